#!/bin/bash
# Sets through the commands: every bank is proved against its plan, and what follows for jumpers that change is said.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

# jetty NAME LAST: a loop of eight states, one of which is spare; LAST is how long its last region is.
jetty() {
	cat >"$work/$1.yaml" <<PLAN
scanlatch: 1
name: $1
clock: { master: 1 MHz, cell: 1 tick }
signals: { sync: { role: composite sync, active: high }, lamp: { role: plain, active: high } }
lines: { only: { regions: [ { region: sync, cells: 2, assert: [sync], hold: { n: cell } }, { region: rest, cells: $2, assert: [lamp], hold: { n: cell } } ] } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 3 bits, fields: { n: 2..0 } }
chips: { part: 28C64, speed: 150 ns }
PLAN
}

jetty short 3
jetty long 5
cat >"$work/jetty.yaml" <<'SET'
scanlatch-set: 1
name: jetty
bank: 2 bits
banks: { 0: short.yaml, 2: long.yaml }
SET
cd "$work" || exit 1

"$SCANLATCH" build jetty.yaml --listing -o out >stdout 2>stderr
same 'build: exit status' 0 $?
same 'build: nothing on standard error' '' "$(cat stderr)"
same 'build: headings and jumpers' "bank 0, short: 3
bank 2, long: 1
pass jumpers" "$(python3 -c '
import json
manifest = json.load(open("out/jetty.manifest.json"))
for entry in manifest["banks"]:
    print("bank %d, %s: %d" % (entry["banks"][0], entry["name"], len(entry["banks"])))
print(manifest["jumpers"], "jumpers")
')"
same 'build: says which banks' "banks 0, 1 and 3: short (short.yaml)
bank 2: long (long.yaml)" "$(grep '^banks\? ' stdout)"
holds 'build: says what jumpers may do' grep -qx 'pass  jumpers   may change at any moment: every state of every bank comes home, as power-up shows' stdout
same 'build: files are named after the set' 'jetty.lst jetty.manifest.json jetty.rom0.bin jetty.rom0.hex' "$(ls out | tr '\n' ' ' | sed 's/ $//')"
# Next in D0 to D2, sync and lamp in D3 and D4, the rest erased; latched, so that a row holds the next cell's signals. Five cells and
# three spare rows like that of the last, which leads to cell 0 with sync; A3 and A4 are the bank.
short='E9F2F3F4E8E8E8E8'
# Seven cells and one spare row.
long='E9F2F3F4F5F6E8E8'
same 'banks 0 to 3, and again' "$short$short$long$short$short$short$long$short" "$(xxd -p -l 64 -c 64 -u out/jetty.rom0.bin)"
same 'listing: a row of bank 2' '0010:E9' "$(grep '^"only" 0 0 ' out/jetty.lst | tail -n 1 | grep -o '[0-9A-F]*:[0-9A-F]*$')"
same 'a start for each bank' '0 loop 0, 1 loop 0, 2 loop 0, 3 loop 0' "$(python3 -c '
import json
print(", ".join("%d %s %d" % (start["bank"], start["stage"], start["state"]) for start in json.load(open("out/jetty.manifest.json"))["start"]))
')"

"$SCANLATCH" prove jetty.yaml out >stdout 2>stderr
same 'prove: exit status' 0 $?
same 'prove: nine proofs for each plan, and the jumpers' 19 "$(grep -Ec '^(pass|none|miss|FAIL)  [a-z]' stdout)"
"$SCANLATCH" prove --json jetty.yaml out >proofs.json
same 'prove --json: keys' "['name', 'failed', 'missed', 'banks', 'jumpers']" "$(python3 -c 'import json; print(list(json.load(open("proofs.json"))))')"
"$SCANLATCH" check jetty.yaml >stdout 2>stderr
same 'check: exit status' 0 $?
same 'check: both plans' 2 "$(grep -c '^frame: ' stdout)"
same 'check --json: banks' '[[0, 1, 3], [2]]' "$("$SCANLATCH" check --json jetty.yaml | python3 -c '
import json, sys
print([entry["banks"] for entry in json.load(sys.stdin)["banks"]])
')"

# The spare row of bank 2 leads to itself: state 7 of that bank is a trap, and jumpers may lead there.
cp out/jetty.rom0.bin trap.bin
printf '\xEF' | dd of=trap.bin bs=1 seek=$((0x17)) conv=notrunc status=none
for ((copy = 1; copy < 256; copy++)); do
	printf '\xEF' | dd of=trap.bin bs=1 seek=$((0x17 + copy * 32)) conv=notrunc status=none
done
"$SCANLATCH" prove jetty.yaml rom0=trap.bin >stdout 2>stderr
same 'a trap in one bank: exit status' 1 $?
holds 'a trap in one bank: jumpers' grep -q '^FAIL  jumpers   may not change while the machine runs' stdout
same 'a trap in one bank: the other banks are good' 1 "$(grep -c '^FAIL  power-up' stdout)"
holds 'a trap in one bank: which byte' grep -q 'byte 0xEF at address 0x0017 of chip rom0' stdout
# Codes that the planner chose are read out of the images, and the decoder is wired once: what each bank has for itself is not enough.
for name in ebb flood; do
	cat >"$name.yaml" <<PLAN
scanlatch: 1
name: $name
clock: { master: 1 MHz, cell: 1 tick }
signals: { sync: { role: composite sync, active: high, from: { field: top, codes: auto } } }
lines: { only: { regions: [ { region: sync, cells: 1, assert: [sync], hold: { top: $([ $name = ebb ]; echo $?) } }, { region: rest, cells: 1 } ] } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 2 bits, fields: { top: 1 } }
chips: [ { label: U1, part: 28C64, speed: 150 ns, address: [state.0, state.1, bank.0, -, -, -, -, -, -, -, -, -, -], data: [next.0, next.1, -, -, -, -, -, -] } ]
PLAN
	"$SCANLATCH" build "$name.yaml" --format bin -o alone >stdout
	same "$name: build" 0 $?
done
printf 'scanlatch-set: 1\nname: tide\nbank: 1 bit\nbanks: { 0: ebb.yaml, 1: flood.yaml }\n' >tide.yaml
# Four bytes of each bank in turn.
python3 -c '
ebb, flood = (open("alone/%s.U1.bin" % name, "rb").read() for name in ("ebb", "flood"))
open("both.bin", "wb").write(b"".join((ebb, flood)[at // 4 % 2][at:at + 4] for at in range(0, len(ebb), 4)))'
"$SCANLATCH" prove tide.yaml U1=both.bin >stdout 2>stderr
same 'codes that differ between banks: exit status' 1 $?
holds 'codes that differ between banks: said' grep -qx 'FAIL  signals   sync is asserted in code 1, but in code 0 in bank 0: the decoder is the same' stdout
sed 's/^bank: .*/bank: 8 bits/' jetty.yaml >wide.yaml
mkfifo pipe.yaml
sed 's/2: long.yaml/2: pipe.yaml/' jetty.yaml >piped.yaml
timeout 10 "$SCANLATCH" check piped.yaml >stdout 2>stderr
same 'a pipe for a plan: exit status' 2 $?
holds 'a pipe for a plan: said' grep -q 'bank 2: "pipe.yaml" is no ordinary file \[bank-plan\]' stderr
# Banks in the wrong order: each has the other's rows.
sed 's/0: short/0: xxx/; s/2: long/2: short/; s/0: xxx/0: long/' jetty.yaml >exchanged.yaml
"$SCANLATCH" prove exchanged.yaml rom0=out/jetty.rom0.bin >stdout 2>stderr
same 'banks exchanged: exit status' 1 $?
holds 'banks exchanged: said of the first' grep -q '^      hint: this bank holds the rows of "short": are banks exchanged?' stdout
holds 'banks exchanged: said of the second' grep -q '^      hint: this bank holds the rows of "long": are banks exchanged?' stdout
same 'banks in ranges' 'banks 0, 1 and 3 to 255: short (short.yaml)' "$("$SCANLATCH" check wide.yaml | grep '^banks')"
finish
