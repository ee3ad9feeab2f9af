#!/bin/bash
# Pairs of plans with one known edit, of which one is built: `diff` of its images and the other plan must name that edit, as far as pins
# and states show it, and nothing else. Edits and what they read as are those of diff.sh; what of them is shown is in
# diff_images_judge.py, written from the design. DIFF_FIRST and DIFF_COUNT choose other random plans.
set -u
. tests/report.sh

first=${DIFF_FIRST:-1}
count=${DIFF_COUNT:-4}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

mkdir "$work/pairs"
holds 'pairs are judged' sh -c 'python3 -B tests/reference/diff_images_judge.py "$0" "$1/pairs" "$2" "$3" >"$1/verdicts"' \
	"$SCANLATCH" "$work" "$first" "$count"
while read -r verdict edit rest; do
	case $verdict in
	ok) pass ;;
	FAILED) fail "$edit" "$rest" ;;
	*) fail 'a line of the judge' "$verdict $edit $rest" ;;
	esac
done <"$work/verdicts"
holds 'at least 50 kinds of edits' test "$(cut -d ' ' -f 2 "$work/verdicts" | sort -u | wc -l)" -ge 50
for way in from-images to-images; do
	holds "pairs $way" test "$(grep -c " $way " "$work/verdicts")" -ge $((50 * count))
done

# edits_of ARGUMENTS: what changed, but words and limits, which a plan's name and edges that no pin sees are among.
edits_of() {
	"$SCANLATCH" diff --json "$@" 2>"$work/err" | python3 -c 'import json, sys
for plan in json.load(sys.stdin)["plans"]:
	for change in sorted(each["words"] for each in plan["changes"] if each["section"] not in ("limits", "in words only")):
		print(plan.get("banks"), change)'
}

# both_ways NAME SED: the example plan with an edit. Images of either and the other plan must differ in what the plans differ in.
both_ways() {
	local name=$1
	cp plans/*.yaml "$work"
	sed -E "$2" "plans/$name.yaml" >"$work/edited.yaml"
	holds "$name, $2: it is an edit" sh -c '! cmp -s "$0" "$1"' "$work/edited.yaml" "$work/$name.yaml"
	rm -rf "$work/old" "$work/new"
	"$SCANLATCH" build --unproven "$work/$name.yaml" -o "$work/old" >"$work/out" 2>"$work/err"
	"$SCANLATCH" build --unproven "$work/edited.yaml" -o "$work/new" >"$work/out" 2>"$work/err"
	edits_of "$work/$name.yaml" "$work/edited.yaml" >"$work/wanted"
	holds "$name, $2: there is a change" test -s "$work/wanted"
	same "$name, $2: images of the old one" "$(cat "$work/wanted")" "$(edits_of "$work/old" "$work/edited.yaml")"
	same "$name, $2: images of the new one" "$(cat "$work/wanted")" "$(edits_of "$work/$name.yaml" "$work/new")"
}

both_ways tide-board-60 's/(region: breezeway, +cells: )1/\12/'
both_ways tide-board-60 's/(region: front porch, cells: )2(,      )/\13\2/'
both_ways tide-board-60 's/(region: broad sync,  fill: true,   assert: .blank, sync.), stretch: 1/\1/'
both_ways tide-board-60 's/repeat: 216/repeat: 213/; s/repeat: 18,/repeat: 21,/'
both_ways tide-board-50 's/(region: serration, +cells: )7/\18/'
both_ways ferry-queue 's/(region: burst, +time: )2.51/\13.07/'
both_ways ferry-queue 's/at: 80\*row \+ col/at: 160 + 80*row + col/'
both_ways pier-clock 's/(repeat: )208/\1206/'
both_ways lock-gate-sign 's/(region: front porch, cells: )1/\12/'
both_ways mooring-board 's/(region: sync, +cells: )12/\113/; s/(region: back porch, +cells: )6/\15/'
both_ways mooring-board 's/(repeat: )33/\130/; s/(repeat: )10/\113/'
both_ways mooring-board-counted 's/(region: sync, +cells: )12/\111/'
both_ways harbour-mouth 's/(repeat: )242/\1240/'
both_ways pilot-station-625 's/active: low, lead: 1 cell/active: high, lead: 1 cell/'
both_ways pilot-station-625 's/lead: 1 cell/lead: 2 cells/'
# Another level, of frames of another length, and where the signal has another edge too.
both_ways tide-board-50 's/(blank:.*active: )high/\1low/; s/repeat: 22/repeat: 30/'
both_ways tide-board-50 's/(load:.*active: )low/\1high/; s/repeat: 37/repeat: 35/'
both_ways tide-board-60 's/(sync:.*active: )low/\1high/; s/repeat: 25/repeat: 27/'
both_ways tide-board-60 's/(blank:.*active: )high/\1low/; s/(region: front porch, +cells: )2(,      )/\13\2/'
both_ways tide-board-50 's/(blank:.*active: )high/\1low/; s/(region: right border, cells: )9/\18/; s/repeat: 22/repeat: 30/'
# Another lead, of frames of another length, and where other lines were edited.
both_ways tide-board-60 's/lead: 1 cell/lead: 2 cells/; s/repeat: 18/repeat: 17/'
both_ways tide-board-60 's/lead: 1 cell/lead: 3 cells/; s/repeat: 216/repeat: 207/'
both_ways tide-board-60 's/lead: 1 cell/lead: 0 cells/; s/repeat: 25/repeat: 24/; s/(region: serration, +cells: )5/\16/'
both_ways pilot-station-625 's/lead: 1 cell/lead: 2 cells/; s/repeat: 34/repeat: 37/'
# A region that was moved, with all its signals, is no lead.
both_ways mooring-board 's/(region: back porch, +cells: )6/\17/; s/(region: front porch, cells: )2/\11/; s/repeat: 33/repeat: 30/'
# Nor is a signal that another region asserts too, before the one that it is in, or in lines that have it nowhere.
both_ways pier-clock 's/(region: front porch, .*assert: \[)blank\]/\1blank, load]/'
both_ways tide-board-60 's/(region: picture, +cells: 80, +assert: \[)load/\1sync, load/; s/(region: serration, .*assert: \[)blank/\1blank, load/'
both_ways harbour-mouth 's/lead: 1 cell/lead: 2 cells/; s/(region: serration, time: 4.7 us, assert: \[)blank, /\1/'
finish
