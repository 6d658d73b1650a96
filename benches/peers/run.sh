#!/usr/bin/env bash
# Measures the mesher and the solver beside general-purpose libraries and writes benches/results/. Needs a Rust toolchain, python3 with
# venv, and on a Debian system apt-get for two of the solvers; installs nothing outside the target folder. Takes about half an hour;
# leave the machine alone meanwhile. `run.sh meshers` and `run.sh solvers` measure one of the two.
set -euo pipefail
cd "$(dirname "$0")/../.."
what="${1:-all}"

target="$(cargo metadata --no-deps --format-version 1 | python3 -c 'import json, sys; print(json.load(sys.stdin)["target_directory"])')"
cargo build --release -p coilwright-benches --bins
venv="$target/peers/venv"
[ -x "$venv/bin/python" ] || python3 -m venv "$venv"
"$venv/bin/pip" install --quiet --disable-pip-version-check -r benches/peers/requirements.txt

[ "$what" = solvers ] || "$venv/bin/python" benches/peers/meshers.py "$target/release/sections"
