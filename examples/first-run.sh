#!/usr/bin/env bash
# Sets up everything on a Debian 12 machine, builds, runs the main job, and says where to look.
set -euo pipefail
cd "$(dirname "$0")/.."
. tests/setup.sh

glint_setup -- -DGLINT_TESTS=OFF
cmake --build build --parallel "$(nproc)" --target glintplan
build/glintplan assess examples/aisle-cart.xml --out out/aisle-cart
echo
echo "Look at the pictures out/aisle-cart/preview-*.png; numbers are in summary.json and zones.csv,"
echo "points in points.ply. Change examples/aisle-cart.xml and run again:"
echo "  build/glintplan assess examples/aisle-cart.xml --out out/aisle-cart"
