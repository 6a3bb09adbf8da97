#!/usr/bin/env bash
# The main job on the demo: installs what is missing, builds, runs, verifies, and shows the best
# phrases with the pass that made them.
set -euo pipefail
top=$(cd "$(dirname "$0")/.." && pwd)
cd "$top"
. tests/packages.sh
install_missing "${program_packages[@]}"
echo "Building (a few minutes the first time) ..."
build_targets=(phraseweld)
build_program build/release -DCMAKE_BUILD_TYPE=Release -DPHRASEWELD_TESTS=OFF -DPHRASEWELD_UNITY=ON

phraseweld=build/release/phraseweld
echo
echo "\$ phraseweld run configs/demo.yaml --fresh"
$phraseweld run configs/demo.yaml --fresh
echo
echo "\$ phraseweld verify runs/demo"
$phraseweld verify runs/demo
echo
echo "The best phrases, the pass that made each, and how often it occurs (inside longer ones too):"
# inventory.tsv: phrase words pass occurrences inside_longer documents surface pmi npmi g2
awk -F'\t' 'NR > 1 && $4 > 0 {printf "  pass %d  %4d x in %3d documents   %s\n", $3, $4 + $5, $6, $7}' runs/demo/inventory.tsv |
  sed -n '1,25p'
echo
echo "And the longest:"
awk -F'\t' 'NR > 1 && $2 >= 4 && $4 > 0 {printf "  pass %d  %4d x in %3d documents   %s\n", $3, $4 + $5, $6, $7}' runs/demo/inventory.tsv |
  sed -n '1,10p'
echo
echo "Results: runs/demo (report.html is the page to look at)"
