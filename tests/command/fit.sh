#!/bin/bash
# The command fit: its options, its report, its JSON, what it writes, and its exit codes.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
python=/usr/bin/python3
cd "$work" || exit 1

# fit STATUS NAME OPTION …: leaves stdout and stderr; the search is small unless the options say otherwise.
fit() {
	local wanted=$1 name=$2
	shift 2
	"$SCANLATCH" fit --standard composite-525 --columns 80 --crystal '14.31818 MHz' --dots-per-cell 9 "$@" >stdout 2>stderr \
		</dev/null
	same "$name: exit status" "$wanted" $?
}

# refuses NAME MESSAGE OPTION …
refuses() {
	local name=$1 message=$2
	shift 2
	fit 2 "$name" "$@"
	same "$name: message" "scanlatch fit: $message" "$(head -n 1 stderr)"
	same "$name: where to find help" 'scanlatch: try "scanlatch fit --help"' "$(sed -n 2p stderr)"
	same "$name: nothing on standard output" '' "$(cat stdout)"
}

# value EXPRESSION: of the JSON document `found` on standard output.
value() {
	"$python" -c "import json; found = json.load(open('stdout')); print($1)"
}

# What is wrong with the command line.
"$SCANLATCH" fit --columns 80 >stdout 2>stderr
same 'no standard: exit status' 2 $?
same 'no standard: message' 'scanlatch fit: wanted --standard NAME, found none' "$(head -n 1 stderr)"
"$SCANLATCH" fit --standard composite-525 >stdout 2>stderr
same 'no columns: exit status' 2 $?
same 'no columns: message' 'scanlatch fit: wanted --columns N, the cells with picture in a line, found none' "$(head -n 1 stderr)"
refuses 'unknown standard' '--standard: there is no standard "composite-526"; did you mean "composite-525"?' \
	--standard composite-526
refuses 'standard that is near to none' \
	'--standard: there is no standard "cinema"; "scanlatch list standards" has them all' --standard cinema
refuses 'empty standard' '--standard: wanted a standard of the catalogue, found none' --standard ''
refuses 'no column' '--columns: wanted a number above 0, found 0' --columns 0
refuses 'columns in words' '--columns: wanted a whole number, found "many"' --columns many
refuses 'columns below zero' '--columns: wanted a whole number, found "-3"' --columns=-3
refuses 'columns and more' '--columns: wanted a whole number, found "80x"' --columns 80x
refuses 'half a column' '--columns: wanted a whole number, found "0.5"' --columns 0.5
refuses 'columns beyond whole numbers' '--columns: wanted a whole number, found "99999999999999999999"' \
	--columns 99999999999999999999
refuses 'too many columns' '--columns: wanted 1 to 4096, found 4097' --columns 4097
refuses 'no line' '--lines: wanted a number above 0, found 0' --lines 0
refuses 'too many lines' '--lines: wanted 1 to 4096, found 5000' --lines 5000
refuses 'bad grade' '--grade: wanted studio or monitor, found "best"' --grade best
refuses 'bad phase' '--phase: wanted "every line", "every 2 lines" or "free", found "every frame"' --phase 'every frame'
refuses 'width beyond the whole' '--width: wanted 0 to 100, found 101' --width 101
refuses 'width in words' '--width: wanted a whole number, found "wide"' --width wide
refuses 'unknown crystal' \
	'--crystal: wanted a crystal of the catalogue or a frequency, such as 14.31818 MHz, found "quartz"' --crystal quartz
refuses 'crystal without a unit' \
	'--crystal: wanted a crystal of the catalogue or a frequency, such as 14.31818 MHz, found "14.31818"' --crystal 14.31818
refuses 'crystal of a time' \
	'--crystal: wanted a crystal of the catalogue or a frequency, such as 14.31818 MHz, found "70 ns"' --crystal '70 ns'
refuses 'crystal that stands still' \
	'--crystal: wanted a crystal of the catalogue or a frequency, such as 14.31818 MHz, found "0 MHz"' --crystal '0 MHz'
refuses 'a list of crystals with a gap' \
	'--crystal: wanted a crystal of the catalogue or a frequency, such as 14.31818 MHz, found ""' --crystal '4 MHz,,6 MHz'
numbers='wanted whole numbers from 1 to 256 or ranges of them, such as 8,9 or 6-16, found'
for list in '' 0 '8,' ',8' 8-7 257 1-257 eight 8-9-10 '8 9' 1234567890; do
	refuses "dots \"$list\"" "--dots-per-cell: $numbers \"$list\"" --dots-per-cell "$list"
done
refuses 'ticks below one' "--ticks-per-dot: $numbers \"0-2\"" --ticks-per-dot 0-2
refuses 'too many stretched' '--stretched: wanted 0 to 64, found 65' --stretched 65
refuses 'stretched in words' '--stretched: wanted a whole number, found "few"' --stretched few
refuses 'a space that is too large' \
	'--dots-per-cell: with ticks-per-dot and stretched there are too many kinds of cells; ask for fewer' \
	--dots-per-cell 1-256 --ticks-per-dot 1-256 --stretched 64
refuses 'no layout wanted' '--top: wanted a number above 0, found 0' --top 0
refuses 'too many layouts' '--top: wanted 1 to 1000, found 1001' --top 1001
refuses 'no layout to write' '--write: wanted a number above 0, found 0' --write 0 plan.yaml
refuses 'a layout far down' '--top: wanted 1 to 1000, found 2000' --write 2000 plan.yaml
refuses 'no number to write' '--write: wanted a whole number, found "plan.yaml"' --write plan.yaml 1
refuses 'no file to write' '--write: wanted a number and a file, found no file' --write 1
refuses 'an empty file' '--write: wanted a file, found ""' --write 1 ''
refuses 'a folder' '--write: wanted a file, found "out/"' --write 1 out/
refuses 'two files' '"two.yaml" is no option, and a file is wanted only with --write' --write 1 one.yaml two.yaml
refuses 'a file and no --write' '"plan.yaml" is no option, and a file is wanted only with --write' plan.yaml
holds 'no refused command line wrote anything' test "$(find . -type f | sort | tr '\n' ' ')" = './stderr ./stdout '

# What is found: with --json and without.
fit 0 'a search' --top 3
same 'a search: nothing on standard error' '' "$(cat stderr)"
same 'a search: what was asked' \
	'composite-525: 80 columns by 242 lines, limits of grade monitor, phase every line' "$(head -n 1 stdout)"
same 'a search: three tables of three layouts' 9 "$(grep -c '^[123]  ' stdout)"
holds 'a search: lines are no wider than a terminal' test -z "$(grep -E '.{101}' stdout)"
fit 0 'JSON' --json --top 3
same 'JSON: what was asked' 'composite-525 monitor every line 80 242 1' \
	"$(value "found['standard'], found['grade'], found['phase'], found['columns'], found['picture_lines'], found['crystals']")"
same 'JSON: ranks' '[1, 2, 3]' "$(value "[layout['rank'] for layout in found['layouts']]")"
same 'JSON: ticks are those of the regions' '[0, 0, 0]' \
	"$(value "[layout['ticks'] - sum(region['ticks'] for region in layout['regions']) for layout in found['layouts']]")"
same 'JSON: exact frequencies beside rounded ones' '157500000/11 14318181.8182' \
	"$(value "found['layouts'][0]['master_hz'], found['layouts'][0]['master_hz_rounded']" | tr -d "(,')")"
same 'JSON: the same bytes again' "$(cat stdout)" "$("$SCANLATCH" fit --standard composite-525 --columns 80 --crystal \
	'14.31818 MHz' --dots-per-cell 9 --json --top 3)"

# The house example is one of the layouts.
fit 0 'the house example' --json --top 1000
same 'the house example: 101 cells, one stretched by three' 1 "$(value "sum((layout['cells'], layout['stretched'],
	layout.get('stretch_dots'), layout['ticks'], layout['cycles']) == (101, 1, 3, 912, '228') for layout in found['layouts'])")"

# Names of crystals, and what is printed on them; one that is named twice counts once.
for crystal in '14.31818 MHz' '14.31818MHz' '14318180 Hz' '315/22 MHz' ' 14318.18 kHz '; do
	fit 0 "crystal \"$crystal\"" --json --crystal "$crystal" --top 1
	same "crystal \"$crystal\": exact" 157500000/11 "$(value "found['layouts'][0]['master_hz']")"
done
fit 0 'a list of crystals' --json --crystal '14.31818 MHz, 28.63636 MHz,14318180 Hz' --top 1
same 'a list of crystals: how many' 2 "$(value "found['crystals']")"
fit 0 'a crystal that is in no catalogue' --json --crystal '14.318 MHz' --top 1
same 'a crystal that is in no catalogue: as given' '14.318 MHz 14318000' \
	"$(value "found['layouts'][0]['crystal'], found['layouts'][0]['master_hz']" | tr -d "(,')")"

# Lists of numbers.
for list in 8,9 9,8 8-9 8,8-9; do
	fit 0 "dots $list" --json --dots-per-cell "$list" --top 1000
	same "dots $list" '[8, 9]' "$(value "sorted({layout['cell_dots'] for layout in found['layouts']})")"
done
fit 0 'stretched by none' --json --stretched 0 --top 1000 --dots-per-cell 6-16
same 'stretched by none' '{0}' "$(value "{layout['stretched'] for layout in found['layouts']}")"

# Nothing that suits: exit 1, and what the nearest fail.
fit 1 'nothing suits' --crystal '25 MHz'
same 'nothing suits: says so' 'No layout meets all conditions. What comes nearest, and what it fails:' "$(sed -n 4p stdout)"
same 'nothing suits: why' \
	'  25 MHz: subcarrier: 25000000 Hz / 7 is 3571428.571429 Hz, wanted 3579245.454545 to 3579845.454545' "$(sed -n 5p stdout)"
fit 1 'nothing suits, JSON' --crystal '25 MHz,3.579545 MHz' --json
same 'nothing suits, JSON: nearest first' "[('3.579545 MHz', 'room'), ('25 MHz', 'subcarrier')]" \
	"$(value "[(near['crystal'], near['condition']) for near in found['nearest']]")"
fit 1 'the studio wants half cycles' --grade studio --dots-per-cell 6-16
holds 'the studio wants half cycles: says so' grep -q '^  14.31818 MHz: colour: .* are 910 ticks: 455/2 cycles$' stdout
fit 1 'the studio wants half lines' --grade studio --dots-per-cell 6-16 --phase 'every 2 lines'
holds 'the studio wants half lines: says so' grep -q '^  14.31818 MHz: field rate: 263 lines of 910 ticks: ' stdout
fit 1 'nothing to write' --crystal '25 MHz' --write 1 plan.yaml
holds 'nothing to write: nothing was' test ! -e plan.yaml
holds 'nothing to write: why' grep -q '^  25 MHz: subcarrier: ' stdout
fit 1 'fewer than that' --stretched 0 --write 900 plan.yaml
same 'fewer than that: says so' 'scanlatch fit: --write: wanted one of ' "$(grep -o '^scanlatch fit: --write: wanted one of ' stderr)"
holds 'fewer than that: nothing was written' test ! -e plan.yaml

# What is written.
fit 0 'written' --write 1 plan.yaml
same 'written: says so' "wrote plan.yaml ($(wc -c <plan.yaml) bytes)" "$(cat stdout)"
fit 0 'written again' --write 1 plan.yaml
same 'written again: kept' "kept  plan.yaml ($(wc -c <plan.yaml) bytes)" "$(cat stdout)"
fit 0 'written to standard output' --write 1 -
same 'written to standard output: the same' "$(cat plan.yaml)" "$(cat stdout)"
fit 0 'the file may stand anywhere' fourth.yaml --write 4 --top 2
holds 'the file may stand anywhere: another layout' test -s fourth.yaml -a "$(cmp -s plan.yaml fourth.yaml; echo $?)" = 1
fit 0 'into a folder' --write 1 new/folder/plan.yaml
same 'into a folder: the same' "$(cat plan.yaml)" "$(cat new/folder/plan.yaml)"
fit 0 'by a whole path' --write 1 "$work/whole.yaml"
holds 'by a whole path: written' test -s whole.yaml
fit 0 'JSON alone' --json
report=$(cat stdout)
fit 0 'written, JSON' --write 1 again.yaml --json
same 'written, JSON: one document, as without' "$report" "$(cat stdout)"
same 'written, JSON: the plan' "$(cat plan.yaml)" "$(cat again.yaml)"
fit 1 'fewer than that, JSON' --stretched 0 --write 900 none.yaml --json
holds 'fewer than that, JSON: one document' python3 -m json.tool stdout
holds 'fewer than that, JSON: nothing was written' test ! -e none.yaml
fit 2 'both to standard output' --write 1 - --json
same 'both to standard output: nothing' '' "$(cat stdout)"
: >file
fit 3 'below a file' --write 1 file/plan.yaml
holds 'below a file: says so' grep -q '^scanlatch: cannot .*; nothing was written$' stderr
holds 'no temporary is left' test -z "$(find . -name '.*' -type f)"
holds 'comments are no wider than a page' test -z "$(grep -E '^#.{100}' plan.yaml)"

finish
