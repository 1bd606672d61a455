#!/bin/sh
# Sets everything up beside this file, once, then does the work:
#   sh start.sh             all editions of site_config/ into build/
#   sh start.sh press ...   any command of chartgen, with its arguments
#   sh start.sh test ...    all tests (the arguments go to pytest)
# Exit codes are chartgen's; 3 also where this machine lacks something: one line then says what to install.
set -eu
root=$(CDPATH='' cd -- "$(dirname -- "$0")" && pwd -P)
venv=$root/.venv
log=$root/.setup.log

# What a user's shell may hold and would lead pip or Python astray. The machine's index and certificates stay.
unset PIP_USER PIP_TARGET PIP_PREFIX PIP_ROOT PIP_REQUIRE_VIRTUALENV PIP_CONSTRAINT PIP_NO_BINARY PYTHONPATH PYTHONHOME
export PYTHONUTF8=1 PIP_NO_INPUT=1 PIP_DISABLE_PIP_VERSION_CHECK=1
export XDG_CACHE_HOME="$root/.cache" MPLCONFIGDIR="$root/.cache/matplotlib"

say() { printf 'start.sh: %s\n' "$*" >&2; }
fail() { say "$*"; exit 3; }

# The stamp is written last. It holds the folder too: a virtual environment that was moved is dead.
sum=$({ cat "$root/requirements/run.lock" "$root/requirements/check.lock" "$root/pyproject.toml"; echo "$root"; } | cksum)
ready() {
  [ -f "$venv/.stamp" ] && read -r have <"$venv/.stamp" || return 1
  [ "$have" = "check $sum" ] || [ "$have" = "$need $sum" ] || return 1
  "$venv/bin/python" -c '' 2>/dev/null
}

find_python() {
  for python in "${PYTHON:-}" python3 python3.14 python3.13 python3.12 python3.11; do
    [ -n "$python" ] || continue
    "$python" -c 'import sys, venv, ensurepip
sys.exit(not (3, 11) <= sys.version_info[:2] <= (3, 14))' 2>/dev/null && return
  done
  return 1
}

lacks() {  # whether one of these shared libraries cannot be loaded
  ! "$python" -c 'import ctypes, sys
for name in sys.argv[1:]:
    ctypes.CDLL(name)' "$@" 2>/dev/null
}

missing_packages() {  # names as Debian has them
  find_python || { echo python3 python3-venv; python=python3; }
  if [ "$(uname -s)" = Darwin ]; then
    lacks libpango-1.0.dylib libpangoft2-1.0.dylib && echo pango
    return
  fi
  lacks libpango-1.0.so.0 libpangoft2-1.0.so.0 libharfbuzz-subset.so.0 &&
    echo libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz-subset0
  [ "$need" = check ] || return
  # The second is for the driver of the browser tests, and not everywhere drawn in by the first.
  command -v chromium >/dev/null || echo chromium
  lacks libatomic.so.1 && echo libatomic1
}

tell_other_system() {
  kind=$(. /etc/os-release 2>/dev/null && echo "${ID:-} ${ID_LIKE:-}" || :)
  case "$kind $(uname -s)" in
    *Darwin*) what='brew install python pango' ;;
    *fedora* | *rhel*) what='sudo dnf install python3 pango harfbuzz' ;;
    *alpine*) what='apk add python3 pango harfbuzz-subset font-dejavu' ;;
    *arch*) what='sudo pacman -S python pango' ;;
    *suse*) what='sudo zypper install python3 libpango-1_0-0 libharfbuzz-subset0' ;;
    *) what='install Python 3.11 to 3.14 with its venv module, Pango and HarfBuzz' ;;
  esac
  [ "$need" = run ] || what="$what (for the tests Chromium too)"
  fail "this system lacks something that chartgen needs; please do this, then start again: $what"
}

install_packages() {
  packages=$(missing_packages | tr '\n' ' ')
  [ -n "$packages" ] || return 0
  command -v apt-get >/dev/null || tell_other_system
  as_root=
  if [ "$(id -u)" != 0 ]; then
    sudo -n true 2>/dev/null ||
      fail "please run this as root, then start again:" \
        "apt-get update && apt-get install -y --no-install-recommends $packages"
    as_root='sudo -n'
  fi
  say "installing $packages(a minute; only this once)"
  $as_root apt-get -o DPkg::Lock::Timeout=300 update </dev/null >>"$log" 2>&1 || :  # lists from yesterday may do
  # $packages is a list of words.
  # shellcheck disable=SC2086
  $as_root env DEBIAN_FRONTEND=noninteractive apt-get -o DPkg::Lock::Timeout=300 install -y --no-install-recommends \
    $packages </dev/null >>"$log" 2>&1 || fail "apt-get could not install $packages(why: $log)"
  left=$(missing_packages | tr '\n' ' ')
  [ -z "$left" ] || fail "after installing $packages- this is still not usable: $left(needed: Python 3.11 to 3.14)"
}

run_logged() {  # WHAT COMMAND...
  what=$1
  shift
  "$@" </dev/null >>"$log" 2>&1 && return
  said=$(grep -m 1 '^ERROR' "$log" || tail -n 1 "$log")
  fail "$what failed (all of it: $log): $said"
}

set_up() {
  : >"$log"
  install_packages
  find_python || fail 'no Python 3.11 to 3.14 with the modules venv and ensurepip was found'
  say "setting up Python's packages (half a minute; only this once)"
  if [ "$need" = run ] || ! [ "$(cat "$venv/.stamp" 2>/dev/null)" = "run $sum" ]; then
    rm -rf "$venv"
    run_logged 'making .venv' "$python" -m venv "$venv"
  fi
  rm -f "$venv/.stamp"
  run_logged 'installing the pinned packages' "$venv/bin/python" -m pip install -q --require-hashes --only-binary :all: \
    -r "$root/requirements/$need.lock"
  run_logged 'installing chartgen' "$venv/bin/python" -m pip install -q --no-index --no-deps --no-build-isolation \
    -e "$root"
  echo "$need $sum" >"$venv/.stamp.new"
  mv "$venv/.stamp.new" "$venv/.stamp"
}

need=run
[ "${1:-}" != test ] || need=check
# Whoever has the tests' packages keeps them when what is pinned changes and something else than the tests runs first.
had=
[ ! -f "$venv/.stamp" ] || read -r had <"$venv/.stamp" || :
if [ "${had%% *}" = check ] && command -v chromium >/dev/null; then need=check; fi
if ! ready; then
  [ -w "$root" ] || fail "cannot write into $root; put the project into a folder of your own"
  # One set-up at a time. The lock is the system's: it goes when the last process of a set-up is gone, killed or not.
  if command -v flock >/dev/null; then
    exec 9>"$root/.setup.lock"
    flock -n 9 || { say 'another set-up is at work here; waiting for it'; flock 9; }
  fi
  ready || set_up
  exec 9>&-
fi

case "${1:-}" in
  test)
    shift
    cd "$root"
    exec "$venv/bin/python" -m pytest -n auto "$@"
    ;;
  '')
    cd "$root"
    exec "$venv/bin/python" -m chartgen press
    ;;
  *) exec "$venv/bin/python" -m chartgen "$@" ;;
esac
