# Sourced by the two README commands: installs what is missing on Debian, configures and builds in build/.
# Arguments to glint_setup: further packages; -- and then further options for CMake.

glint_setup() {
    local packages="cmake g++ make pkg-config libeigen3-dev libtinyxml2-dev libstb-dev libcli11-dev nlohmann-json3-dev
                    libfmt-dev libtinyobjloader-dev doctest-dev"
    while [ $# -gt 0 ] && [ "$1" != "--" ]; do packages="$packages $1"; shift; done
    [ $# -gt 0 ] && shift
    local missing="" package
    for package in $packages; do
        dpkg-query -W -f='${Status}' "$package" 2>/dev/null | grep -q 'ok installed' || missing="$missing $package"
    done
    if [ -n "$missing" ]; then
        echo "Installing:$missing"
        local as_root=""
        [ "$(id -u)" = 0 ] || as_root="sudo"
        $as_root apt-get update -qq
        # shellcheck disable=SC2086  # a list of words on purpose
        $as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends $missing >/dev/null
    fi
    cmake -S . -B build "$@" >build-configure.log 2>&1 || { cat build-configure.log >&2; rm -f build-configure.log; return 1; }
    rm -f build-configure.log
}
