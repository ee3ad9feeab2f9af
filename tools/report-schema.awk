# Puts the schema of a report together, at build time: its own file, and of the files of definitions what it uses.
#
#     awk -f tools/report-schema.awk src/view/reports/NAME.json src/view/reports/shared/*.json
#
# It goes by how the files are laid out: braces of the whole file alone on their lines, a tab a level, and what has a name at the first
# level, or at the second in a file's own $defs, begins a line. What breaks that makes a document that is none, which tests find.

function fail(words) {
	print ARGV[1] ": error: " words > "/dev/stderr"
	failed = 1
	exit 1
}

# Marks the definitions that a text refers to, and those that they refer to.
function use(text,    name) {
	while (match(text, /#\/[$]defs\/[a-z0-9-]+/)) {
		name = substr(text, RSTART + 8, RLENGTH - 8)
		text = substr(text, RSTART + RLENGTH)
		if (!(name in definition))
			fail("there is no definition \"" name "\"")
		if (!(name in used)) {
			used[name] = 1
			use(definition[name])
		}
	}
}

function begin_definition(line) {
	split(line, parts, "\"")
	current = parts[2]
	if (current in definition)
		fail("the definition \"" current "\" of " FILENAME " is there already")
	names[++count] = current
	if (files == 1)
		used[current] = 1
}

FNR == 1 {
	files++
}

/^[{}]$/ {
	next
}

files == 1 && /^\t"[$]defs": \{$/ {
	in_definitions = 1
	next
}

files == 1 && in_definitions && /^\t\},?$/ {
	in_definitions = 0
	next
}

files == 1 && !in_definitions {
	body = body $0 "\n"
	next
}

{
	line = files == 1 ? $0 : "\t" $0
	if (line ~ /^\t\t"/)
		begin_definition(line)
	definition[current] = definition[current] line "\n"
}

END {
	if (failed)
		exit 1
	use(body)
	for (name in definition)
		if (name in used)
			use(definition[name])
	text = "{\n\t\"$schema\": \"https://json-schema.org/draft/2020-12/schema\",\n" body
	sub(/,?\n$/, ",\n\t\"$defs\": {\n", text)
	for (at = 1; at <= count; at++)
		if (names[at] in used) {
			sub(/,?\n$/, "", definition[names[at]])
			text = text separator definition[names[at]]
			separator = ",\n"
		}
	text = text "\n\t}\n}\n"
	gsub(/\t/, "  ", text)
	printf "%s", text
	if (failed)
		exit 1
}
