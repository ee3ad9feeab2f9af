// JSON Schema (draft 2020-12) of the reports that commands print with --json, and of the manifest. Data: src/view/reports/NAME.json, one
// for each report, and in src/view/reports/shared/ the definitions that reports share. They are put together when the program is built
// (tools/report-schema.awk): nothing is parsed here, which jansson (2.14) does badly where memory is out.
#ifndef SCANLATCH_VIEW_REPORTS_H
#define SCANLATCH_VIEW_REPORTS_H

#include <stddef.h>

struct text;

// A schema that is built in, with the definitions that it uses.
struct report_schema {
	const char *name; // of the report: the file's, without its ending
	const unsigned char *bytes;
	size_t length;
};

// By name; the last one has none.
extern const struct report_schema report_schemas[];

// How many reports there are. Cannot fail.
size_t report_count(void);

// Puts the schema of a report, an index below that. Failure is text's.
void view_report_schema(struct text *out, size_t report);

#endif
