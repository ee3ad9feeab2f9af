#include "view/markup.h"

#include <string.h>

#include "base/excerpt.h"
#include "base/text.h"

static const char *reference_of(char byte)
{
	switch (byte) {
	case '&': return "&amp;";
	case '<': return "&lt;";
	case '>': return "&gt;";
	case '"': return "&quot;";
	case '\'': return "&#39;";
	default: return NULL;
	}
}

void text_put_markup(struct text *out, const char *words)
{
	struct text shown = {0};
	excerpt_put_printable(words, strlen(words), &shown);
	const char *bytes = text_string(&shown);
	for (size_t index = 0; index < shown.length; index++) {
		const char *reference = reference_of(bytes[index]);
		if (reference != NULL)
			text_put(out, reference);
		else
			text_put_bytes(out, &bytes[index], 1);
	}
	out->failed = out->failed || shown.failed;
	text_release(&shown);
}
