#!/usr/bin/env bash
# Real letters through a real mail server: a private Postfix on loopback with a certificate
# authority of its own, STARTTLS and a login. Checks what arrives, and that each fault gives one
# clear sentence and puts no secret on the wire.
#   mail_postfix.sh PROGRAM     PROGRAM is mail_send_once from the build
# Status: 0 all as it should be, 1 not, 77 skipped (not root, or no Postfix here).
set -euo pipefail

program=${1:?"usage: mail_postfix.sh PATH-OF-mail_send_once"}
skip() { echo "skipped: $*"; exit 77; }
[ "$(id -u)" = 0 ] || skip "a Postfix of one's own needs root"
for tool in postfix postconf saslpasswd2 openssl; do
  command -v "$tool" >/dev/null || skip "$tool is not installed"
done
[ -r /usr/share/postfix/master.cf.dist ] || skip "no /usr/share/postfix/master.cf.dist"
[ -x "$program" ] || { echo "no program at $program"; exit 1; }

room=$(mktemp -d)
chmod 755 "$room"
started=
finish() {
  [ -z "$started" ] || postfix -c "$room/etc" stop >/dev/null 2>&1 || true
  rm -rf "$room"
}
trap finish EXIT

# --- certificates: an authority, a server's for "localhost" alone, and a foreign authority
authority() {  # NAME: $room/NAME.pem with its key
  openssl req -x509 -newkey rsa:2048 -nodes -days 2 -subj "/CN=$1" -keyout "$room/$1.key" \
    -out "$room/$1.pem" -addext basicConstraints=critical,CA:TRUE \
    -addext keyUsage=critical,keyCertSign 2>/dev/null
}
authority bench-authority
authority foreign-authority
openssl req -newkey rsa:2048 -nodes -subj "/CN=localhost" -keyout "$room/server.key" \
  -out "$room/server.request" -addext subjectAltName=DNS:localhost 2>/dev/null
openssl x509 -req -in "$room/server.request" -CA "$room/bench-authority.pem" \
  -CAkey "$room/bench-authority.key" -CAcreateserial -days 2 -copy_extensions copy \
  -out "$room/server.pem" 2>/dev/null
chmod 600 "$room"/*.key

# --- two free ports: STARTTLS, and TLS at once
free_port() {
  local port
  while :; do
    port=$((20000 + RANDOM % 20000))
    (: </dev/tcp/127.0.0.1/$port) 2>/dev/null || { echo "$port"; return; }
  done
}
port=$(free_port)
tls_port=$(free_port)

# --- Postfix: the distribution's list of services with ours in place of port 25
mkdir -p "$room"/{etc/sasl,queue,data,boxes}
chown postfix "$room/data"
chown nobody "$room/boxes"
cat >"$room/etc/main.cf" <<CF
compatibility_level = 3.6
meta_directory = /etc/postfix
queue_directory = $room/queue
data_directory = $room/data
maillog_file_prefixes = $room
maillog_file = $room/log
myhostname = localhost
mydestination =
inet_interfaces = loopback-only
inet_protocols = ipv4
biff = no
virtual_mailbox_domains = larkspur.example
virtual_mailbox_base = $room/boxes
virtual_mailbox_maps = inline:{ {owner@larkspur.example = owner/} {temp@larkspur.example = temp/} }
virtual_uid_maps = static:$(id -u nobody)
virtual_gid_maps = static:$(id -g nobody)
smtpd_tls_cert_file = $room/server.pem
smtpd_tls_key_file = $room/server.key
smtpd_tls_security_level = encrypt
smtpd_tls_auth_only = yes
smtpd_sasl_auth_enable = yes
smtpd_sasl_security_options = noanonymous
smtpd_sasl_local_domain = localhost
cyrus_sasl_config_path = $room/etc/sasl
smtpd_relay_restrictions = permit_sasl_authenticated, reject
smtpd_recipient_restrictions =
  check_recipient_access inline:{ {temp@larkspur.example = 450 4.2.0 mailbox busy, try later}
    {perm@larkspur.example = 550 5.1.1 no such mailbox} }, permit_sasl_authenticated, reject
CF
cp /usr/share/postfix/master.cf.dist "$room/etc/master.cf"
postconf -c "$room/etc" -MX smtp/inet
postconf -c "$room/etc" -F '*/*/chroot=n'
postconf -c "$room/etc" -M "$port/inet=$port inet n - n - - smtpd"
postconf -c "$room/etc" -M \
  "$tls_port/inet=$tls_port inet n - n - - smtpd -o smtpd_tls_wrappermode=yes"
printf '%s\n' 'pwcheck_method: auxprop' 'auxprop_plugin: sasldb' 'mech_list: PLAIN LOGIN' \
  "sasldb_path: $room/etc/logins" >"$room/etc/sasl/smtpd.conf"
secret="larkspur-$(openssl rand -hex 8)"
printf %s "$secret" | saslpasswd2 -p -c -f "$room/etc/logins" -u localhost farm
chown postfix "$room/etc/logins"
(umask 077 && printf '%s\n' "$secret" >"$room/password" &&
  printf '%s\n' "wrong-$secret" >"$room/wrong-password")
postfix -c "$room/etc" start >"$room/start" 2>&1 || { cat "$room/start"; exit 1; }
started=yes

# --- checks
passed=0 failed=0
check() {  # WHAT COMMAND…
  local what=$1
  shift
  if "$@" >/dev/null; then
    passed=$((passed + 1))
  else
    failed=$((failed + 1))
    printf 'NOT SO: %s\n' "$what"
    sed 's/^/    /' "$room/said"
  fi
}
absent() { ! grep -qF -- "$@"; }
transcript() { grep '^talk: ' "$room/said"; }

say() {  # NAME [VARIABLE=VALUE…]: one letter; what was said is in $room/said
  local name=$1 begin end
  shift
  begin=$(date +%s%N)
  env MAIL_URL="smtp://localhost:$port" MAIL_USER=farm MAIL_PASSWORD_FILE="$room/password" \
    MAIL_CA_FILE="$room/bench-authority.pem" MAIL_TO=owner@larkspur.example "$@" \
    "$program" >"$room/said" 2>&1 || true
  end=$(date +%s%N)
  printf '\n%s (%d ms)\n    %s\n    %s\n' "$name" $(((end - begin) / 1000000)) \
    "$(grep -m1 '^state: ' "$room/said")" "$(grep -m1 '^sentence: ' "$room/said")"
  check "$name: one sentence" test "$(grep -c '^sentence: ' "$room/said")" = 1
  check "$name: the server is named" \
    grep -q '^sentence: .*\(localhost\|127\.0\.0\.1\):' "$room/said"
  check "$name: no password is told" absent "$secret" "$room/said"
  check "$name: no password in base64 is told" absent \
    "$(printf '\0farm\0%s' "$secret" | base64 -w0 | cut -c1-20)" "$room/said"
}
state_is() { grep -qx "state: $1" "$room/said"; }
sentence_has() { grep -q "^sentence: .*$1" "$room/said"; }

say "a letter by STARTTLS and login" MAIL_ID=heat-1
check "it is sent" state_is sent
check "TLS came before the login" test "$(transcript | grep -n STARTTLS | tail -1 | cut -d: -f1)" \
  -lt "$(transcript | grep -n 'AUTH PLAIN$' | tail -1 | cut -d: -f1)"
say "a letter by TLS at once" MAIL_ID=heat-2 MAIL_URL="smtps://localhost:$tls_port"
check "it is sent" state_is sent

begin=$(date +%s%N)
for _ in $(seq 200); do
  [ "$(ls "$room/boxes/owner/new" 2>/dev/null | wc -l)" = 2 ] && break
  sleep 0.05
done
printf '\nin the mailbox: %s letters, %d ms after the last acceptance\n' \
  "$(ls "$room/boxes/owner/new" | wc -l)" $((($(date +%s%N) - begin) / 1000000))
check "both are in the mailbox" test "$(ls "$room/boxes/owner/new" | wc -l)" = 2
letter=$(grep -l 'Message-ID: <heat-1@' "$room"/boxes/owner/new/* || true)
check "the Message-ID is the letter's" test -n "$letter"
has() { grep -qx -- "$1" "${letter:-/dev/null}"; }
check "From" has 'From: <alerts@larkspur.example>'
check "To" has 'To: <owner@larkspur.example>'
check "Date" grep -qE '^Date: [A-Z][a-z]{2}, [0-9]{2} [A-Z][a-z]{2} [0-9]{4} [0-9:]{8} \+0000$' \
  "${letter:-/dev/null}"
check "Subject" has 'Subject: =?UTF-8?Q?HEAT_Severe=3A_north_bench_96_=C2=B0F_at_3_pm=2C_flower?='
check "Auto-Submitted" has 'Auto-Submitted: auto-generated'
check "Content-Type" has 'Content-Type: text/plain; charset=utf-8'
check "no envelope was added twice" test "$(grep -c '^Message-ID' "${letter:-/dev/null}")" = 1
check "the body" has 'north bench, flower not seen: 96 =C2=B0F at 3 pm =C2=B1 1.'
check "the dot is one dot" has '.a line that begins with a dot'
check "the way was encrypted and logged in" grep -q 'with ESMTPSA' "${letter:-/dev/null}"

say "a wrong password" MAIL_PASSWORD_FILE="$room/wrong-password"
check "it is kept" state_is waiting
check "it says so" sentence_has 'refuses the login of farm (535'
check "no letter was offered" absent 'talk: > MAIL' "$room/said"
say "an unknown authority" MAIL_CA_FILE="$room/foreign-authority.pem"
check "it is kept" state_is waiting
check "it says so" sentence_has 'unknown authority'
check "no login was tried" absent 'talk: > AUTH' "$room/said"
say "an authority the system does not know" MAIL_CA_FILE=
check "it says so" sentence_has 'unknown authority'
say "a certificate of another name" MAIL_URL="smtp://127.0.0.1:$port"
check "it says so" sentence_has 'belongs to another name'
check "no login was tried" absent 'talk: > AUTH' "$room/said"
say "a missing file of authorities" MAIL_CA_FILE="$room/none.pem"
check "it says so" sentence_has 'certificate authorities.*cannot be read'
say "TLS at once on the port for STARTTLS" MAIL_URL="smtps://localhost:$port"
check "it says so" sentence_has 'does not speak TLS as asked'
say "no login" MAIL_USER=
check "it is kept" state_is waiting
check "it says so" sentence_has 'login'

say "a server without STARTTLS" MAIL_RECORDER=1
check "it is kept" state_is waiting
check "it says so" sentence_has 'offers no STARTTLS'
sed -n 's/^wire: /    on the wire: /p' "$room/said"
check "the wire holds EHLO and nothing but" test \
  "$(grep '^wire: ' "$room/said" | grep -vcE '^wire: (EHLO [^ ]+|QUIT).?$')" = 0

say "a mailbox that is busy" MAIL_TO=temp@larkspur.example
check "it waits" state_is waiting
check "it waits on its own clock" grep -qx 'waits: 60 s' "$room/said"
check "it says so" sentence_has 'temp@larkspur.example.*waits'
say "a mailbox that is none" MAIL_TO=perm@larkspur.example
check "it is put aside" state_is parked
check "it says so" sentence_has 'refuses the recipient perm@larkspur.example (550 5.1.1'
check "none of these arrived" test "$(find "$room/boxes" -type f | wc -l)" = 2

printf '\n%d checks passed, %d failed\n' "$passed" "$failed"
[ "$failed" = 0 ]
