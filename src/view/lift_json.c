#include "base/text.h"
#include "view/figures.h"
#include "view/lift.h"

static json_t *hex_json(uint32_t value, unsigned bits)
{
	struct text text = {0};
	text_put_hex(&text, value, bits);
	return json_of_text(&text);
}

static json_t *images_json(const struct lift *lift, const struct lift_sources *sources)
{
	json_t *images = json_array();
	for (size_t chip = 0; chip < lift->plan->chip_count; chip++) {
		json_t *image = json_object();
		json_put(&image, "label", json_string(lift->plan->chips[chip].label));
		json_put(&image, "file", json_string(sources->files[chip]));
		json_put(&image, "crc32", json_sprintf("%08x", (unsigned)image_crc32(&sources->images[chip])));
		json_append(&images, image);
	}
	return images;
}

static json_t *loop_json(const struct lift *lift)
{
	json_t *loop = json_object();
	json_put(&loop, "state", hex_json(lift->states[0], lift->state_bits));
	json_put(&loop, "cells", json_integer(lift->cell_count));
	json_put(&loop, "ticks", json_ticks(lift->tick_count));
	json_put(&loop, "lines", json_integer(lift->line_count));
	json_put(&loop, "power_up_state", hex_json(lift->power_up_state, lift->state_bits));
	json_put(&loop, "lead_in_cells", json_integer(lift->lead_in_cells));
	return loop;
}

static json_t *other_loops_json(const struct lift *lift)
{
	json_t *loops = json_array();
	for (uint64_t index = 0; index < lift->loop_count && index < LIFT_LOOPS; index++) {
		json_t *loop = json_object();
		json_put(&loop, "state", hex_json(lift->loops[index].state, lift->state_bits));
		json_put(&loop, "cells", json_integer((json_int_t)lift->loops[index].cells));
		json_append(&loops, loop);
	}
	return loops;
}

static json_t *region_json(const struct lift *lift, const struct lift_region *region)
{
	json_t *object = json_object(), *asserted = json_array(), *holds = json_object();
	for (size_t signal = 0; signal < lift->plan->signal_count; signal++)
		if ((region->asserted >> signal & 1) != 0)
			json_append(&asserted, json_string(lift->plan->signals[signal].name));
	for (size_t hold = 0; hold < region->hold_count; hold++)
		json_put(&holds, region->holds[hold].field, json_string(region->holds[hold].expression));
	json_put(&object, "name", json_string(region->name));
	json_put(&object, "first_cell", json_integer(region->first_cell));
	json_put(&object, "cells", json_integer(region->cells));
	json_put(&object, "stretched_cells", json_integer(region->stretched));
	json_put(&object, "asserted", asserted);
	json_put(&object, "hold", holds);
	return object;
}

static json_t *lines_json(const struct lift *lift)
{
	json_t *lines = json_array();
	for (size_t index = 0; index < lift->type_count; index++) {
		const struct lift_type *type = &lift->types[index];
		json_t *line = json_object(), *regions = json_array();
		for (size_t region = 0; region < type->region_count; region++)
			json_append(&regions, region_json(lift, &type->regions[region]));
		json_put(&line, "name", json_string(type->name));
		json_put(&line, "cells", json_integer(type->cells));
		json_put(&line, "ticks", json_ticks(type->ticks));
		json_put(&line, "used", json_integer(type->lines));
		json_put(&line, "regions", regions);
		json_append(&lines, line);
	}
	return lines;
}

static json_t *frame_json(const struct lift *lift)
{
	json_t *frame = json_array();
	for (size_t index = 0; index < lift->block_count; index++) {
		json_t *block = json_object();
		json_put(&block, "repeat", json_integer(lift->blocks[index].repeat));
		json_put(&block, "line", json_string(lift->types[lift->blocks[index].type].name));
		json_append(&frame, block);
	}
	return frame;
}

json_t *view_lift_json(const struct lift *lift, const struct lift_sources *sources, const char *plan)
{
	json_t *object = json_object();
	json_put(&object, "name", json_string(lift->plan->name));
	json_put(&object, "board", json_string(sources->board));
	json_put(&object, "images", images_json(lift, sources));
	json_put(&object, "loop", loop_json(lift));
	json_put(&object, "laps", json_integer(lift->copies));
	json_put(&object, "other_loops", other_loops_json(lift));
	json_put(&object, "other_loop_count", json_integer((json_int_t)lift->loop_count));
	json_put(&object, "lost_states", json_integer((json_int_t)lift->lost_states));
	json_put(&object, "lines", lines_json(lift));
	json_put(&object, "frame", frame_json(lift));
	json_put(&object, "near", json_boolean(lift->options.near));
	json_put(&object, "plan", json_string(plan));
	return object;
}
