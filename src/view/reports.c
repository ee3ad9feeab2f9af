#include "view/reports.h"

#include "base/text.h"

size_t report_count(void)
{
	size_t count = 0;
	while (report_schemas[count].name != NULL)
		count++;
	return count;
}

void view_report_schema(struct text *out, size_t report)
{
	text_put_bytes(out, (const char *)report_schemas[report].bytes, report_schemas[report].length);
}
