#!/bin/bash
# tools/run-tests with programs and scripts that pass, fail, crash, hang, lie or do nothing.
set -u
. tests/report.sh

folder=$(mktemp -d) || exit 1
trap 'rm -rf "$folder"' EXIT
runner=$PWD/tools/run-tests

# put NAME TEXT: an executable file of that text.
put() {
	printf '#!/bin/sh\n%s\n' "$2" >"$folder/$1"
	chmod +x "$folder/$1"
}

# The lines that the runner starts itself, its last line and its status; the output of failed tests is left out.
outcome() {
	local output status
	output=$(cd "$folder" && TEST_TIMEOUT=${LIMIT:-60} BUILD=$folder/build SCANLATCH=program "$runner" "$@" 2>&1)
	status=$?
	grep -v '^        ' <<<"$output"
	echo "status $status"
}

put good 'echo 1..2; echo "ok 1 - first"; echo "ok 2 - second"'
put groups 'echo 1..1; echo "ok 1 - first"; echo 1..2; echo "ok 1 - second"; echo "ok 2 - third"'
put bad 'echo 1..2; echo "ok 1 - first"; echo "not ok 2 - second"; exit 1'
put skips 'echo 1..2; echo "ok 1 - first"; echo "not ok 2 # SKIP second"'
put leaves 'echo 1..3; echo "ok 1 - first"; exit 0'
put crashes 'echo 1..2; echo "ok 1 - first"; echo "ok 2 - second"; kill -ABRT $$'
put silent ':'
put empty 'echo 1..0'
put hangs 'echo 1..2; echo "ok 1 - first"; exec sleep 60'
put excess 'echo 1..1; echo "ok 1 - first"; echo "ok 2 - second"'
put good.sh 'echo "3 passed, 0 failed"'
put bad.sh 'echo "FAILED: something"; echo "3 passed, 2 failed"; exit 1'
put lies.sh 'echo "3 passed, 0 failed"; exit 1'
put hides.sh 'echo "3 passed, 2 failed"'
put dies.sh 'echo "3 passed, 0 failed"; echo more; exit 0'
put nothing.sh 'echo "0 passed, 0 failed"'
# shellcheck disable=SC2016 # the script expands them
put environment.sh '[ "$SCANLATCH" = "$PWD/program" ] && [ "$BUILD" = "$PWD/build" ] && [ -n "$CC" ] &&
	[ -z "${MAKEFLAGS:-}" ] && echo "1 passed, 0 failed"'
echo 'helper() { :; }' >"$folder/helper.sh"
put forgotten.sh 'echo "1 passed, 0 failed"'
chmod -x "$folder/forgotten.sh"

same 'cases of programs and scripts add up' 'ok      good: 2
ok      groups: 3
ok      good.sh: 3
8 passed, 0 failed
status 0' "$(outcome good groups good.sh)"
# Each waits for the other, so that it passes only where both run at the same time.
put waits.sh 'for step in $(seq 100); do [ ! -e follows.began ] || break; sleep 0.1; done; [ -e follows.began ] && touch waits.began && echo "1 passed, 0 failed"'
put follows.sh 'touch follows.began; for step in $(seq 100); do [ ! -e waits.began ] || break; sleep 0.1; done; [ -e waits.began ] && echo "1 passed, 0 failed"'
same 'two at the same time, in the order given' 'ok      waits.sh: 1
ok      follows.sh: 1
2 passed, 0 failed
status 0' "$(TEST_JOBS=2 outcome waits.sh follows.sh)"
same 'a failed case' 'FAILED  bad: 1 passed, 1 failed, exit status 1
ok      good: 2
3 passed, 1 failed
status 1' "$(outcome bad good)"
same 'a skipped case has failed' 'FAILED  skips: 1 passed, 1 failed, exit status 0
1 passed, 1 failed
status 1' "$(outcome skips)"
same 'cases that were never reached have failed' 'FAILED  leaves: 1 passed, 2 failed, exit status 0
1 passed, 2 failed
status 1' "$(outcome leaves)"
same 'a crash after the last case' 'FAILED  crashes: 2 passed, 1 failed, exit status 134
2 passed, 1 failed
status 1' "$(outcome crashes)"
same 'a program without a case' 'FAILED  silent: 0 passed, 1 failed, exit status 0
FAILED  empty: 0 passed, 1 failed, exit status 0
0 passed, 2 failed
status 1' "$(outcome silent empty)"
same 'a program that hangs' 'FAILED  hangs: 1 passed, 1 failed, hung, ended after 1 s
1 passed, 1 failed
status 1' "$(LIMIT=1 outcome hangs)"
same 'more cases than planned' 'FAILED  excess: 2 passed, 1 failed, exit status 0
2 passed, 1 failed
status 1' "$(outcome excess)"
same 'a script that fails' 'FAILED  bad.sh: 3 passed, 2 failed, exit status 1
3 passed, 2 failed
status 1' "$(outcome bad.sh)"
same 'a script whose status and count disagree' 'FAILED  lies.sh: 3 passed, 1 failed, exit status 1
FAILED  hides.sh: 3 passed, 2 failed, exit status 0
6 passed, 3 failed
status 1' "$(outcome lies.sh hides.sh)"
same 'a script without a closing line, or without a case' 'FAILED  dies.sh: 0 passed, 1 failed, exit status 0
FAILED  nothing.sh: 0 passed, 1 failed, exit status 0
0 passed, 2 failed
status 1' "$(outcome dies.sh nothing.sh)"
same 'what scripts get' 'ok      environment.sh: 1
1 passed, 0 failed
status 0' "$(outcome environment.sh)"
same 'a helper is no test, a script that is not executable is a mistake' 'FAILED  forgotten.sh: not an executable file
ok      good.sh: 3
3 passed, 1 failed
status 1' "$(outcome helper.sh forgotten.sh good.sh)"
same 'a test that is not there' 'FAILED  gone: not an executable file
0 passed, 1 failed
status 1' "$(outcome gone)"
same 'no test at all' 'tools/run-tests: no test ran
0 passed, 0 failed
status 1' "$(outcome)"
same 'nothing but a helper' 'tools/run-tests: no test ran
0 passed, 0 failed
status 1' "$(outcome helper.sh)"

finish
