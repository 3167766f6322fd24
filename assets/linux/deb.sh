#!/bin/sh
# deb.sh FOLDER: packs FOLDER/annulet and FOLDER/annulet-batch for Debian, as
# FOLDER/annulet_VERSION_ARCH.deb; the same programs give the same package.
set -eu
here=$(cd "$(dirname "$0")" && pwd)
out=$(cd "$1" && pwd)
version=$("$out/annulet-batch" version | cut -d' ' -f2)
arch=$(dpkg --print-architecture)
stage=$(mktemp -d)
trap 'rm -rf "$stage"' EXIT
chmod 755 "$stage"
SOURCE_DATE_EPOCH=${SOURCE_DATE_EPOCH:-0}
export SOURCE_DATE_EPOCH
put() { install -D -m "$1" "$2" "$stage/$3"; }

put 755 "$out/annulet" usr/bin/annulet
put 755 "$out/annulet-batch" usr/bin/annulet-batch
put 644 "$here/annulet.desktop" usr/share/applications/annulet.desktop
put 644 "$here/annulet.metainfo.xml" usr/share/metainfo/annulet.metainfo.xml
put 644 "$here/annulet-scene.xml" usr/share/mime/packages/annulet.xml
put 644 "$here/../icon.svg" usr/share/icons/hicolor/scalable/apps/annulet.svg
put 644 "$here/../../LICENSE" usr/share/doc/annulet/copyright
mkdir -p "$stage/usr/share/man/man1" "$stage/usr/share/bash-completion/completions"
"$out/annulet-batch" man "$stage/usr/share/man/man1" >/dev/null
gzip -9n "$stage"/usr/share/man/man1/*.1
"$out/annulet-batch" completion bash >"$stage/usr/share/bash-completion/completions/annulet-batch"
mkdir "$stage/DEBIAN"
# What the programs link with, and what the window loads when it opens.
cat >"$stage/DEBIAN/control" <<END
Package: annulet
Version: $version
Architecture: $arch
Section: science
Priority: optional
Maintainer: The Annulet maintainers <maintainers@users.noreply.g-seed-34ac0aa5.example>
Depends: libc6 (>= 2.34), libgl1, libegl1, libwayland-client0, libwayland-cursor0, libwayland-egl1, libx11-6, libxcursor1, libxrandr2, libxinerama1, libxi6, libxxf86vm1, libxkbcommon0
Description: lensing of the gas around compact objects
 Annulet traces light through the spacetime of a black hole, a star or a shell,
 previews the lensed image of the gas around it, and measures photon rings,
 lines, visibilities and light curves beside their closed forms.
END
find "$stage" -exec touch -h -d @0 {} +
dpkg-deb --root-owner-group -Zxz --build "$stage" "$out/annulet_${version}_$arch.deb"
