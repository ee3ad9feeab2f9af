# Read in by tests/command/plans.sh and tools/expect-bad (bash): runs one case of tests/bad or tests/good.
#
# A case NAME of tests/bad is `scanlatch check NAME.yaml`, run in a copy of the folder, and
#     NAME.stderr   what it prints on standard error, exactly; the copy's own path reads WORK
#     NAME.exit     its exit status, where that is not 2
#     NAME.args     other arguments, separated by blanks; OUT stands for an output folder that does not exist
#     NAME.make     a shell script that prints NAME.yaml, for plans that are better made than kept
#     NAME/         further files that the case needs: the plans of a set NAME.yaml, which lists them as NAME/PLAN.yaml
# Its name is that of the rule it breaks, -something may follow; or several-something, when it breaks several.
#
# A case NAME of tests/good is `scanlatch build NAME.yaml -o out/NAME`, run in a copy of the folder, and at least one of
#     NAME.stdout    what it prints on standard output, exactly but for the manifest's size, which reads N
#     NAME.check     what `scanlatch check NAME.yaml` prints there, exactly
#     NAME.expected  what else must be, line by line (# starts a comment, but not in a stdout line):
#         args WORD …            further arguments
#         exit N                 the exit status, where that is not 0
#         stdout TEXT            a whole line of standard output
#         files NAME …           the output folder holds these files and no others
#         size FILE N            FILE has N bytes
#         bytes FILE AT XX …     FILE has these bytes (hexadecimal) from offset AT (decimal or 0x…) on
#         every FILE XX          every byte of FILE is XX
# and, if there is one, NAME.stderr; without it nothing may be printed on standard error.

# An exit status from here on is a sanitizer's, a time-out or a signal: never an answer of the program.
crash_status=99

# stage FOLDER COPY: copies a folder of cases and makes the plans that are to be made.
stage() {
	local script
	mkdir -p "$2" && cp -R "$1/." "$2" || return
	for script in "$2"/*.make; do
		[ ! -e "$script" ] || sh "$script" >"${script%.make}.yaml" || return
	done
}

# case_names FOLDER: the cases in a staged folder, one a line.
case_names() {
	local path
	for path in "$1"/*.yaml "$1"/*.args; do
		[ ! -e "$path" ] || basename "${path%.*}"
	done | sort -u
}

# hide_sizes FOLDER: a manifest grows with every figure that is added; in $work/stdout its size reads N, if it is the file's.
hide_sizes() {
	local path size
	while read -r path size; do
		[ "$(stat -c %s "$1/$path" 2>/dev/null)" != "$size" ] || sed -i "s|$path ($size bytes)\$|$path (N bytes)|" "$work/stdout"
	done < <(sed -En 's/^(wrote|kept ) (.*\.manifest\.json) \(([0-9]+) bytes\)$/\2 \3/p' "$work/stdout")
}

# run_program FOLDER ARGUMENT …: runs the program there, fills $work/stdout and $work/stderr, returns its status.
run_program() {
	local status
	# The outer standard error takes what the shell itself says of a program that a signal ended.
	(cd "$1" && shift && timeout -k 5 120 "$SCANLATCH" "$@" >"$work/stdout" 2>"$work/stderr" </dev/null) 2>/dev/null
	status=$?
	sed -i "s|$work|WORK|g" "$work/stdout" "$work/stderr"
	hide_sizes "$1"
	return "$status"
}

# run_bad NAME: runs a case of $work/bad.
run_bad() {
	local -a arguments=(check "$1.yaml")
	if [ -e "$work/bad/$1.args" ]; then
		read -r -a arguments <"$work/bad/$1.args"
	fi
	run_program "$work/bad" "${arguments[@]/#OUT/$work/out/$1}"
}

# rules_in FILE: the rules that the diagnostics in FILE name, each once. Only headlines start at the margin.
rules_in() {
	sed -n 's/^[^ ].*: [a-z]*: .* \[\([a-z0-9-]*\)\]$/\1/p' "$1" | sort -u
}

# rules_of AREA …: the ids of the rules of these areas in src/base/rules.def.
rules_of() {
	local area
	for area in "$@"; do
		sed -n "s/^RULE([A-Z_0-9]*, \"\([a-z0-9-]*\)\", $area, .*/\1/p" src/base/rules.def
	done
}
