#!/usr/bin/env bash
# Runs the tests of real station reports where Debian's libncarg-data and ncdump are installed.
#   reports.sh PROGRAM     PROGRAM is test_registry_reports from the build
# Status: that of PROGRAM, or 77: skipped.
set -euo pipefail

program=${1:?"usage: reports.sh PATH-OF-test_registry_reports"}
skip() { echo "skipped: $*"; exit 77; }
command -v ncdump >/dev/null || skip "ncdump is not installed (Debian: netcdf-bin)"
for hour in $(seq -w 0 23); do
  file=/usr/share/ncarg/data/cdf/950318${hour}_sao.cdf
  [ -r "$file" ] || skip "no $file (Debian: libncarg-data, 100 MB)"
done
exec "$program"
