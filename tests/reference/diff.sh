#!/bin/bash
# Pairs of plans with one known edit, and the same plan in other words: `diff` must name that edit and nothing else but what follows
# from it. What each edit must read as is in diff_edits.py, written from the design and from the documented shape of the JSON.
# DIFF_FIRST and DIFF_COUNT choose other random plans; of each there is a pair for every edit that it has room for.
set -u
. tests/report.sh

first=${DIFF_FIRST:-1}
count=${DIFF_COUNT:-8}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

holds 'pairs are judged' sh -c 'python3 -B tests/reference/diff_judge.py "$0" "$1" "$2" "$3" >"$1/verdicts"' \
	"$SCANLATCH" "$work" "$first" "$count"
while read -r verdict edit rest; do
	case $verdict in
	ok) pass ;;
	FAILED) fail "$edit" "$rest" ;;
	*) fail 'a line of the judge' "$verdict $edit $rest" ;;
	esac
done <"$work/verdicts"
holds 'at least 50 kinds of edits' test "$(cut -d ' ' -f 2 "$work/verdicts" | sort -u | wc -l)" -ge 50

# Pictures of the pairs of two random plans, read back.
pairs=()
for old in "$work"/*-"$first"-old.yaml "$work"/*-"$((first + 1))"-old.yaml; do
	pairs+=("$old" "${old%-old.yaml}-new.yaml")
done
# Debian's, for its python3-yaml.
holds 'pictures are read back' /usr/bin/python3 -B tests/view/read_back_diff.py "$SCANLATCH" "${pairs[@]}"

# The plans of the tree: each is the same as itself, and other than any other, in either order.
for plan in plans/*.yaml; do
	holds "$plan: the same as itself" "$SCANLATCH" diff "$plan" "$plan"
done
for pair in 'tide-board-60 tide-board-50' 'mooring-board mooring-board-counted' 'pier-clock ferry-queue' 'pilot-station pilot-station-625' \
	'pilot-station harbour-mouth'; do
	read -r left right <<<"$pair"
	for order in "$left $right" "$right $left"; do
		read -r old new <<<"$order"
		"$SCANLATCH" diff "plans/$old.yaml" "plans/$new.yaml" >"$work/out" 2>"$work/err"
		same "$order: status" 1 $?
		holds "$order: no line is longer than 100 characters" sh -c '! grep -Eq "^.{101}" "$0"' "$work/out"
	done
done
finish
