#!/usr/bin/env bash
# The real window on a real (virtual) display: opens, settles, rests, resizes, hides, closes.
#
#   tests/window-e2e.sh PROGRAM FOLDER [RENDERER...]
#
# Starts PROGRAM once with each RENDERER (auto and cpu unless told otherwise), writes a picture of each window
# into FOLDER, and once with no display at all. Says what it does; ends with status 0 if all of it went well.
# Needs the packages in .ci/packages-window (on Debian).
set -euo pipefail
[[ $# -ge 2 ]] || { sed -n '2,8p' "$0" >&2; exit 2; }
program=$(realpath "$1"); folder=$2; shift 2
renderers=("$@"); [[ ${#renderers[@]} -gt 0 ]] || renderers=(auto cpu)
for tool in Xvfb openbox xdotool import identify; do
    command -v "$tool" >/dev/null || { echo "FAIL: $tool is missing (see .ci/packages-window)" >&2; exit 1; }
done
mkdir -p "$folder"
work=$(mktemp -d); pids=()
cleanup() {
    for p in "${pids[@]}"; do kill "$p" 2>/dev/null || true; done
    wait 2>/dev/null || true
    rm -rf "$work"
}
trap cleanup EXIT
fail() { echo "FAIL: $*" >&2; tail -n 5 "$work/program.log" >&2 2>/dev/null || true; exit 1; }
say() { echo "ok: $*"; }

# wait_for SECONDS COMMAND...: polls until it succeeds. xdotool's own --sync can wait for ever.
wait_for() {
    local end=$((SECONDS + $1)); shift
    until "$@" >/dev/null 2>&1; do ((SECONDS < end)) || return 1; sleep 0.05; done
}

# The display announces its number when it can be used; a window mapped before the window manager is up
# would stay unmanaged, so that says when it is ready too.
mkfifo "$work/number"
Xvfb -displayfd 3 -screen 0 1600x1000x24 -nolisten tcp 3>"$work/number" 2>"$work/xvfb.log" & pids+=($!)
read -r number <"$work/number"
export DISPLAY=:$number; unset WAYLAND_DISPLAY WAYLAND_SOCKET
openbox --startup "touch $work/manager-up" >"$work/openbox.log" 2>&1 & pids+=($!)
wait_for 20 test -e "$work/manager-up" || fail "no window manager"
say "display :$number with a window manager"

find_window() { window=$(xdotool search --onlyvisible --class parabound | tail -1); [[ -n $window ]]; }
picture() { import -silent -window "$window" "$1"; }
fingerprint() { import -silent -window "$window" rgba:- | md5sum; }
# Two equal pictures in a row.
settled() {
    local now before=''
    for _ in $(seq 100); do
        # A window that is just coming up cannot be read yet.
        now=$(fingerprint 2>/dev/null) || now=unread-$SECONDS-$RANDOM
        [[ $now == "$before" ]] && return
        before=$now; sleep 0.15
    done
    return 1
}
ticks() { awk '{print $14 + $15}' "/proc/$1/stat"; }
gone() { ! kill -0 "$1"; }
wide() { [[ $(xdotool getwindowgeometry --shell "$window" | sed -n 's/^WIDTH=//p') -eq $1 ]]; }

one_window() {
    local renderer=$1 running out=$folder/window-$1.png
    "$program" --renderer "$renderer" >"$work/program.log" 2>&1 & running=$!; pids+=("$running")
    wait_for 60 find_window || fail "$renderer: no window"
    settled || fail "$renderer: the window keeps changing"
    picture "$out"
    local colours; colours=$(identify -format '%k' "$out")
    [[ $colours -gt 100 ]] || fail "$renderer: a blank window ($colours colours)"
    say "$renderer: window $(identify -format '%wx%h' "$out"), $colours colours, $out"

    local before after; before=$(ticks "$running"); sleep 3; after=$(ticks "$running")
    [[ $((after - before)) -le 6 ]] || fail "$renderer: busy while idle ($((after - before)) ticks in 3 s)"
    say "$renderer: at rest, $((after - before)) ticks of processor time in 3 s"

    xdotool windowsize "$window" 1013 707
    wait_for 10 wide 1013 || fail "$renderer: the size does not change"
    settled || fail "$renderer: keeps changing after a new size"
    picture "$folder/window-$renderer-small.png"
    say "$renderer: resized to 1013x707"

    xdotool windowminimize "$window"; sleep 1
    kill -0 "$running" || fail "$renderer: ended when minimised"
    xdotool windowmap "$window"; wait_for 10 find_window || fail "$renderer: does not come back"
    settled || fail "$renderer: keeps changing after coming back"
    say "$renderer: minimised and brought back"

    active() { xdotool windowactivate "$window" && [[ $(xdotool getactivewindow) == "$window" ]]; }
    wait_for 10 active || fail "$renderer: cannot be made active"
    xdotool key --clearmodifiers alt+F4
    wait_for 15 gone "$running" || fail "$renderer: does not close"
    wait "$running" || fail "$renderer: closed with status $?"
    say "$renderer: closed by the window manager, status 0"
}
for renderer in "${renderers[@]}"; do one_window "$renderer"; done

status=0
env -u DISPLAY "$program" >"$work/program.log" 2>&1 || status=$?
[[ $status -eq 3 ]] || fail "without a display: status $status instead of 3"
[[ $(wc -l <"$work/program.log") -eq 1 ]] && grep -q 'parabound study' "$work/program.log" ||
    fail "without a display: not one line that names the way out"
say "without a display: status 3, '$(cat "$work/program.log")'"
echo "all went well"
