#include "view/frame.h"

#include "layout/timeline.h"
#include "view/figures.h"

json_t *view_frame_json(const struct timeline *timeline)
{
	json_t *frame = json_object(), *rate_object = json_object();
	struct fraction rate;
	json_put(&frame, "lines", json_integer(timeline->line_count));
	json_put(&frame, "cells", json_integer(timeline->cell_count));
	json_put(&frame, "ticks", json_ticks(timeline->tick_count));
	if (!fraction_divide(timeline->plan->clock.master_hz, fraction_whole(timeline->tick_count), &rate)) {
		json_decref(rate_object);
		json_put(&frame, "rate", json_null());
		return frame;
	}
	json_put(&rate_object, "fraction", json_fraction(rate));
	json_put(&rate_object, "decimal", json_rounded(rate));
	json_put(&frame, "rate", rate_object);
	return frame;
}
