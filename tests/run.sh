#!/usr/bin/env bash
# Sets up everything on a Debian 12 machine, builds, and passes the tests. Ends with the line ctest prints.
set -euo pipefail
cd "$(dirname "$0")/.."
. tests/setup.sh

# The tests need xmllint, and node with npm for a mesh and for an independent PLY reader.
extra="libxml2-utils"
command -v node >/dev/null || extra="$extra nodejs"
command -v npm >/dev/null || extra="$extra npm"
glint_setup $extra -- -DGLINT_TESTS=ON -DGLINT_WERROR=ON
cmake --build build --parallel "$(nproc)"

sh tests/fetch-bunny.sh build/tests/bunny.obj
if [ ! -d build/tests/node/node_modules ]; then
    mkdir -p build/tests/node
    (cd build/tests/node && echo '{"private": true}' >package.json &&
        npm install --silent --ignore-scripts --no-audit --no-fund @loaders.gl/core@4.4.5 @loaders.gl/ply@4.4.5)
fi
cd build
exec ctest --output-on-failure --parallel "$(nproc)"
