// What every sheet says: the usual cautions, and the terms of the trade that it has used.
#include <string.h>

#include "base/text.h"
#include "view/page.h"
#include "view/sheet_parts.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

static const char *const cautions[] = {
	"Picture tubes hold a lethal charge long after switch-off. They are work for trained hands.",
	"A monitor of fixed frequency can be damaged by sync outside its range. Check its rating before it is connected.",
	"Keep mains supplies enclosed, and follow local electrical codes.",
	"A modulator that reaches an antenna is a transmitter, and needs a licence in most places.",
	"Published limits and figures of parts are for reference. Licensed practice and the data sheet of the part in hand decide.",
};

void sheet_cautions(struct text *out)
{
	text_put(out, "<ul class=\"cautions\">\n");
	for (size_t index = 0; index < COUNT_OF(cautions); index++)
		page_element(out, "li", "", "%s", cautions[index]);
	text_put(out, "</ul>\n");
}

// A term and what betrays that a page uses it.
struct term {
	const char *word, *used, *meaning;
};

static const struct term terms[] = {
	{"active low", "active low", "asserted while the pin is low"},
	{"asserted", "asserted", "a signal is asserted while its pin has the active level, high or low as the plan says"},
	{"back porch", "back porch", "blanking between the end of sync and the picture; with colour, burst lies in it"},
	{"bank", "bank", "one of several contents of the same chips, chosen by jumpers on address pins"},
	{"blanking", "blanking", "the time in which the screen shows nothing, and its signal"},
	{"breezeway", "breezeway", "the part of the back porch before burst"},
	{"broad pulse", "broad", "one of the long sync pulses of vertical sync"},
	{"burst", "burst", "some cycles of subcarrier after sync, by which a receiver finds the phase of colour"},
	{"cell", "cell", "one step of the sequencer; a stretched cell is some ticks longer"},
	{"clear", "clear", "what sends a counter back to 0: synchronous, at the next clock edge, or asynchronous, at once"},
	{"CRC-32", "CRC-32", "a check sum of 32 bits that tells one file from another"},
	{"dot", "dot", "one element of the picture: a whole number of ticks"},
	{"duty", "duty", "the part of the time for which a pin is high"},
	{"equalising pulse", "equalising", "a narrow sync pulse, two a line, before and after vertical sync"},
	{"field of the state", "field ", "a group of state bits with a meaning of its own: an address, a code"},
	{"frame", "frame", "all lines until everything begins again"},
	{"front porch", "front porch", "blanking between the picture and sync"},
	{"grade", "grade", "which tolerance of a limit counts: studio, as published, or monitor, as receivers usually accept"},
	{"H, V", "H 0x", "the state of the line stage and that of the frame stage"},
	{"hold", "held", "state bits that a plan fixes in some cells, such as a video address"},
	{"IRE", "IRE", "a hundredth of the level from blanking to white; 140 of them are 1 volt with sync"},
	{"jumper", "jumper", "a wire or switch that ties a pin high or low"},
	{"kind", "kind", "the number of a line's type, by which the frame stage tells the line stage what to do"},
	{"latch", "latch", "a register that takes its inputs D to its outputs Q at a clock edge"},
	{"lead", "lead", "a signal that shows some cells early, since hardware behind it delays it"},
	{"look-up", "looked up", "an EEPROM gives the row at the address that the state is"},
	{"margin", "margin", "how far a measured value is from the nearer limit"},
	{"must, advice", "advice", "a must that fails makes the images wrong; advice that fails is for the builder to weigh"},
	{"phase", "phase", "where in its cycle the subcarrier is"},
	{"power-up", "power-up", "the state in which latches wake is any; from each the machine must come home to the frame"},
	{"ppm", "ppm", "parts in a million"},
	{"region", "region", "a run of cells of a line in which the same signals are asserted"},
	{"serration", "serration", "the gap between broad pulses"},
	{"stage", "stage", "an EEPROM group with its latch or counter"},
	{"state", "state", "the number that a stage's latch or counter holds"},
	{"step", "step", "the signal with which the line stage ends a line and lets the frame stage go on"},
	{"stretch", "stretch", "to make a cell longer, so that a line has the length that colour wants"},
	{"subcarrier", "subcarrier", "the wave that carries colour; burst is a sample of it"},
	{"sync", "sync", "the pulses that tell a screen where lines and fields begin"},
	{"tap", "tap", "a wire from a divider"},
	{"tick", "tick", "one period of the master clock"},
	{"upset", "upset", "a bit of the state that flips by a disturbance"},
};

void sheet_glossary(struct text *out, const char *page)
{
	bool used[COUNT_OF(terms)];
	for (size_t index = 0; index < COUNT_OF(terms); index++)
		used[index] = strstr(page, terms[index].used) != NULL;
	text_put(out, "<dl class=\"glossary\">\n"); // from here on `page` may be gone
	for (size_t index = 0; index < COUNT_OF(terms); index++) {
		if (!used[index])
			continue;
		text_put(out, "<div>");
		page_element(out, "dt", "", "%s", terms[index].word);
		page_element(out, "dd", "", "%s", terms[index].meaning);
		text_put(out, "</div>\n");
	}
	text_put(out, "</dl>\n");
}
