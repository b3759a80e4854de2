#!/usr/bin/env bash
# Segments and restores the demo images: installs what is missing, builds the program, runs it.
#
# Usage: bash images/demo.sh [OUTPUT_FOLDER]    default: build/demo-results
# Safe to run again: what is installed, built or finished is not done twice.
set -euo pipefail

root="$(cd -- "$(dirname -- "${BASH_SOURCE[0]}")/.." && pwd)"
results="${1:-$root/build/demo-results}"
mkdir -p -- "$results"
results="$(cd -- "$results" && pwd)"
cd -- "$root"

bash src/cmake/install-packages.sh
cmake --preset release
cmake --build --preset release --parallel "$(nproc)" --target stillfield

segment() { # folder, number of classes
  printf '\n%s: %s classes\n' "$1" "$2"
  build/release/src/cli/stillfield segment "images/$1" --classes "$2" --out "$results/$1" </dev/null
}
segment cast-iron 3      # graphite, pearlite, ferrite
segment yeast 2          # background, cells
segment delivery-notes 2 # ink, paper

printf '\nyeast: restored, with the gain, read noise and offset of its camera\n'
build/release/src/cli/stillfield denoise images/yeast --noise photon:4,64,100 --out "$results/yeast-restored" \
  </dev/null

printf '\nResults are in %s\n' "$results"
for folder in cast-iron yeast delivery-notes; do
  printf '  %s/measurements.csv   area fractions with intervals, one row a measurement\n' "$folder"
  printf '  %s/summary.csv        the same over all fields of the folder\n' "$folder"
done
printf '  %s/yeast-restored   restored images (*.restored.tif), deviations (*.sd.tif), bounds\n' "$results"
printf 'Beside them: label maps (*.labels.tif), class probabilities (*.probability.tif) and\n'
printf 'where to doubt them (*.entropy.tif). True area fractions: images/truth/area-fractions.csv\n'
