#!/bin/sh
# Makes the pictures of the README. Run from the top of the repository:
#   sh tests/screenshots.sh [path of the program]
set -eu
program=${1:-target/release/dotwright}
out=screenshots
mkdir -p "$out"
"$program" map shapes/notch-dot.toml --mode 3 --width 900 -o "$out/density-light.png"
"$program" map shapes/two-lobe.toml --mode 9 --show wave --theme dark --width 900 -o "$out/wave-dark.png"
"$program" sheet shapes/quatrefoil.toml --show wave --width 900 -o "$out/sheet.png"
