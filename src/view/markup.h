// Words of a plan in XML and HTML: nothing that a plan says can become markup.
#ifndef SCANLATCH_VIEW_MARKUP_H
#define SCANLATCH_VIEW_MARKUP_H

struct text;

// Puts words as character data: & < > " and ' become references, so that they are safe between tags and in quoted attributes; what
// no terminal would show as it stands (control characters, bytes that are no UTF-8, marks that turn the direction of writing) is put as
// messages have it. When memory is out, out->failed is set.
void text_put_markup(struct text *out, const char *words);

#endif
