#include "catalogue/standards.h"

#include <string.h>

#define FREQUENCY(name, unit, measures) {name, measures, false, DIMENSION_FREQUENCY, unit}
#define TIME(name, measures) {name, measures, false, DIMENSION_TIME, "us"}
#define LINES(name, measures) {name, measures, false, DIMENSION_LINES, "lines"}
#define CYCLES(name, measures) {name, measures, false, DIMENSION_CYCLES, "cycles"}
#define PULSES(name, measures) {name, measures, false, DIMENSION_PULSES, "pulses"}
#define POLARITY(name, measures) {name, measures, true, DIMENSION_PULSES, ""}

static const struct limit_item_facts facts[ITEM_COUNT] = {
	[ITEM_LINE_RATE] = FREQUENCY("line rate", "Hz", "normal lines a second, from 0H to 0H"),
	[ITEM_FIELD_RATE] = FREQUENCY("field rate", "Hz", "fields a second, from 0V to 0V"),
	[ITEM_FRAME_RATE] = FREQUENCY("frame rate", "Hz", "frames a second"),
	[ITEM_LINES_PER_FIELD] = LINES("lines per field", "normal lines from 0V to 0V"),
	[ITEM_PIXEL_CLOCK] = FREQUENCY("pixel clock", "MHz", "dots, or samples, a second"),
	[ITEM_SUBCARRIER] = FREQUENCY("subcarrier", "MHz", "frequency of the colour subcarrier"),
	[ITEM_CYCLES_PER_LINE] = CYCLES("subcarrier cycles per line", "cycles from 0H to 0H of a normal line"),
	[ITEM_FRONT_PORCH] = TIME("front porch", "from the start of blanking to 0H"),
	[ITEM_SYNC_WIDTH] = TIME("horizontal sync width", "sync pulse of a normal line"),
	[ITEM_BREEZEWAY] = TIME("breezeway", "from the end of sync to the start of burst"),
	[ITEM_BURST_START] = TIME("burst start", "from 0H to the start of burst"),
	[ITEM_BURST_START_CYCLES] = CYCLES("burst start in cycles", "subcarrier cycles from 0H to the start of burst"),
	[ITEM_BURST_LENGTH] = TIME("burst length", "from the start of burst to its end"),
	[ITEM_BURST_LENGTH_CYCLES] = CYCLES("burst length in cycles", "subcarrier cycles of a burst"),
	[ITEM_BURST_TO_PICTURE] = TIME("burst end to picture", "from the end of burst to the end of blanking"),
	[ITEM_BACK_PORCH] = TIME("back porch", "from the end of sync to the end of blanking"),
	[ITEM_HORIZONTAL_BLANKING] = TIME("horizontal blanking", "blanking of a line with picture"),
	[ITEM_PICTURE_START] = TIME("picture start", "from 0H to the end of blanking"),
	[ITEM_PICTURE_WIDTH] = TIME("picture width", "from the first end of blanking in a line to its last start"),
	[ITEM_HORIZONTAL_CENTRE] = TIME("horizontal centre", "from 0H to the middle of the picture"),
	[ITEM_PRE_EQUALISING_PULSES] = PULSES("pre-equalising pulses", "equalising pulses before 0V"),
	[ITEM_PRE_EQUALISING_LINES] = LINES("pre-equalising lines", "from the first equalising pulse to 0V"),
	[ITEM_BROAD_PULSES] = PULSES("broad pulses", "broad pulses of a field"),
	[ITEM_VERTICAL_SYNC] =
		LINES("vertical sync length", "from 0V to the first pulse after that is not broad; a sync of its own: its width"),
	[ITEM_POST_EQUALISING_PULSES] = PULSES("post-equalising pulses", "equalising pulses after the broad ones"),
	[ITEM_POST_EQUALISING_LINES] =
		LINES("post-equalising lines", "from the first equalising pulse after the broad ones to half a line after the last"),
	[ITEM_EQUALISING_WIDTH] = TIME("equalising pulse width", "each equalising pulse"),
	[ITEM_BROAD_WIDTH] = TIME("broad pulse width", "each broad pulse"),
	[ITEM_SERRATION_WIDTH] = TIME("serration width", "from the end of a broad pulse to the next pulse"),
	[ITEM_VERTICAL_FRONT_PORCH] = LINES("vertical front porch", "lines from the last with picture to 0V"),
	[ITEM_VERTICAL_BACK_PORCH] = LINES("vertical back porch", "lines from the end of vertical sync to the first with picture"),
	[ITEM_VERTICAL_BLANKING] = LINES("vertical blanking", "lines from the last with picture of a field to the first of the next, half lines counted from 0H"),
	[ITEM_PICTURE_TOP] = LINES("picture top", "lines from 0V to the first with picture, half lines counted from 0H"),
	[ITEM_PICTURE_HEIGHT] = LINES("picture height", "lines from the first with picture of a field to the last, half lines counted from 0H"),
	[ITEM_VERTICAL_CENTRE] = LINES("vertical centre", "lines from 0V to the middle of the picture"),
	[ITEM_LINES_WITHOUT_BURST] = LINES("lines without burst", "whole lines without burst that are nearer to the 0V of a field than to any other"),
	[ITEM_HORIZONTAL_POLARITY] = POLARITY("horizontal sync polarity", "level of the horizontal sync pulse"),
	[ITEM_VERTICAL_POLARITY] = POLARITY("vertical sync polarity", "level of the vertical sync pulse"),
};

static const char *const grade_names[GRADE_COUNT] = {[GRADE_STUDIO] = "studio", [GRADE_MONITOR] = "monitor"};

const struct limit_item_facts *limit_item_facts(enum limit_item item)
{
	return &facts[item];
}

bool limit_item_find(const char *name, enum limit_item *item)
{
	for (size_t index = 0; index < ITEM_COUNT; index++)
		if (strcmp(facts[index].name, name) == 0) {
			*item = (enum limit_item)index;
			return true;
		}
	return false;
}

const char *limit_grade_name(enum limit_grade grade)
{
	return grade_names[grade];
}
