#!/bin/bash
# Installs the packages of the groups named from packages.txt: install-packages.sh GROUP...
#
# Does nothing, and needs no rights, when all of them are there already.
set -euo pipefail

list=$(dirname "$0")/packages.txt
[ $# -ge 1 ] || { echo "usage: install-packages.sh GROUP..." >&2; exit 64; }

packages_of() {
  local wanted=$1 group="" found="" line
  while read -r line; do
    case $line in
      "" | "#"*) ;;
      "["*) group=${line//[\[\]]/} ;;
      *) if [ "$group" = "$wanted" ]; then echo "$line"; found=yes; fi ;;
    esac
  done <"$list"
  [ -n "$found" ] || { echo "install-packages.sh: there is no group '$wanted' in $list" >&2; return 64; }
}

installed() {
  [ "$(dpkg-query -W -f '${Status}' "$1" 2>/dev/null)" = "install ok installed" ]
}

command -v apt-get >/dev/null || {
  echo "install-packages.sh: apt-get is not here; on another system install what $list names" >&2
  exit 69
}

missing=()
for group in "$@"; do
  packages=$(packages_of "$group")
  for package in $packages; do
    [[ " ${missing[*]} " == *" $package "* ]] || installed "$package" || missing+=("$package")
  done
done
[ ${#missing[@]} -gt 0 ] || exit 0

as_root=()
if [ "$(id -u)" != 0 ]; then
  command -v sudo >/dev/null || {
    echo "install-packages.sh: run this as root once: apt-get install ${missing[*]}" >&2
    exit 77
  }
  as_root=(sudo)
fi

echo "Installing ${#missing[@]} packages: ${missing[*]}"
log=$(mktemp)
trap 'rm -f "$log"' EXIT
apt() {
  "${as_root[@]}" env DEBIAN_FRONTEND=noninteractive \
    apt-get -qq -o DPkg::Lock::Timeout=300 "$@" >"$log" 2>&1 || { cat "$log" >&2; return 1; }
}
# A source that cannot be read may be one that is not needed; the installation shows.
apt update || echo "install-packages.sh: not every package source could be read" >&2
apt install --yes --no-install-recommends "${missing[@]}"
