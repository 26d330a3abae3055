#!/bin/sh
# Gets the bunny mesh (npm package "bunny", public domain) and writes it as an OBJ file: fetch-bunny.sh OUTFILE
set -eu
[ $# -eq 1 ] || { echo "usage: $0 OUTFILE" >&2; exit 2; }
case $1 in /*) out=$1 ;; *) out=$PWD/$1 ;; esac
[ -s "$out" ] && exit 0

folder=$(mktemp -d)
trap 'rm -rf "$folder"' EXIT
cd "$folder"
npm pack --silent --ignore-scripts bunny@1.0.1 >/dev/null
tar -xzf bunny-1.0.1.tgz
node -e '
const mesh = require("./package/index.js");
const lines = ["# bunny: " + mesh.positions.length + " vertices, " + mesh.cells.length + " triangles"];
for (const p of mesh.positions) lines.push("v " + p.join(" "));
for (const c of mesh.cells) lines.push("f " + c.map(i => i + 1).join(" "));
require("fs").writeFileSync("bunny.obj", lines.join("\n") + "\n");
'
mkdir -p "$(dirname "$out")"
mv bunny.obj "$out.part-$$"
mv "$out.part-$$" "$out"
