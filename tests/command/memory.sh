#!/bin/bash
# Memory that does not suffice: the program says so, with the exit code of a refusal, and leaves nothing behind.
set -u
. tests/report.sh

# A sanitizer's own memory does not fit below any of these limits.
if grep -qa __asan_init "$SCANLATCH"; then
	pass
	finish
	exit
fi
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
"$SCANLATCH" build plans/ferry-queue.yaml -o "$work/images" >/dev/null

# with_memory KIB ARGUMENT …
with_memory() {
	(ulimit -v "$1" && shift && exec "$SCANLATCH" "$@" >"$work/stdout" 2>"$work/stderr" </dev/null)
}

least=1000
until with_memory $least --version; do
	least=$((least + 100))
done

# refused_below LIMIT NAME ARGUMENT …: from the memory in which the program just starts on, it either succeeds or says that
# memory is out, and both happen.
refused_below() {
	local limit=$1 name=$2 kib status refusals=0 successes=0
	shift 2
	for ((kib = least; kib < limit; kib += 300)); do
		with_memory $kib "$@"
		status=$?
		case $status in
		0) successes=$((successes + 1)) ;;
		3)
			refusals=$((refusals + 1))
			holds "$name in $kib KiB: says what is out" grep -Eq '(memory is out|out of memory|Cannot allocate memory)' "$work/stderr"
			holds "$name in $kib KiB: writes nothing" test -z "$(find "$work/out" -type f 2>/dev/null)"
			;;
		*) fail "$name in $kib KiB: exit status $status" "$(cat "$work/stderr")" ;;
		esac
		rm -rf "$work/out"
	done
	holds "$name: refused $refusals times, done $successes times" test "$refusals" -gt 0 -a "$successes" -gt 0
}

refused_below 16000 check check plans/ferry-queue.yaml
refused_below 16000 build build plans/ferry-queue.yaml --listing -o "$work/out"
refused_below 16000 prove prove --json plans/ferry-queue.yaml "$work/images"
finish
