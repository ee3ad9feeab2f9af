# Read in by the test scripts (bash): counts cases, shows those that fail, and prints the closing line that
# tools/run-tests adds up. Not a test itself.

cases_passed=0
cases_failed=0

pass() {
	cases_passed=$((cases_passed + 1))
}

# fail NAME [DETAIL …]
fail() {
	cases_failed=$((cases_failed + 1))
	echo "FAILED: $1"
	shift
	[ $# -eq 0 ] || printf '  %s\n' "$@"
}

# same NAME WANTED FOUND: the two texts are equal.
same() {
	if [ "$2" = "$3" ]; then
		pass
	else
		fail "$1" "$(diff -u --label wanted --label found <(printf '%s\n' "$2") <(printf '%s\n' "$3"))"
	fi
}

# holds NAME COMMAND …: the command succeeds.
holds() {
	local name=$1 output
	shift
	if output=$("$@" 2>&1); then
		pass
	else
		fail "$name" "command: $*" "$output"
	fi
}

# Prints the closing line; the script's exit status when called last.
finish() {
	echo "$cases_passed passed, $cases_failed failed"
	[ "$cases_failed" -eq 0 ] && [ "$cases_passed" -gt 0 ]
}
