// Texts that are refused, each with all that is printed for it. Lines, columns and messages were read over by hand; the
// rest of a line's excerpt is the work of src/base.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "parsing.h"
#include "plan/syntax.h"

// With its length, since some hold NUL.
#define TEXT(literal) literal, sizeof(literal) - 1

struct refused_text {
	const char *bytes;
	size_t length;
	const char *printed;
};

static const struct refused_text refused_texts[] = {
	// Tags and directives.
	{TEXT("a: !!str b\n"),
	 "plan:1:4: error: wanted no tag, found '!!str' [yaml-tag]\n"
	 "  a: !!str b\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("a: ! b\n"),
	 "plan:1:4: error: wanted no tag, found '!' [yaml-tag]\n"
	 "  a: ! b\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("a: !e!x b\n"),
	 "plan:1:4: error: wanted no tag, found '!e!x b' [yaml-tag]\n"
	 "  a: !e!x b\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("a: !<x y\n"),
	 "plan:1:4: error: wanted no tag, found '!<x y' [yaml-tag]\n"
	 "  a: !<x y\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("a: &x ! b\n"),
	 "plan:1:7: error: wanted no tag, found '!' [yaml-tag]\n"
	 "  a: &x ! b\n"
	 "        ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("a: !x {b: c}\n"),
	 "plan:1:4: error: wanted no tag, found '!x' [yaml-tag]\n"
	 "  a: !x {b: c}\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("!\n"),
	 "plan:1:1: error: wanted no tag, found '!' [yaml-tag]\n"
	 "  !\n"
	 "  ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("a: &b\n" "  !c\n" "  d: e\n"),
	 "plan:2:3: error: wanted no tag, found '!c' [yaml-tag]\n"
	 "    !c\n"
	 "    ^\n"
	 "  hint: quote a text that begins with '!'\n"},
	{TEXT("%TAG ! x\n" "--- a\n"),
	 "plan:1:1: error: wanted no directive but %YAML, found %TAG [yaml-tag]\n"
	 "  %TAG ! x\n"
	 "  ^\n"},
	{TEXT("%YAML 1.2\n" "%TAG ! x\n" "--- a\n"),
	 "plan:2:1: error: wanted no directive but %YAML, found %TAG [yaml-tag]\n"
	 "  %TAG ! x\n"
	 "  ^\n"},
	{TEXT("%TAG x\n"),
	 "plan:1:1: error: wanted no directive but %YAML, found %TAG [yaml-tag]\n"
	 "  %TAG x\n"
	 "  ^\n"},
	{TEXT("# c\n" "%TAG !a! x\n" "%TAG !a! y\n" "--- a\n"),
	 "plan:2:1: error: wanted no directive but %YAML, found %TAG [yaml-tag]\n"
	 "  %TAG !a! x\n"
	 "  ^\n"},
	{TEXT("a: b\n" "%TAG ! x\n" "--- c\n"),
	 "plan:2:1: error: wanted no directive but %YAML, found %TAG [yaml-tag]\n"
	 "  %TAG ! x\n"
	 "  ^\n"},
	{TEXT("a: b\n" "... # end\n" "\n" "...\n" "%YAML 1.1\n" "%TAG ! x\n" "--- c\n"),
	 "plan:6:1: error: wanted no directive but %YAML, found %TAG [yaml-tag]\n"
	 "  %TAG ! x\n"
	 "  ^\n"},
	{TEXT("[a,\n" "%TAG x\n" "]\n"),
	 "plan:2:1: error: wanted no directive but %YAML, found '%TAG x' [yaml-tag]\n"
	 "  %TAG x\n"
	 "  ^\n"},
	{TEXT("%FOO x\n" "--- a\n"),
	 "plan:1:1: error: wanted no directive but %YAML, found '%FOO x' [yaml-syntax]\n"
	 "  %FOO x\n"
	 "  ^\n"
	 "  hint: quote a text that begins with '%'\n"},
	{TEXT("a: b\n" "%c: d\n"),
	 "plan:2:1: error: wanted no directive but %YAML, found '%c: d' [yaml-syntax]\n"
	 "  %c: d\n"
	 "  ^\n"
	 "  hint: quote a text that begins with '%'\n"},
	{TEXT("%YAML 2.0\n" "--- a\n"),
	 "plan:1:1: error: wanted '%YAML 1.1' or '%YAML 1.2', found '%YAML 2.0' [yaml-syntax]\n"
	 "  %YAML 2.0\n"
	 "  ^\n"},
	{TEXT("%YAML 1\n" "--- a\n"),
	 "plan:1:1: error: wanted '%YAML 1.1' or '%YAML 1.2', found '%YAML 1' [yaml-syntax]\n"
	 "  %YAML 1\n"
	 "  ^\n"},
	{TEXT("%YAML 1.1\n" "%YAML 1.1\n" "--- a\n"),
	 "plan:2:1: error: wanted %YAML once, found '%YAML 1.1' [yaml-syntax]\n"
	 "  %YAML 1.1\n"
	 "  ^\n"},
	// Keys.
	{TEXT("a: 1\n" "b: 2\n" "a: 3\n" "\"a\": 4\n"),
	 "plan:3:1: error: wanted each key of a mapping once, found 'a' again [yaml-duplicate-key]\n"
	 "  a: 3\n"
	 "  ^\n"
	 "plan:1:1: note: first defined here\n"
	 "plan:4:1: error: wanted each key of a mapping once, found 'a' again [yaml-duplicate-key]\n"
	 "  \"a\": 4\n"
	 "  ^\n"
	 "plan:1:1: note: first defined here\n"},
	{TEXT("{\303\251: 1, x: {\303\251: 2, \303\251: 3}, '\303\251': 4}\n"),
	 "plan:1:18: error: wanted each key of a mapping once, found '\303\251' again [yaml-duplicate-key]\n"
	 "  {\303\251: 1, x: {\303\251: 2, \303\251: 3}, '\303\251': 4}\n"
	 "                   ^\n"
	 "plan:1:12: note: first defined here\n"
	 "plan:1:25: error: wanted each key of a mapping once, found '\303\251' again [yaml-duplicate-key]\n"
	 "  {\303\251: 1, x: {\303\251: 2, \303\251: 3}, '\303\251': 4}\n"
	 "                          ^\n"
	 "plan:1:2: note: first defined here\n"},
	{TEXT("? [a]\n" ": b\n" "? {c: d}\n" ": e\n"),
	 "plan:1:3: error: wanted a text as key, found a list [yaml-key-not-scalar]\n"
	 "  ? [a]\n"
	 "    ^\n"
	 "  hint: quote a key that begins with '['\n"
	 "plan:3:3: error: wanted a text as key, found a mapping [yaml-key-not-scalar]\n"
	 "  ? {c: d}\n"
	 "    ^\n"
	 "  hint: quote a key that begins with '{'\n"},
	{TEXT("a: &x [b]\n" "*x : c\n"),
	 "plan:2:1: error: wanted a text as key, found a list [yaml-key-not-scalar]\n"
	 "  *x : c\n"
	 "  ^\n"
	 "  hint: quote a key that begins with '['\n"},
	{TEXT("a: &x {b: 1}\n" "c:\n" "  <<: *x\n"),
	 "plan:3:3: error: wanted a key, found the merge key '<<' [yaml-merge-key]\n"
	 "    <<: *x\n"
	 "    ^\n"
	 "  hint: write the keys out; a line type takes another's regions with 'like'\n"},
	{TEXT("01234567890123456789012345678901234567: 1\n" "01234567890123456789012345678901234567: 2\n"),
	 "plan:2:1: error: wanted each key of a mapping once, found '01234567890123456789012345678901'... again [yaml-duplicate-key]\n"
	 "  01234567890123456789012345678901234567: 2\n"
	 "  ^\n"
	 "plan:1:1: note: first defined here\n"},
	// Aliases.
	{TEXT("a: *b\n" "c: &b 1\n"),
	 "plan:1:4: error: wanted an alias of an anchor further up, found no anchor 'b' [yaml-alias]\n"
	 "  a: *b\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '*'\n"},
	{TEXT("a: &x [*x]\n"),
	 "plan:1:8: error: wanted an alias of an anchor that is complete, found 'x' inside of what it stands for [yaml-alias]\n"
	 "  a: &x [*x]\n"
	 "         ^\n"
	 "plan:1:7: note: what it stands for begins here\n"},
	{TEXT("a: &x {k: [1, *x], m: *x}\n"),
	 "plan:1:15: error: wanted an alias of an anchor that is complete, found 'x' inside of what it stands for [yaml-alias]\n"
	 "  a: &x {k: [1, *x], m: *x}\n"
	 "                ^\n"
	 "plan:1:7: note: what it stands for begins here\n"
	 "plan:1:23: error: wanted an alias of an anchor that is complete, found 'x' inside of what it stands for [yaml-alias]\n"
	 "  a: &x {k: [1, *x], m: *x}\n"
	 "                        ^\n"
	 "plan:1:7: note: what it stands for begins here\n"},
	{TEXT("a: *\n"),
	 "plan:1:5: error: wanted the name of an anchor after '*', found the end of the line [yaml-syntax]\n"
	 "  a: *\n"
	 "      ^\n"
	 "  hint: quote a text that begins with '*'\n"},
	{TEXT("a: & b\n"),
	 "plan:1:5: error: wanted a name after '&', found 'b' [yaml-syntax]\n"
	 "  a: & b\n"
	 "      ^\n"
	 "  hint: quote a text that begins with '&'\n"},
	{TEXT("at: *(row/9)\n"),
	 "plan:1:6: error: wanted the name of an anchor after '*', found '(row/9)' [yaml-syntax]\n"
	 "  at: *(row/9)\n"
	 "       ^\n"
	 "  hint: quote a text that begins with '*'\n"},
	// Documents.
	{TEXT("a: b\n" "--- c\n"),
	 "plan:2:1: error: wanted one document, found the start of a second [yaml-second-document]\n"
	 "  --- c\n"
	 "  ^\n"
	 "plan:1:1: note: the first begins here\n"},
	{TEXT("a: b\n" "...\n" "c: d\n"),
	 "plan:3:1: error: wanted the end of the file after '...', found a second document [yaml-second-document]\n"
	 "  c: d\n"
	 "  ^\n"},
	{TEXT("---\n" "---\n"),
	 "plan:2:1: error: wanted one document, found the start of a second [yaml-second-document]\n"
	 "  ---\n"
	 "  ^\n"
	 "plan:2:1: note: the first begins here\n"},
	{TEXT("{a: b}}\n"),
	 "plan:1:7: error: wanted the end of the file after its value, found '}' [yaml-syntax]\n"
	 "  {a: b}}\n"
	 "        ^\n"},
	{TEXT("&a &b c\n"),
	 "plan:1:4: error: wanted the end of the file after its value, found '&b c' [yaml-syntax]\n"
	 "  &a &b c\n"
	 "     ^\n"},
	// Nothing.
	{TEXT(""),
	 "plan: error: wanted a plan, found an empty file [file-empty]\n"},
	{TEXT("\n" "  \n"),
	 "plan: error: wanted a plan, found nothing but comments and blanks [file-empty]\n"},
	{TEXT("# only this\n"),
	 "plan: error: wanted a plan, found nothing but comments and blanks [file-empty]\n"},
	{TEXT("---\n"),
	 "plan: error: wanted a plan, found nothing but comments and blanks [file-empty]\n"},
	{TEXT("--- ''\n"),
	 "plan: error: wanted a plan, found nothing but comments and blanks [file-empty]\n"},
	{TEXT("\357\273\277"),
	 "plan: error: wanted a plan, found nothing but comments and blanks [file-empty]\n"},
	// Bytes.
	{TEXT("a: b\n" "c\000: d\n"),
	 "plan:2:2: error: wanted text, found a NUL byte [file-binary]\n"
	 "  c?: d\n"
	 "   ^\n"},
	{TEXT("\000\000\000\000"),
	 "plan:1:1: error: wanted text, found a NUL byte [file-binary]\n"
	 "  ????\n"
	 "  ^\n"},
	{TEXT("a: \007b\n"),
	 "plan:1:4: error: wanted text, found the control character U+0007 [file-binary]\n"
	 "  a: ?b\n"
	 "     ^\n"},
	{TEXT("a: \177\n"),
	 "plan:1:4: error: wanted text, found the control character U+007F [file-binary]\n"
	 "  a: ?\n"
	 "     ^\n"},
	{TEXT("a: b\015c: d\n"),
	 "plan:1:5: error: wanted a line feed, found a carriage return without one [file-binary]\n"
	 "  a: b\n"
	 "      ^\n"
	 "  hint: save the file with line ends LF or CR LF\n"},
	{TEXT("a: b\015"),
	 "plan:1:5: error: wanted a line feed, found a carriage return without one [file-binary]\n"
	 "  a: b\n"
	 "      ^\n"
	 "  hint: save the file with line ends LF or CR LF\n"},
	{TEXT("a: \302\205\n"),
	 "plan:1:4: error: wanted LF or CR LF as line ends, found the line end U+0085 [file-binary]\n"
	 "  a: \n"
	 "     ^\n"},
	{TEXT("# x\342\200\250a: b\n"),
	 "plan:1:4: error: wanted LF or CR LF as line ends, found the line end U+2028 [file-binary]\n"
	 "  # x\n"
	 "     ^\n"},
	{TEXT("a: \357\273\277b\n"),
	 "plan:1:4: error: wanted text, found a byte order mark inside of it [file-binary]\n"
	 "  a: \357\273\277b\n"
	 "     ^\n"},
	{TEXT("a: \357\277\277\n"),
	 "plan:1:4: error: wanted text, found U+FFFF, which is no character [file-binary]\n"
	 "  a: \357\277\277\n"
	 "     ^\n"},
	{TEXT("a: \"\\0\"\n"),
	 "plan:1:4: error: wanted text, found an escape that stands for the control character U+0000 [file-binary]\n"
	 "  a: \"\\0\"\n"
	 "     ^\n"},
	{TEXT("a: \"x\\e\"\n"),
	 "plan:1:4: error: wanted text, found an escape that stands for the control character U+001B [file-binary]\n"
	 "  a: \"x\\e\"\n"
	 "     ^\n"},
	{TEXT("a: \"\\r\"\n"),
	 "plan:1:4: error: wanted text, found an escape that stands for the control character U+000D [file-binary]\n"
	 "  a: \"\\r\"\n"
	 "     ^\n"},
	{TEXT("a: \"\\L\"\n"),
	 "plan:1:4: error: wanted text, found an escape that stands for the control character U+2028 [file-binary]\n"
	 "  a: \"\\L\"\n"
	 "     ^\n"},
	// Encoding.
	{TEXT("\377\376a\000:\000"),
	 "plan: error: wanted UTF-8, found what looks like UTF-16 or UTF-32 [file-encoding]\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("\376\377\000a\000:"),
	 "plan: error: wanted UTF-8, found what looks like UTF-16 or UTF-32 [file-encoding]\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("\000\000\376\377\000\000\000a"),
	 "plan: error: wanted UTF-8, found what looks like UTF-16 or UTF-32 [file-encoding]\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a\000:\000 \000b\000"),
	 "plan: error: wanted UTF-8, found what looks like UTF-16 or UTF-32 [file-encoding]\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("\000a\000:\000 \000b"),
	 "plan: error: wanted UTF-8, found what looks like UTF-16 or UTF-32 [file-encoding]\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("\303\251: caf\351\n"),
	 "plan:1:7: error: wanted UTF-8, found byte 0xe9, which begins no character here [file-encoding]\n"
	 "  \303\251: caf?\n"
	 "        ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \200\n"),
	 "plan:1:4: error: wanted UTF-8, found byte 0x80, which begins no character here [file-encoding]\n"
	 "  a: ?\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \300\257\n"),
	 "plan:1:4: error: wanted UTF-8, found byte 0xc0, which begins no character here [file-encoding]\n"
	 "  a: ??\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \340\237\277\n"),
	 "plan:1:4: error: wanted UTF-8, found byte 0xe0, which begins no character here [file-encoding]\n"
	 "  a: ???\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \355\240\200\n"),
	 "plan:1:4: error: wanted UTF-8, found byte 0xed, which begins no character here [file-encoding]\n"
	 "  a: ???\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \364\220\200\200\n"),
	 "plan:1:4: error: wanted UTF-8, found byte 0xf4, which begins no character here [file-encoding]\n"
	 "  a: ????\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \365\200\200\200\n"),
	 "plan:1:4: error: wanted UTF-8, found byte 0xf5, which begins no character here [file-encoding]\n"
	 "  a: ????\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \342\202"),
	 "plan:1:4: error: wanted UTF-8, found byte 0xe2, which begins no character here [file-encoding]\n"
	 "  a: ??\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	{TEXT("a: \342\202\n"),
	 "plan:1:4: error: wanted UTF-8, found byte 0xe2, which begins no character here [file-encoding]\n"
	 "  a: ??\n"
	 "     ^\n"
	 "  hint: save the file as UTF-8\n"},
	// Lists in brackets.
	{TEXT("data: [next.0, - , sync]\n"),
	 "plan:1:16: error: wanted a value, found '- , sync]' [yaml-syntax]\n"
	 "  data: [next.0, - , sync]\n"
	 "                 ^\n"
	 "  hint: in a list in brackets, an unwired pin is a '-' directly before ',' or ']', or a quoted one\n"},
	{TEXT("data: [-, - ]\n"),
	 "plan:1:11: error: wanted a value, found '- ]' [yaml-syntax]\n"
	 "  data: [-, - ]\n"
	 "            ^\n"
	 "  hint: in a list in brackets, an unwired pin is a '-' directly before ',' or ']', or a quoted one\n"},
	{TEXT("data: [a, , b]\n"),
	 "plan:1:11: error: wanted a value, found ', b]' [yaml-syntax]\n"
	 "  data: [a, , b]\n"
	 "            ^\n"
	 "  hint: between two commas there is a value; an unwired pin is '-'\n"},
	{TEXT("data: [a b\n"),
	 "plan:1:7: error: wanted ']' to close this '[', found the end of the file [yaml-syntax]\n"
	 "  data: [a b\n"
	 "        ^\n"},
	{TEXT("data: [a, b\n" "sync: c\n"),
	 "plan:2:5: error: wanted ',' or ']', found ': c' [yaml-syntax]\n"
	 "  sync: c\n"
	 "      ^\n"
	 "plan:1:7: note: the '[' is here\n"
	 "  hint: is a ']' or a ',' missing further up?\n"},
	{TEXT("a: {b: c\n" "d: e\n"),
	 "plan:2:2: error: wanted ',' or '}', found ': e' [yaml-syntax]\n"
	 "  d: e\n"
	 "   ^\n"
	 "plan:1:4: note: the '{' is here\n"
	 "  hint: is a '}' or a ',' missing further up?\n"},
	{TEXT("a: {b: c d: e}\n"),
	 "plan:1:11: error: wanted ',' or '}', found ': e}' [yaml-syntax]\n"
	 "  a: {b: c d: e}\n"
	 "            ^\n"
	 "plan:1:4: note: the '{' is here\n"
	 "  hint: is a ',' missing before the key, or are quotes missing around the value?\n"},
	{TEXT("a: [b, {c: d]\n"),
	 "plan:1:13: error: wanted ',' or '}', found ']' [yaml-syntax]\n"
	 "  a: [b, {c: d]\n"
	 "              ^\n"
	 "plan:1:8: note: the '{' is here\n"},
	{TEXT("a: [1, 2]]\n"),
	 "plan:1:10: error: wanted the end of the line after the value, found ']' [yaml-syntax]\n"
	 "  a: [1, 2]]\n"
	 "           ^\n"
	 "  hint: no bracket is open here that this one could close\n"},
	{TEXT("a: ]\n"),
	 "plan:1:4: error: wanted a value, found ']' [yaml-syntax]\n"
	 "  a: ]\n"
	 "     ^\n"
	 "  hint: no bracket is open here that this one could close\n"},
	{TEXT("[a,\n" "# rest\n" "\n"),
	 "plan:4:1: error: wanted a value, found the end of the file [yaml-syntax]\n"
	 "  hint: is a ']' or a '}' missing further up?\n"},
	{TEXT("a: {b:}\n"),
	 "plan:1:6: error: wanted a space after ':', found ':}' [yaml-syntax]\n"
	 "  a: {b:}\n"
	 "       ^\n"
	 "  hint: write a space after the ':' that ends a key, or quote the text\n"},
	// Keys, values and lines.
	{TEXT("name: x\n" "clock\n" "dot: 1\n"),
	 "plan:2:1: error: wanted ':' after the key 'clock' [yaml-syntax]\n"
	 "  clock\n"
	 "  ^\n"},
	{TEXT("clock\n" "  dot: 1\n"),
	 "plan:1:1: error: wanted ':' after the key 'clock' [yaml-syntax]\n"
	 "  clock\n"
	 "  ^\n"},
	{TEXT("clock:\n" "  dot: 1\n" "  cell:16 ticks\n" "name: x\n"),
	 "plan:3:3: error: wanted ':' after the key 'cell:16 ticks' [yaml-syntax]\n"
	 "    cell:16 ticks\n"
	 "    ^\n"
	 "  hint: put a space after ':'\n"},
	{TEXT("clock:\n" "  cell:16 ticks\n" "\n" "  dot: 1\n"),
	 "plan:2:3: error: wanted ':' after the key 'cell:16 ticks' [yaml-syntax]\n"
	 "    cell:16 ticks\n"
	 "    ^\n"
	 "  hint: put a space after ':'\n"},
	{TEXT("note: tide: board\n"),
	 "plan:1:11: error: wanted one key on a line, found a second ':' [yaml-syntax]\n"
	 "  note: tide: board\n"
	 "            ^\n"
	 "  hint: quote a value that has ': ' in it, or write a mapping as {key: value}\n"},
	{TEXT("a: b\n" "  c: d\n"),
	 "plan:2:3: error: wanted a key in the column of the line above, 1, found one in column 3 [yaml-syntax]\n"
	 "    c: d\n"
	 "    ^\n"
	 "plan:1:1: note: the line above begins here\n"
	 "  hint: one of the two is indented differently from its neighbours\n"},
	{TEXT("- a: b\n" "  c: d\n" "   e: f\n"),
	 "plan:3:4: error: wanted a key in the column of the line above, 3, found one in column 4 [yaml-syntax]\n"
	 "     e: f\n"
	 "     ^\n"
	 "plan:2:3: note: the line above begins here\n"
	 "  hint: one of the two is indented differently from its neighbours\n"},
	{TEXT("- a: b\n" "     c: d\n"),
	 "plan:2:6: error: wanted a key in the column of the line above, 3, found one in column 6 [yaml-syntax]\n"
	 "       c: d\n"
	 "       ^\n"
	 "plan:1:3: note: the line above begins here\n"
	 "  hint: one of the two is indented differently from its neighbours\n"},
	{TEXT("a: b\n" "  c\n" "  d: e\n"),
	 "plan:3:3: error: wanted more of the value that a line above began, found a key [yaml-syntax]\n"
	 "    d: e\n"
	 "    ^\n"
	 "  hint: end the line above with ':' if the key is part of it; quote a value that has ': ' in it\n"},
	{TEXT("a:\n" "   b: c\n" "  d: e\n"),
	 "plan:3:3: error: wanted a key in column 1, found 'd: e' in column 3 [yaml-syntax]\n"
	 "    d: e\n"
	 "    ^\n"
	 "plan:1:1: note: the mapping begins here\n"
	 "  hint: give keys that belong to one mapping, and items of one list, the same indentation\n"},
	{TEXT("- a\n" "b: c\n"),
	 "plan:2:1: error: wanted '- ', found 'b: c' [yaml-syntax]\n"
	 "  b: c\n"
	 "  ^\n"
	 "plan:1:1: note: the list begins here\n"},
	{TEXT("a: b\n" "- c\n"),
	 "plan:2:1: error: wanted a key, found '- c' [yaml-syntax]\n"
	 "  - c\n"
	 "  ^\n"
	 "plan:1:1: note: the mapping begins here\n"},
	{TEXT("a:\n" " - b\n" " c: d\n"),
	 "plan:3:2: error: wanted '- ', found 'c: d' [yaml-syntax]\n"
	 "   c: d\n"
	 "   ^\n"
	 "plan:2:2: note: the list begins here\n"},
	{TEXT("- - a\n" " - b\n"),
	 "plan:2:2: error: wanted '- ' in column 1, found '- b' in column 2 [yaml-syntax]\n"
	 "   - b\n"
	 "   ^\n"
	 "plan:1:1: note: the list begins here\n"
	 "  hint: give keys that belong to one mapping, and items of one list, the same indentation\n"},
	{TEXT("a: - b\n"),
	 "plan:1:4: error: wanted a value, found '- b' [yaml-syntax]\n"
	 "  a: - b\n"
	 "     ^\n"
	 "  hint: begin a list on a line of its own, or write it as [a, b, c]; an unwired pin in there is '-'\n"},
	{TEXT("a: ? b\n"),
	 "plan:1:4: error: wanted a value, found '? b' [yaml-syntax]\n"
	 "  a: ? b\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '?'\n"},
	{TEXT("a: \"b\" c\n"),
	 "plan:1:8: error: wanted the end of the line after the value, found 'c' [yaml-syntax]\n"
	 "  a: \"b\" c\n"
	 "         ^\n"
	 "  hint: put the whole value in quotes if all of it is meant\n"},
	{TEXT("a: [b] c\n"),
	 "plan:1:8: error: wanted the end of the line after the value, found 'c' [yaml-syntax]\n"
	 "  a: [b] c\n"
	 "         ^\n"
	 "  hint: put the whole value in quotes if all of it is meant\n"},
	{TEXT("a: 'b'c: d\n"),
	 "plan:1:7: error: wanted the end of the line after the value, found 'c: d' [yaml-syntax]\n"
	 "  a: 'b'c: d\n"
	 "        ^\n"
	 "  hint: put the whole value in quotes if all of it is meant\n"},
	// Tabs.
	{TEXT("a:\n" "\011b: c\n"),
	 "plan:2:1: error: wanted spaces as indentation, found a tab [yaml-syntax]\n"
	 "   b: c\n"
	 "  ^\n"
	 "  hint: indent with spaces only\n"},
	{TEXT("a: b\n" "\011c: d\n"),
	 "plan:2:1: error: wanted spaces as indentation, found a tab [yaml-syntax]\n"
	 "   c: d\n"
	 "  ^\n"
	 "  hint: indent with spaces only\n"},
	{TEXT("a: |\n" "\011b\n"),
	 "plan:2:1: error: wanted spaces as indentation, found a tab [yaml-syntax]\n"
	 "   b\n"
	 "  ^\n"
	 "  hint: indent with spaces only\n"},
	// Quotes and other texts.
	{TEXT("a: \"b\n" "c: d\n"),
	 "plan:1:4: error: wanted a closing quote to this one, found the end of the file [yaml-syntax]\n"
	 "  a: \"b\n"
	 "     ^\n"},
	{TEXT("a: 'b"),
	 "plan:1:4: error: wanted a closing quote to this one, found the end of the file [yaml-syntax]\n"
	 "  a: 'b\n"
	 "     ^\n"},
	{TEXT("a: \"b\n" "---\n" "c\"\n"),
	 "plan:2:1: error: wanted a closing quote, found '---' [yaml-syntax]\n"
	 "  ---\n"
	 "  ^\n"},
	{TEXT("a: \"\\q\"\n"),
	 "plan:1:5: error: wanted one of YAML's escapes after '\\', found '\\q\"' [yaml-syntax]\n"
	 "  a: \"\\q\"\n"
	 "      ^\n"
	 "  hint: write \\\\ for a backslash, or put the text in single quotes\n"},
	{TEXT("a: \"\\x4\"\n"),
	 "plan:1:7: error: wanted hexadecimal digits in the escape, found '4\"' [yaml-syntax]\n"
	 "  a: \"\\x4\"\n"
	 "        ^\n"},
	{TEXT("a: \"\\uD800\"\n"),
	 "plan:1:7: error: wanted an escape that stands for a character, found 'D800\"' [yaml-syntax]\n"
	 "  a: \"\\uD800\"\n"
	 "        ^\n"},
	{TEXT("a: @b\n"),
	 "plan:1:4: error: wanted a key or a value, found '@', with which none can begin [yaml-syntax]\n"
	 "  a: @b\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '@'\n"},
	{TEXT("a: `b`\n"),
	 "plan:1:4: error: wanted a key or a value, found '`', with which none can begin [yaml-syntax]\n"
	 "  a: `b`\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '`'\n"},
	{TEXT("a: %b\n"),
	 "plan:1:4: error: wanted a key or a value, found '%', with which none can begin [yaml-syntax]\n"
	 "  a: %b\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '%'\n"},
	{TEXT("a: [|]\n"),
	 "plan:1:5: error: wanted a key or a value, found '|', with which none can begin [yaml-syntax]\n"
	 "  a: [|]\n"
	 "      ^\n"
	 "  hint: quote a text that begins with '|'\n"},
	{TEXT("a: |x\n" " b\n"),
	 "plan:1:5: error: wanted the end of the line after '|' or '>', found 'x' [yaml-syntax]\n"
	 "  a: |x\n"
	 "      ^\n"
	 "  hint: quote a text that begins with '|' or '>'\n"},
	{TEXT("a: |0\n" " b\n"),
	 "plan:1:5: error: wanted an indentation of 1 to 9 after '|' or '>', found '0' [yaml-syntax]\n"
	 "  a: |0\n"
	 "      ^\n"},
	// Several at once.
	{TEXT("a: !x 1\n" "b: *c\n" "b: 2\n" "<<: {d: 1, d: 2}\n" "--- e\n"),
	 "plan:1:4: error: wanted no tag, found '!x' [yaml-tag]\n"
	 "  a: !x 1\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '!'\n"
	 "plan:2:4: error: wanted an alias of an anchor further up, found no anchor 'c' [yaml-alias]\n"
	 "  b: *c\n"
	 "     ^\n"
	 "  hint: quote a text that begins with '*'\n"
	 "plan:3:1: error: wanted each key of a mapping once, found 'b' again [yaml-duplicate-key]\n"
	 "  b: 2\n"
	 "  ^\n"
	 "plan:2:1: note: first defined here\n"
	 "plan:4:1: error: wanted a key, found the merge key '<<' [yaml-merge-key]\n"
	 "  <<: {d: 1, d: 2}\n"
	 "  ^\n"
	 "  hint: write the keys out; a line type takes another's regions with 'like'\n"
	 "plan:4:12: error: wanted each key of a mapping once, found 'd' again [yaml-duplicate-key]\n"
	 "  <<: {d: 1, d: 2}\n"
	 "             ^\n"
	 "plan:4:6: note: first defined here\n"
	 "plan:5:1: error: wanted one document, found the start of a second [yaml-second-document]\n"
	 "  --- e\n"
	 "  ^\n"
	 "plan:1:1: note: the first begins here\n"},

};

static void prints_what_is_wrong(void **state)
{
	(void)state;
	for (size_t index = 0; index < sizeof(refused_texts) / sizeof(refused_texts[0]); index++) {
		const struct refused_text *const text = &refused_texts[index];
		struct parsed *const parsed = parse_bytes(text->bytes, text->length);
		assert_null(parsed->root);
		assert_string_equal(text_string(&parsed->printed), text->printed);
		parsed_release(parsed);
	}
}

// A problem that another release of the parser words otherwise.
static void passes_on_what_it_does_not_know(void **state)
{
	struct diagnostics *const diagnostics = diagnostics_create();
	const struct source source = {"plan", "a\nb", 3};
	struct syntax_fault fault = {.problem = "found a cuttlefish", .context = "while parsing a flow node"};
	struct text printed = {0};

	(void)state;
	assert_non_null(diagnostics);
	fault.opened = position_start(&source);
	fault.found = fault.opened;
	position_seek(&fault.found, 2);
	syntax_diagnose(diagnostics, &fault);
	fault.context = NULL;
	syntax_diagnose(diagnostics, &fault);
	diagnostics_print(diagnostics, &printed, false);
	assert_string_equal(text_string(&printed),
	                    "plan:2:1: error: found a cuttlefish while parsing a flow node [yaml-syntax]\n"
	                    "  b\n"
	                    "  ^\n"
	                    "plan:2:1: error: found a cuttlefish [yaml-syntax]\n"
	                    "  b\n"
	                    "  ^\n");
	text_release(&printed);
	diagnostics_destroy(diagnostics);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(prints_what_is_wrong),
		cmocka_unit_test(passes_on_what_it_does_not_know),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
