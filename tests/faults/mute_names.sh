#!/usr/bin/env bash
# A name server that never answers, under the station's address and the mail server's: the service
# must say so, keep its letters, and still end at once when told to (promise 9): a look-up that hangs
# cannot be called off, only left behind.
#   mute_names.sh ANTHERD
# Needs root (a network of its own, where 127.0.0.1 is the name server), ip and python3; else exit 77.
set -euo pipefail
if [ "${MUTE_NAMES_INSIDE:-}" != true ]; then
  for tool in ip python3 unshare; do
    command -v "$tool" >/dev/null || { echo "skipped: no $tool here, a mute name server was not tried"; exit 77; }
  done
  if ! unshare --net --mount true 2>/dev/null; then
    echo "skipped: no right to a network of its own here, a mute name server was not tried"
    exit 77
  fi
  exec unshare --net --mount env MUTE_NAMES_INSIDE=true "$0" "$@"
fi
. "$(dirname "${BASH_SOURCE[0]}")/hot_farm.sh"

hot_farm_make "$1"
hot_farm_add_gate "https://gate.larkspur.example/now.json"
sed -i 's|^folder = "outgoing"$|server = "smtps://mail.larkspur.example:465"|' "$top/antherd.toml"

ip link set lo up
echo "nameserver 127.0.0.1" >"$top/resolv.conf"
mount --bind "$top/resolv.conf" "$(readlink -f /etc/resolv.conf)"
python3 -c 'import socket, time
mute = socket.socket(socket.AF_INET, socket.SOCK_DGRAM)
mute.bind(("127.0.0.1", 53))
print("bound", flush=True)
time.sleep(600)' >"$top/mute" &
mute=$!
trap 'kill "$mute" 2>/dev/null; umount "$(readlink -f /etc/resolv.conf)" 2>/dev/null; hot_farm_end' EXIT
for _ in $(seq 100); do grep -q bound "$top/mute" && break; sleep 0.1; done
grep -q bound "$top/mute" || fail "port 53 of the network of its own is taken"

hot_farm_start
letter_waits() { feed; "$antherd" letters --settings "$top/antherd.toml" 2>/dev/null | grep -qi waiting; }
wait_for 120 "the season was read" ready
wait_for 60 "the station's trouble is named" \
  log_says 'gate.larkspur.example.*no such host name, or the name server does not answer'
wait_for 90 "the heat's letter waits" letter_waits
wait_for 60 "the mail server's trouble is named" log_says 'mail.larkspur.example'
hot_farm_stop
[ "$stopped_after" -lt 5000 ] || fail "it ended only after $stopped_after ms"
echo "$checks checks passed"
