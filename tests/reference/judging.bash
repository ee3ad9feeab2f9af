# Read in by scripts that have oracle.py judge what the program builds from plans in "$work"/plans, after tests/report.sh. Not
# a test itself.

# Debian's, for its python3-yaml.
python=/usr/bin/python3

oracle() {
	"$python" -B tests/reference/oracle.py "$@"
}

# build PLAN FOLDER OPTION …: the program's status; standard error and output are kept beside FOLDER.
build() {
	local plan=$1 folder=$2
	shift 2
	timeout -k 5 60 "$SCANLATCH" build "$plan" -o "$folder" "$@" >"$folder.out" 2>"$folder.err" </dev/null
}

# Builds a plan in one of several ways and prints the line for the oracle.
build_line() {
	local plan=$1 turn=$2 formats=bin,hex record=16 folder status
	folder=$work/$(basename "$plan" .yaml)
	case $((turn % 5)) in
	1) record=32 ;;
	2) formats=hex ;;
	3) formats=bin ;;
	esac
	build "$plan" "$folder" --format "$formats" --record "$record"
	status=$?
	if [ "$status" -eq 1 ]; then
		build "$plan" "$folder.unproven" --format "$formats" --record "$record" --unproven
		same "$plan: status with --unproven" 1 $? >&2
	fi
	printf '%s\t%s\t%s\t%s\t%s\n' "$plan" "$folder" "$status" "$formats" "$record"
}

# build_all PLAN …
build_all() {
	local plan turn=0
	for plan in "$@"; do
		build_line "$plan" "$turn"
		turn=$((turn + 1))
	done >"$work/builds"
}

# What the oracle cannot decide counts neither way.
judge_all() {
	local line
	oracle judge <"$work/builds" >"$work/verdicts"
	while IFS= read -r line; do
		case $line in
		'ok '*) pass ;;
		'undecided '*) echo "$line" ;;
		*) fail "$line" ;;
		esac
	done <"$work/verdicts"
	same 'every plan was judged' "$(wc -l <"$work/builds")" "$(wc -l <"$work/verdicts")"
}

# at_least NUMBER PATTERN: so many verdicts are of that kind, or the random plans test too little.
at_least() {
	local found
	found=$(grep -c "$2" "$work/verdicts")
	holds "at least $1 verdicts like '$2', found $found" test "$found" -ge "$1"
}

# What the oracle knows only of power-up values taken by chance counts neither way.
prove_damaged() {
	local plan folder worth why status
	while IFS=$'\t' read -r plan folder worth why; do
		timeout -k 5 60 "$SCANLATCH" prove "$plan" "$folder" >"$folder.out" 2>&1 </dev/null
		status=$?
		case $worth$status in
		pass0 | fail1 | unknown[01]) pass ;;
		*) fail "$plan with $why: prove has status $status" "$(grep -v '^pass\|^none' "$folder.out")" ;;
		esac
	done <"$work/damages"
}

# damage_all SEED COUNT: damaged images are worth as much to `prove` as to the oracle, and of COUNT plans an eighth each pass
# and fail.
damage_all() {
	local worth found
	mkdir "$work/damaged"
	oracle damage "$work/damaged" "$1" <"$work/builds" >"$work/damages" || fail 'images are damaged'
	prove_damaged
	for worth in pass fail; do
		found=$(cut -f 3 "$work/damages" | grep -c "$worth")
		holds "at least $(($2 / 8)) damaged images that $worth, found $found" test "$found" -ge $(($2 / 8))
	done
}
