#!/bin/bash
# How prove takes images: folders and files, both formats, in every mixture; what it refuses; what it finds.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
cp tests/good/{unused-line,codes-auto,lead,scrambled,bank,wide-part,speed-notice}.yaml plans/lock-gate-sign.yaml "$work"
cp tests/bad/unknown-key.yaml "$work/bad.yaml"
cd "$work" || exit 1
head -c 32768 /dev/zero >blank32
for plan in *.yaml; do
	"$SCANLATCH" build "$plan" -o images >/dev/null 2>&1
done

# prove STATUS ARGUMENT …: runs prove and checks its exit status; leaves stdout and stderr in files.
prove() {
	local wanted=$1
	shift
	"$SCANLATCH" prove "$@" >stdout 2>stderr </dev/null
	same "prove $*: exit status" "$wanted" $?
	if [ "$wanted" -gt 1 ]; then
		same "prove $*: nothing on standard output" '' "$(cat stdout)"
	else
		holds "prove $*: a line for each proof" test "$(grep -Ec '^(pass|none|miss|FAIL)  [a-z]' stdout)" -eq 9
	fi
}

# refuses RULE TEXT ARGUMENT …: exit 2, with this as the first diagnostic.
refuses() {
	local rule=$1 text=$2
	shift 2
	prove 2 "$@"
	same "prove $*: message" "$text [$rule]" "$(head -n 1 stderr)"
}

# What is proved is what build proved.
prove 0 lock-gate-sign.yaml images
same 'the same report as build printed' "$("$SCANLATCH" build lock-gate-sign.yaml -o images | sed '1d; /^kept/d')" \
	"$(cat stdout)"
prove 0 scrambled.yaml U1=images/scrambled.U1.bin U2=images/scrambled.U2.bin
prove 0 scrambled.yaml U2=images/scrambled.U2.hex U1=images/scrambled.U1.bin
prove 0 scrambled.yaml U1=images/scrambled.U1.hex U2=images/scrambled.U2.hex U1=images/scrambled.U1.bin
prove 0 bank.yaml images
prove 0 wide-part.yaml U1=images/wide-part.U1.hex
prove 0 speed-notice.yaml images
prove 1 speed-notice.yaml images --strict
mkdir -p bin hex 'odd=name'
cp images/scrambled.*.bin bin
cp images/scrambled.*.hex hex
prove 0 scrambled.yaml bin
prove 0 scrambled.yaml hex
cp bin/scrambled.U1.bin 'odd=name'
cp hex/scrambled.U2.hex 'odd=name'
prove 0 scrambled.yaml 'odd=name'
prove 0 scrambled.yaml U1=odd=name/scrambled.U1.bin U2=bin/scrambled.U2.bin

# Files that other programs wrote. The bytes of lead.yaml are ED E6 F7 E0.
printf ':04000000ede6f7e052\r\n:00000001ff\r\n' >lower.hex
prove 0 lead.yaml rom0=lower.hex
printf '\n:01000200F706\n:020000040000FA\n:02000000EDE62B\n:0100030000FC\n:0000000' >broken.hex
printf ':01000200F706\n\n:020000040000FA\n:02000000EDE62B\n:01000300E01C\n:0400000500000000F7\n:00000001FF\n' >order.hex
prove 0 lead.yaml rom0=order.hex
printf ':020000020000FC\n:04000000EDE6F7E052\n:00000001FF' >segment.hex
prove 0 lead.yaml rom0=segment.hex
# Four bytes of which the first happens to be a colon are a binary image.
printf ':\xe6\xf7\xe0' >colon.bin
prove 1 lead.yaml rom0=colon.bin

# Images that another maker chose other states for, which the plan leaves free: 0 2 1 3; and 2 0 1 3, with another start.
printf '\xfe\xff\xfd\xf8' >states.bin
prove 0 unused-line.yaml rom0=states.bin
holds 'other states: home' grep -q 'home in state 0x0 after 4 us$' stdout
printf '\xfd\xff\xfc\xfa' >start.bin
prove 0 unused-line.yaml rom0=start.bin
holds 'another start: home' grep -q 'home in state 0x2 after 4 us$' stdout
# Codes that another maker chose, states as in codes-auto.yaml but for bit 2 turned over: 4 6 7 2 3 0.
printf '\xfc\xf8\xfb\xf8\xfe\xf8\xff\xfa' >codes.bin
prove 0 codes-auto.yaml rom0=codes.bin
holds 'other codes: sync' grep -q 'sync is asserted in code of field code: 3$' stdout
holds 'other codes: blank' grep -q 'blank is asserted in codes of field code: 2 3$' stdout

# What cannot be images of the chip.
refuses image-format 'broken.hex:6:1: error: Intel HEX: a record that does not have the length it says' \
	lead.yaml rom0=broken.hex
printf ':04000000EDE6F7E052\n:00000001FF\n' | tr F f | sed 's/52/53/' >sum.hex
refuses image-format 'sum.hex:1:1: error: Intel HEX: a record whose checksum is wrong' lead.yaml rom0=sum.hex
head -c 25 images/lead.rom0.hex >cut.hex
refuses image-format 'cut.hex:2:1: error: Intel HEX: a record that does not have the length it says' \
	lead.yaml rom0=cut.hex
head -c 20 images/lead.rom0.hex >end.hex
refuses image-format 'end.hex: error: Intel HEX: no end record' lead.yaml rom0=end.hex
head -c 3 images/lead.rom0.bin >small.bin
refuses image-size 'small.bin: error: 3 bytes, but chip "rom0" (BUOYROM) has 4' lead.yaml rom0=small.bin
printf ':0400000OEDE6F7E052\n:00000001FF\n' >letter.hex
refuses image-size 'letter.hex: error: 32 bytes, but chip "rom0" (BUOYROM) has 4' lead.yaml rom0=letter.hex
holds 'a letter in the first record: hint' \
	grep -Fqx '  hint: it begins as Intel HEX does, but its first record has other characters than digits' stderr
: >empty.bin
refuses image-size 'empty.bin: error: 0 bytes, but chip "rom0" (BUOYROM) has 4' lead.yaml rom0=empty.bin
refuses image-size 'images/lock-gate-sign.U4.bin: error: 8192 bytes, but chip "U3" (28C256) has 32768' \
	lock-gate-sign.yaml U3=images/lock-gate-sign.U4.bin U4=images/lock-gate-sign.U3.bin
refuses image-missing 'scrambled.yaml: error: there is no image for chip "U2" (LOCKROM)' \
	scrambled.yaml U1=bin/scrambled.U1.bin
refuses image-missing 'scrambled.yaml: error: there is no image for chip "U1" (LOCKROM)' scrambled.yaml 'odd=name/..'
holds 'a folder without images: the names that were wanted' \
	grep -Eqx '  hint: the folder odd=name/\.\. has neither scrambled\.U1\.bin nor scrambled\.U1\.hex; it has [^,]*\.(bin|hex),.*' stderr
prove 3 scrambled.yaml nosuch
same 'no folder: the system says so' 'nosuch: error: cannot read a folder of images: No such file or directory [file-unreadable]' \
	"$(cat stderr)"
refuses image-unknown-chip 'bin/scrambled.U1.bin: error: the plan has no chip "U7"' \
	scrambled.yaml U7=bin/scrambled.U1.bin
holds 'an unknown chip: those that there are' grep -Fqx '  hint: its chips are U1, U2' stderr
refuses image-unknown-chip 'bin/scrambled.U1.bin: error: the plan has no chip ""' scrambled.yaml =bin/scrambled.U1.bin
cp -r images both
printf '\x7f\xff\xfe\x77' >both/scrambled.U1.bin
refuses image-disagrees 'both/scrambled.U1.hex: error: byte 0xFF at 0x2, where another file for chip "U1" has 0xFE' \
	scrambled.yaml both
refuses file-is-directory 'images: error: wanted an image, found a directory' lead.yaml rom0=images
refuses unknown-key 'bad.yaml:13:1: error: a plan has no key "colour"' bad.yaml images
prove 3 lead.yaml rom0=none.bin
same 'a missing image: message' 'none.bin: error: cannot read an image: No such file or directory [file-unreadable]' \
	"$(cat stderr)"
prove 3 none.yaml images

# A gap is a notice, and its bytes count as erased.
printf ':03000000EDE6F733\n:00000001FF\n' >gap.hex
prove 1 lead.yaml rom0=gap.hex
same 'a gap: message' \
	'gap.hex: notice: Intel HEX leaves 1 of the 4 bytes of chip "rom0" out, the first at 0x3; taken as 0xFF (erased) [image-gap]' \
	"$(cat stderr)"

# A wrong level: row 1 holds load (D3) of cell 2, where it has led already.
printf '\xed\xee\xf7\xe0' >level.bin
prove 1 lead.yaml rom0=level.bin
same 'a wrong level: where, and which byte' \
	'FAIL  signals   not all of 12 pin levels and 4 held addresses are as planned
      load is high, expected low
      at line 0 (only), cell 2 (picture); cell 2 of the frame
      row of state 0x1, which sets load: byte 0xEE at address 0x1 of chip rom0' "$(grep -A 3 'FAIL  signals' stdout)"
same 'a wrong level in JSON' '1 rom0 1 238' "$("$SCANLATCH" prove lead.yaml --json rom0=level.bin | python3 -c '
import json, sys
place = json.load(sys.stdin)["proofs"]["signals"]["counterexample"]
print(place["state"], place["chip"], place["address"], place["byte"])')"
# A wrong next state: row 2 leads to 2 instead of 3.
printf '\xed\xe6\xf6\xe0' >next.bin
prove 1 lead.yaml rom0=next.bin
holds 'a wrong next state: closure fails' grep -q '^FAIL  closure ' stdout
holds 'a wrong next state: which byte' grep -Fq 'row of state 0x2: byte 0xF6 at address 0x2 of chip rom0' stdout
# Blank chips never leave state 3.
printf '\xff\xff\xff\xff' >blank.bin
prove 1 lead.yaml rom0=blank.bin
holds 'blank: closure fails' grep -q '^FAIL  closure ' stdout
# Two chips in each other's sockets.
prove 1 scrambled.yaml U1=bin/scrambled.U2.bin U2=bin/scrambled.U1.bin
# Another plan's images.
prove 1 lock-gate-sign.yaml U3=blank32 U4=images/lock-gate-sign.U4.bin

# Two chips of a two-stage board in each other's sockets, of one stage and of two.
"$SCANLATCH" build "$OLDPWD/plans/mooring-board.yaml" --format bin -o mooring >stdout 2>stderr
for pair in 'rom0 rom1' 'rom2 rom3' 'rom1 rom2'; do
	read -r left right <<<"$pair"
	chips=()
	for chip in rom0 rom1 rom2 rom3; do
		from=$chip
		[ "$chip" != "$left" ] || from=$right
		[ "$chip" != "$right" ] || from=$left
		chips+=("$chip=mooring/mooring-board.$from.bin")
	done
	"$SCANLATCH" prove "$OLDPWD/plans/mooring-board.yaml" "${chips[@]}" >stdout 2>stderr
	same "$pair exchanged: exit status" 1 $?
	holds "$pair exchanged: said" grep -q "^      hint: with $left and $right exchanged the frame closes as planned" stdout
done
finish
