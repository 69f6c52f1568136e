#!/bin/bash
# The claim of a fresh machine: in a minimal Debian 12 with nothing installed, as root and without sudo,
# netlists/try.sh works, and with `--all` tests/run.sh too. Takes the packages from where this machine does.
#
# usage: tests/fresh.sh [--all] [--keep]     as root; needs debootstrap, and a gigabyte or three below TMPDIR
#
# A command of its own: it is not part of tests/run.sh.
set -eu
top=$(realpath "$(dirname "$(realpath "$0")")/..")
all=false keep=false
for word in "$@"; do
    case $word in
        --all) all=true ;;
        --keep) keep=true ;;
        *) echo "usage: tests/fresh.sh [--all] [--keep]" >&2; exit 2 ;;
    esac
done
[ "$(id -u)" = 0 ] || { echo "tests/fresh.sh has to be run as root" >&2; exit 2; }
. "$top/tests/packages.sh"
packages_install debootstrap

root=$(mktemp -d)
mounted=""
finish() {
    local point
    for point in $mounted; do umount "$point"; done
    $keep && echo "kept: $root" || rm -rf --one-file-system "$root"
}
trap finish EXIT

mirror=$(apt-get indextargets --format '$(REPO_URI) $(CODENAME) $(COMPONENT)' 'Identifier: Packages' \
    | awk '$2 == "bookworm" && $3 == "main" {print $1; exit}')
[ -n "$mirror" ] || { echo "this machine's apt has no source for Debian 12 (bookworm)" >&2; exit 1; }
echo "A minimal Debian 12 from $mirror"
debootstrap --variant=minbase bookworm "$root" "$mirror" >"$root.log" 2>&1 \
    || { tail -n 20 "$root.log" >&2; exit 1; }
rm "$root.log"

# Debian's own sources and the way to reach them; nothing else of this machine.
cp /etc/resolv.conf "$root/etc/" 2>/dev/null || true
cp /etc/hosts "$root/etc/" 2>/dev/null || true
apt-config dump | grep -E '^Acquire::(http|https|Retries)' >"$root/etc/apt/apt.conf.d/00reach" || true
rm -f "$root/etc/apt/sources.list"
grep -l debian-archive-keyring /etc/apt/sources.list.d/* 2>/dev/null \
    | xargs -r cp -t "$root/etc/apt/sources.list.d"
[ -n "$(ls "$root/etc/apt/sources.list.d")" ] \
    || echo "deb $mirror bookworm main" >"$root/etc/apt/sources.list"

for name in proc dev; do
    if [ $name = proc ]; then mount -t proc proc "$root/proc"; else mount --bind /dev "$root/dev"; fi
    mounted="$root/$name $mounted"
done

# What a fresh clone holds, without what was built here.
mkdir "$root/anabranch"
tar -C "$top" --exclude=./.git --exclude='./build*' --exclude=__pycache__ -cf - . \
    | tar -C "$root/anabranch" -xf -

inside() {
    echo "== $*"
    chroot "$root" env -i HOME=/root PATH=/usr/sbin:/usr/bin:/sbin:/bin LC_ALL=C "$@"
}
inside sh -c '! command -v sudo && ! command -v cc && ! command -v git'
inside anabranch/netlists/try.sh
inside sh -c 'anabranch/build/anabranch sweep anabranch/netlists/feed_four.anab | grep -q "^1000000000 "'
if $all; then
    inside env "ANB_SKIP=${ANB_SKIP:-}" anabranch/tests/run.sh
fi
echo "The fresh machine works."
