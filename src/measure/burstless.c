// The lines without burst, by the standard's numbers, and whether they are those of the standard.
#include <string.h>

#include "base/arena.h"
#include "measure/tally.h"

// Places at which fields begin, around the trace: -1 is the last of the lap before, and so on in both directions.
struct zeros {
	const int64_t *list;
	int64_t count;
	int64_t total;
};

static int64_t wrapped(const struct zeros *zeros, int64_t index)
{
	const int64_t rest = index % zeros->count;
	return rest < 0 ? rest + zeros->count : rest;
}

static int64_t zero_at(const struct zeros *zeros, int64_t index)
{
	const int64_t field = wrapped(zeros, index);
	return zeros->list[field] + (index - field) / zeros->count * zeros->total;
}

struct numbering {
	int64_t line;                  // a line in places
	struct zeros fields;           // all of them
	struct zeros bases;            // those that begin at a line: from there lines are counted
	int64_t nearest, base;         // of the line at hand, in those lists
	unsigned first_number;         // the standard's, of the line at which the first field begins; 0: lines have no numbers
};

static bool numbering_start(const struct instrument *instrument, struct numbering *numbering)
{
	const struct raster *raster = &instrument->raster;
	int64_t *fields = arena_array(instrument->arena, raster->field_count, sizeof *fields);
	int64_t *bases = arena_array(instrument->arena, raster->field_count, sizeof *bases);
	if (fields == NULL || bases == NULL)
		return false;
	uint32_t base_count = 0;
	for (uint32_t index = 0; index < raster->field_count; index++) {
		fields[index] = raster->fields[index].zero;
		if (!raster->fields[index].at_half)
			bases[base_count++] = fields[index];
	}
	*numbering = (struct numbering){2 * raster->line_ticks, {fields, raster->field_count, raster->place_total},
	                                {bases, base_count, raster->place_total}, -1, -1, instrument->standard->vertical_sync_line};
	if (base_count == 0)
		numbering->first_number = 0;
	return true;
}

// Comes to a line, later than all before.
static void numbering_next(struct numbering *numbering, int64_t place)
{
	const int64_t middle = 2 * place + numbering->line;
	while (zero_at(&numbering->fields, numbering->nearest) + zero_at(&numbering->fields, numbering->nearest + 1) <= middle)
		numbering->nearest++;
	while (numbering->first_number > 0 && zero_at(&numbering->bases, numbering->base + 1) * 4 <= place * 4 + numbering->line)
		numbering->base++;
}

static int64_t number_of(const struct numbering *numbering, int64_t place)
{
	if (numbering->first_number == 0)
		return 0;
	const int64_t line = numbering->line, zero = zero_at(&numbering->bases, numbering->base);
	const int64_t lines = (zero_at(&numbering->bases, numbering->base + 1) - zero + line / 2) / line;
	const int64_t passed = (place - zero + line / 4) / line;
	return (passed + numbering->first_number - 1) % (lines < 1 ? 1 : lines) + 1;
}

static void put_burstless(struct measurement *result, struct burstless *list, uint32_t field, int64_t number, bool joins)
{
	struct burstless *last = result->burstless_count > 0 ? &list[result->burstless_count - 1] : NULL;
	if (joins && last != NULL && last->field == field) {
		last->last_line = number;
		return;
	}
	list[result->burstless_count++] = (struct burstless){field, number, number};
}

// A run that goes around the trace's end is one.
static void join_ends(struct measurement *result, struct burstless *list, bool joins)
{
	const uint32_t last = result->burstless_count - 1;
	if (!joins || result->burstless_count < 2 || list[0].field != list[last].field)
		return;
	list[0].first_line = list[last].first_line;
	result->burstless_count--;
}

static unsigned pause_fields(const struct standard *standard)
{
	unsigned fields = 0;
	for (size_t index = 0; index < standard->pause_count; index++)
		if (standard->pauses[index].field > fields)
			fields = standard->pauses[index].field;
	return fields;
}

static size_t pauses_of(const struct standard *standard, uint64_t field)
{
	size_t count = 0;
	for (size_t index = 0; index < standard->pause_count; index++)
		count += standard->pauses[index].field == field;
	return count;
}

static bool is_pause(const struct standard *standard, uint64_t field, const struct burstless *run)
{
	for (size_t index = 0; index < standard->pause_count; index++) {
		const struct burst_pause *pause = &standard->pauses[index];
		if (pause->field == field && pause->first_line == run->first_line && pause->last_line == run->last_line)
			return true;
	}
	return false;
}

// Whether the frame, as it repeats, has the standard's sequence if it begins with its field turn + 1: every run is a pause of its field,
// and there are as many runs as pauses, in each lap until both come round. Runs differ, and so do pauses.
static bool runs_match(const struct measurement *result, const struct standard *standard, uint64_t turn)
{
	const unsigned sequence = pause_fields(standard);
	bool match = true;
	for (uint64_t lap = 0; lap < sequence && match; lap++) {
		const uint64_t first = turn + lap * result->field_count;
		size_t wanted = 0;
		for (uint32_t field = 0; field < result->field_count; field++)
			wanted += pauses_of(standard, (first + field) % sequence + 1);
		match = wanted == result->burstless_count;
		for (uint32_t run = 0; run < result->burstless_count && match; run++)
			match = is_pause(standard, (first + result->burstless[run].field) % sequence + 1, &result->burstless[run]);
	}
	return match;
}

// A frame may begin with any field of the standard's sequence.
static bool pauses_match(const struct measurement *result, const struct standard *standard)
{
	for (uint32_t turn = 0; turn < pause_fields(standard); turn++)
		if (runs_match(result, standard, turn))
			return true;
	return false;
}

// The burstless lines of each field as an item of its own, and where the first of them is.
static void tally_fields(struct instrument *instrument, const struct measured_field *fields)
{
	for (uint32_t index = 0; index < instrument->raster.field_count; index++) {
		const uint32_t cell = instrument->raster.fields[index].cell;
		tally_add(instrument, ITEM_LINES_WITHOUT_BURST, 4 * fields[index].burstless_lines * instrument->raster.line_ticks, cell, cell);
	}
}

// The runs, with no more room than they need. NULL when memory is out.
static const struct burstless *kept_runs(const struct instrument *instrument, const struct burstless *list, uint32_t count)
{
	struct burstless *kept = arena_array(instrument->results, count, sizeof *kept);
	if (kept != NULL && count > 0)
		memcpy(kept, list, count * sizeof *kept);
	return kept;
}

bool measure_burstless(struct instrument *instrument, struct measurement *result)
{
	const struct raster *raster = &instrument->raster;
	struct measured_field *fields = arena_array(instrument->results, raster->field_count, sizeof *fields);
	struct burstless *list = arena_array(instrument->arena, raster->line_count, sizeof *list);
	struct numbering numbering;
	if (fields == NULL || list == NULL || !numbering_start(instrument, &numbering))
		return false;
	for (uint32_t index = 0; index < raster->field_count; index++) {
		fields[index].at_half = raster->fields[index].at_half;
		fields[index].cell = raster->fields[index].cell;
	}
	bool joins = false;
	for (uint32_t index = 0; raster->field_count > 0 && index < raster->line_count; index++) {
		const int64_t place = raster->lines[index].place;
		numbering_next(&numbering, place);
		const uint32_t field = (uint32_t)wrapped(&numbering.fields, numbering.nearest);
		if (!instrument->views[index].has_burst) {
			put_burstless(result, list, field, number_of(&numbering, place), joins);
			fields[field].burstless_lines++;
		}
		joins = !instrument->views[index].has_burst;
	}
	join_ends(result, list, joins && raster->line_count > 0 && !instrument->views[0].has_burst);
	result->fields = fields;
	result->field_count = raster->field_count;
	result->numbered = numbering.first_number > 0;
	result->burstless = kept_runs(instrument, list, result->burstless_count);
	if (result->burstless == NULL)
		return false;
	result->pauses_kept = result->numbered && pauses_match(result, instrument->standard);
	tally_fields(instrument, fields);
	return true;
}
