#!/usr/bin/env bash
# Installs the pinned libraries into the build folder, runs the programs, prints one table.
set -euo pipefail
cd "$(dirname "$0")"

target=$(cargo metadata --format-version 1 --no-deps --manifest-path ../../Cargo.toml |
    python3 -c 'import json, sys; print(json.load(sys.stdin)["target_directory"])')
venv="$target/peers"
[ -x "$venv/bin/python" ] || python3 -m venv "$venv"
"$venv/bin/python" -m pip install --quiet --disable-pip-version-check -r requirements.txt
export PYTHONDONTWRITEBYTECODE=1

# $1 threads for the library and for the dense kernels below it, $2 program.
timed() {
    OMP_NUM_THREADS=$1 OPENBLAS_NUM_THREADS=$1 "$venv/bin/python" "$2" "$1"
}

lscpu | sed -n 's/^Model name: */processor: /p'
"$venv/bin/python" -c 'import platform; print("Python", platform.python_version(), flush=True)'
grep == requirements.txt | paste -sd ' '
"$venv/bin/python" rows.py
# Two threads can be slower than one on systems this small: both are shown.
for program in pressure.py cavity.py housing.py; do
    for threads in 1 2; do
        timed "$threads" "$program"
    done
done
