#!/usr/bin/env bash
# Installs what is missing from debian-packages.txt, and nothing else.
#
# Does nothing (and needs no rights and no network) when everything is there. Otherwise apt-get
# runs without recommended packages, through sudo unless the user is root; package lists are
# refreshed only when they do not offer a package or an installation failed.
set -euo pipefail

here="$(cd -- "$(dirname -- "${BASH_SOURCE[0]}")" && pwd)"
mapfile -t wanted <<<"$(sed -e 's/#.*//' -e 's/[[:space:]]//g' -e '/^$/d' "$here/debian-packages.txt")"

fail() {
  printf 'install-packages: %s\n' "$1" >&2
  exit 1
}

if ! command -v dpkg-query >/dev/null || ! command -v apt-get >/dev/null; then
  printf 'install-packages: this is not a Debian system; the build goes on and needs what these packages hold: %s\n' \
    "${wanted[*]}" >&2
  exit 0
fi

missing=()
for package in "${wanted[@]}"; do
  status="$(dpkg-query -W -f='${db:Status-Status}' "$package" 2>/dev/null || true)"
  [[ $status == installed ]] || missing+=("$package")
done
[[ ${#missing[@]} -gt 0 ]] || exit 0

as_root=()
if [[ $EUID -ne 0 ]]; then
  command -v sudo >/dev/null ||
    fail "missing packages, and neither root nor sudo is at hand; as root run: apt-get install --no-install-recommends ${missing[*]}"
  as_root=(sudo)
fi
apt() { "${as_root[@]}" env DEBIAN_FRONTEND=noninteractive apt-get -y -q "$@" </dev/null; }

printf 'Installing Debian packages: %s\n' "${missing[*]}"
updated=no
for package in "${missing[@]}"; do
  if [[ -z "$(apt-cache show --no-all-versions "$package" 2>/dev/null)" ]]; then
    apt update || fail "the package lists cannot be refreshed (apt-get update); check the network and the package sources"
    updated=yes
    break
  fi
done
if ! apt install --no-install-recommends "${missing[@]}"; then
  [[ $updated == no ]] || fail "apt-get could not install: ${missing[*]}"
  apt update || fail "the package lists cannot be refreshed (apt-get update); check the network and the package sources"
  apt install --no-install-recommends "${missing[@]}" || fail "apt-get could not install: ${missing[*]}"
fi
