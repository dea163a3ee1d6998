# SPDX-License-Identifier: GPL-3.0-or-later
# Sourced by app/run and tests/run: brings in missing Debian packages, saying beforehand which.

BUILD_PACKAGES="g++ cmake ninja-build ccache mold qt6-base-dev qt6-svg-dev libsqlitecpp-dev libsqlite3-dev libfmt-dev
libeigen3-dev libboost-dev libtomlplusplus-dev libcli11-dev nlohmann-json3-dev libcsv-dev fonts-dejavu-core
libxkbcommon-x11-0"
TEST_PACKAGES="catch2 librapidcheck-dev libgsl-dev git"

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
    echo "Installing from Debian:$missing" >&2
    as_root=""
    if [ "$(id -u)" != 0 ]; then as_root=sudo; fi
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
