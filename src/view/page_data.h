// What pages have beside their words, built into the program byte for byte: src/view/sheet.css and sheet.js. The Makefile makes them, in
// page_data.c under the build folder.
#ifndef SCANLATCH_VIEW_PAGE_DATA_H
#define SCANLATCH_VIEW_PAGE_DATA_H

#include <stddef.h>

// A NUL follows the bytes and is not counted in the length.
extern const unsigned char page_sheet_css[];
extern const size_t page_sheet_css_length;
extern const unsigned char page_sheet_js[];
extern const size_t page_sheet_js_length;

#endif
