#!/usr/bin/env bash
# Draws the pictures of README.md and patches/README.md anew:
#   cargo build --release && patches/pictures/draw.sh
# CHORDWISE names another build of the program.
set -euo pipefail
cd "$(dirname "$0")/../.."
chordwise=${CHORDWISE:-${CARGO_TARGET_DIR:-target}/release/chordwise}
draw() { "$chordwise" draw "patches/$1.ron" -o "patches/pictures/$2.png" "${@:3}" 2>/dev/null; }

for set in patches/*.ron; do
    name=$(basename "$set" .ron)
    draw "$name" "$name" --shading panels --edges --size 360x260
done
draw front_quarter front_quarter_seams --seams --size 840x500
draw front_quarter front_quarter_lines --shading reflection --size 840x500
draw front_quarter front_quarter_mean --shading mean --size 840x500
draw front_quarter front_quarter_section --section x=300 --size 840x500
