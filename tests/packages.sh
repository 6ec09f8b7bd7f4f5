# shellcheck shell=bash
# Sourced by tests/run and demo/run: says what is missing on this machine and installs it.
# Sets nothing but functions whose names begin with "packages_" or "build_".

# The packages of this release for the purposes named, one a line.
packages_wanted() {
  local list release purposes=" $* "
  list="$(dirname "${BASH_SOURCE[0]}")/packages.list"
  release="$(. /etc/os-release 2>/dev/null && printf '%s' "${VERSION_CODENAME:-}")"
  local name purpose releases rest
  while read -r name purpose releases rest; do
    case "$name" in '' | '#'*) continue ;; esac
    case "$purposes" in *" $purpose "*) ;; *) continue ;; esac
    case ",$releases," in *,all,* | *",$release,"*) printf '%s\n' "$name" ;; esac
  done < "$list"
}

# Of the names given, those that are not installed.
packages_missing() {
  local installed name
  installed="$(dpkg-query -W -f '${Package} ${db:Status-Status}\n' "$@" 2>/dev/null || true)"
  for name in "$@"; do
    case $'\n'"$installed"$'\n' in
      *$'\n'"$name installed"$'\n'*) ;;
      *) printf '%s\n' "$name" ;;
    esac
  done
}

# Installs what is missing for the purposes named. Returns 1 after saying what to do.
packages_install() {
  local wanted missing log as_root=()
  mapfile -t wanted < <(packages_wanted "$@")
  if ! command -v dpkg-query >/dev/null || ! command -v apt-get >/dev/null; then
    printf 'No apt-get here: these Debian packages, or their like, must be there already:\n  %s\n' \
      "${wanted[*]}"
    return 0
  fi
  mapfile -t missing < <(packages_missing "${wanted[@]}")
  [ "${#missing[@]}" -eq 0 ] && return 0
  if [ "$(id -u)" -ne 0 ]; then
    if command -v sudo >/dev/null && sudo -n true 2>/dev/null; then
      as_root=(sudo -n)
    elif command -v sudo >/dev/null && [ -t 0 ]; then
      as_root=(sudo)
    else
      printf 'Packages are missing and this user may not install them. As root, run:\n' >&2
      printf '  apt-get update && apt-get install --no-install-recommends %s\n' "${missing[*]}" >&2
      return 1
    fi
  fi
  printf 'Installing %d packages: %s\n' "${#missing[@]}" "${missing[*]}"
  log="$(mktemp)"
  local apt=("${as_root[@]}" env DEBIAN_FRONTEND=noninteractive LC_ALL=C apt-get
    -o DPkg::Lock::Timeout=600 -o Acquire::Retries=3 -q)
  case " ${missing[*]} " in
    *' postfix '*)  # unconfigured: the tests bring their own configuration, nothing is started
      echo 'postfix postfix/main_mailer_type select No configuration' |
        "${as_root[@]}" env LC_ALL=C debconf-set-selections >"$log" 2>&1 || true
      ;;
  esac
  local install=(install -y --no-install-recommends "${missing[@]}")
  if ! "${apt[@]}" "${install[@]}" >"$log" 2>&1 </dev/null; then
    # the lists were missing or old
    if ! "${apt[@]}" update >>"$log" 2>&1 </dev/null ||
      ! "${apt[@]}" "${install[@]}" >>"$log" 2>&1 </dev/null; then
      tail -n 25 "$log" >&2
      printf 'Installing failed; the whole output is in %s\n' "$log" >&2
      return 1
    fi
  fi
  rm -f "$log"
}

# How many compilers at once: one a processor, but a gigabyte of free memory for each.
build_jobs() {
  local processors memory_kib jobs
  processors="$(nproc 2>/dev/null || echo 1)"
  memory_kib="$(sed -n 's/^MemAvailable: *\([0-9]*\) kB$/\1/p' /proc/meminfo 2>/dev/null || true)"
  jobs=$(( ${memory_kib:-1048576} / 1048576 ))
  [ "$jobs" -lt 1 ] && jobs=1
  [ "$jobs" -gt "$processors" ] && jobs="$processors"
  printf '%s\n' "$jobs"
}

# Configures a preset once and builds the targets named (none: all). Quiet unless it fails.
build_preset() {
  local preset="$1" log
  shift
  log="$(mktemp)"
  if [ ! -f ".build/$preset/build.ninja" ] &&
    ! cmake --preset "$preset" >"$log" 2>&1 </dev/null; then
    cat "$log" >&2
    rm -f "$log" ".build/$preset/CMakeCache.txt"
    return 1
  fi
  rm -f "$log"
  local targets=()
  [ "$#" -gt 0 ] && targets=(--target "$@")
  cmake --build ".build/$preset" --parallel "$(build_jobs)" "${targets[@]}" </dev/null
}
