#!/usr/bin/env bash
# Brings Debian's source package of the reference BLAS and LAPACK into a folder, for the tests that read it.
# usage: tests/support/lapack-source.sh [FOLDER]     default: $MORTISE_LAPACK_SOURCE, else .scratch/lapack
set -euo pipefail
cd "$(dirname "$0")/../.."
folder=$(realpath -m "${1:-${MORTISE_LAPACK_SOURCE:-.scratch/lapack}}")
[ -d "$folder/SRC" ] && exit 0

# Package lists of their own: the machine's stay as they are, in whichever of the two formats it keeps its sources.
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
chmod 755 "$work"
mkdir -p "$work/parts" "$work/lists/partial" "$work/package"
touch "$work/sources.list"
for list in /etc/apt/sources.list /etc/apt/sources.list.d/*.list; do
  if [ -f "$list" ]; then sed -n 's/^[[:space:]]*deb[[:space:]]/deb-src /p' "$list" >>"$work/sources.list"; fi
done
for list in /etc/apt/sources.list.d/*.sources; do
  if [ -f "$list" ]; then sed 's/^Types:.*/Types: deb-src/' "$list" >"$work/parts/$(basename "$list")"; fi
done
apt=(-qq -o "Dir::Etc::SourceList=$work/sources.list" -o "Dir::Etc::SourceParts=$work/parts"
  -o "Dir::State::Lists=$work/lists" -o APT::Sandbox::User=root -o Acquire::Retries=3)
apt-get "${apt[@]}" update
(cd "$work/package" && apt-get "${apt[@]}" source --download-only lapack)
mkdir -p "$folder"
tar -xf "$work"/package/lapack_*.orig.tar.* -C "$folder" --strip-components=1
