# Set-up shared by tests/run and sample_models/run; sourced by bash, not run.
# The caller stands at the top of the checkout.  Everything goes into .venv and, as root or
# through sudo without a password, into the system's packages.

VENV=.venv
HOST_PACKAGES=(freecad xvfb xauth libgl1-mesa-dri python3-pivy python3-pyside2.qttest python3-venv)

say() { printf '==> %s\n' "$*"; }
stop() { printf 'Stopped: %s\n' "$*" >&2; exit 2; }

# as_root COMMAND...: runs it with the rights to install packages; fails where there are none.
as_root() {
  if [ "$(id -u)" = 0 ]; then "$@"; else sudo -n "$@"; fi
}

can_install() {
  command -v apt-get >/dev/null || return 1
  [ "$(id -u)" = 0 ] || { command -v sudo >/dev/null && sudo -n true 2>/dev/null; }
}

# apt_install PACKAGE...: installs those that are missing, without asking anything.
apt_install() {
  local missing=() package log
  for package in "$@"; do
    dpkg-query -W -f='${Status}' "$package" 2>/dev/null | grep -q 'ok installed' ||
      missing+=("$package")
  done
  [ ${#missing[@]} = 0 ] && return 0
  say "Installing ${missing[*]} (apt)"
  log=$(mktemp)
  if as_root env DEBIAN_FRONTEND=noninteractive apt-get update -qq >"$log" 2>&1 &&
    as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -q --no-install-recommends \
      "${missing[@]}" >>"$log" 2>&1; then
    rm -f "$log"
  else
    tail -n 15 "$log" >&2
    rm -f "$log"
    return 1
  fi
}

# suits PYTHON MODULE...: whether it is Python 3.11 or later and has the modules.
suits() {
  local python=$1; shift
  "$python" -c 'import sys, importlib.util as u
sys.exit(sys.version_info < (3, 11) or any(u.find_spec(m) is None for m in sys.argv[1:]))' \
    "$@" 2>/dev/null
}

# The system's own Python first: FreeCAD from the system's packages runs on that one.
PYTHONS=(/usr/bin/python3 python3 python3.14 python3.13 python3.12 python3.11)

find_python() {
  local python
  for python in "${PYTHONS[@]}"; do
    suits "$python" "$@" && { command -v "$python"; return 0; }
  done
  return 1
}

make_venv() {
  local python
  if python=$(find_python venv ensurepip); then
    "$python" -m venv "$VENV"
  elif suits /usr/bin/python3 && can_install && apt_install python3-venv; then
    python=/usr/bin/python3
    "$python" -m venv "$VENV"
  elif python=$(find_python venv pip); then
    # No ensurepip (Debian keeps it in python3-venv): the Python's own pip fills the venv.
    "$python" -m venv --without-pip "$VENV"
    "$python" -m pip --python "$VENV/bin/python" install -qq pip setuptools
  else
    find_python >/dev/null ||
      stop "no Python 3.11 or later was found (looked for ${PYTHONS[*]}). Install one and run this again."
    stop "this Python cannot make a virtual environment. Install the package python3-venv and run this again."
  fi
  say "Made $VENV with $("$VENV/bin/python" --version) ($python)"
}

# install_project EXTRA...: makes .venv and installs the project with these extras.
install_project() {
  local extras stamp wanted
  extras=$(IFS=,; printf '%s' "$*")
  stamp=$VENV/installed-$(printf '%s' "$extras" | tr , -)
  "$VENV/bin/python" -c 'import pip' 2>/dev/null || { rm -rf "$VENV"; make_venv; }
  wanted=$(cksum <pyproject.toml; "$VENV/bin/python" --version)
  if [ "$(cat "$stamp" 2>/dev/null)" = "$wanted" ]; then
    say "$VENV is up to date"
    return 0
  fi
  say "Installing Spanledger and its packages into $VENV (pip)"
  "$VENV/bin/python" -m pip install -qq -e ".[$extras]" ||
    stop "pip could not install the project (see above). Check the connection and run this again."
  printf '%s\n' "$wanted" >"$stamp"
}

# host_ready: whether FreeCAD and a virtual display are there.
host_ready() {
  local command
  for command in freecad freecadcmd xvfb-run xauth; do
    command -v "$command" >/dev/null || return 1
  done
}

# install_host: puts FreeCAD and a virtual display in place where that is possible.
install_host() {
  if can_install; then apt_install "${HOST_PACKAGES[@]}" && host_ready; else host_ready; fi
}

# match_host_python: remakes .venv where it was made by another Python than FreeCAD's.
match_host_python() {
  local host venv
  host=$(freecadcmd -c 'import sys; print("python", *sys.version_info[:2])' </dev/null 2>/dev/null |
    sed -n 's/^python //p')
  [ -x "$VENV/bin/python" ] || return 0
  venv=$("$VENV/bin/python" -c 'import sys; print(*sys.version_info[:2])')
  [ "$host" = "$venv" ] || [ -z "$host" ] && return 0
  suits /usr/bin/python3 venv ensurepip || return 0
  say "FreeCAD runs Python ${host/ /.}, $VENV has ${venv/ /.}: making $VENV again"
  rm -rf "$VENV"
}
