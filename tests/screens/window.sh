#!/bin/sh
# A journey in a real window, with the keyboard alone: open a study, write both exports, write
# prose, save, close, and read what was written with the commands.
#
#   tests/screens/window.sh PROGRAM
#
# Needs Xvfb and xdotool. Ends with status 0 and one line, or says what was missed.
set -eu

program=$1
folder=$(mktemp -d)
display=:$((90 + $$ % 400))
HOME=$folder/home
export HOME
mkdir "$HOME"

miss() {
    echo "window journey: $1" >&2
    exit 1
}

# 30 invented dishes with 40 readings; the third reading follows the sweetness.
awk 'BEGIN {
    srand(7); printf "dish,sweetness"; for (j = 1; j <= 40; j++) printf ",r%d", j; print ""
    for (i = 1; i <= 30; i++) {
        for (j = 1; j <= 40; j++) x[j] = rand()
        printf "dish %02d,%.3f", i, 5 + 3 * x[3] + 2 * rand()
        for (j = 1; j <= 40; j++) printf ",%.4f", x[j]
        print ""
    }
}' > "$folder/dishes.csv"
cd "$folder"
"$program" start dishes.csv --outcome sweetness --parts 4 --repeats 1 --outer-parts 3 \
    --outer-repeats 1 -o dishes.widefold 2> /dev/null
"$program" update dishes.widefold 2> /dev/null || true

Xvfb "$display" -noreset -screen 0 1280x800x24 > /dev/null 2>&1 &
screen=$!
DISPLAY=$display
# Without an input method of its own a bare server can keep keys back.
XMODIFIERS=@im=none
export DISPLAY XMODIFIERS
sleep 1
"$program" dishes.widefold > window.log 2>&1 &
window=$!
trap 'kill "$window" "$screen" 2> /dev/null || true; rm -rf "$folder"' EXIT

found=
for _ in $(seq 1 100); do
    found=$(xdotool search --onlyvisible --name Widefold 2> /dev/null | tail -n 1) && [ -n "$found" ] && break
    sleep 0.1
done
[ -n "$found" ] || miss "no window opened: $(cat window.log)"
sleep 1
xdotool windowfocus --sync "$found"
sleep 1

xdotool key ctrl+e
sleep 1
xdotool key ctrl+a
xdotool type --delay 40 "$folder/hand"
xdotool key Return
for _ in $(seq 1 100); do
    [ -s hand.md ] && break
    sleep 0.1
done
[ -s hand.xlsx ] || miss "the workbook was not written"
[ -s hand.md ] || miss "the write-up was not written"

before=$(cksum < dishes.widefold)
xdotool key ctrl+shift+s
sleep 1
xdotool key ctrl+a
xdotool type --delay 40 "$folder/copy.widefold"
xdotool key Return
for _ in $(seq 1 100); do
    [ -s copy.widefold ] && break
    sleep 0.1
done
[ -s copy.widefold ] || miss "the study was not saved"
[ "$before" = "$(cksum < dishes.widefold)" ] || miss "saving under another name changed the first file"
"$program" facts copy.widefold > facts.txt 2> /dev/null || true
grep -q sweetness facts.txt || miss "the saved study has no facts"

kill -0 "$window" 2> /dev/null || miss "the window ended by itself: $(cat window.log)"
echo "window journey: done"
