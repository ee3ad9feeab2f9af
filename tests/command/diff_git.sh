#!/bin/bash
# diff --git as git calls it: a repository of plans, with the two lines of configuration that the README shows.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
command -v git >/dev/null || fail 'git is installed'
root=$PWD
mkdir "$work/bin" "$work/harbour" "$work/home"
ln -s "$SCANLATCH" "$work/bin/scanlatch"
cp plans/tide-board-60.yaml plans/pier-clock.yaml plans/pilot-station*.yaml "$work/harbour"
cd "$work/harbour" || exit 1
# Nobody's own configuration.
export PATH="$work/bin:$PATH" HOME="$work/home" GIT_CONFIG_NOSYSTEM=1 GIT_PAGER=cat LC_ALL=C TZ=UTC
unset XDG_CONFIG_HOME GIT_DIR GIT_WORK_TREE GIT_EXTERNAL_DIFF

quiet() {
	"$@" >"$work/quiet" 2>&1 || fail "$*" "$(cat "$work/quiet")"
}

quiet git init -q -b main
quiet git config user.name Pilot
quiet git config user.email pilot@harbour.example
# As the README shows.
mapfile -t configuration < <(sed -n '/^## Plans in git/,/^## /p' "$root/README.md" | sed -n '/^```/,/^```/p' | grep -v '^```')
for line in "${configuration[@]}"; do
	quiet sh -c "${line#\$ }"
done
holds 'the README has lines of configuration' test "${#configuration[@]}" -ge 2
holds 'attributes' grep -q '^\*\.yaml diff=scanlatch' .gitattributes
quiet git add -A
quiet git commit -qm 'the boards of the harbour'

# run STATUS COMMAND …
run() {
	local wanted=$1
	shift
	"$@" >"$work/stdout" 2>"$work/stderr" </dev/null
	same "$*: status" "$wanted" $?
}

# One cell of 18 + 216 + 25 lines; each twice, as A16 is open.
report='  musts: all hold, the frame closes, as before
  frame: 262 lines, 26462 cells, 238944 ticks, 59.923 Hz, as before
  colour: in step as asked, 228 cycles a line, repeats after 1 line and 1 frame, as before
  speed of the chips: in time, 422.571 ns to spare, as before
  limits: 24 of 24 kept at monitor grade of composite-525, 1 not measured, as before
chips
  rom0: stays as it is
  rom1: stays as it is
  rom2: burn it again, 518 of 131072 bytes differ, the first at 0x78C
lines
  "picture", "border": edge between "burst" and "back porch": 1 cell later (9 ticks, 0.629 us)'

# One burst edge.
sed -i 's/\(region: burst, .*time: \)2.51 us/\13.14 us/' tide-board-60.yaml
run 0 git diff
same 'git diff: one burst edge' "scanlatch diff tide-board-60.yaml
tide-board-60.yaml: another timeline, 1 change; the images are not the same bytes
$report" "$(cat "$work/stdout")"
same 'git diff: nothing else' '' "$(cat "$work/stderr")"
mkdir folder
(cd folder && git diff) >"$work/stdout" 2>&1
holds 'git diff: from a folder below' grep -q '1 cell later (9 ticks' "$work/stdout"
run 0 git diff --no-ext-diff
holds 'git diff --no-ext-diff: the text' grep -q '^+ .*3.14 us' "$work/stdout"
quiet git commit -qam 'a longer burst'
run 0 git log -p -1 --ext-diff --format=%s
same 'git log: the same' "a longer burst

scanlatch diff tide-board-60.yaml
tide-board-60.yaml: another timeline, 1 change; the images are not the same bytes
$report" "$(cat "$work/stdout")"
run 0 git diff HEAD HEAD^
holds 'git diff: back' grep -q '1 cell earlier (9 ticks' "$work/stdout"

# Words, modes, files that are new, gone and renamed.
chmod +x pier-clock.yaml
run 0 git diff
same 'a mode alone' 'scanlatch diff pier-clock.yaml, mode 100755, was 100644' "$(head -n 1 "$work/stdout")"
holds 'a mode alone: nothing changed' grep -q '^pier-clock.yaml: same timeline, nothing changed; the images are the same bytes$' "$work/stdout"
chmod -x pier-clock.yaml
cp tide-board-60.yaml spare.yaml
quiet git add spare.yaml
run 0 git diff --cached
same 'a new file' 'scanlatch diff spare.yaml
the file is new' "$(cat "$work/stdout")"
quiet git commit -qm 'a spare board'
quiet git rm -q spare.yaml
run 0 git diff --cached
same 'a file that is gone' 'scanlatch diff spare.yaml
the file is gone' "$(cat "$work/stdout")"
quiet git reset -q --hard
quiet git mv spare.yaml 'second board.yaml'
sed -i 's/^note: .*/note: another/' 'second board.yaml'
quiet git add -A
run 0 git diff --cached -M
same 'a renamed file' 'scanlatch diff spare.yaml to second board.yaml
spare.yaml to second board.yaml: same timeline, 1 change in words only; the images are the same
    bytes' "$(head -n 3 "$work/stdout")"
quiet git reset -q --hard

# Neither a bad plan nor what is no plan ends git.
sed -i 's/^clock:/clocks:/' pier-clock.yaml
printf 'steps: [ build ]\n' >pipeline.yaml
quiet git add pipeline.yaml
quiet git commit -qm 'another use of YAML' pipeline.yaml
printf 'steps: [ build, check ]\n' >pipeline.yaml
sed -i 's/^note: .*/note: last of all/' tide-board-60.yaml
run 0 git diff
holds 'a bad plan: where' grep -q '^pier-clock.yaml:[0-9]*:1: error: .*\[unknown-key\]$' "$work/stderr"
same 'bad plans: words' 2 "$(grep -c '^not compared, the messages say why; "git diff --no-ext-diff" shows the text$' "$work/stdout")"
same 'what is no plan: one error of each revision' 2 "$(grep -c '^pipeline.yaml.*: error: a plan needs the key "scanlatch" \[missing-key\]$' "$work/stderr")"
same 'what is no plan: no others' 2 "$(grep -c '^pipeline.yaml' "$work/stderr")"
holds 'the old one of two bad files is called so' grep -q '^pipeline.yaml (old):' "$work/stderr"
holds 'after them, the next' grep -q "the plan's note: last of all" "$work/stdout"
quiet git checkout -q .

# A set: its plans are those of the working tree, which the report says, as what changed in them is not in it.
sed -i 's/1: pilot-station-625.yaml/1: pilot-station-525.yaml/' pilot-station.yaml
run 0 git diff
holds 'a set: bank 1' grep -q '^changes in bank 1 (pilot-station-525, was pilot-station-625)$' "$work/stdout"
same 'a set: no words but these' '' "$(cat "$work/stderr")"
quiet git checkout -q .
mkdir sets
sed -e 's/pilot-station-//g' -e 's/^note: .*//' -e '$a note: one' pilot-station.yaml >sets/station.yaml
cp pilot-station-525.yaml sets/525.yaml
cp pilot-station-625.yaml sets/625.yaml
quiet git add sets
quiet git commit -qm 'sets in a folder'
sed -i 's/^note: .*/note: another/' sets/station.yaml
sed -E -i 's/(region: front porch, +cells: )4/\15/' sets/625.yaml
quiet git commit -qam 'a set and a plan of it'
run 0 git log -p -1 --ext-diff --format= -- sets/station.yaml
same 'a set: which plans' 'scanlatch diff sets/station.yaml
both sides have the plans of the working tree: sets/525.yaml, sets/625.yaml
what changed in these plans is not compared; chips may have to be burned again for it all the same' \
	"$(head -n 3 "$work/stdout")"
same 'a set: nothing else' '' "$(cat "$work/stderr")"
run 0 git log -p -1 --ext-diff --format= -- sets/625.yaml
same 'a plan: no such words' '' "$(grep 'working tree' "$work/stdout")"

# Names that are relative to a folder, be it the one git is called in, or one that the working tree's own file shows.
relative='^both sides have the plans of the working tree: sets/525.yaml, sets/625.yaml$'
cd sets || exit 1
run 0 git log -p -1 --ext-diff --format= --relative -- station.yaml
same '--relative: the heading' 'scanlatch diff station.yaml' "$(head -n 1 "$work/stdout")"
holds '--relative: the plans' grep -q "$relative" "$work/stdout"
holds '--relative: compared' grep -q '^station.yaml: same timeline' "$work/stdout"
run 0 git log -p -1 --ext-diff --format= -- station.yaml
holds 'from its folder: the plans' grep -q "$relative" "$work/stdout"
cd ..
sed -i 's/^note: .*/note: a third/' sets/station.yaml
run 0 git diff --relative=sets
holds '--relative=FOLDER: the plans' grep -q "$relative" "$work/stdout"
quiet git checkout -q .

# A plan of a set with another name now: the older revisions' plans are not there.
quiet git mv sets/625.yaml sets/fifty.yaml
sed -i 's/625.yaml/fifty.yaml/' sets/station.yaml
quiet git commit -qam 'a plan with another name'
run 0 git log -p -1 --ext-diff --format= -- sets/station.yaml
same 'a plan of a set is gone' 'scanlatch diff sets/station.yaml
not compared: git hands over a set without its plans, and the working tree has none now of this name: sets/625.yaml' \
	"$(cat "$work/stdout")"

# Names of files cannot command a terminal.
cp pier-clock.yaml $'a\e[31mX\nY.yaml'
quiet git add -A
quiet git commit -qm 'a name'
sed -i 's/^note: .*/note: another/' $'a\e[31mX\nY.yaml'
run 0 git diff
same 'a name with control characters' 'scanlatch diff a?[31mX?Y.yaml' "$(head -n 1 "$work/stdout")"
run 0 scanlatch diff --git $'a\e[31mX\nY.yaml'
same 'not merged: a name with control characters' 'scanlatch diff a?[31mX?Y.yaml
not merged yet' "$(cat "$work/stdout")"
quiet git checkout -q .

# Not merged.
quiet git checkout -qb other
sed -i 's/^note: .*/note: one/' pier-clock.yaml
quiet git commit -qam one
quiet git checkout -q main
sed -i 's/^note: .*/note: two/' pier-clock.yaml
quiet git commit -qam two
git merge -q other >"$work/quiet" 2>&1 && fail 'a merge that cannot be'
run 0 git diff --cached
same 'not merged' 'scanlatch diff pier-clock.yaml
not merged yet' "$(cat "$work/stdout")"
quiet git merge --abort

# Without git: as many arguments as git gives, and no others.
run 0 scanlatch diff --git a.yaml tide-board-60.yaml 0123456 100644 pier-clock.yaml 89abcde 100644
holds 'by hand' grep -q '^a.yaml: another timeline' "$work/stdout"
run 2 scanlatch diff --git a.yaml tide-board-60.yaml pier-clock.yaml
holds 'too few' grep -q 'wanted the seven arguments' "$work/stderr"
run 3 scanlatch diff --git a.yaml missing.yaml 0 100644 pier-clock.yaml 0 100644
finish
