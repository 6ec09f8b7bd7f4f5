#!/usr/bin/env bash
# A full disk, for real: the store lies on a small memory file system (promise 5). The service must
# stay up, say so, still tell of the heat while the disk is full (readings wait in memory, so that they
# leave the reserve to decisions and letters), and catch up by itself when there is room again.
#   full_disk.sh ANTHERD
# Needs root to mount; else exit 77.
set -euo pipefail
. "$(dirname "${BASH_SOURCE[0]}")/hot_farm.sh"

hot_farm_make "$1"
if ! mount -t tmpfs -o size=48m,mode=700 tmpfs "$top/store" 2>/dev/null; then
  echo "skipped: no right to mount a file system here, the full disk was not tried"
  exit 77
fi
hot_farm_start

said_full() { feed; log_says 'the disk is full: the 8 MiB kept in reserve were given up'; }
said_waiting() { feed; log_says 'readings wait in memory'; }
put_back() { feed; log_says 'kept in reserve were put back'; }

wait_for 120 "the season was read" ready
dd if=/dev/zero of="$top/store/filler" bs=64k 2>/dev/null || true
[ "$(df --output=avail -k "$top/store" | tail -n 1)" -lt 64 ] || fail "the disk is not full"
[ -s "$top/store/ballast" ] || fail "there is no ballast to give back"
passed "the disk is full, the ballast is there"
wait_for 90 "the log says that the disk is full and the reserve is used" said_full
wait_for 90 "and that readings wait, to leave it to alerts" said_waiting
wait_for 90 "the heat is told although the disk is full" told_of_heat

rm "$top/store/filler"
wait_for 90 "with room again every hour is caught up" known_up_to_date
wait_for 90 "and the reserve is put back" put_back

# Started anew on a disk that is full to the last byte: first with the reserve, then without it.
fill() {
  dd if=/dev/zero of="$top/store/$1" bs=64k 2>/dev/null || true
  dd if=/dev/zero of="$top/store/$1.rest" bs=1k 2>/dev/null || true
}
hot_farm_stop
[ -s "$top/store/ballast" ] || fail "the reserve is not there"
fill filler
start=$(date -u -d '2026-07-15 17:00' +%s)
hot_farm_start
wait_for 60 "started on a full disk it gives the reserve up and watches" log_says 'given up to open the store'
hot_farm_stop
fill more
start=$(date -u -d '2026-07-15 19:00' +%s)
hot_farm_start
wait_for 60 "without a reserve it stays up and says so" log_says 'nothing is watched: '
rm "$top/store/filler" "$top/store/more"
wait_for 90 "with room the watch begins by itself" log_says 'the watch begins'
wait_for 90 "and every hour is caught up" known_up_to_date
hot_farm_close
