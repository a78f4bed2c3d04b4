#!/usr/bin/env bash
# Set up what is missing in .venv beside this checkout, then open Armslength. Arguments go to `armslength`.
set -euo pipefail
cd "$(dirname "$0")/.."
. app/setup.sh
if [ ! -x "$venv/bin/armslength" ] || [ pyproject.toml -nt "$venv/bin/armslength" ]; then
  make_venv
  "$venv/bin/python" -m pip install --quiet --disable-pip-version-check -e .
  touch "$venv/bin/armslength"
fi
exec "$venv/bin/armslength" "$@"
