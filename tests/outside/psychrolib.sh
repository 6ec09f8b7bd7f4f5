#!/usr/bin/env bash
# Compares our moist air with the npm package psychrolib on a dense grid made just now.
#   psychrolib.sh TEST_PROGRAM BUILD_FOLDER
# Skips itself (77) with a sentence where there is no node, no npm or no way to the package.
set -euo pipefail
program="$1" folder="$2/psychrolib" tables="$(dirname "${BASH_SOURCE[0]}")/../tables"

skip() { echo "skipped: $*"; exit 77; }
command -v node >/dev/null || skip 'there is no node here; the recorded grid was checked'
if [ ! -f "$folder/node_modules/psychrolib/package.json" ]; then
  command -v npm >/dev/null || skip 'there is no npm here; the recorded grid was checked'
  mkdir -p "$folder"
  timeout 60 npm install --prefix "$folder" --no-save --no-audit --no-fund --fetch-retries 0 \
    psychrolib@1.1.1 </dev/null >"$folder/install.log" 2>&1 ||
    skip 'psychrolib 1.1.1 could not be fetched; the recorded grid was checked'
fi

# The committed table is what the library says today.
node "$tables/psychrolib_grid.mjs" "$folder" recorded >"$folder/recorded.csv"
cmp "$folder/recorded.csv" "$tables/weather-psychrolib.csv"

node "$tables/psychrolib_grid.mjs" "$folder" dense >"$folder/dense.csv"
ANTHERD_PSYCHROLIB_GRID="$folder/dense.csv" exec "$program" \
  "moist air agrees with psychrolib on a dense grid made just now"
