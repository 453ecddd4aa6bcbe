#!/usr/bin/env bash
# Checks the peer against itself, then prints the answer to one case as JSON.
#   tests/peer/run.sh CASE.json
# Python 3.11 or later; its packages go to an environment of their own under the target folder.
set -euo pipefail

case_file=${1:?usage: run.sh CASE.json}
here=$(cd "$(dirname "${BASH_SOURCE[0]}")" && pwd)
place=${CARGO_TARGET_DIR:-$here/../../target}/peer

# the list of packages is copied last, so an environment left half made is made again
if ! cmp -s "$here/requirements.txt" "$place/requirements.txt"; then
    mkdir -p "$place"
    "${PYTHON:-python3}" -m venv --clear "$place"
    "$place/bin/python" -m pip install --quiet --disable-pip-version-check \
        --requirement "$here/requirements.txt" >&2
    cp "$here/requirements.txt" "$place/requirements.txt"
fi

# keep the source folder as it is
export PYTHONPYCACHEPREFIX=$place/pycache
export PYTHONPATH=$here
if ! check=$("$place/bin/python" -m unittest --quiet test_peer 2>&1); then
    printf '%s\n' "$check" >&2
    exit 1
fi
"$place/bin/python" "$here/peer.py" "$case_file"
