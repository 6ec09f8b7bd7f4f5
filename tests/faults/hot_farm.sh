# shellcheck shell=bash
# Sourced by the scripts that make a farm's disk fail: a farm whose field is in flower when three hot
# days begin, a service that lives half an hour in a second, and what both scripts ask of it.
#   hot_farm_make ANTHERD, then whatever happens to "$top/store", then hot_farm_start [NAME=VALUE …]
top="$(mktemp -d)"
service=
checks=0
hot_farm_end() {
  if [ -n "$service" ]; then
    kill -KILL "$service" 2>/dev/null || true
    wait "$service" 2>/dev/null || true
  fi
  umount "$top/store" 2>/dev/null || true
  rm -rf "$top"
}
trap hot_farm_end EXIT

fail() {
  echo "$(basename "$0"): $*" >&2
  tail -n 30 "$top/antherd.log" >&2
  exit 1
}
passed() { checks=$((checks + 1)); echo "  $*"; }
# wait_for SECONDS WORDS COMMAND…: until the command succeeds.
wait_for() {
  local until=$((SECONDS + $1)) words="$2"
  shift 2
  while ! "$@"; do
    [ "$SECONDS" -lt "$until" ] || fail "in vain: $words"
    kill -0 "$service" 2>/dev/null || fail "the service ended while waiting: $words"
    sleep 0.2
  done
  passed "$words"
}

hot_from=$(date -u -d '2026-07-14 07:00' +%s)
start=$(date -u -d '2026-07-14 17:00' +%s)  # 10 in the morning at the farm
next=$start
# Half-hourly readings [from, to), warmest about 4 in the afternoon; from July 14 the days are hot.
readings() {
  awk -v from="$1" -v to="$2" -v hot_from="$hot_from" 'BEGIN {
    for (at = from; at < to; at += 1800) {
      phase = cos(6.2831853 * ((at - 23 * 3600) % 86400) / 86400)
      printf "%d,%.1f,%.1f\n", at, (at >= hot_from ? 28 : 12.5) + 9 * phase, 55 - 25 * phase
    }
  }' >>"$top/drop/bench.csv"
}
# Readings up to an hour before the service's clock: half an hour passes in a second.
feed() {
  local now=$((start + ($(date +%s%N) - began) / 1000000 * 1800 / 1000 - 3600))
  now=$((now / 1800 * 1800))
  if [ "$now" -gt "$next" ]; then
    readings "$next" "$now"
    next=$now
  fi
}
heat_letters() { find "$top/outgoing" -name 'heat-*.eml' | wc -l; }
hours_known() {
  "$antherd" hours "north bench" --settings "$top/antherd.toml" --lines 2>/dev/null |
    grep -c '"n":[1-9]' || true
}
ready() { [ -s "$top/store/antherd.db" ] && [ "$(hours_known)" -gt 1000 ]; }
log_says() { grep -qi "$1" "$top/antherd.log"; }
told_of_heat() { feed; [ "$(heat_letters)" -gt 0 ]; }
known_up_to_date() { feed; [ "$(hours_known)" -ge $(((next - hot_from) / 3600 + 2000)) ]; }

hot_farm_make() {
  antherd="$1"
  mkdir "$top/store" "$top/drop" "$top/outgoing"
  cat >"$top/antherd.toml" <<'END'
[farm]
name = "Larkspur Bench"
time_zone = "America/Los_Angeles"
units = "us"
exercise = true
[store]
folder = "store"
[log]
file = "antherd.log"
[mail]
folder = "outgoing"
from = "alerts@larkspur.example"
[[recipient]]
address = "owner@larkspur.example"
[[station]]
name = "bench"
latitude = 46.73
longitude = -117.18
elevation = "780 m"
interval = "30 min"
silent_after = "12 h"
[station.drop]
folder = "drop"
time = { column = "time", form = "unix" }
temperature = { column = "t", unit = "degC" }
humidity = { column = "h", unit = "%" }
[[field]]
name = "north bench"
station = "bench"
sown = 2026-04-20
crop_type = "coastal"
irrigation = "drip"
END
  echo "time,t,h" >"$top/drop/bench.csv"
  readings $((hot_from - 85 * 86400)) "$start"
}

# A second station, at the gate, that is asked over HTTP at the address given.
hot_farm_add_gate() {
  cat >>"$top/antherd.toml" <<END
[[station]]
name = "gate"
latitude = 46.73
longitude = -117.18
elevation = "780 m"
interval = "5 min"
silent_after = "12 h"
[station.http]
url = "$1"
every = "5 min"
form = "json"
time = { at = "/time", form = "unix" }
temperature = { at = "/t", unit = "degC" }
humidity = { at = "/rh", unit = "%" }
END
}

hot_farm_start() {
  local from
  from="$(TZ=America/Los_Angeles date -d "@$start" '+%Y-%m-%d %H:%M')"
  env "$@" "$antherd" run --settings "$top/antherd.toml" --clock-from "$from" --pace 1800 \
    </dev/null >"$top/out" 2>&1 &
  service=$!
  began=$(date +%s%N)
}

hot_farm_stop() {
  local asked status=0
  asked=$(date +%s%N)
  kill -TERM "$service"
  wait "$service" || status=$?
  service=
  [ "$status" -eq 0 ] || fail "it ended with status $status"
  stopped_after=$((($(date +%s%N) - asked) / 1000000))
  passed "ended $stopped_after ms after it was asked"
}

# One opening has one letter, the service ends when asked, and the store can be opened again.
hot_farm_close() {
  local opened
  opened=$(find "$top/outgoing" -name 'heat-opened-*.eml' | wc -l)
  [ "$opened" -eq 1 ] || fail "$opened letters of one opening"
  passed "one opening, one letter"
  hot_farm_stop
  "$antherd" check --settings "$top/antherd.toml" >"$top/check" 2>&1 || [ $? -eq 3 ] ||
    fail "check is not content: $(tail -n 3 "$top/check")"
  passed "the store opens again"
  echo "$checks checks passed"
}
