#!/bin/bash
# Memory that does not suffice: the program says so, with the exit code of a refusal, and leaves nothing behind.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

# limited LIMIT ARGUMENT …: runs the program with so much memory: KiB in all; MiB in one piece under a sanitizer, whose own memory
# fits below no limit of the first kind.
limited() {
	local limit=$1
	shift
	if [ -n "$sanitized" ]; then
		ASAN_OPTIONS=${ASAN_OPTIONS:-}:allocator_may_return_null=1:max_allocation_size_mb=$limit \
			"$SCANLATCH" "$@" >"$work/stdout" 2>"$work/stderr" </dev/null
	else
		(ulimit -v "$limit" && exec "$SCANLATCH" "$@" >"$work/stdout" 2>"$work/stderr" </dev/null)
	fi
}

# Whether the program itself, and not only its sanitizer, says what is out.
says_so() {
	grep -v '^==' "$work/stderr" | grep -Eq '(memory is out|out of memory|Cannot allocate memory)'
}

# refused_below NAME ARGUMENT …: within each of the limits it either succeeds or says that memory is out, and both happen.
refused_below() {
	local name=$1 limit status refusals=0 successes=0
	shift
	for limit in $limits; do
		limited "$limit" "$@"
		status=$?
		case $status in
		0) successes=$((successes + 1)) ;;
		3)
			refusals=$((refusals + 1))
			holds "$name with $limit: says what is out" says_so
			holds "$name with $limit: writes nothing" test -z "$(find "$work/out" -type f 2>/dev/null)"
			;;
		*) fail "$name with $limit: exit status $status" "$(cat "$work/stderr")" ;;
		esac
		rm -rf "$work/out"
	done
	holds "$name: refused $refusals times, done $successes times" test "$refusals" -gt 0 -a "$successes" -gt 0
}

plan=plans/ferry-queue.yaml
sanitized=
if grep -qa __asan_init "$SCANLATCH"; then
	sanitized=yes
	plan=tests/good/wide-state.yaml # needs pieces of many sizes
	limits='1 2 3 4 8'
else
	least=1000
	until limited $least --version; do
		least=$((least + 100))
	done
	limits=$(seq "$least" 300 15999)
fi
"$SCANLATCH" build "$plan" -o "$work/images" >/dev/null
refused_below check check "$plan"
refused_below build build "$plan" --listing -o "$work/out"
refused_below sheet sheet "$plan" -o "$work/out/sheet.html"
refused_below prove prove --json "$plan" "$work/images"
refused_below fit fit --standard composite-625 --columns 80
# A schema takes no piece of 1 MiB, so that a sanitizer's limit never strikes.
[ -n "$sanitized" ] || refused_below schema schema
refused_below lift lift --near "$plan" "$work/images" -o "$work/out/lifted.yaml"
finish
