# Sourced by app/start.sh and tests/run: the virtual environment, and how to install a Debian package.
# PYTHON chooses the interpreter (3.11 or newer), VENV the folder.
python=${PYTHON:-python3}
venv=${VENV:-.venv}

as_root() {
  if [ "$(id -u)" = 0 ]; then "$@"; else sudo "$@"; fi
}

# Install Debian packages, waiting for another package manager to finish.
debian_install() {
  if ! command -v apt-get >/dev/null; then
    echo "This is not Debian: install what provides $* by hand, then run this again." >&2
    exit 1
  fi
  as_root apt-get -qq -o DPkg::Lock::Timeout=300 update
  as_root env DEBIAN_FRONTEND=noninteractive apt-get -qq -y --no-install-recommends -o DPkg::Lock::Timeout=300 install "$@" >/dev/null
}

make_venv() {
  command -v "$python" >/dev/null || debian_install python3 python3-venv
  "$python" -c 'import sys; sys.exit(sys.version_info < (3, 11))' || {
    echo "Armslength needs Python 3.11 or newer; $python is $("$python" -V). Set PYTHON to a newer one." >&2
    exit 1
  }
  if [ -d "$venv" ] && ! "$venv/bin/python" -m pip --version >/dev/null 2>&1; then
    rm -rf "$venv" # half made, as a Debian without python3-venv leaves it
  fi
  if [ ! -d "$venv" ]; then
    "$python" -c 'import ensurepip' 2>/dev/null || debian_install python3-venv
    "$python" -m venv "$venv"
  fi
}
