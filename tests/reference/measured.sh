#!/bin/bash
# Boards against monitors: the plans of the tree that have two stages or banks are built, their images are run, and what their
# pins do is measured and compared with VESA DMT (measured_dmt.py) and with the standards of television
# (measured_television.py, which names them). Then wrong plans and patched images, which must be seen.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
# Debian's, for its python3-yaml.
python=/usr/bin/python3
export PYTHONDONTWRITEBYTECODE=1

built() {
	timeout -k 5 60 "$SCANLATCH" build "$1" -o "$2" --format bin
}

# measured MEASURE …: `dmt`, or what measured_television.py measures, and its other arguments. Keeps what it printed.
measured() {
	local what=$1
	shift
	case $what in
	dmt) "$python" tests/reference/measured_dmt.py "$@" ;;
	*) "$python" tests/reference/measured_television.py "$what" "$@" ;;
	esac >"$work/found" 2>&1
}

# shows NAME LINE …: the last measurement printed these lines.
shows() {
	local name=$1 line
	shift
	for line; do
		holds "$name: $line" grep -Fxq -- "$line" "$work/found"
	done
}

# is_seen NAME STATUS LINE …: the last measurement failed, with these lines, and did not break down.
is_seen() {
	local name=$1 status=$2
	shift 2
	same "$name: is seen" 1 "$status"
	same "$name: is measured to the end" 0 "$(grep -c '^Traceback' "$work/found")"
	shows "$name" "$@"
}

# wrong NAME MEASURE SED LINE …: the plan NAME, changed, builds, and measuring it finds what the lines say.
turn=0
wrong() {
	local name=$1 measure=$2 change=$3 folder
	shift 3
	turn=$((turn + 1))
	folder=$work/wrong$turn
	mkdir "$folder"
	sed -e "$change" "plans/$name.yaml" >"$folder/$name.yaml"
	holds "$name with $change: is another plan" test "$(cmp "plans/$name.yaml" "$folder/$name.yaml" | wc -l)" -eq 1
	holds "$name with $change: builds" built "$folder/$name.yaml" "$folder"
	measured "$measure" "$folder/$name.yaml" "$folder"
	is_seen "$name with $change" $? "$@"
}

# patched NAME MEASURE LABEL BYTE BIT LINE …: the image of a chip, with that bit flipped.
patched() {
	local name=$1 measure=$2 label=$3 place=$4 bit=$5 folder image byte
	shift 5
	turn=$((turn + 1))
	folder=$work/patched$turn
	cp -R "$work/$name" "$folder"
	image=$folder/$name.$label.bin
	byte=$(od -An -tu1 -j "$place" -N 1 "$image")
	# shellcheck disable=SC2059 # the format is the byte
	printf "\\$(printf '%03o' $((byte ^ 1 << bit)))" | dd of="$image" bs=1 seek="$place" conv=notrunc status=none
	measured "$measure" "plans/$name.yaml" "$folder"
	is_seen "$name with $label byte $place bit $bit" $? "$@"
}

good() {
	local name=$1 measure=$2
	holds "$name: builds" built "plans/$name.yaml" "$work/$name"
	holds "$name: measures well: $(grep -s FAILED "$work/found")" measured "$measure" "plans/$name.yaml" "$work/$name"
}

# 640 x 480 at 60 Hz.
for name in mooring-board mooring-board-counted; do
	good "$name" dmt
	shows "$name" 'hsync is low' 'vsync is low' 'line rate: 31.4688, printed 31.469' 'frame rate: 59.9405, printed 59.940'
	wrong "$name" dmt 's/\(region: sync, *cells:\) 12/\1 13/; s/\(back porch, *cells:\) 6/\1 5/' \
		'FAILED: horizontal sync, dots: 104, wanted 96' 'FAILED: horizontal back porch, dots: 40, wanted 48' \
		'horizontal front porch, dots: 16 (3029 times)'
	wrong "$name" dmt 's/\(front porch, *cells:\) 2/\1 3/' \
		'FAILED: line, dots: 808, wanted 800' 'FAILED: horizontal front porch, dots: 24, wanted 16'
	wrong "$name" dmt 's/horizontal sync, active: low/horizontal sync, active: high/' 'FAILED: hsync is high' 'vsync is low'
	wrong "$name" dmt 's/vertical sync,   active: low/vertical sync,   active: high/' 'hsync is low' 'FAILED: vsync is high'
	wrong "$name" dmt 's/repeat: 2,   line: sync/repeat: 3,   line: sync/' \
		'FAILED: vertical sync, dots: 2400, wanted 1600' 'FAILED: frame, dots: 420800, wanted 420000'
	wrong "$name" dmt 's/repeat: 33, /repeat: 32, /; s/repeat: 10, /repeat: 11, /' \
		'FAILED: vertical back porch, lines: 32, wanted 33' 'FAILED: vertical front porch, lines: 11, wanted 10'
	wrong "$name" dmt 's/repeat: 480,/repeat: 479,/; s/repeat: 10, /repeat: 11, /' 'FAILED: active, lines: 479, wanted 480'
	wrong "$name" dmt 's/25.175 MHz/25.2 MHz/' 'FAILED: line rate: 31.5000, printed 31.469' \
		'FAILED: frame rate: 60.0000, printed 59.940'
done
# The delay of horizontal sync alone.
wrong mooring-board-counted dmt '/hsync:/s/,  lead: -1 cell//' \
	'FAILED: horizontal back porch, dots: 56, wanted 48' 'FAILED: horizontal front porch, dots: 8, wanted 16'
# Horizontal sync in the middle of a picture line (kind 0, column 40), and the kind of line 100.
patched mooring-board-counted dmt rom0 40 2 'FAILED: horizontal sync, dots: 8, wanted 96'
patched mooring-board-counted dmt rom1 100 0 'FAILED: active, lines: 479, wanted 480' \
	'FAILED: active lines, dots apart: 1600, wanted 800'

# 525 interlaced lines.
good harbour-mouth interlaced
shows harbour-mouth 'frames a second: 30 (1 times)' 'field 2 after field 1, lines: 525/2 (1 times)' \
	'field 1: 6 equalising, 6 broad, 6 equalising pulses' 'field 2: 6 equalising, 6 broad, 6 equalising pulses'
wrong harbour-mouth interlaced '/region: pulse, time/s/2.3 us/2.6 us/' \
	'FAILED: field 1: equalising pulse: 2.646 us, limits 2.200 to 2.400 (12 times)' \
	'FAILED: field 2: equalising pulse: 2.646 us, limits 2.200 to 2.400 (12 times)'
wrong harbour-mouth interlaced '/region: serration/s/4.7 us/5.2 us/' \
	'FAILED: field 1: serration: 5.291 us, limits 4.600 to 4.800 (6 times)' \
	'FAILED: field 2: broad pulse: 26.455 us, limits 27.050 to 27.150 (6 times)'
wrong harbour-mouth interlaced '/lines 1 to 3/s/repeat: 6/repeat: 5/; /7 to 9/s/repeat: 6/repeat: 7/' \
	'FAILED: field 1: 5 equalising, 6 broad, 7 equalising pulses'
wrong harbour-mouth interlaced '/middle of 266/s/repeat: 6/repeat: 5/; /middle of 269/s/repeat: 5/repeat: 6/' \
	'FAILED: field 2: 6 equalising, 5 broad, 7 equalising pulses' 'frame, lines: 525 (1 times)'
# A second field without its half line, and a first one that is a line short.
wrong harbour-mouth interlaced 's/line: early picture/line: picture/' \
	"FAILED: field 2, lines after line 263's sync: 1, wanted 1/2"
wrong harbour-mouth interlaced '/21 to 262/s/242/241/; /284 to 525/s/242/243/' \
	'FAILED: field 2 after field 1, lines: 523/2, wanted 525/2' 'FAILED: field 1: line syncs: 253, wanted 254'
wrong harbour-mouth interlaced '/10 to 20/s/11/12/; /21 to 262/s/242/241/' \
	'FAILED: field 1: picture, after 20 lines: 72.751 us, limits 8.900 to 10.300 (1 times)'
wrong harbour-mouth interlaced 's/line: late picture/line: picture/' \
	'FAILED: field 2: picture, after 20 lines: -22.487 us, limits 0.000 to 0.000 (1 times)'
wrong harbour-mouth interlaced 's/12.096 MHz/12 MHz/' 'FAILED: lines a second: 15625, wanted 15750' \
	'FAILED: frames a second: 625/21, wanted 30'
wrong harbour-mouth interlaced 's/composite sync, active: low/composite sync, active: high/' 'FAILED: sync is low while asserted'
wrong harbour-mouth interlaced 's/front porch, cells: 5/front porch, cells: 3/' \
	'FAILED: front porch: 0.992 us, limits 1.270 to 2.540 (232 times)' \
	'FAILED: field 2: blanking before the first pulse: 0.992 us, limits 1.270 to 2.540 (1 times)'
# The third broad pulse of field 2 becomes an equalising one.
patched harbour-mouth interlaced rom2 280 0 'field 1: 6 equalising, 6 broad, 6 equalising pulses' \
	'FAILED: field 2: 6 equalising, 2 broad, 1 equalising pulses'

# Two banks in the same chips, neither of which is the other.
holds 'pilot-station: builds' built plans/pilot-station.yaml "$work/pilot-station"
for bank in 0:525 1:625; do
	lines=${bank#*:}
	holds "pilot-station: bank ${bank%:*} has lines of $lines" \
		measured "$lines" "plans/pilot-station-$lines.yaml" "$work/pilot-station" pilot-station "${bank%:*}"
	measured "$lines" "plans/pilot-station-$lines.yaml" "$work/pilot-station" pilot-station $((1 - ${bank%:*}))
	is_seen "pilot-station: bank $((1 - ${bank%:*})) has no lines of $lines" $?
	holds "pilot-station: the other bank has other frames" grep -q '^FAILED: frame, lines: ' "$work/found"
done

finish
