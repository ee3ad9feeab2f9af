// Pages in HTML that are XML too: tags put by hand, words escaped. What goes to a page as words is put into a text of its own first, and
// from there, escaped, between tags. When memory is out, out->failed is set.
#ifndef SCANLATCH_VIEW_PAGE_H
#define SCANLATCH_VIEW_PAGE_H

#include "view/columns.h"

struct text;

// Puts words escaped, and releases them. Of words with a line break what follows it is set small, on lines of its own.
void page_words(struct text *out, struct text *words);

// Puts <TAG ATTRIBUTES>words</TAG>; the words are a format's. `attributes` is markup that begins with a space, or "".
__attribute__((format(printf, 4, 5)))
void page_element(struct text *out, const char *tag, const char *attributes, const char *format, ...);
// The same with words that were made; releases them.
void page_element_of(struct text *out, const char *tag, const char *attributes, struct text *words);

struct page_table {
	const char *caption;   // NULL for none
	const char *name;      // class of the table
	struct columns columns; // the first column heads its row
	// Puts attributes of a row's tag, each after a space, by page_attribute; NULL for none.
	void (*put_attributes)(struct text *out, const void *context, size_t row);
};

void page_table(struct text *out, const struct page_table *table);

// Puts ` NAME="words"`, escaped; releases the words.
void page_attribute(struct text *out, const char *name, struct text *words);

#endif
