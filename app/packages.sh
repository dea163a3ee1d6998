# SPDX-License-Identifier: GPL-3.0-or-later
# Sourced by app/run and tests/run: brings in missing Debian packages, saying beforehand which, and builds.

BUILD_PACKAGES="g++ cmake ninja-build ccache mold qt6-base-dev qt6-svg-dev libqt6svg6 libsqlitecpp-dev libsqlite3-dev
libfmt-dev libeigen3-dev libboost-dev libtomlplusplus-dev libcli11-dev nlohmann-json3-dev libcsv-dev fonts-dejavu-core
libxkbcommon-x11-0"
TEST_PACKAGES="catch2 librapidcheck-dev libgsl-dev git"

# What a window needs where there is a Wayland display and no X11 one.
display_packages() {
    if [ -n "${WAYLAND_DISPLAY-}" ] && [ -z "${DISPLAY-}" ]; then echo qt6-wayland; fi
}

# need_packages PACKAGE...: installs those that are missing; sudo only when not root.
need_packages() {
    missing=""
    for package in "$@"; do
        state=$(dpkg-query -W -f='${db:Status-Abbrev}' "$package" 2>/dev/null || true)
        case "$state" in ii*) ;; *) missing="$missing $package" ;; esac
    done
    [ -z "$missing" ] && return 0
    if ! command -v apt-get >/dev/null 2>&1; then
        echo "These packages are missing, and there is no apt-get to install them with:$missing" >&2
        return 4
    fi
    as_root=""
    if [ "$(id -u)" != 0 ]; then
        as_root=sudo
        if ! command -v sudo >/dev/null 2>&1; then
            echo "These packages are missing, and there is no sudo to install them with; as root:" >&2
            echo "apt-get install --no-install-recommends$missing" >&2
            return 4
        fi
    fi
    echo "Installing from Debian${as_root:+ with sudo}:$missing" >&2
    $as_root apt-get -qq -o DPkg::Lock::Timeout=400 update >&2 || return 4
    # shellcheck disable=SC2086
    $as_root env DEBIAN_FRONTEND=noninteractive apt-get -qq -o DPkg::Lock::Timeout=400 install -y \
        --no-install-recommends $missing >&2 || return 4
}

# configure SOURCE BUILD cmake-option...: with the compiler cache and the fast linker where they are present.
configure() {
    source_dir=$1
    build_dir=$2
    shift 2
    command -v ccache >/dev/null 2>&1 && set -- "$@" -DCMAKE_CXX_COMPILER_LAUNCHER=ccache
    command -v mold >/dev/null 2>&1 && set -- "$@" -DCMAKE_EXE_LINKER_FLAGS=-fuse-ld=mold
    cmake -G Ninja -S "$source_dir" -B "$build_dir" "$@"
}

# ready SOURCE BUILD cmake-option...: whether the build folder is configured, for this source, with these options.
# What has changed in the source since then, ninja finds out by itself.
ready() {
    [ -f "$2/build.ninja" ] && [ -f "$2/CMakeCache.txt" ] || return 1
    if ! grep -qxF "CMAKE_HOME_DIRECTORY:INTERNAL=$1" "$2/CMakeCache.txt"; then
        rm -f "$2/CMakeCache.txt" # the folder was moved or copied here
        return 1
    fi
    cache=$2/CMakeCache.txt
    shift 2
    for option in "$@"; do
        name=${option#-D}
        grep -qE "^${name%%=*}:[A-Z]+=${name#*=}\$" "$cache" || return 1
    done
}

# build_targets SOURCE BUILD LOG target... [-- cmake-option...]: configures where needed and builds; what was said in
# between goes to LOG, and to standard error when it fails. An option not named keeps the value that it had.
build_targets() {
    source_dir=$1
    build_dir=$2
    log=$3
    shift 3
    targets=""
    while [ $# -gt 0 ]; do
        if [ "$1" = -- ]; then
            shift
            break
        fi
        targets="$targets $1"
        shift
    done
    case " $* " in *" -DCMAKE_BUILD_TYPE="*) ;; *) set -- "$@" -DCMAKE_BUILD_TYPE=Release ;; esac
    mkdir -p "$build_dir"
    if ! ready "$source_dir" "$build_dir" "$@"; then
        if ! configure "$source_dir" "$build_dir" "$@" >"$log" 2>&1; then
            cat "$log" >&2
            return 1
        fi
    fi
    # On a terminal the progress is worth seeing; elsewhere only what went wrong.
    if [ -t 2 ]; then
        # shellcheck disable=SC2086
        ninja -C "$build_dir" $targets >&2 || return 1
    else
        # shellcheck disable=SC2086
        if ! ninja -C "$build_dir" $targets >"$log" 2>&1; then
            cat "$log" >&2
            return 1
        fi
    fi
}
