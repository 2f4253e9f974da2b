#!/bin/sh
# List the program for this user, and open .crew.json files with it: sh install.sh [PATH OF full-complement]
# Without a path the one that is found by name. Undo: sh install.sh --remove
set -eu
here=$(cd "$(dirname "$0")" && pwd)
icon=$here/../icons/full-complement
share=${XDG_DATA_HOME:-$HOME/.local/share}
entry=$share/applications/full-complement.desktop
kind=$share/mime/packages/full-complement.xml
svg=$share/icons/hicolor/scalable/apps/full-complement.svg
png=$share/icons/hicolor/256x256/apps/full-complement.png

if [ "${1:-}" = --remove ]; then
    rm -f "$entry" "$kind" "$svg" "$png"
else
    program=${1:-full-complement}
    case $program in */*) program=$(cd "$(dirname "$program")" && pwd)/$(basename "$program") ;; esac
    mkdir -p "${entry%/*}" "${kind%/*}" "${svg%/*}" "${png%/*}"
    while IFS= read -r line; do
        case $line in Exec=*) printf 'Exec="%s" %%f\n' "$program" ;; *) printf '%s\n' "$line" ;; esac
    done <"$here/full-complement.desktop" >"$entry"
    cp "$here/full-complement.xml" "$kind"
    cp "$icon.svg" "$svg"
    cp "$icon.png" "$png"
fi
for tool in "update-mime-database $share/mime" "update-desktop-database $share/applications"; do
    command -v "${tool%% *}" >/dev/null 2>&1 && $tool || true
done
