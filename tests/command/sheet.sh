#!/bin/bash
# The command sheet: what it writes and says, for good plans, failing ones and bad ones, and where it cannot write.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
plans=$PWD/plans
cd "$work" || exit 1

"$SCANLATCH" sheet "$plans/tide-board-60.yaml" -o sheet.html >stdout 2>stderr
same 'a good plan: exit status' 0 $?
same 'a good plan: what it says' "wrote sheet.html ($(stat -c %s sheet.html) bytes)" "$(cat stdout)"
same 'a good plan: nothing on standard error' '' "$(cat stderr)"
holds 'the page is XML' xmllint --noout sheet.html
# The parser of HTML 4 does not know the elements of today; it must have nothing else to say.
same 'the page is HTML' '' "$(xmllint --html --noout sheet.html 2>&1 | grep -E ': (HTML parser )?(error|warning)' |
	grep -vE 'Tag (header|section|nav|main|svg|g|path|rect|line|text|title|desc|defs|pattern|figure|figcaption|tspan|circle|polyline|polygon|use) invalid')"
same 'no images are written' 'sheet.html stderr stdout' "$(ls | tr '\n' ' ' | sed 's/ $//')"
cp sheet.html again.html
"$SCANLATCH" sheet "$plans/tide-board-60.yaml" -o sheet.html >stdout
same 'again: kept' "kept  sheet.html ($(stat -c %s sheet.html) bytes)" "$(cat stdout)"
"$SCANLATCH" sheet "$plans/tide-board-60.yaml" -o - >standard.html 2>stderr
same 'to standard output: exit status' 0 $?
holds 'to standard output: the same bytes' cmp standard.html again.html
same 'to standard output: nothing on standard error' '' "$(cat stderr)"
"$SCANLATCH" sheet - -o fed.html <"$plans/tide-board-60.yaml" >stdout
same 'from standard input: exit status' 0 $?
holds 'from standard input: it says so' grep -q 'Plan standard input, revision' fed.html
"$SCANLATCH" sheet "$plans/tide-board-60.yaml" -o deep/er/sheet.html >stdout
same 'into a new folder: exit status' 0 $?
holds 'into a new folder' cmp sheet.html deep/er/sheet.html
holds 'no temporary file is left' test "$(ls deep/er)" = sheet.html

# What is on the page.
"$SCANLATCH" build "$plans/tide-board-60.yaml" -o images >/dev/null
text=$(sed 's/<[^>]*>/ /g' sheet.html | tr -s ' \n' ' ')
for label in rom0 rom1 rom2; do
	sums=$(python3 -c '
import json, sys
chip = next(chip for chip in json.load(open("images/tide-board-60.manifest.json"))["chips"] if chip["label"] == sys.argv[1])
print("%s %s %s.bin or %s.hex %d %s 0x%04X" % (chip["label"], chip["part"], *2 * (chip["files"][0][:-4],), chip["bytes"], chip["crc32"], chip["sum16"]))
' "$label")
	holds "burn list: $sums" grep -qF "$sums" <<<"$text"
done
holds 'the revision is the CRC-32 of the plan' grep -qF "revision $(python3 -c '
import sys, zlib
print("%08x" % zlib.crc32(open(sys.argv[1], "rb").read()))' "$plans/tide-board-60.yaml") (CRC-32 of the file)" <<<"$text"
for word in 'closure ✓ pass must' 'sweep – none must' 'Proved' 'lethal charge' 'data sheet of the part in hand' 'breezeway the part of'; do
	holds "the page has: $word" grep -qF "$word" <<<"$text"
done
# Every pin of every package, once; and every wire that the plan has.
python3 - <<'PYTHON' >pins
import json, re, xml.etree.ElementTree as ElementTree
tables = [table for table in ElementTree.parse("sheet.html").iter("{http://www.w3.org/1999/xhtml}table") if table.get("class") == "package"]
chips = json.load(open("images/tide-board-60.manifest.json"))["chips"]
for table, chip in zip(tables, chips, strict=True):
    pins = {}
    for row in list(table[-1]):
        left, left_name, left_pin, right_pin, right_name, right = ["\n".join(cell.itertext()) for cell in row]
        pins[int(left_pin)], pins[int(right_pin)] = (left_name, left), (right_name, right)
    assert sorted(pins) == list(range(1, 33)), pins
    wires = {name: wire.split("\n")[0] for name, wire in pins.values()}
    for letter, names in (("A", chip["address"]), ("D", chip["data"])):
        for number, wire in enumerate(names):
            assert wires[f"{letter}{number}"] == {"-": "GND" if letter == "A" else "open"}.get(wire, wire), (letter, number, wire)
    print(chip["label"], len(pins))
PYTHON
same 'pins of all packages' 'rom0 32
rom1 32
rom2 32' "$(cat pins)"

"$SCANLATCH" sheet "$plans/pilot-station.yaml" -o set.html >stdout
same 'a set: exit status' 0 $?
holds 'a set: XML' xmllint --noout set.html
text=$(sed 's/<[^>]*>/ /g' set.html | tr -s ' \n' ' ')
for word in 'Set pilot-station.yaml, revision' 'Bank 0: pilot-station-525' 'Bank 1: pilot-station-625' '1 bank.0 high pilot-station-625' \
	'Jumper bank.0, between high and low, goes to A16 (pin 2) of rom0, rom1, rom2' 'The jumpers may be changed while the machine runs'; do
	holds "a set: $word" grep -qF "$word" <<<"$text"
done
same 'a set: every id is there once' '' "$(grep -o ' id="[^"]*"' set.html | sort | uniq -d)"
same 'every link leads to an id' '' "$(comm -23 <(grep -o 'href="#[^"]*"' set.html | sed 's/href="#//' | sort -u) <(grep -o ' id="[^"]*"' set.html | sed 's/ id="//' | sort -u))"
"$SCANLATCH" sheet "$plans/mooring-board-counted.yaml" -o two.html >stdout
same 'two stages: exit status' 0 $?
text=$(sed 's/<[^>]*>/ /g' two.html | tr -s ' \n' ' ')
for word in 'ENT from RCO of frame counter 2' 'a NAND of clear and step' 'frame state.0 frame counter 1, Q0' 'H, V the state of the line stage'; do
	holds "two stages: $word" grep -qF "$word" <<<"$text"
done
cat >own.yaml <<'PLAN'
scanlatch: 1
name: own
clock: { master: 1 MHz, cell: 1 tick }
signals: { sync: { role: composite sync, active: high } }
lines: { only: { regions: [ { region: sync, cells: 2, assert: [sync] }, { region: rest, cells: 2 } ] } }
frame: [ { repeat: 1, line: only } ]
parts: { XROM16: { address pins: 4, data pins: 8, access: [ 90 ns ] } }
machine: { form: loop, state: 2 bits }
chips: { part: XROM16, speed: 90 ns }
PLAN
"$SCANLATCH" sheet own.yaml -o own.html >stdout
holds 'a part without known pins: says so' grep -q 'The catalogue does not know the package of XROM16: its pins are here by name' own.html
holds 'a part without known pins: by name' grep -q '<th scope="row" class="pin">A3</th><td class="wire tied">GND<br/><small>unused</small></td>' own.html

# A must that fails: colour. The page is there, and does not look approved.
sed -e 's/cells: 101/cells: 100/; s/stretch: auto/stretch: 0/' "$plans/tide-board-60.yaml" >wrong.yaml
"$SCANLATCH" sheet wrong.yaml -o wrong.html >stdout 2>stderr
same 'a must fails: exit status' 1 $?
same 'a must fails: said' 'tide-board-60: a proof failed: the sheet is not approved and says why' "$(tail -n 1 stdout)"
holds 'a must fails: XML' xmllint --noout wrong.html
text=$(sed -n '/<body/,$p' wrong.html | sed 's/<[^>]*>/ /g' | tr -s ' \n' ' ')
for word in '✗ NOT APPROVED A proof that must hold FAILED: colour.' 'Do not burn: these images are not approved.' 'colour ✗ FAIL must'; do
	holds "a must fails: $word" grep -qF "$word" <<<"$text"
done
holds 'a must fails: before the job' grep -q 'NOT APPROVED.*The job' <<<"$text"
holds 'a must fails: in the title' grep -q '<title>NOT APPROVED: tide-board-60: build sheet</title>' wrong.html
same 'a must fails: nothing looks proved' 0 "$(grep -c 'class="verdict approved"\|✓ Proved' wrong.html)"
"$SCANLATCH" sheet wrong.yaml -o - >wrong-too.html 2>stderr
same 'a must fails, to standard output: exit status' 1 $?
holds 'a must fails, to standard output: said on standard error' grep -q '^tide-board-60: a proof failed' stderr
holds 'a must fails, to standard output: the same page' cmp wrong.html wrong-too.html

# Advice that fails: speed.
sed -e 's/speed: 120 ns/speed: 200 ns/; s/margin: 20 ns/margin: 400 ns/' "$plans/tide-board-60.yaml" >slow.yaml
"$SCANLATCH" sheet slow.yaml -o slow.html >stdout 2>stderr
same 'advice fails: exit status' 0 $?
same 'advice fails: said' 'tide-board-60: advice missed: speed' "$(tail -n 1 stdout)"
holds 'advice fails: on the page' grep -q '<p>Advice missed: speed.</p>' slow.html
holds 'advice fails: proved all the same' grep -q '✓ Proved' slow.html
"$SCANLATCH" sheet --strict slow.yaml -o strict.html >stdout 2>stderr
same 'advice fails, --strict: exit status' 1 $?
holds 'advice fails, --strict: not approved' grep -q '✗ NOT APPROVED' strict.html
holds 'advice fails, --strict: why' grep -q 'Advice missed: speed. It was asked to count like a must (--strict).' strict.html

"$SCANLATCH" sheet --json slow.yaml -o json.html >stdout
same '--json' "{'name': 'tide-board-60', 'failed': False, 'missed': ['speed'], 'file': 'json.html', 'bytes': $(stat -c %s json.html), 'kept': False}" \
	"$(python3 -c 'import json, sys; print(json.load(sys.stdin))' <stdout)"

# Bad input. Nothing is written.
refused() {
	local name=$1 status=$2 words=$3
	shift 3
	"$SCANLATCH" sheet "$@" >stdout 2>stderr
	same "$name: exit status" "$status" $?
	holds "$name: says: $words" grep -qF -- "$words" stderr
	same "$name: nothing on standard output" '' "$(cat stdout)"
}
good=$plans/tide-board-60.yaml
refused 'no plan' 2 'wanted a plan, found none' -o new.html
refused 'two plans' 2 'wanted one plan, found "other.yaml" too' "$good" other.yaml -o new.html
refused 'no -o' 2 'wanted -o FILE.html' "$good"
refused 'an empty -o' 2 'wanted -o FILE.html' "$good" -o ''
refused 'a folder by its slash' 2 'found the folder "deep/"' "$good" -o deep/
refused '--json and -o -' 2 '--json and -o - would both go' "$good" --json -o -
refused 'a plan that is not there' 3 'cannot read a plan' missing.yaml -o new.html
sed 's/cells: 101/cells: 1O1/' "$good" >bad.yaml
refused 'a bad plan' 2 'bad.yaml:' bad.yaml -o new.html
holds 'a bad plan: nothing is written' test ! -e new.html
refused 'a folder' 3 'cannot create ./deep' "$good" -o deep
refused 'below a file' 3 'cannot make directory own.yaml' "$good" -o own.yaml/new.html
refused 'a full device' 3 'cannot write /dev/full: No space left on device' "$good" -o /dev/full
holds 'a device is left a device' test -c /dev/full
if [ "$(id -u)" -ne 0 ]; then
	mkdir locked && chmod 555 locked
	refused 'a folder that may not be written' 3 'cannot create locked/new.html' "$good" -o locked/new.html
fi
"$SCANLATCH" sheet "$good" -o - >/dev/full 2>stderr
same 'a full standard output: exit status' 3 $?
finish
