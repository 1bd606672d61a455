#!/bin/sh
# Renews requirements/run.lock and requirements/check.lock from the two .in files beside them:
#   sh tools/lock.sh              keeps what is pinned as far as the .in files allow
#   sh tools/lock.sh --upgrade    takes the newest
# Needs uv (only for this; installing is done with pip). The locks hold a hash of every file of each release, one version
# for all Pythons from 3.11 on, and name no index.
set -eu
cd -- "$(dirname -- "$0")/../requirements"
command -v uv >/dev/null || { echo 'tools/lock.sh: uv is needed: https://docs.astral.sh/uv' >&2; exit 3; }

compile() {  # LOCK IN...
  lock=$1
  shift
  uv pip compile --quiet --universal --python-version 3.11 --fork-strategy fewest --generate-hashes --no-header \
    --no-annotate $upgrade -o "$lock" "$@"
}

upgrade=${1:-}
compile run.lock run.in
# Constrained by the first, so that what is tested is what is run.
compile check.lock run.in check.in -c run.lock
