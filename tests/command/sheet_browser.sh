#!/bin/bash
# Build sheets in a browser that nobody sees: they are quiet, fit screens and paper, tell exact values, and nothing that a plan says
# becomes markup or script.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
browser() {
	/usr/bin/python3 -B tests/command/sheet_browser.py "$@"
}

# A board whose colour is wrong, so that its page is not approved, and one with limits.
sed -e 's/cells: 101/cells: 100/; s/stretch: auto/stretch: 0/' plans/tide-board-60.yaml >"$work/wrong.yaml"
sed -e '/^standard:/d; s/^note:.*/&\nstandard: composite-525/; s/time: 4.7 us,  assert: \[blank, sync\]/time: 6.5 us, assert: [blank, sync]/' plans/ferry-queue.yaml >"$work/limits.yaml"
pages=()
for plan in plans/tide-board-60 plans/pilot-station plans/mooring-board plans/mooring-board-counted "$work/wrong" "$work/limits"; do
	page=$work/$(basename "$plan").html
	"$SCANLATCH" sheet "$plan.yaml" -o "$page" >"$work/out" 2>&1
	[ $? -le 1 ] || fail "a sheet of $plan" "$(cat "$work/out")"
	pages+=("$page")
done
holds 'no message, and no request but for the page' browser quiet "${pages[@]}"
holds 'screens and paper are wide enough' browser fits "${pages[@]}"
holds 'paper cuts no table' browser prints "${pages[@]}"
for plan in plans/mooring-board "$work/limits"; do
	"$SCANLATCH" check --json "$plan.yaml" >"$work/check.json"
	"$SCANLATCH" build "$plan.yaml" -o "$work/images" >/dev/null
	"$SCANLATCH" prove --json "$plan.yaml" "$work/images" >"$work/proofs.json"
	holds "$plan: a pointer finds the values of the JSON reports" browser tells "$work/$(basename "$plan").html" "$work/check.json" "$work/proofs.json"
done

# The checks see what they are for: a page that asks for something, one that speaks, one that is too wide, one whose rows are cut.
spoil() {
	sed -e "$2" "$work/limits.html" >"$work/$1.html"
	cmp -s "$work/limits.html" "$work/$1.html" && fail "$1 is spoiled"
}
refuses() {
	if browser "$2" "$work/$1.html" >"$work/out"; then
		fail "$2 sees $1"
	else
		pass
	fi
}
spoil asking "s/default-src 'none'/default-src */; s|<main>|<main><img src='http://board.example/pier.png' alt=''/>|"
refuses asking quiet
spoil speaking 's|"use strict";|"use strict"; console.log("ebb");|'
refuses speaking quiet
spoil wide 's|^\.wide {|table.nets { min-width: 900px; } &|'
refuses wide fits
spoil cut 's|^\.wide {|tr, table { break-inside: auto !important; } table.proofs td { width: 3mm !important; word-break: break-all; } &|; s|tr, figure, .line p|i|'
refuses cut prints
"$SCANLATCH" check --json "$work/limits.yaml" | sed 's/"start_ticks": "24"/"start_ticks": "25"/' >"$work/check.json"
same 'a report was changed' 1 "$(grep -c '"start_ticks": "25"' "$work/check.json" | sed 's/^[1-9].*/1/')"
if browser tells "$work/limits.html" "$work/check.json" "$work/proofs.json" >"$work/out"; then
	fail 'tells sees another value'
else
	pass
fi

# A plan's own words: note, line type, region, part and file name. Were any of them run, it would set the title.
evil='</title></style></script><script>document.title = 1</script><img src=x onerror=document.title=2>&amp;&lt;'
mkdir "$work/evil"
cat >"$work/evil/&<script>document.title=3<\$script>.yaml" <<PLAN
scanlatch: 1
name: quay
note: |
  ' onmouseover='document.title=4' "
  $evil ]]> --> <![CDATA[
clock: { master: 1 MHz, cell: 1 tick }
signals: { sync: { role: composite sync, active: high } }
lines:
  "<b>&<script>document.title=5</script>":
    regions:
      - { region: "</td><script>document.title=6</script>", cells: 2, assert: [sync] }
      - { region: "<img src=x onerror=document.title=7>", cells: 2 }
frame: [ { repeat: 1, line: "<b>&<script>document.title=5</script>" } ]
parts: { "<i>&X</i><svg onload=a()>": { address pins: 4, data pins: 8, access: [ 90 ns ] } }
machine: { form: loop, state: 2 bits }
chips: { part: "<i>&X</i><svg onload=a()>", speed: 90 ns }
PLAN
"$SCANLATCH" sheet "$work"/evil/*.yaml -o "$work/quay.html" >"$work/out" 2>&1
same 'a plan of evil words: exit status' 0 $?
holds 'its page is XML' xmllint --noout "$work/quay.html"
holds 'nothing of it is run' browser harmless "$work/quay.html" 'quay: build sheet'
holds 'nor loaded' browser quiet "$work/quay.html"
finish
