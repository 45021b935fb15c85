#!/bin/sh
# Builds the peers and compares: sh testdata/peers/run.sh, from anywhere.
# Needs a C compiler, SUNDIALS and Python 3 with venv
# (apt-get install build-essential libsundials-dev python3-venv).
set -eu
here=$(cd "$(dirname "$0")" && pwd)
cd "$here/../.."
tmp=$(mktemp -d)
trap 'rm -rf "$tmp"' EXIT
trap 'exit 130' INT TERM

cc -O3 -march=native -Wall -o "$tmp/cvode" "$here"/cvode/*.c \
	-lsundials_cvode -lsundials_nvecserial -lsundials_sunmatrixdense -lsundials_sunlinsoldense -lm ||
	{ echo "no CVODE: apt-get install build-essential libsundials-dev" >&2; exit 1; }
python3 -m venv "$tmp/venv" ||
	{ echo "no Python: apt-get install python3-venv" >&2; exit 1; }
"$tmp/venv/bin/pip" install --quiet --disable-pip-version-check -r "$here/scipy/requirements.txt"
go build -o "$tmp/peers" ./testdata/peers

"$tmp/peers" -cvode "$tmp/cvode" -python "$tmp/venv/bin/python" -script "$here/scipy/main.py" \
	-dir "$tmp" -out "$here/RESULTS.md"
