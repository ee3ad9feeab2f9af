#!/bin/bash
# The command line: exit codes, help, version, the order of options, standard input, colour, JSON.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
cp tests/good/own-part.yaml "$work/good.yaml"
cp tests/good/speed-notice.yaml "$work/slow.yaml"
cp tests/good/flicker.yaml "$work/flicker.yaml"
cp tests/bad/states-short.yaml "$work/short.yaml"
cp tests/bad/unknown-key.yaml "$work/bad.yaml"
sed 's/phase: every line/phase: every 2 lines/; s/stretch: auto, //' tests/good/stretch-auto.yaml |
	sed 's/^name: .*/name: out-of-step/; s/cells: 2, hold/cells: 3, hold/' >"$work/out-of-step.yaml"
cd "$work" || exit 1

# run ARGUMENT …: leaves status, stdout and stderr in variables.
run() {
	"$SCANLATCH" "$@" >stdout 2>stderr </dev/null
	status=$?
	stdout=$(cat stdout)
	stderr=$(cat stderr)
}

# ends NAME STATUS ARGUMENT …: the program's exit status.
ends() {
	local name=$1 wanted=$2
	shift 2
	run "$@"
	same "$name: exit status" "$wanted" "$status"
}

# refuses NAME TEXT ARGUMENT …: exit 2, nothing on standard output; on standard error the text, and where to find help.
refuses() {
	local name=$1 text=$2
	shift 2
	ends "$name" 2 "$@"
	same "$name: stdout" '' "$stdout"
	same "$name: stderr" "$text" "$(head -n 1 stderr)"
	holds "$name: points to help" grep -q '^scanlatch: try "scanlatch .*--help"$' stderr
}

is_json() {
	python3 -m json.tool "$1" /dev/null
}

# What is wrong with the command line.
ends 'no command' 2
same 'no command: help on standard error' 'Usage: scanlatch COMMAND [options] ARGUMENTS' "$(head -n 1 stderr)"
same 'no command: nothing on standard output' '' "$stdout"
refuses 'unknown command' 'scanlatch: there is no command "frobnicate"; the commands are check, build, prove, diff, draw, sheet, fit, lift, list, schema' \
	frobnicate good.yaml
refuses 'option before a command' 'scanlatch: unknown option "--json" before a command' --json check good.yaml
for command in readback probe export; do
	ends "later command $command" 2 $command good.yaml
	same "later command $command: says so" "scanlatch: the command \"$command\" is not carried out by this version yet" \
		"$stderr"
done
for command in check build prove diff draw sheet fit list schema; do
	refuses "$command: unknown option" "scanlatch $command: unrecognized option '--frobnicate'" $command --frobnicate
	refuses "$command: unknown short option" "scanlatch $command: invalid option -- 'x'" $command -x
	refuses "$command: bad colour" "scanlatch $command: --color: wanted auto, always or never, found \"blue\"" \
		$command --color blue good.yaml
	refuses "$command: colour without a value" "scanlatch $command: option '--color' requires an argument" \
		$command --color
done
refuses 'check: no plan' 'scanlatch check: wanted at least one plan, found none' check
refuses 'check: no plan after --' 'scanlatch check: wanted at least one plan, found none' check --json --
refuses 'check: an option of build' "scanlatch check: unrecognized option '--listing'" check --listing good.yaml
refuses 'build: no plan' 'scanlatch build: wanted at least one plan, found none' build -o out
refuses 'build: no folder' 'scanlatch build: wanted -o DIR, the folder that the images go to' build good.yaml
refuses 'build: empty folder' 'scanlatch build: wanted -o DIR, the folder that the images go to' build good.yaml -o ''
refuses 'build: -o at the end' "scanlatch build: option requires an argument -- 'o'" build good.yaml -o
refuses 'build: bad format' 'scanlatch build: --format: wanted bin, hex or bin,hex, found "elf"' \
	build good.yaml -o out --format elf
refuses 'build: format with a gap' 'scanlatch build: --format: wanted bin, hex or bin,hex, found "bin,"' \
	build good.yaml -o out --format bin,
refuses 'build: bad record' 'scanlatch build: --record: wanted 16 or 32, found "8"' build good.yaml -o out --record 8
refuses 'prove: nothing' 'scanlatch prove: wanted a plan and images, found nothing' prove
refuses 'prove: no images' 'scanlatch prove: wanted a plan and images, found no images' prove good.yaml
refuses 'prove: a file without a label' \
	'scanlatch prove: "good.yaml" is not a folder; a single image is given as LABEL=FILE' prove good.yaml good.yaml
refuses 'prove: a label, then none' 'scanlatch prove: wanted LABEL=FILE, found "more"' \
	prove good.yaml rom0=good.yaml more
refuses 'prove: a folder and more' \
	'scanlatch prove: wanted one folder, or LABEL=FILE for each chip, found "." and more' prove good.yaml . rom0=good.yaml
refuses 'list: nothing' 'scanlatch list: wanted one catalogue (parts, standards or crystals), found 0' list
refuses 'list: two' 'scanlatch list: wanted one catalogue (parts, standards or crystals), found 2' list parts standards
refuses 'list: unknown' 'scanlatch list: there is no catalogue of "ships": wanted parts, standards or crystals' list ships
schemas='plan set board build check crystals diff fit lift manifest parts prove sheet standards'
refuses 'schema: unknown' "scanlatch schema: there is no schema of \"ships\"; there are ${schemas// /, }" schema ships
refuses 'schema: two' 'scanlatch schema: wanted at most one name, found 2' schema plan set
holds 'no refused command line wrote anything' test ! -e out

# Help and version, wherever they stand.
version=$("$SCANLATCH" --version)
holds 'version has its form' grep -Eqx 'scanlatch [0-9]+\.[0-9]+\.[0-9]+' <<<"$version"
same 'short version' "$version" "$("$SCANLATCH" -V)"
same 'short help' "$("$SCANLATCH" --help)" "$("$SCANLATCH" -h)"
for command in check build prove diff draw sheet fit list schema; do
	holds "help names $command" grep -q "^  $command " <<<"$("$SCANLATCH" --help)"
	ends "$command --help" 0 $command --help
	same "$command --help: usage" "Usage: scanlatch $command [options]" \
		"$(head -n 1 stdout | grep -o '^Usage: scanlatch [a-z]* \[options\]')"
	same "$command --help: nothing on standard error" '' "$stderr"
	same "$command -h" "$stdout" "$("$SCANLATCH" $command -h)"
	same "$command: help after arguments" "$stdout" "$("$SCANLATCH" $command one two --help)"
	same "$command --version" "$version" "$("$SCANLATCH" $command --version)"
	same "$command -V" "$version" "$("$SCANLATCH" $command good.yaml -V)"
done

# Exit codes of check.
ends 'good plan' 0 check good.yaml
same 'good plan: nothing on standard error' '' "$stderr"
good=$stdout
ends 'bad plan' 2 check bad.yaml
same 'bad plan: nothing on standard output' '' "$stdout"
ends 'plan without states' 2 check short.yaml
ends 'missing plan' 3 check none.yaml
# A file that opens and then refuses to be read, for the superuser too (Linux).
ends 'unreadable plan' 3 check /proc/self/mem
same 'unreadable plan: says why' '/proc/self/mem: error: cannot read a plan: Input/output error [file-unreadable]' \
	"$stderr"
ends 'out of step' 1 check out-of-step.yaml
holds 'out of step: says so' grep -q '^FAIL  colour ' stdout
ends 'slow memory' 0 check slow.yaml
holds 'slow memory: says so' grep -q '^miss  speed ' stdout
ends 'slow memory, strict' 1 check --strict slow.yaml
ends 'several plans: the worst counts' 3 check good.yaml none.yaml bad.yaml
ends 'several plans: bad before found' 2 check slow.yaml --strict bad.yaml good.yaml
ends 'several plans, all good' 0 check good.yaml slow.yaml
same 'several plans: a report for each' '2' "$(grep -c '^clock: ' stdout)"

# Where options may stand.
same 'options after arguments' "$good" "$("$SCANLATCH" check good.yaml --strict --color never)"
cp good.yaml ./--json
same '-- ends options' "$good" "$("$SCANLATCH" check -- --json)"
same '- is standard input' "$good" "$("$SCANLATCH" check - <good.yaml)"
"$SCANLATCH" check - <bad.yaml >stdout 2>stderr
same '- is named in messages' 'standard input' "$(head -n 1 stderr | cut -d : -f 1)"
"$SCANLATCH" build - -o out <good.yaml >stdout 2>stderr
same 'build from standard input' 0 $?
holds 'build from standard input: files' test -s out/own-part.rom0.bin
same 'prove with a plan from standard input' '0' "$("$SCANLATCH" prove - out <good.yaml >stdout 2>stderr; echo $?)"
same 'prove with an image from standard input' '0' \
	"$("$SCANLATCH" prove good.yaml rom0=- <out/own-part.rom0.hex >stdout 2>stderr; echo $?)"
same 'a long option cut short' "$good" "$("$SCANLATCH" check --str good.yaml)"
same 'a value after =' "$good" "$("$SCANLATCH" check --color=never good.yaml)"

# Colour: escapes begin with ESC.
escapes() {
	grep -c "$(printf '\033')" "$1"
}
run check --color always bad.yaml
holds 'colour always: diagnostics' test "$(escapes stderr)" -gt 0
run check --color auto bad.yaml
same 'colour auto: none in a file' 0 "$(escapes stderr)"
NO_COLOR=1 "$SCANLATCH" check --color always bad.yaml >stdout 2>stderr
holds 'colour always wins over NO_COLOR' test "$(escapes stderr)" -gt 0
run build --color always slow.yaml -o out
holds 'colour always: proofs' test "$(escapes stdout)" -gt 0
run build --color never slow.yaml -o out
same 'colour never: proofs' 0 "$(escapes stdout)"

# on_terminal VARIABLE=VALUE … ARGUMENT …: runs the program with a terminal as its standard output and error.
on_terminal() {
	env -u NO_COLOR "$@" python3 -c 'import pty, sys; pty.spawn(sys.argv[1:])' "$SCANLATCH" check bad.yaml </dev/null
}
on_terminal A=B >terminal
holds 'colour on a terminal' test "$(escapes terminal)" -gt 0
on_terminal NO_COLOR=1 >terminal
same 'NO_COLOR on a terminal' 0 "$(escapes terminal)"
holds 'NO_COLOR on a terminal: the diagnostics are there' grep -q 'unknown-key' terminal
on_terminal NO_COLOR= >terminal
holds 'an empty NO_COLOR counts as none' test "$(escapes terminal)" -gt 0

# JSON: one valid document, whatever was asked.
json() {
	local name=$1 wanted=$2
	shift 2
	ends "$name" "$wanted" "$@"
	holds "$name: valid JSON" is_json stdout
}
json 'check --json' 0 check --json good.yaml
same 'check --json: an object' '{' "$(head -n 1 stdout)"
json 'check --json of two' 0 check --json good.yaml slow.yaml
same 'check --json of two: a list of two' 'own-part speed-notice' \
	"$(python3 -c 'import json; print(*[plan["plan"]["name"] for plan in json.load(open("stdout"))])')"
json 'check --json, one of three bad' 2 check --json good.yaml bad.yaml slow.yaml
json 'check --json, out of step' 1 check --json out-of-step.yaml
json 'build --json' 0 build --json good.yaml -o out
json 'build --json of two' 0 build --json good.yaml slow.yaml -o out
json 'build --json, nothing written' 1 build --json out-of-step.yaml -o nowhere
holds 'build --json, nothing written: no folder' test ! -e nowhere
json 'prove --json' 0 prove --json good.yaml out
same 'prove --json: which plan, and how it went' 'own-part False [] 9' \
	"$(python3 -c 'import json
report = json.load(open("stdout"))
print(report["name"], report["failed"], report["missed"], len(report["proofs"]))')"
json 'build --json of missed advice' 0 build --json slow.yaml -o slow
same 'build --json: not failed, written' 'False True' \
	"$(python3 -c 'import json; report = json.load(open("stdout")); print(report["failed"], report["written"])')"
json 'prove --json of missed advice' 0 prove --json slow.yaml slow
same 'prove --json: what is missed' "False ['speed']" \
	"$(python3 -c 'import json; report = json.load(open("stdout")); print(report["failed"], report["missed"])')"
json 'list --json' 0 list --json parts
same 'list --json: a part' '17' \
	"$(python3 -c 'import json
print(*[memory["address_pins"] for memory in json.load(open("stdout"))["memories"] if memory["name"] == "28C010"])')"
for name in $schemas; do
	json "schema $name" 0 schema $name
	holds "schema $name: help names it" grep -qE "^ .*\<$name\>" <<<"$("$SCANLATCH" schema --help)"
done
ends 'list parts' 0 list parts
holds 'list parts: the part, its size and its grades' \
	grep -Eq '^28C010 +128K x 8 +131072 +17 +8 +DIP-32 +120, 150, 200 ns$' stdout
# Front porch and end of blanking: SMPTE 170M-2004 table 2.
json 'list --json standards' 0 list standards --json
same 'list --json standards: a limit, its bounds and its source' '3/2 7/5 8/5 SMPTE 170M-2004 table 2' \
	"$(python3 -c 'import json
standards = {standard["name"]: standard for standard in json.load(open("stdout"))["standards"]}
porch = [limit for limit in standards["composite-525"]["limits"] if limit["item"] == "front porch"][0]
print(porch["nominal"], porch["low"], porch["high"], porch["source"].split(";")[0])')"
ends 'list standards' 0 list standards
holds 'list standards: a limit at both grades' \
	grep -Eq '^picture start +studio +9\.2 +9\.1 +9\.4 +us +\[[0-9]+\]$' stdout
holds 'list standards: what a monitor accepts' grep -Eq '^picture start +monitor +- +8\.9 +- +us +\[[0-9]+\]$' stdout
holds 'list standards: every standard' test 18 = "$(grep -c '^documents: ' stdout)"
json 'list --json crystals' 0 list crystals --json
same 'list --json crystals: an exact frequency' '157500000/11' \
	"$(python3 -c 'import json
print(*[crystal["hz"] for crystal in json.load(open("stdout"))["crystals"] if crystal["name"] == "14.31818 MHz"])')"
ends 'list crystals' 0 list crystals
holds 'list crystals: name, frequency and use' grep -Eq '^17\.734475 MHz +17734475 +17734475 +4 times the subcarrier' stdout

# Whatever a name or an option holds, nothing of it commands a terminal.
quiet() {
	local wanted=$1
	shift
	run "$@"
	same "$(printf '%q ' "$@"): exit status" "$wanted" "$status"
	holds "$(printf '%q ' "$@"): says something" test -s stdout -o -s stderr
	same "$(printf '%q ' "$@"): nothing but text" '' "$(cat stdout stderr | tr -d '\n' | LC_ALL=C grep -a '[[:cntrl:]]' | cat -v)"
}
strange=$'x\e[31m\ty\nz'
cp good.yaml "$strange.yaml"
quiet 2 "$strange"
quiet 2 "-$strange"
quiet 2 schema "$strange"
quiet 2 list "$strange"
quiet 2 draw "$strange" good.yaml
quiet 0 build good.yaml -o "$strange"
quiet 0 build good.yaml -o "$strange" --near "$strange"
quiet 3 build good.yaml -o good.yaml/"$strange"
quiet 0 draw line "$strange.yaml" -o "$strange/line.svg"
quiet 3 draw line good.yaml -o "good.yaml/$strange"
quiet 0 sheet "$strange.yaml" -o "$strange/sheet.html"
quiet 3 sheet good.yaml -o "good.yaml/$strange"
quiet 0 fit --standard composite-525 --columns 80 --crystal '14.31818 MHz' --write 1 "$strange/fit.yaml"
quiet 3 fit --standard composite-525 --columns 80 --crystal '14.31818 MHz' --write 1 "good.yaml/$strange"
quiet 2 fit --standard composite-525 --columns 80 "$strange"
quiet 1 diff slow.yaml "$strange.yaml"
quiet 2 diff good.yaml "$strange/own-part.rom0.bin"
quiet 2 prove good.yaml good.yaml "$strange"
quiet 2 prove good.yaml "$strange.yaml"
quiet 2 prove good.yaml "$strange=$strange.yaml"
quiet 2 lift --text good.yaml "$strange.yaml"
quiet 3 lift --git good.yaml "$strange.none"
quiet 0 lift --git good.yaml "$strange.yaml"
for command in check build prove diff draw sheet fit lift list schema; do
	quiet 2 $command "--$strange"
	quiet 2 $command "-$strange"
	quiet 2 $command --color "$strange"
done
"$SCANLATCH" build "$OLDPWD/plans/pier-clock.yaml" -o "$strange" >/dev/null
quiet 0 lift "$OLDPWD/plans/pier-clock.yaml" "$strange" -o "$strange/lifted.yaml"
quiet 3 lift "$OLDPWD/plans/pier-clock.yaml" "$strange" -o "good.yaml/$strange"

finish
