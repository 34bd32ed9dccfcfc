#!/usr/bin/env bash
# The real window on a real (virtual) display: opens, settles, rests, resizes, hides, closes; and, driven by keys
# and mouse alone, goes from a file that does not state its units to findings and a figure on disk.
#
#   tests/window-e2e.sh PROGRAM FOLDER [RENDERER...]
#
# Starts PROGRAM once with each RENDERER (auto and cpu unless told otherwise), writes a picture of each window
# into FOLDER, and once with no display at all. Says what it does; ends with status 0 if all of it went well.
# Needs the packages in .ci/packages-window (on Debian).
set -euo pipefail
[[ $# -ge 2 ]] || { sed -n '2,9p' "$0" >&2; exit 2; }
program=$(realpath "$1"); folder=$2; shift 2
renderers=("$@"); [[ ${#renderers[@]} -gt 0 ]] || renderers=(auto cpu)
for tool in Xvfb openbox xdotool import identify; do
    command -v "$tool" >/dev/null || { echo "FAIL: $tool is missing (see .ci/packages-window)" >&2; exit 1; }
done
mkdir -p "$folder"
work=$(mktemp -d); pids=()
# Nothing of the user's own is touched.
export PARABOUND_STATE_DIR=$work/state-of-windows
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

active() { xdotool windowactivate "$window" && [[ $(xdotool getactivewindow) == "$window" ]]; }

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

    wait_for 10 active || fail "$renderer: cannot be made active"
    xdotool key --clearmodifiers alt+F4
    wait_for 15 gone "$running" || fail "$renderer: does not close"
    wait "$running" || fail "$renderer: closed with status $?"
    say "$renderer: closed by the window manager, status 0"
}
for renderer in "${renderers[@]}"; do one_window "$renderer"; done

# The whole job by keys and mouse. What the window knows is read from the work it keeps beside itself.
type_text() { xdotool type --delay 12 "$1"; }
keys() { xdotool key --clearmodifiers --delay 30 "$@"; sleep 0.3; }
command_named() { keys ctrl+k; settled; type_text "$1"; sleep 0.5; keys Return; }
kept() { cat "$work"/state/work-*.parabound 2>/dev/null; }
knows() { kept | grep -q -- "$1"; }
type_path() { settled; keys ctrl+a; type_text "$1"; sleep 0.3; keys Return; }
# The right-most column of the picture that is mostly in the colour of the handles: the upper window edge.
upper_edge() {
    import -silent -window "$window" -crop 700x300+240+200 +repage txt:- |
        awk -F'[(,: )]+' '$3 > 170 && $3 - $5 > 80 && $4 > 140 && $4 < $3 { n[$1]++ }
            END { for (x in n) if (n[x] > 200 && x + 0 > best) best = x + 0; print best + 240 }'
}

whole_job() {
    local renderer=$1 running x moved
    export PARABOUND_STATE_DIR=$work/state
    # Invented numbers: a parabola with a cubic term, in angstrom and hartree, which the file does not say.
    awk 'BEGIN { print "R,E"; for (i = 0; i < 31; i++) { x = -0.3 + 0.03 * i;
        printf "%.3f,%.8f\n", 1.3 + x, 0.5 * x * x - 0.3 * x * x * x } }' >"$work/unknown.csv"
    "$program" --renderer "$renderer" --theme dark >"$work/program.log" 2>&1 & running=$!; pids+=("$running")
    wait_for 60 find_window || fail "$renderer: no window"
    settled || fail "$renderer: the window keeps changing"
    wait_for 10 active || fail "$renderer: cannot be made active"

    keys ctrl+o
    type_path "$work/unknown.csv"
    settled; picture "$folder/job-1-units.png"
    command_named "angstrom hartree"
    wait_for 20 knows '"file_name": "unknown.csv"' || fail "$renderer: the file is not open"
    say "$renderer: a file without units opened by keys, units chosen by name"
    settled; picture "$folder/job-2-opened.png"

    x=$(upper_edge); [[ $x -gt 260 ]] || fail "$renderer: no window edge to be seen"
    local y=330
    xdotool mousemove --window "$window" "$x" "$y"; sleep 0.3
    xdotool mousedown 1; sleep 0.3
    for moved in 10 20 30 40; do xdotool mousemove --window "$window" $((x + moved)) "$y"; sleep 0.15; done
    xdotool mouseup 1
    # What is kept is a moment behind.
    settled; sleep 2
    wait_for 20 knows '"to": ' || fail "$renderer: the edge at $x does not move"
    local dragged; dragged=$(kept | sed -n 's/^ *"to": \([0-9.]*\).*/\1/p' | head -1)
    say "$renderer: upper edge of the fit window dragged with the mouse, to $dragged"

    settled; picture "$folder/job-3-dragged.png"
    local findings=$work/unknown.findings.json
    keys ctrl+e
    type_path "$findings"
    wait_for 20 test -s "$findings" || fail "$renderer: no findings"
    grep -q '"format": "parabound.findings"' "$findings" && grep -q "\"to\": $dragged" "$findings" ||
        fail "$renderer: the findings are not those of the window"
    say "$renderer: findings written, with the window as dragged"
    cp "$findings" "$folder/"

    command_named "export picture"
    type_path "$work/seen.svg"
    wait_for 20 test -s "$work/seen.svg" || fail "$renderer: no picture"
    grep -q '<svg' "$work/seen.svg" || fail "$renderer: the picture is no SVG"
    cp "$work/seen.svg" "$folder/"
    say "$renderer: picture of the view written"

    keys ctrl+s
    type_path "$work/unknown.parabound"
    wait_for 20 test -s "$work/unknown.parabound" || fail "$renderer: no study file"
    "$program" figure "$work/unknown.csv" --settings "$work/unknown.parabound" --out "$work/unknown.svg" ||
        fail "$renderer: no figure from the study file"
    grep -q '<svg' "$work/unknown.svg" || fail "$renderer: the figure is no SVG"
    cp "$work/unknown.svg" "$folder/"
    "$program" recheck "$findings" --source "$work/unknown.csv" || fail "$renderer: recheck differs"
    say "$renderer: study saved, figure made from it, findings rechecked to the last digit"

    keys alt+F4
    wait_for 15 gone "$running" || fail "$renderer: does not close"
    wait "$running" || fail "$renderer: closed with status $?"
    export PARABOUND_STATE_DIR=$work/state-of-windows
}
whole_job cpu

# The fallback chain: what is not there is stood in for by a file that is no library, first on the search path.
mkdir -p "$work/no-gl" "$work/no-x"
touch "$work/no-gl/"{libGL.so.1,libGL.so,libEGL.so.1,libEGL.so,libOpenGL.so.0}
touch "$work/no-x/"{libX11.so.6,libX11.so,libX11-xcb.so.1,libX11-xcb.so,libXcursor.so.1,libXcursor.so,libXi.so.6,libXi.so}

# painted_by NAME WORD [ASSIGNMENT...]: a window comes, painted as the word says.
painted_by() {
    local name=$1 word=$2 running; shift 2
    env PARABOUND_VERBOSE=1 "$@" "$program" >"$work/program.log" 2>&1 & running=$!; pids+=("$running")
    wait_for 60 find_window || fail "$name: no window"
    wait_for 20 grep -q "painted $word" "$work/program.log" || fail "$name: not painted $word"
    settled || fail "$name: the window keeps changing"
    say "$name: $(grep -o 'painted .*' "$work/program.log")"
    wait_for 10 active || fail "$name: cannot be made active"
    xdotool key --clearmodifiers alt+F4
    wait_for 15 gone "$running" || fail "$name: does not close"
    wait "$running" || fail "$name: closed with status $?"
}
# refused NAME STATUS WORD [ASSIGNMENT...]: no window, one line with the way out.
refused() {
    local name=$1 wanted=$2 word=$3 status=0; shift 3
    env "$@" "$program" >"$work/program.log" 2>&1 || status=$?
    [[ $status -eq $wanted ]] || fail "$name: status $status instead of $wanted"
    [[ $(wc -l <"$work/program.log") -eq 1 ]] && grep -q -- "$word" "$work/program.log" ||
        fail "$name: not one line that names the way out"
    say "$name: status $status, '$(cat "$work/program.log")'"
}
painted_by "only emulated OpenGL" "by the processor"
painted_by "emulated OpenGL demanded" "through OpenGL" PARABOUND_RENDERER=gl
painted_by "the processor demanded" "by the processor" PARABOUND_RENDERER=cpu
painted_by "no OpenGL library" "by the processor" LD_LIBRARY_PATH="$work/no-gl"
refused "no OpenGL library, OpenGL demanded" 2 "--renderer auto" LD_LIBRARY_PATH="$work/no-gl" PARABOUND_RENDERER=gl
refused "no X library" 3 "parabound study" LD_LIBRARY_PATH="$work/no-x"
refused "a display that does not answer" 3 "parabound study" DISPLAY=:987

status=0
env -u DISPLAY "$program" >"$work/program.log" 2>&1 || status=$?
[[ $status -eq 3 ]] || fail "without a display: status $status instead of 3"
[[ $(wc -l <"$work/program.log") -eq 1 ]] && grep -q 'parabound study' "$work/program.log" ||
    fail "without a display: not one line that names the way out"
say "without a display: status 3, '$(cat "$work/program.log")'"
echo "all went well"
