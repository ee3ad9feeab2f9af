// The lines without burst, by the standard's numbers, and whether they are those of the standard.
#include "base/arena.h"
#include "measure/tally.h"

// Places at which fields begin, around the trace: -1 is the last of the lap before.
struct zeros {
	const int64_t *list;
	int64_t count;
	int64_t total;
};

static int64_t zero_at(const struct zeros *zeros, int64_t index)
{
	if (index < 0)
		return zeros->list[zeros->count + index] - zeros->total;
	return index < zeros->count ? zeros->list[index] : zeros->list[index - zeros->count] + zeros->total;
}

static int64_t wrapped(const struct zeros *zeros, int64_t index)
{
	return index < 0 ? index + zeros->count : index >= zeros->count ? index - zeros->count : index;
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

// The run of lines without burst that each field has; NULL in *runs where one has none, or more than one. False when memory is out.
static bool runs_of_fields(struct arena *arena, const struct measurement *result, const struct burstless ***runs)
{
	const struct burstless **list = arena_array(arena, result->field_count, sizeof *list);
	*runs = list;
	if (list == NULL)
		return false;
	for (uint32_t run = 0; run < result->burstless_count && *runs != NULL; run++) {
		if (list[result->burstless[run].field] != NULL)
			*runs = NULL;
		list[result->burstless[run].field] = &result->burstless[run];
	}
	for (uint32_t field = 0; field < result->field_count; field++)
		if (list[field] == NULL)
			*runs = NULL;
	return true;
}

// The lines without burst of a field of the standard's sequence; NULL if it has none.
static const struct burst_pause *pause_of(const struct standard *standard, size_t field)
{
	for (size_t index = 0; index < standard->pause_count; index++)
		if (standard->pauses[index].field == field + 1)
			return &standard->pauses[index];
	return NULL;
}

static size_t fields_of_sequence(const struct standard *standard)
{
	size_t fields = 0;
	for (size_t index = 0; index < standard->pause_count; index++)
		if (standard->pauses[index].field > fields)
			fields = standard->pauses[index].field;
	return fields;
}

// Whether the frame, as it repeats, has the standard's sequence from one of its fields on.
static bool sequence_matches(const struct measurement *result, const struct standard *standard, const struct burstless *const *runs,
                             size_t turn)
{
	const size_t sequence = fields_of_sequence(standard);
	for (size_t step = 0; step < sequence * result->field_count; step++) {
		const struct burst_pause *pause = pause_of(standard, (step + turn) % sequence);
		const struct burstless *run = runs[step % result->field_count];
		if (pause == NULL || run->first_line != pause->first_line || run->last_line != pause->last_line)
			return false;
	}
	return sequence > 0;
}

// A frame may begin with any field of the sequence. False when memory is out.
static bool judge_pauses(struct arena *arena, struct measurement *result, const struct standard *standard)
{
	const struct burstless **runs;
	if (!runs_of_fields(arena, result, &runs))
		return false;
	for (size_t turn = 0; runs != NULL && !result->pauses_kept && turn < fields_of_sequence(standard); turn++)
		result->pauses_kept = result->numbered && sequence_matches(result, standard, runs, turn);
	return true;
}

// The burstless lines of each field as an item of its own, and where the first of them is.
static void tally_fields(struct instrument *instrument, const struct measured_field *fields)
{
	for (uint32_t index = 0; index < instrument->raster.field_count; index++) {
		const uint32_t cell = instrument->raster.fields[index].cell;
		tally_add(instrument, ITEM_LINES_WITHOUT_BURST, 4 * fields[index].burstless_lines * instrument->raster.line_ticks, cell, cell);
	}
}

bool measure_burstless(struct instrument *instrument, struct measurement *result)
{
	const struct raster *raster = &instrument->raster;
	struct measured_field *fields = arena_array(instrument->arena, raster->field_count, sizeof *fields);
	struct burstless *list = arena_array(instrument->arena, raster->line_count, sizeof *list);
	struct numbering numbering;
	if (fields == NULL || list == NULL || !numbering_start(instrument, &numbering))
		return false;
	for (uint32_t index = 0; index < raster->field_count; index++)
		fields[index].at_half = raster->fields[index].at_half;
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
	result->burstless = list;
	tally_fields(instrument, fields);
	return judge_pauses(instrument->arena, result, instrument->standard);
}
