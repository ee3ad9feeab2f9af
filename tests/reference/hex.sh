#!/bin/bash
# Intel HEX against two programs from outside: GNU objcopy (Debian binutils) and Python's intelhex (Debian
# python3-intelhex). What the program writes they decode to the .bin; what they write of the .bin the program reads.
# Then the worked records.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
python=/usr/bin/python3
intel_hex=tests/reference/intel_hex.py

# The plans of the tree, and two whose chips are of other kinds: words of 16 bits, and more than the 1 MiB that
# segment addresses reach.
mkdir "$work/plans"
cp plans/*.yaml "$work/plans/"
# own_plan NAME PINS DATAPINS ADVANCE: 18,000 cells for a chip with so many pins.
own_plan() {
	cat >"$work/plans/$1.yaml" <<PLAN
scanlatch: 1
name: $1
clock: { master: 1 MHz, cell: 1 tick }
signals:
  sync:  { role: composite sync, active: low }
  blank: { role: blanking, active: high }
lines:
  only:
    regions:
      - { region: rest,  cells: 900, assert: [blank] }
      - { region: pulse, cells: 100, assert: [sync] }
frame: [ { repeat: 18, line: only } ]
machine: { form: loop, state: $2 bits, advance: $4 }
parts: { XROM: { address pins: $2, data pins: $3, access: [100 ns] } }
chips: { part: XROM }
PLAN
}
own_plan wide-words 16 16 table
own_plan large-chip 21 8 count

# built PLAN RECORD: builds with records of that many bytes into $work/RECORD/PLAN.
built() {
	"$SCANLATCH" build "$work/plans/$1.yaml" -o "$work/$2/$1" --record "$2"
}

# images FOLDER: its .bin files, one a line; none is a mistake.
images() {
	find "$1" -name '*.bin' | sort
}

# decodes_to_binary NAME HEX BIN: both programs decode HEX to BIN.
decodes_to_binary() {
	holds "$1: objcopy decodes" objcopy -I ihex -O binary "$2" "$work/objcopy.bin"
	holds "$1: objcopy's bytes" cmp "$3" "$work/objcopy.bin"
	holds "$1: intelhex decodes" "$python" "$intel_hex" decode "$2" "$work/intelhex.bin" "$(wc -c <"$3")"
	holds "$1: intelhex's bytes" cmp "$3" "$work/intelhex.bin"
	rm -f "$work/objcopy.bin" "$work/intelhex.bin"
}

# records_of HEX DIGITS: how many records have that length; DIGITS are the length as the record has it.
records_of() {
	grep -c "^:$2....00" "$1"
}

for plan in "$work"/plans/*.yaml; do
	name=$(basename "$plan" .yaml)
	for record in 16 32; do
		holds "$name: builds with --record $record" built "$name" "$record"
		[ -n "$(images "$work/$record/$name")" ] || fail "$name: no image"
		while read -r image; do
			decodes_to_binary "$(basename "$image" .bin), records of $record" "${image%.bin}.hex" "$image"
			same "$(basename "$image" .bin): as many records of $record as the chip takes" \
				$(($(wc -c <"$image") / record)) "$(records_of "${image%.bin}.hex" "$(printf '%02X' "$record")")"
		done <<<"$(images "$work/$record/$name")"
	done
done

# label_of IMAGE: the chip's label, from NAME.LABEL.bin.
label_of() {
	basename "$1" .bin | sed 's/^[^.]*\.//'
}

# Writes LABEL=FILE for each image of plan $1 to the array `chips`, the files made by command $2 from each .bin.
encode_all() {
	local image
	chips=()
	while read -r image; do
		holds "$1: $2 encodes $(basename "$image")" "$2" "$image" "$work/$2.$(basename "$image" .bin).hex"
		chips+=("$(label_of "$image")=$work/$2.$(basename "$image" .bin).hex")
	done <<<"$(images "$work/16/$1")"
}

# objcopy writes segment addresses (type 02) up to 1 MiB and \r\n; intelhex linear ones (type 04), the first for the
# first 64 KiB.
by_objcopy() {
	objcopy -I binary -O ihex "$1" "$2"
}
# With a start address (type 05 or 03), which a memory has no use for.
by_objcopy_with_start() {
	objcopy -I binary -O ihex --set-start 0x1234 "$1" "$2"
}
by_intelhex() {
	"$python" "$intel_hex" encode "$1" "$2"
}

for plan in "$work"/plans/*.yaml; do
	name=$(basename "$plan" .yaml)
	for encoder in by_objcopy by_objcopy_with_start by_intelhex; do
		encode_all "$name" "$encoder"
		holds "$name: prove reads what was encoded $encoder" "$SCANLATCH" prove "$plan" "${chips[@]}"
	done
done
holds 'objcopy wrote segment addresses' grep -q '^:02000002' "$work/by_objcopy.tide-board-60.rom0.hex"
holds 'objcopy wrote a start address' grep -q '^:0400000[35]' "$work/by_objcopy_with_start.tide-board-60.rom0.hex"
holds 'intelhex wrote linear addresses' grep -q '^:020000040000FA' "$work/by_intelhex.large-chip.rom0.hex"

# The bytes do count: one bit of the row of the first state, flipped on the way, is found.
cp "$work/16/tide-board-60/tide-board-60.rom0.bin" "$work/flipped.bin"
byte=$(od -An -tu1 -j 32768 -N 1 "$work/flipped.bin")
# shellcheck disable=SC2059 # the format is the byte
printf "\\$(printf '%03o' $((byte ^ 1)))" | dd of="$work/flipped.bin" bs=1 seek=32768 conv=notrunc status=none
by_objcopy "$work/flipped.bin" "$work/flipped.hex"
built=$work/16/tide-board-60/tide-board-60
"$SCANLATCH" prove plans/tide-board-60.yaml "rom0=$work/flipped.hex" "rom1=$built.rom1.hex" "rom2=$built.rom2.hex" \
	>"$work/output" 2>&1
same 'a flipped bit in another program'\''s file fails' 1 $?

# Worked records. A chip is read from a .hex and a .bin made by hand: they must agree, or the status is 2. What the
# bytes do as a table does not matter, so 0 and 1 are both agreement.

# plan_of PINS: a plan whose only chip rom0 has that many address pins.
plan_of() {
	cat >"$work/records.yaml" <<PLAN
scanlatch: 1
name: records
clock: { master: 1 MHz, cell: 1 tick }
signals: { sync: { role: composite sync, active: high } }
lines: { only: { regions: [ { region: pulse, cells: 1, assert: [sync] }, { region: rest, cells: 3 } ] } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 2 bits }
parts: { ROM: { address pins: $1, data pins: 8, access: [100 ns] } }
chips: { part: ROM }
PLAN
}

# Puts an erased image of 2^PINS bytes with bytes at addresses: expected PINS [ADDRESS HEXBYTES] …
expected() {
	head -c $((1 << $1)) /dev/zero | tr '\0' '\377' >"$work/expected.bin"
	shift
	while [ $# -gt 0 ]; do
		# shellcheck disable=SC2001,SC2059 # two digits each; the format is the bytes
		printf "$(sed 's/../\\x&/g' <<<"$2")" | dd of="$work/expected.bin" bs=1 seek=$(($1)) conv=notrunc status=none
		shift 2
	done
}

# reads NAME: $work/records.hex is read to the bytes of $work/expected.bin, and by intelhex too; another byte is
# noticed.
reads() {
	local status
	"$SCANLATCH" prove "$work/records.yaml" "rom0=$work/records.hex" "rom0=$work/expected.bin" >"$work/output" 2>&1
	status=$?
	if [ "$status" -le 1 ]; then pass; else fail "$1: status $status" "$(cat "$work/output")"; fi
	"$python" "$intel_hex" decode "$work/records.hex" "$work/intelhex.bin" "$(wc -c <"$work/expected.bin")"
	holds "$1: intelhex reads the same" cmp "$work/expected.bin" "$work/intelhex.bin"
	printf '\0' | dd of="$work/expected.bin" bs=1 seek=255 conv=notrunc status=none
	"$SCANLATCH" prove "$work/records.yaml" "rom0=$work/records.hex" "rom0=$work/expected.bin" >"$work/output" 2>&1
	same "$1: another byte at 0xFF is refused" 2 $?
	holds "$1: and named" grep -q 'byte 0x00 at 0xFF, .* has 0xFF \[image-disagrees\]' "$work/output"
}

# refuses NAME WORDS: $work/records.hex is refused with those words.
refuses() {
	"$SCANLATCH" prove "$work/records.yaml" "rom0=$work/records.hex" >"$work/output" 2>&1
	same "$1: status" 2 $?
	holds "$1: says '$2'" grep -q -- "$2" "$work/output"
}

# From a public README of example records, 64 bytes at 0100h; checksums recomputed.
plan_of 9
cat >"$work/records.hex" <<'RECORDS'
:10010000214601360121470136007EFE09D2190140
:100110002146017E17C20001FF5F16002148011928
:10012000194E79234623965778239EDA3F01B2CAA7
:100130003F0156702B5E712B722B732146013421C7
:00000001FF
RECORDS
expected 9 0x100 214601360121470136007EFE09D21901 0x110 2146017E17C20001FF5F160021480119 \
	0x120 194E79234623965778239EDA3F01B2CA 0x130 3F0156702B5E712B722B732146013421
reads 'the four example records'

# Intel Hexadecimal Object File Format Specification, Rev. A, 6 January 1988: the checksum makes the sum of a record 0
# modulo 256, and the end of file record has one legal form (section 8).
sed -i '2s/28$/29/' "$work/records.hex"
refuses 'a checksum off by one' "records.hex:2:1: error: Intel HEX: "
printf ':00000001FE\n' >"$work/records.hex"
refuses 'an end record of another form' "records.hex:1:1: error: Intel HEX: "
printf ':100110002146017E17C20001FF5F16002148011928\n' >"$work/records.hex"
refuses 'no end record' 'error: Intel HEX: '
# Another circulating variant of the second record (B7, checksum 88), from a public test file, is as valid.
printf ':100110002146017EB7C20001FF5F16002148011988\n:00000001FF\n' >"$work/records.hex"
expected 9 0x110 2146017EB7C20001FF5F160021480119
reads 'the variant of the second record'
# Three bytes at 0030h: from memory, checksum recomputed.
printf ':0300300002337A1E\n:00000001FF\n' >"$work/records.hex"
expected 9 0x30 02337A
reads 'three bytes at 0030h'
# The start records hold no data: CS:IP 0000:3800 and EIP 000000CDh, from memory, checksums recomputed.
for start in 0400000300003800C1 04000005000000CD2A; do
	printf ':%s\n:0300300002337A1E\n:00000001FF\n' "$start" >"$work/records.hex"
	expected 9 0x30 02337A
	reads "start record $start"
done
# Extended linear address 0800h, base 08000000h: from public test files, checksum recomputed. FFFFh: from memory,
# recomputed.
printf ':020000040800F2\n:0300300002337A1E\n:00000001FF\n' >"$work/records.hex"
refuses 'linear base 08000000h' 'data at address 0x8000030, but'
printf ':02000004FFFFFC\n:0300300002337A1E\n:00000001FF\n' >"$work/records.hex"
refuses 'linear base FFFF0000h' 'data at address 0xFFFF0030, but'
# Linear base 0001h, then back to 0000h: derived from the specification's address formula.
plan_of 17
printf ':020000040001F9\n:0300300002337A1E\n:020000040000FA\n:0300300002337A1E\n:00000001FF\n' >"$work/records.hex"
expected 17 0x10030 02337A 0x30 02337A
reads 'linear base 00010000h and back'
# Segment 1000h begins at 10000h, segment 1200h at 12000h: derived, and from memory, recomputed.
printf ':020000021000EC\n:0300300002337A1E\n:020000021200EA\n:0300300002337A1E\n:00000001FF\n' >"$work/records.hex"
expected 17 0x10030 02337A 0x12030 02337A
reads 'segments 1000h and 1200h'
# Within a segment the offset wraps at 64 KiB: SBA + ((DRLO + DRI) mod 64K), section 4 of the specification. intelhex
# does not wrap.
printf ':020000021000EC\n:04FFFE0001020304F5\n:00000001FF\n' >"$work/records.hex"
expected 17 0x1FFFE 0102 0x10000 0304
"$SCANLATCH" prove "$work/records.yaml" "rom0=$work/records.hex" "rom0=$work/expected.bin" >"$work/output" 2>&1
holds 'an offset wraps in its segment' test $? -le 1

finish
