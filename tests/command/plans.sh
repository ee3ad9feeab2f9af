#!/bin/bash
# Whole plans through the program: tests/good must build and prove with the stated results, tests/bad must be refused with
# the exact diagnostics, and every rule has a bad plan of its own. tests/plan_cases.sh says what makes a case.
# With PLAN_CASES=FOLDER the folders good and bad are taken from there.
set -u
. tests/report.sh
. tests/plan_cases.sh

folder=${PLAN_CASES:-tests}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

# same_file NAME WANTED FOUND: two files are equal, byte for byte.
same_file() {
	if cmp -s "$2" "$3"; then
		pass
	else
		fail "$1" "$(diff -au --label wanted --label found "$2" "$3")"
	fi
}

# status_is NAME WANTED FOUND: and none of them is a crash's.
status_is() {
	if [ "$3" -ge "$crash_status" ]; then
		fail "$1 crashed, status $3" "$(cat "$work/stderr")"
	elif [ "$3" -eq "$2" ]; then
		pass
	else
		fail "$1: exit status $3, wanted $2" "$(cat "$work/stderr")"
	fi
}

expected_lines() {
	[ ! -e "$1.expected" ] || sed -e '/^stdout /!s/[ ]*#.*//' -e '/^[ ]*$/d' "$1.expected"
}

hex_bytes() {
	od -An -v -tx1 "$@" | tr -d ' \n'
}

# expect_line NAME KEYWORD REST: one line of NAME.expected, after the build.
expect_line() {
	local name=$1 keyword=$2 rest=$3 out=$work/good/out/$1 file words
	read -r -a words <<<"$rest"
	file=$out/${words[0]:-}
	case $keyword in
	args | exit) ;;
	stdout) holds "$name: stdout has the line '$rest'" grep -Fxq -- "$rest" "$work/built" ;;
	files) same "$name: files" "$(printf '%s\n' "${words[@]}" | sort)" "$(ls -A "$out")" ;;
	size) same "$name: size of ${words[0]}" "${words[1]}" "$(wc -c <"$file")" ;;
	bytes)
		same "$name: ${words[0]} from ${words[1]}" "$(tr -d ' \n' <<<"${words[*]:2}" | tr A-F a-f)" \
			"$(hex_bytes -j "$((words[1]))" -N "$((${#words[@]} - 2))" "$file")"
		;;
	every)
		same "$name: every byte of ${words[0]}" "$(tr A-F a-f <<<"${words[1]}")" \
			"$(hex_bytes "$file" | fold -w 2 | sort -u)"
		;;
	*) fail "$name.expected: unknown keyword '$keyword'" ;;
	esac
}

# What was written must prove when it is read back.
prove_good() {
	run_program "$work/good" prove "$1.yaml" "out/$1"
	status_is "$1: prove" 0 $?
}

check_layout() {
	[ -e "$work/good/$1.check" ] || return
	run_program "$work/good" check "$1.yaml"
	status_is "$1: check" 0 $?
	same_file "$1: what check prints" "$work/good/$1.check" "$work/stdout"
}

check_good() {
	local name=$1 base=$work/good/$1 wanted status line
	local -a arguments
	if [ ! -e "$base.stdout" ] && [ ! -e "$base.check" ] && [ -z "$(expected_lines "$base")" ]; then
		fail "$name: neither $name.stdout nor anything in $name.expected"
		return
	fi
	read -r -a arguments <<<"$(expected_lines "$base" | sed -n 's/^args //p')"
	wanted=$(expected_lines "$base" | sed -n 's/^exit //p')
	run_program "$work/good" build "$name.yaml" -o "out/$name" "${arguments[@]}"
	status=$?
	status_is "$name: build" "${wanted:-0}" "$status"
	cp "$work/stdout" "$work/built"
	[ -e "$base.stderr" ] || : >"$base.stderr"
	same_file "$name: stderr" "$base.stderr" "$work/stderr"
	[ ! -e "$base.stdout" ] || same_file "$name: stdout" "$base.stdout" "$work/stdout"
	while IFS= read -r line; do
		expect_line "$name" "${line%% *}" "${line#* }"
	done < <(expected_lines "$base")
	[ "$status" -ne 0 ] || prove_good "$name"
	check_layout "$name"
}

check_bad() {
	local name=$1 base=$work/bad/$1 wanted=2 status
	if [ ! -e "$base.stderr" ]; then
		fail "$name: no $name.stderr (tools/expect-bad writes it for you to read)"
		return
	fi
	[ ! -e "$base.exit" ] || wanted=$(cat "$base.exit")
	run_bad "$name"
	status=$?
	status_is "$name" "$wanted" "$status"
	same_file "$name: stderr" "$base.stderr" "$work/stderr"
	if [ "$status" -eq 2 ] && [ -n "$(ls -A "$work/out/$name" 2>/dev/null)" ]; then
		fail "$name: refused, and yet it wrote" "$(ls -A "$work/out/$name")"
	fi
}

# A case breaks the rule that it is named after, and no other.
check_bad_name() {
	local name=$1 rules
	[ -e "$work/bad/$name.stderr" ] || return
	rules=$(rules_in "$work/bad/$name.stderr")
	case $name in
	several-*) holds "$name breaks several rules" test "$(wc -l <<<"$rules")" -gt 1 ;;
	*) case $name- in
		"${rules:-none}"-*) pass ;;
		*) fail "$name breaks another rule than its name says:" "$rules" ;;
		esac ;;
	esac
}

check_rule() {
	local stderr
	for stderr in "$work/bad/$1".stderr "$work/bad/$1"-*.stderr; do
		if [ -e "$stderr" ] && [ "$(rules_in "$stderr")" = "$1" ]; then
			pass
			return
		fi
	done
	fail "rule $1 has no bad plan that breaks it and only it"
}

# A file that belongs to no case tests nothing.
check_orphans() {
	local path name
	for path in "$work/$1"/*.*; do
		name=$(basename "${path%.*}")
		[ -e "$work/$1/$name.yaml" ] || [ -e "$work/$1/$name.args" ] || fail "$1/$(basename "$path") belongs to no case"
	done
	for path in "$work/$1"/*/; do
		name=$(basename "$path")
		[ ! -d "$path" ] || [ -e "$work/$1/${name%.yaml}.yaml" ] || fail "$1/$name/ belongs to no case"
	done
}

# for_cases FOLDER FUNCTION …: there must be cases, and each function is called for each.
for_cases() {
	local kind=$1 name check names
	shift
	if ! stage "$folder/$kind" "$work/$kind"; then
		fail "$kind: cannot be copied"
		return
	fi
	names=$(case_names "$work/$kind")
	if [ -z "$names" ]; then
		fail "$kind: no case"
		return
	fi
	check_orphans "$kind"
	for name in $names; do
		for check; do
			"$check" "$name"
		done
	done
}

for_cases good check_good
for_cases bad check_bad check_bad_name
for rule in $(rules_of FILE FORM PLAN STATES WIRING IMAGE); do
	check_rule "$rule"
done

finish
