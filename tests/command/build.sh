#!/bin/bash
# What build writes and when: file formats, folders, files kept, refusals of the system, nothing half-written.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'chmod -R u+w "$work"; rm -rf "$work"' EXIT
cp tests/good/{rounding,lead,scrambled,pins,speed-notice,flicker}.yaml plans/tide-board-60.yaml "$work"
cp tests/bad/states-short.yaml "$work/short.yaml"
sed 's/phase: every line/phase: every 2 lines/; s/stretch: auto, //' tests/good/stretch-auto.yaml |
	sed 's/^name: .*/name: out-of-step/; s/cells: 2, hold/cells: 3, hold/' >"$work/out-of-step.yaml"
cd "$work" || exit 1

# build STATUS ARGUMENT …: runs build and checks its exit status; leaves stdout and stderr in files.
build() {
	local wanted=$1
	shift
	"$SCANLATCH" build "$@" >stdout 2>stderr </dev/null
	same "build $*: exit status" "$wanted" $?
}

# listed FOLDER NAME …: the folder holds these files and no others.
listed() {
	local folder=$1
	shift
	same "files in $folder" "$(printf '%s\n' "$@" | sort)" "$(ls -A "$folder")"
}

# Formats.
build 0 lead.yaml -o both
listed both lead.rom0.bin lead.rom0.hex lead.manifest.json
build 0 lead.yaml --format bin -o bin
listed bin lead.rom0.bin lead.manifest.json
build 0 lead.yaml --format hex -o hex
listed hex lead.rom0.hex lead.manifest.json
build 0 lead.yaml --format hex,bin -o order
listed order lead.rom0.bin lead.rom0.hex lead.manifest.json
same 'the same image in each format' "$(cat both/lead.rom0.hex)" "$(cat hex/lead.rom0.hex)"
# 04+ED+E6+F7+E0 is 3AE; AE and 52 make 100.
same 'Intel HEX of four bytes' $':04000000EDE6F7E052\n:00000001FF' "$(cat both/lead.rom0.hex)"
build 0 tide-board-60.yaml -o record --record 32
same 'records of 32' "$((131072 / 32))" "$(grep -c '^:20....00.\{66\}$' record/tide-board-60.rom0.hex)"
build 0 tide-board-60.yaml -o record
same 'records of 16' "$((131072 / 16))" "$(grep -c '^:10....00.\{34\}$' record/tide-board-60.rom0.hex)"
# 128 KiB pass 64 KiB once: FC is what 02+04+01 lack. A record of type 04 at the start would say nothing.
same 'one record of type 04' ':020000040001F9' "$(grep '^:......04' record/tide-board-60.rom0.hex)"

# Two chips, several plans.
build 0 scrambled.yaml rounding.yaml -o two
listed two scrambled.U{1,2}.{bin,hex} scrambled.manifest.json rounding.rom0.{bin,hex} rounding.manifest.json
same 'a report for each plan' '2' "$(grep -c '^pass  closure ' stdout)"
build 2 rounding.yaml rounding.yaml -o clash
same 'two plans of one name' 'scanlatch build: two plans have the name "rounding" and would write the same files' \
	"$(head -n 1 stderr)"
build 2 rounding.yaml short.yaml lead.yaml -o clash
build 3 rounding.yaml none.yaml -o clash
holds 'nothing written when one plan is bad' test ! -e clash

# The listing: every row of the frame, as worked out in the plan.
build 0 lead.yaml --listing -o listing
listed listing lead.rom0.{bin,hex} lead.manifest.json lead.lst
same 'listing' '"only" 0 0 "sync" 0  1 110  0:ED
"only" 0 1 "porch" 1  2 100  1:E6
"only" 0 2 "picture" 2  3 101  2:F7
"only" 0 3 "end" 3  0 000  3:E0' "$(grep -v '^#' listing/lead.lst)"
build 0 tide-board-60.yaml --listing -o listing
same 'listing of a large plan: a row a cell' 26462 "$(grep -c '^"' listing/tide-board-60.lst)"

# Addresses are those that the wires make: state.0 on A0, state.1 on A2, A3 high, A1 low, A4 open.
build 0 pins.yaml --listing -o listing
same 'listing: pins tied to levels' '"only" 0 0 "sync" 0  1 1  08:FD
"only" 0 1 "rest" 1  2 1  09:FE
"only" 0 2 "rest" 2  3 1  0C:FF
"only" 0 3 "rest" 3  0 0  0D:F8' "$(grep -v '^#' listing/pins.lst)"
# U1 has state.1 on A0 and state.0 on A1, U2 the other way round.
build 0 scrambled.yaml --listing -o listing
same 'listing: two chips, wires in another order each' '"only" 0 0 "sync" 0  1 1  0:7F  0:FF
"only" 0 1 "rest" 1  2 1  2:FF  1:FE
"only" 0 2 "rest" 2  3 1  1:FF  2:FF
"only" 0 3 "rest" 3  0 0  3:77  3:FE' "$(grep -v '^#' listing/scrambled.lst)"

# Folders are made; the same bytes are kept.
build 0 lead.yaml -o deep/er/folder/
listed deep/er/folder lead.rom0.{bin,hex} lead.manifest.json
touch -d '2001-02-03 04:05:06' both/*
build 0 lead.yaml -o both
same 'kept: all three' $'kept  both/lead.rom0.bin (4 bytes)\nkept  both/lead.rom0.hex (32 bytes)' \
	"$(grep -E '^(kept|wrote).*rom' stdout)"
same 'kept: untouched' '2001' "$(stat -c %y both/* | cut -d - -f 1 | sort -u)"
printf 'XXXX' >both/lead.rom0.bin
build 0 lead.yaml -o both
same 'one changed: written' 'wrote both/lead.rom0.bin (4 bytes)' "$(grep '^wrote' stdout)"
same 'one changed: the others untouched' '2001-02-03 2001-02-03' \
	"$(stat -c %y both/lead.rom0.hex both/lead.manifest.json | cut -c 1-10 | tr '\n' ' ' | sed 's/ $//')"
cmp -s both/lead.rom0.bin bin/lead.rom0.bin
same 'one changed: mended' 0 $?
same 'kept in JSON' 'True True True' \
	"$("$SCANLATCH" build --json lead.yaml -o both |
		python3 -c 'import json, sys; print(*[file["kept"] for file in json.load(sys.stdin)["files"]])')"

# The same plan gives the same bytes, wherever it is built from.
build 0 tide-board-60.yaml --listing -o first
(cd / && "$SCANLATCH" build "$work/tide-board-60.yaml" --listing -o "$work/second" >/dev/null)
holds 'same bytes from another folder' diff -r first second
holds 'no path of the build in what it wrote' test -z "$(grep -rl "$work" first second)"
cp tide-board-60.yaml elsewhere.yaml
build 0 elsewhere.yaml --listing -o third
holds 'same images from a file of another name' cmp first/tide-board-60.rom0.bin third/tide-board-60.rom0.bin

# A file's name may be any bytes; the manifest, which is UTF-8, has it as messages show it.
cp lead.yaml "$(printf 'tide\377\303\nboard.yaml')"
build 0 "$(printf 'tide\377\303\nboard.yaml')" -o odd
same 'a file name that is not UTF-8: manifest' 'tide???board.yaml' \
	"$(python3 -c 'import json; print(json.load(open("odd/lead.manifest.json"))["plan"]["file"])')"
same 'a file name that is not UTF-8: check --json' 'tide???board.yaml' \
	"$("$SCANLATCH" check --json "$(printf 'tide\377\303\nboard.yaml')" 2>stderr |
		python3 -c 'import json, sys; print(json.load(sys.stdin)["plan"]["file"])' 2>stderr)"

# Proofs that fail.
build 1 out-of-step.yaml -o failed
holds 'a must failed: nothing written' test ! -e failed
same 'a must failed: says so' 'out-of-step: a proof failed: nothing was written (--unproven writes all the same)' \
	"$(tail -n 1 stdout)"
build 1 out-of-step.yaml -o failed --unproven
listed failed out-of-step.rom0.{bin,hex} out-of-step.manifest.json
same '--unproven: says so' 'out-of-step: written though a proof failed, as asked by --unproven' "$(tail -n 1 stdout)"
same '--unproven: the manifest says so too' fail \
	"$(python3 -c 'import json; print(json.load(open("failed/out-of-step.manifest.json"))["proofs"]["colour"]["verdict"])')"
"$SCANLATCH" build rounding.yaml no-such.yaml -o together >stdout 2>stderr
same 'one plan of two is bad: status' 3 $?
same 'one plan of two is bad: nothing written' 'scanlatch: nothing was written, since not all plans could be built' \
	"$(tail -n 1 stderr)"
holds 'one plan of two is bad: no folder' test ! -e together
"$SCANLATCH" build rounding.yaml -o /dev/null/nowhere >both-streams 2>&1
same 'a refusal stands last' 'scanlatch: cannot make directory /dev/null' "$(tail -n 1 both-streams | cut -c 1-42)"
build 1 rounding.yaml out-of-step.yaml -o together
holds 'one plan of two failed: nothing written' test ! -e together
for plan in speed-notice flicker; do
	build 0 $plan.yaml -o advice
	build 1 $plan.yaml -o strict --strict
	holds "$plan --strict: nothing written" test ! -e strict
	build 1 $plan.yaml -o strict-$plan --strict --unproven
	holds "$plan --strict --unproven: written" test -s strict-$plan/$plan.rom0.bin
done

# in_json: what the JSON in stdout says of each plan: its name, whether it failed and was written, and its files.
in_json() {
	python3 -c '
import json, sys
plans = json.load(sys.stdin)
for plan in plans if isinstance(plans, list) else [plans]:
    print(plan["name"], plan["failed"], plan["written"], [file["name"] for file in plan["files"]])' <stdout
}
build 1 --json out-of-step.yaml -o json
same 'JSON of a must that failed' 'out-of-step True False []' "$(in_json)"
build 1 --json --strict flicker.yaml -o json
same 'JSON of advice missed, --strict' 'flicker True False []' "$(in_json)"
build 1 --json rounding.yaml out-of-step.yaml -o json
same 'JSON of two plans, one failed' $'rounding False False []\nout-of-step True False []' "$(in_json)"
build 3 --json lead.yaml -o /dev/null/json
same 'JSON of a refused write' 'lead False False []' "$(in_json)"
holds 'JSON of a refused write: says why' grep -q '^scanlatch: cannot make directory /dev/null.*; nothing was written$' stderr
build 3 --json --unproven lead.yaml out-of-step.yaml -o /dev/null/json
same 'JSON of a refused write, --unproven' $'lead False False []\nout-of-step True False []' "$(in_json)"
holds 'JSON of what was not written: no folder' test ! -e json
build 1 --json --unproven out-of-step.yaml --format bin -o json
same 'JSON of --unproven' "out-of-step True True ['out-of-step.rom0.bin', 'out-of-step.manifest.json']" "$(in_json)"

# refused NAME FOLDER ARGUMENT …: exit 3, says that nothing was written, and leaves the folder as it was.
refused() {
	local name=$1 folder=$2 before
	shift 2
	before=$(ls -lA --time-style=full-iso "$folder" 2>/dev/null)
	build 3 "$@"
	holds "$name: says what the system refused" grep -q '^scanlatch: cannot .*: .*; nothing was written$' stderr
	same "$name: says nothing of written files" '' "$(grep -E '^(wrote|kept)' stdout)"
	same "$name: nothing changed" "$before" "$(ls -lA --time-style=full-iso "$folder" 2>/dev/null)"
}

mkdir street
: >street/occupied
refused 'a file where the folder should be' street lead.yaml -o street/occupied
refused 'a file where a folder above should be' street lead.yaml -o street/occupied/below
mkdir taken taken/lead.rom0.hex
refused 'a folder where a file should be' taken lead.yaml -o taken
mkdir locked
chmod 555 locked
if [ -w locked ]; then
	# The superuser may write anywhere but where there is nothing to write to.
	refused 'a folder that cannot be written to' locked lead.yaml -o /proc
	refused 'a folder that cannot be made' locked lead.yaml -o /proc/images
else
	refused 'a folder that cannot be written to' locked lead.yaml -o locked
	refused 'a folder that cannot be made' locked lead.yaml -o locked/images
fi

# A disk that fills up: a limit on the size of files stops the third file of many (1024 bytes a block).
mkdir full
cp both/lead.rom0.bin full/tide-board-60.rom0.bin
before=$(ls -lA --time-style=full-iso full)
(ulimit -f 200 && exec "$SCANLATCH" build tide-board-60.yaml -o full >stdout 2>stderr </dev/null)
same 'full: exit status' 3 $?
same 'full: says which file' \
	'scanlatch: cannot write full/tide-board-60.rom0.hex: File too large; nothing was written' "$(cat stderr)"
same 'full: what was there before is there, and nothing else' "$before" "$(ls -lA --time-style=full-iso full)"

# Standard output that cannot be written.
for arguments in 'check lead.yaml' 'check --json lead.yaml' 'build lead.yaml -o both' 'prove lead.yaml both' 'list parts' \
	'--help' '--version' 'check --help'; do
	# shellcheck disable=SC2086 # several words
	"$SCANLATCH" $arguments >/dev/full 2>stderr
	same "$arguments, standard output full" 3 $?
	same "$arguments, standard output full: says so" 'scanlatch: cannot write standard output: No space left on device' \
		"$(tail -n 1 stderr)"
done
same 'no temporaries anywhere' '' "$(find . -name '.*' -not -name .)"

finish
