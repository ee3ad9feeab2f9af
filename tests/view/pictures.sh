#!/bin/bash
# Pictures of every plan, judged from outside: well-formed by xmllint, and read back to the tick by read_back.py, which has the timeline from
# the second implementation of the plan language.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
# Debian's, for its python3-yaml.
python=/usr/bin/python3

# well_formed NAME ARGUMENT …: the picture is drawn, is XML, and has the size of an SVG.
well_formed() {
	local name=$1
	shift
	holds "$name: drawn" "$SCANLATCH" draw "$@" -o "$work/picture.svg"
	holds "$name: well-formed" xmllint --noout "$work/picture.svg"
	holds "$name: has a size" grep -Eq '^<svg [^>]*width="[0-9.]+" height="[0-9.]+" viewBox="0 0 [0-9.]+ [0-9.]+"' "$work/picture.svg"
	rm -f "$work/picture.svg"
}

for plan in plans/*.yaml; do
	name=$(basename "$plan" .yaml)
	for what in line frame table; do
		well_formed "$name, $what" $what "$plan"
	done
	if grep -q '^  subcarrier:' "$plan"; then
		well_formed "$name, phase" phase "$plan"
	fi
done
well_formed 'interleaved fields' frame --interleave plans/harbour-mouth.yaml
well_formed 'another bank' table --bank 1 plans/pilot-station.yaml

# Random plans bring leads, stretched cells, odd lengths and all wirings.
holds 'plans are made' "$python" -B tests/reference/generate.py "$work" 1 60
mapfile -t plans < <(grep -L '^scanlatch-set' plans/*.yaml)
for plan in "$work"/*.yaml; do
	if "$SCANLATCH" check "$plan" >/dev/null 2>&1; then
		plans+=("$plan")
	fi
done
holds 'most random plans are good' test ${#plans[@]} -gt 30
for plan in "${plans[@]}"; do
	holds "read back: $(basename "$plan")" "$python" -B tests/view/read_back.py "$SCANLATCH" "$plan"
done

# Levels of 525 lines, SMPTE 170M-2004 table 1: of the plot's 140 IRE from white to sync, 100 are above blanking.
"$SCANLATCH" draw line plans/tide-board-60.yaml >"$work/line.svg"
same 'a level is drawn to scale' '130 37.143' "$("$python" - "$work/line.svg" <<'PYTHON'
import re, sys
text = open(sys.argv[1]).read()
group = text[text.index('class="composite"'):]
heights = [float(y) for y in re.findall(r'<line class="guide"[^>]* y1="([0-9.]+)"', group)]
white, black, blanking, sync = heights[:4]
print("%g %g" % (sync - white, round(sync - blanking, 3)))
PYTHON
)"

finish
