// JSON Schema (draft 2020-12) of the reports that commands print with --json, and of the manifest. Data: src/view/reports/NAME.json, one
// for each report, and in src/view/reports/shared/ the definitions that reports share; all built in.
#ifndef SCANLATCH_VIEW_REPORTS_H
#define SCANLATCH_VIEW_REPORTS_H

#include <jansson.h>
#include <stdbool.h>
#include <stddef.h>

// A file that is built in.
struct report_file {
	const char *name; // without its ending
	bool shared;      // definitions, and no report
	const unsigned char *bytes;
	size_t length;
};

// Reports by name; the last file has no name.
extern const struct report_file report_files[];

// How many reports there are, and the name of one (an index below that). Cannot fail.
size_t report_count(void);
const char *report_name(size_t report);

// The schema of a report, with the definitions that it uses. A new reference, owned by the caller; NULL when memory is out.
json_t *view_report_schema(size_t report);

#endif
