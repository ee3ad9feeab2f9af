#!/bin/bash
# build --near: a plan near to its own images is the same bytes; after small edits fewer bytes change than without; images prove; and old images
# that are damaged, of another wiring or not there.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
cp plans/*.yaml tests/good/codes-auto.yaml "$work"
cd "$work" || exit 1
# A decoder whose codes the planner chooses.
sed -E '/codes: \[/s/codes: \[[^]]*\]/codes: auto/; /start: 0x4000/d; s/hold: \{ code: 0, at/hold: { at/' ferry-queue.yaml >ferry-auto.yaml
# A region after the picture, which an edit takes away.
sed -E 's/(region: picture, +cells: )80/\176/; /region: picture, +cells/a\      - { region: right edge, cells: 4, assert: [blank] }' tide-board-60.yaml >edge-board.yaml

# build STATUS ARGUMENT …: leaves stdout and stderr in files.
build() {
	local wanted=$1
	shift
	"$SCANLATCH" build "$@" >stdout 2>stderr </dev/null
	same "build $*: exit status" "$wanted" $?
}

# The names and bytes of images in a folder.
sums() { (cd "$1" && cksum -- *.bin); }
# Bytes of all chips that change, with --near and without, from the last report.
changed() { awk '/^near /{ inside = 1; next } inside && /^  /{ sum += $2 == "keeps" ? 0 : $2 } /^wrote|^kept/{ inside = 0 } END { print sum + 0 }' stdout; }
changed_without() { awk '/^near /{ inside = 1; next } inside && /^  /{ sum += $(NF - 2) } /^wrote|^kept/{ inside = 0 } END { print sum + 0 }' stdout; }

# Itself: the same bytes, with the manifest and without.
for plan in *.yaml; do
	name=${plan%.yaml}
	build 0 "$plan" -o "old/$name" --format bin
	build 0 "$plan" --near "old/$name" -o "same/$name" --format bin
	same "$name: near to itself, the same bytes" "$(sums "old/$name")" "$(sums "same/$name")"
	same "$name: near to itself, no byte changes" '0' "$(changed)"
	holds "$name: near to itself, each chip is named" test "$(grep -c ': keeps its bytes; 0 without --near$' stdout)" \
		-eq "$(find "old/$name" -name '*.bin' | wc -l)"
	rm "old/$name/"*.manifest.json
	build 0 "$plan" --near "old/$name" -o "same/$name" --format bin
	same "$name: without a manifest, the same bytes" "$(sums "old/$name")" "$(sums "same/$name")"
	build 0 "$plan" -o "old/$name" --format bin
done

# edit MOST PLAN NAME SED: near to the plan's images no more than MOST bytes change, and no more than without; the images prove.
edit() {
	sed -E "$4" "$2.yaml" >"$3.yaml"
	holds "$3 is another text" sh -c '! cmp -s "$0" "$1"' "$2.yaml" "$3.yaml"
	build 0 "$3.yaml" --near "old/$2" -o "new/$3" --format bin
	holds "$3: $(changed) bytes change, wanted at most $1" test "$(changed)" -le "$1"
	holds "$3: no more than the $(changed_without) without" test "$(changed)" -le "$(changed_without)"
	holds "$3: the images prove" "$SCANLATCH" prove "$3.yaml" "new/$3"
	cp "$3.yaml" again.yaml
	build 0 again.yaml --near "old/$2" -o again --format bin
	same "$3: the same again" "$(sums "new/$3")" "$(sums again)"
	rm -r again
	grep -A 20 '^near ' stdout >counts
}

# A line more: 101 rows in three chips, each twice, as A16 is open, and the rows that led there. Where the line is all blank, sync is only in the
# new rows, so that the third chip changes little.
edit 700 tide-board-60 tide-more 's/repeat: 25/repeat: 26/'
edit 700 tide-board-60 tide-first 's/repeat: 18/repeat: 19/'
edit 700 tide-board-60 tide-fewer 's/repeat: 18/repeat: 17/'
# Data signals that move change the chip alone that has them.
edit 1036 tide-board-60 tide-edge 's/(region: breezeway, +cells: )1/\12/'
holds 'an edge: two chips keep their bytes' test "$(grep -c 'rom[01]: keeps its bytes; 0 without' counts)" -eq 2
# One chip to burn, though in three fewer bytes might change: only what the third one says has changed.
one_chip() {
	edit 131072 "$@"
	same "$2: chips to burn" 1 "$(grep -c ' bytes change;' counts)"
	same "$2: the others keep their bytes" 2 "$(grep -c 'rom[01]: keeps its bytes; 0 without --near$' counts)"
}
one_chip tide-board-60 tide-burst-low '/^  burst: /s/high/low/'
one_chip tide-board-60 tide-blank-low '/^  blank: /s/high/low/'
one_chip tide-board-60 tide-sync-high '/^  sync: /s/low/high/'
one_chip tide-board-60 tide-direct 's/outputs: registered/outputs: direct/'
one_chip tide-board-60 tide-porch '1,/region: front porch/s/(region: front porch, +cells: )2/\13/'
one_chip tide-board-60 tide-short-porch '1,/region: front porch/s/(region: front porch, +cells: )2/\11/'
# Cells that are gone from behind the picture go into the back porch before it: in each of 216 lines three rows of each copy lead elsewhere.
edit 1400 edge-board edge-gone '/region: right edge/d'
holds 'a region is gone: what shows stays' grep -q '^  rom2: keeps its bytes' counts
# Polarities and outputs that are others beside an edit: rows are matched by what they were meant to show.
rows_kept() {
	edit 140000 "$@"
	same "$2: rows that lead elsewhere" 2 "$(grep -c 'rom[01]: 204 of 131072 bytes change' counts)"
}
rows_kept tide-board-60 tide-burst-more 's/repeat: 18/repeat: 19/; /^  burst: /s/high/low/'
rows_kept tide-board-60 tide-polarities-more 's/repeat: 18/repeat: 19/; /^  sync: /s/low/high/; /^  blank: /s/high/low/'
edit 3200 tide-board-60 tide-longer 's/cells: 101/cells: 102/; s/stretch: auto/stretch: 1/; s/phase: every line/phase: free/'
edit 600 tide-board-50 board-more 's/repeat: 37/repeat: 38/'
edit 400 ferry-queue ferry-more 's/repeat: 3,/repeat: 4,/'
edit 1900 ferry-queue ferry-edge 's/time: 0.6 us/cells: 2/'
edit 400 ferry-auto auto-more 's/repeat: 3,/repeat: 4,/'
edit 2500 ferry-auto auto-edge 's/time: 0.6 us/cells: 2/'
holds 'codes: auto stay: a tenth of the bytes that change otherwise' test "$(($(changed) * 10))" -lt "$(changed_without)"
edit 200 lock-gate-sign lock-more 's/repeat: 28/repeat: 29/'
edit 2800 lock-gate-sign lock-longer 's/cells: 30/cells: 31/'
edit 100 mooring-board mooring-longer 's/(region: back porch, +cells: )6/\17/'
edit 30 mooring-board mooring-edge 's/(region: sync, +cells: )12/\113/; s/(region: back porch, +cells: )6/\15/'
edit 1100 pilot-station-525 pilot-edge 's/(region: front porch, +cells: )4/\15/'
edit 300 pier-clock pier-more 's/repeat: 208/repeat: 209/'
edit 30 harbour-mouth mouth-edge 's/(region: back porch, +cells: )14/\115/'
# A set: the bank that does not change keeps its rows.
sed 's/repeat: 34/repeat: 33/' pilot-station-625.yaml >edited-625.yaml
sed 's/pilot-station-625/edited-625/' pilot-station.yaml >kit.yaml
build 0 kit.yaml --near old/pilot-station -o new/kit --format bin
holds "a set: $(changed) bytes change, $(changed_without) without" test "$(changed)" -lt "$(($(changed_without) / 4))"
holds 'a set: the images prove' "$SCANLATCH" prove kit.yaml new/kit
holds 'a set: bank 0 keeps its rows' cmp -n 65536 old/pilot-station/pilot-station.rom0.bin new/kit/pilot-station.rom0.bin

# Into the same folder, as JSON, and several plans at once.
cp -r old/tide-board-60 images
build 0 --json tide-more.yaml --near images -o images
cat >judge.py <<'PYTHON'
import json
near = json.load(open("stdout", encoding="utf-8"))["near"]
assert [chip["label"] for chip in near] == ["rom0", "rom1", "rom2"], near
assert all(set(chip) == {"label", "bytes", "changed", "changed_without"} and chip["bytes"] == 131072 for chip in near), near
assert all(0 < chip["changed"] < chip["changed_without"] for chip in near), near
PYTHON
holds 'JSON' python3 -B judge.py
same 'into the same folder: the same bytes' "$(sums new/tide-more)" "$(sums images)"
mkdir both
cp old/tide-board-60/* old/pier-clock/* both
build 0 tide-board-60.yaml pier-clock.yaml --near both -o out
same 'several plans: a count for each' 2 "$(grep -c '^near both$' stdout)"
build 0 tide-board-60.yaml -o out
holds 'without --near there is no count' sh -c '! grep -q "^near" stdout'
build 0 --json tide-board-60.yaml -o out
holds 'without --near there is none in JSON' sh -c '! grep -q "\"near\"" stdout'

# Damaged images: less near, but right. One bit; a row that leads astray; noise; erased chips.
damage() {
	rm -rf damaged
	cp -r "old/$1" damaged
	python3 -B - "$2" damaged/*.bin <<'PYTHON'
import random, sys
for path in sys.argv[2:]:
    data = bytearray(open(path, "rb").read())
    chance = random.Random(sys.argv[1] + str(len(data)))
    if sys.argv[1] == "bit":
        data[chance.randrange(len(data))] ^= 1 << chance.randrange(8)
    elif sys.argv[1] == "some":
        for _ in range(50):
            data[chance.randrange(len(data))] = chance.randrange(256)
    elif sys.argv[1] == "noise":
        data = bytes(chance.randrange(256) for _ in data)
    else:
        data = bytes([255]) * len(data)
    open(path, "wb").write(data)
PYTHON
}
for name in tide-board-60 ferry-queue ferry-auto mooring-board pilot-station codes-auto pier-clock harbour-mouth; do
	for kind in bit some noise erased; do
		damage "$name" "$kind"
		build 0 "$name.yaml" --near damaged -o out
		holds "$name, $kind: the images prove" "$SCANLATCH" prove "$name.yaml" out
	done
done
damage tide-board-60 erased
build 0 tide-board-60.yaml --near damaged -o out
holds 'erased: says so' grep -q '^tide-board-60.yaml: notice: the old images have no frame that comes back to its first cell.*\[near-frame\]$' stderr

# Manifests: one that is none is done without; one that says that pins were wired otherwise is believed.
cp -r old/tide-board-60 broken
echo '{ "start": ' >broken/tide-board-60.manifest.json
build 0 tide-board-60.yaml --near broken -o out
holds 'a broken manifest: says so' grep -q '^broken/tide-board-60.manifest.json: notice: .*\[near-manifest\]$' stderr
same 'a broken manifest: the same bytes' "$(sums old/tide-board-60)" "$(sums out | grep tide-board-60)"
for text in '[]' '"x"' '{ "start": [ 1, { "bank": 0, "stage": "loop", "state": -1 }, { "bank": 0, "stage": "loop", "state": 99999999 } ], "chips": { "a": 1 },
	"proofs": { "signals": { "codes": 7 } } }' '{ "chips": [ 3, { "label": 4 }, { "label": "rom9", "address": 5 } ], "start": {} }'; do
	echo "$text" >broken/tide-board-60.manifest.json
	build 0 tide-board-60.yaml --near broken -o out
done
cp -r old/lock-gate-sign wired
sed -E 's/\[state.4, state.0,/[state.0, state.4,/' lock-gate-sign.yaml >swapped.yaml
build 2 swapped.yaml --near wired -o none
holds 'wired otherwise: which pin' grep -q '^wired/lock-gate-sign.manifest.json: error: chip "U3" was wired otherwise: pin A0 was state.4, now state.0 \[near-wiring\]$' stderr
sed -E 's/next.3, sync,/sync, next.3,/' lock-gate-sign.yaml >swapped.yaml
build 2 swapped.yaml --near wired -o none
holds 'wired otherwise: which data pin' grep -q 'pin D0 was next.3, now sync \[near-wiring\]$' stderr
holds 'wired otherwise: nothing is written' test ! -e none
# A signal on another pin, or a new one, leaves the states where they are.
sed -E 's/data: \[next.3, sync,(.*), load,/data: [next.3, load,\1, sync,/' lock-gate-sign.yaml >moved.yaml
build 0 moved.yaml --near wired -o out
holds 'a signal on another pin: U4 keeps its bytes' grep -q '^  U4: keeps its bytes' stdout

# What is not there.
build 3 tide-board-60.yaml --near nowhere -o none
same 'no folder: said once' 'nowhere: error: cannot read a folder of images: No such file or directory [file-unreadable]' "$(cat stderr)"
build 3 tide-board-60.yaml --near tide-board-60.yaml -o none
same 'a file: said once' 'tide-board-60.yaml: error: cannot read a folder of images: Not a directory [file-unreadable]' "$(cat stderr)"
build 2 pier-clock.yaml --near old/tide-board-60 -o none
holds 'of another plan: what is there' grep -Fqx '  hint: the folder old/tide-board-60 has neither pier-clock.rom0.bin nor pier-clock.rom0.hex; it has tide-board-60.rom0.bin, tide-board-60.rom1.bin, tide-board-60.rom2.bin' stderr
sed 's/label: U4/label: U5/' lock-gate-sign.yaml >label.yaml
build 2 label.yaml --near old/lock-gate-sign -o none
holds 'another label: what is there' grep -Fqx '  hint: the folder old/lock-gate-sign has neither lock-gate-sign.U5.bin nor lock-gate-sign.U5.hex; it has lock-gate-sign.U4.bin' stderr
mkdir many
touch many/tide-board-60.rom0.bin many/tide.rom{0,1,2}.{bin,hex} many/tide.yaml
build 2 pier-clock.yaml --near many -o none
holds 'many: the first of them' grep -Fqx '  hint: the folder many has neither pier-clock.rom0.bin nor pier-clock.rom0.hex; it has tide-board-60.rom0.bin, tide.rom0.bin, tide.rom0.hex, tide.rom1.bin and 3 more' stderr
printf 'short' >damaged/tide-board-60.rom0.bin
build 2 tide-board-60.yaml --near damaged -o none
holds 'a wrong size' grep -q '\[image-size\]$' stderr
build 2 tide-board-60.yaml -o none --near
holds 'none is written' test ! -e none
finish
