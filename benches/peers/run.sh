#!/usr/bin/env bash
# Measures the mesher and the solver beside general-purpose libraries and writes benches/results/. Needs a Rust toolchain, python3 with
# venv, and on a Debian system apt-get for one of the solvers; installs nothing outside the target folder. Takes about half an hour;
# leave the machine alone meanwhile. `run.sh meshers` and `run.sh solvers [SYSTEM...]` measure one of the two.
set -euo pipefail
cd "$(dirname "$0")/../.."
what="${1:-all}"
shift || true

target="$(cargo metadata --no-deps --format-version 1 | python3 -c 'import json, sys; print(json.load(sys.stdin)["target_directory"])')"
cargo build --release -p coilwright-benches --bins
venv="$target/peers/venv"
[ -x "$venv/bin/python" ] || python3 -m venv "$venv"
"$venv/bin/pip" install --quiet --disable-pip-version-check -r benches/peers/requirements.txt

# UMFPACK is in no PyPI package that needs no compiler: Debian's, unpacked beside the venv.
debian="$target/peers/debian"
if [ ! -d "$debian" ] && command -v apt-get >/dev/null; then
    mkdir -p "$debian.part"
    if (cd "$debian.part" && apt-get download --quiet libumfpack5 libcholmod3 libamd2 libcamd2 libcolamd2 libccolamd2 \
        libsuitesparseconfig5 libmetis5 libopenblas0-pthread libgfortran5 libquadmath0 libgomp1); then
        for package in "$debian.part"/*.deb; do dpkg-deb -x "$package" "$debian.part"; done
        mv "$debian.part" "$debian"
    fi
fi
library="$(find "$target/peers" -name libumfpack.so.5 | head -n 1)"
folder="${library%/*}"

[ "$what" = solvers ] || "$venv/bin/python" benches/peers/meshers.py "$target/release/sections"
[ "$what" = meshers ] || LD_LIBRARY_PATH="${folder:+$folder:$folder/openblas-pthread}" \
    "$venv/bin/python" benches/peers/solvers.py "$target/release/systems" "$@"
