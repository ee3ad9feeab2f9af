#include <string.h>

#include "base/text.h"
#include "view/figures.h"
#include "view/lift.h"

const char *view_lift_first(const struct lift *lift)
{
	static const char *const words[][2] = {
		[FIRST_FREE] = {"arbitrary, as there is no vertical sync", "anywhere"},
		[FIRST_COUNTED] = {"where the counter is 0; there is no vertical sync", "where the counter is 0, as in every plan, and not after vertical sync"},
		[FIRST_NUMBERED] = {"line 0 of the frame stage; there is no vertical sync",
		                    "line 0 of the frame stage, as in every plan, and not after vertical sync"},
		[FIRST_HOME] = {"where spare rows lead; there is no vertical sync",
		                "where spare rows lead, so that they keep their bytes, and not after vertical sync"},
	};
	return lift->first == FIRST_AFTER_SYNC ? NULL : words[lift->first][lift->vertical_sync];
}

static void put_loop(struct text *out, const struct lift *lift)
{
	struct fraction seconds;
	text_put(out, "loop: ");
	text_put_count(out, lift->line_count, "line", "lines");
	text_put(out, ", ");
	text_put_count(out, lift->cell_count, "cell", "cells");
	text_put(out, ", ");
	text_put_count(out, (uint64_t)lift->tick_count, "tick", "ticks");
	if (seconds_of_ticks(&lift->plan->clock, lift->tick_count, &seconds)) {
		text_put(out, ", ");
		text_put_time(out, seconds);
	}
	text_put(out, "; power-up in state ");
	text_put_hex(out, lift->power_up_state, lift->state_bits);
	text_put(out, lift->lead_in_cells == 0 ? " is in it\n" : " enters it after ");
	if (lift->lead_in_cells > 0) {
		text_put_count(out, lift->lead_in_cells, "cell", "cells");
		text_put(out, "\n");
	}
	if (lift->loop_count > 0)
		text_printf(out, "other loops: %llu, in which %llu states end\n", (unsigned long long)lift->loop_count,
		            (unsigned long long)lift->lost_states);
}

static size_t longest_name(const struct lift_type *type)
{
	size_t longest = strlen("region");
	for (size_t region = 0; region < type->region_count; region++)
		if (strlen(type->regions[region].name) > longest)
			longest = strlen(type->regions[region].name);
	return longest;
}

static void put_region(struct text *out, const struct lift *lift, const struct lift_region *region, size_t width)
{
	text_printf(out, "%-*s  %5u  %5u ", (int)width, region->name, (unsigned)region->first_cell, (unsigned)region->cells);
	for (size_t signal = 0; signal < lift->plan->signal_count; signal++)
		if ((region->asserted >> signal & 1) != 0)
			text_printf(out, " %s", lift->plan->signals[signal].name);
	if (region->stretched > 0)
		text_printf(out, " (%u stretched)", (unsigned)region->stretched);
	for (size_t hold = 0; hold < region->hold_count; hold++)
		text_printf(out, "%s%s = %s", hold == 0 ? "  holds " : ", ", region->holds[hold].field, region->holds[hold].expression);
	text_put(out, "\n");
}

static void put_type(struct text *out, const struct lift *lift, const struct lift_type *type)
{
	const size_t width = longest_name(type);
	text_printf(out, "\nline \"%s\": ", type->name);
	text_put_count(out, type->cells, "cell, ", "cells, ");
	text_put_count(out, (uint64_t)type->ticks, "tick; ", "ticks; ");
	text_put_count(out, type->lines, "line of the loop\n", "lines of the loop\n");
	text_printf(out, "%-*s   cell  cells  asserted\n", (int)width, "region");
	for (size_t region = 0; region < type->region_count; region++)
		put_region(out, lift, &type->regions[region], width);
}

void view_lift_text(struct text *out, const struct lift *lift)
{
	text_printf(out, "%s: a plan lifted out of its images%s\n", lift->plan->name, lift->options.near ? ", states pinned" : "");
	put_loop(out, lift);
	text_put(out, "frame:");
	for (size_t block = 0; block < lift->block_count; block++)
		text_printf(out, "%s %u %s", block > 0 ? "," : "", (unsigned)lift->blocks[block].repeat,
		            lift->types[lift->blocks[block].type].name);
	if (lift->copies > 1)
		text_printf(out, "; %u laps of that", (unsigned)lift->copies);
	text_put(out, "\n");
	if (view_lift_first(lift) != NULL)
		text_printf(out, "start of the frame: %s\n", view_lift_first(lift));
	for (size_t type = 0; type < lift->type_count; type++)
		put_type(out, lift, &lift->types[type]);
}
