#!/bin/bash
# Installs the C library on a host: `src/capi/install.sh PREFIX` (by default /usr/local) builds the shared and the static library
# and puts them, the header and a pkg-config file under PREFIX. Needs cargo. DESTDIR goes before PREFIX, for packages.
set -euo pipefail
case ${1:-} in
-*)
    sed -n '2,3s/^# //p' "$0"
    exit
    ;;
esac
prefix=${1:-/usr/local}
# a relative one counts from where the script was called
[[ $prefix == /* ]] || prefix=$PWD/$prefix
stage=${DESTDIR:-}
[[ -z $stage || $stage == /* ]] || stage=$PWD/$stage
[[ $prefix != *[[:space:]]* ]] || { echo "install.sh: '$prefix': expected a prefix without spaces, which pkg-config would part" >&2; exit 2; }
cd "$(dirname "$0")/../.."
root=$stage$prefix
target=target/capi-install
version=$(sed -n 's/^version = "\(.*\)"/\1/p' Cargo.toml | head -n 1)

for kind in cdylib staticlib; do
    name=()
    # a shared library carries its name
    [ $kind = cdylib ] && name=(-- -C link-arg=-Wl,-soname,libohmwright.so)
    cargo rustc --quiet --profile embedded --lib --crate-type $kind --features capi,std --target-dir $target "${name[@]}"
done
# what a program must link beside the static library, as the compiler says
native="-lpthread -lm -ldl"

install -d "$root/lib/pkgconfig" "$root/include"
install -m 644 $target/embedded/libohmwright.a "$root/lib/"
install -m 755 $target/embedded/libohmwright.so "$root/lib/"
install -m 644 src/capi/ohmwright.h "$root/include/"
cat > "$root/lib/pkgconfig/ohmwright.pc" <<PC
prefix=$prefix
libdir=\${prefix}/lib
includedir=\${prefix}/include

Name: ohmwright
Description: Bridge volts and ohms to microstrain and degrees, exact for the circuit that was wired
Version: $version
Libs: -L\${libdir} -lohmwright
Libs.private: $native
Cflags: -I\${includedir}
PC
echo "installed under $root"
