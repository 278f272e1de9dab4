# Sourced by scenario/run.sh and tests/run.sh: the Debian 12 packages of the build, and how the repo is built.
# Nothing is installed where all of them are there already. ccache speeds rebuilds up and is not needed.

build_packages=(
  build-essential cmake ninja-build git
  libsqlitecpp-dev libsqlite3-dev sqlite3
  libeigen3-dev libhowardhinnant-date-dev libspdlog-dev libfmt-dev
  libcli11-dev nlohmann-json3-dev libssl-dev zlib1g-dev libboost-math-dev catch2
)

# install_missing PACKAGE...: installs those that dpkg does not know as installed.
install_missing() {
  local missing=() package
  for package in "$@"; do
    if [ "$(dpkg-query -W -f '${db:Status-Status}' "$package" 2>/dev/null || true)" != installed ]; then
      missing+=("$package")
    fi
  done
  if [ ${#missing[@]} -eq 0 ]; then return 0; fi
  local as_root=()
  if [ "$(id -u)" -ne 0 ]; then
    if ! command -v sudo >/dev/null; then
      echo "These packages are missing, and installing them needs root: ${missing[*]}" >&2
      return 1
    fi
    as_root=(sudo)
  fi
  echo "Installing ${missing[*]}"
  "${as_root[@]}" apt-get update -q
  "${as_root[@]}" env DEBIAN_FRONTEND=noninteractive apt-get install -q -y --no-install-recommends "${missing[@]}"
}

# configure FOLDER [CMAKE OPTION...]: configures a build folder with Ninja, started over where the source moved.
configure() {
  local folder=$1
  shift
  if [ -f "$folder/CMakeCache.txt" ] &&
    ! grep -qxF "CMAKE_HOME_DIRECTORY:INTERNAL=$PWD" "$folder/CMakeCache.txt"; then
    rm -f "$folder/CMakeCache.txt"
  fi
  cmake -S . -B "$folder" -G Ninja "$@"
}

# Jobs of a build: 2, or what SCOURBOOK_JOBS says.
build_jobs=${SCOURBOOK_JOBS:-2}
