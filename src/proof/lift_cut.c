#include <string.h>

#include "base/arena.h"
#include "proof/lift_work.h"

static bool cut_asserted(const struct lifting *lifting, uint32_t cell)
{
	return (lifting->lift->asserted[cell] >> lifting->cut_signal & 1) != 0;
}

// Whether a line ends after a cell.
static bool ends_after(const struct lifting *lifting, uint32_t cell)
{
	const uint32_t next = cell + 1 == lifting->lift->cell_count ? 0 : cell + 1;
	if (lifting->ends != NULL)
		return lifting->ends[cell];
	return !cut_asserted(lifting, cell) && cut_asserted(lifting, next);
}

// Turns the loop so that a cell becomes cell 0.
static bool turn_loop(struct lifting *lifting, uint32_t first)
{
	struct lift *lift = lifting->lift;
	const uint32_t count = lift->cell_count, rest = count - first;
	uint32_t *states = arena_array(lift->arena, count, sizeof *states);
	uint64_t *asserted = arena_array(lift->arena, count, sizeof *asserted);
	uint8_t *ends = arena_alloc(lifting->arena, count);
	if (states == NULL || asserted == NULL || ends == NULL)
		return lift_memory(lifting);
	memcpy(states, lift->states + first, rest * sizeof *states);
	memcpy(states + rest, lift->states, first * sizeof *states);
	memcpy(asserted, lift->asserted + first, rest * sizeof *asserted);
	memcpy(asserted + rest, lift->asserted, first * sizeof *asserted);
	if (lifting->ends != NULL) {
		memcpy(ends, lifting->ends + first, rest);
		memcpy(ends + rest, lifting->ends, first);
		lifting->ends = ends;
	}
	lift->states = states;
	lift->asserted = asserted;
	return true;
}

// Where the first line begins that begins at or after a cell; NO_INDEX if none does anywhere.
static uint32_t next_line(const struct lifting *lifting, uint32_t cell)
{
	const uint32_t count = lifting->lift->cell_count;
	for (uint32_t step = 0; step < count; step++) {
		if (ends_after(lifting, cell == 0 ? count - 1 : cell - 1))
			return cell;
		cell = cell + 1 == count ? 0 : cell + 1;
	}
	return NO_INDEX;
}

static uint32_t kind_of(const struct lifting *lifting, uint32_t state)
{
	const uint32_t address = machine_row_address(lifting->machine, STAGE_LINE, state);
	return lifting->wiring.form == FORM_LOOP ? 0 : address >> lifting->wiring.line.state_bits;
}

// Lists the lines of a loop whose cell 0 begins one, or lies as far before a line's cut as every line is to begin.
static bool list_lines(struct lifting *lifting, uint32_t ahead)
{
	struct lift *lift = lifting->lift;
	const uint32_t count = lift->cell_count;
	uint32_t lines = 0, first = 0;
	for (uint32_t cell = 0; cell < count; cell++)
		lines += ends_after(lifting, cell);
	lift->line_count = lines;
	lifting->lines = arena_array(lifting->arena, lines, sizeof *lifting->lines);
	if (lifting->lines == NULL)
		return lift_memory(lifting);
	for (uint32_t line = 0, cell = 0; line < lines; line++) {
		uint32_t cut = (uint32_t)(((uint64_t)cell + ahead) % count);
		do {
			cell++;
			cut = cut + 1 == count ? 0 : cut + 1;
		} while (!ends_after(lifting, cut == 0 ? count - 1 : cut - 1));
		lifting->lines[line] = (struct lifted_line){.first_cell = first, .cells = cell - first};
		lifting->lines[line].kind = kind_of(lifting, lift->states[first]);
		first = cell;
	}
	return true;
}

int64_t lifted_line_ticks(const struct lifting *lifting, const struct lifted_line *line)
{
	int64_t ticks = 0;
	for (uint32_t cell = 0; cell < line->cells; cell++)
		ticks += lifted_cell_ticks(lifting, lifting->lift->asserted[line->first_cell + cell]);
	return ticks;
}

// The length that lines have for most of the time. Time by length is summed in an array as long as the longest line.
static bool find_normal(struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	uint64_t *sums = arena_array(lifting->arena, (size_t)lift->cell_count + 1, sizeof *sums);
	if (sums == NULL)
		return lift_memory(lifting);
	for (uint32_t line = 0; line < lift->line_count; line++)
		sums[lifting->lines[line].cells] += lifting->lines[line].cells;
	lifting->normal_cells = lifting->lines[0].cells;
	for (uint32_t cells = 1; cells <= lift->cell_count; cells++) {
		lifting->length_count += sums[cells] > 0;
		if (sums[cells] > sums[lifting->normal_cells])
			lifting->normal_cells = cells;
	}
	for (uint32_t line = 0; line < lift->line_count && lifting->normal_ticks == 0; line++)
		if (lifting->lines[line].cells == lifting->normal_cells)
			lifting->normal_ticks = lifted_line_ticks(lifting, &lifting->lines[line]);
	return true;
}

bool lifted_mostly_sync(const struct lifting *lifting, const struct lifted_line *line)
{
	uint32_t asserted = 0;
	for (uint32_t cell = 0; cell < line->cells; cell++)
		asserted += cut_asserted(lifting, line->first_cell + cell);
	return asserted > line->cells / 2;
}

// How many normal lines a line stands for: vertical sync without serrations runs through several.
static uint32_t normal_lines(const struct lifting *lifting, const struct lifted_line *line)
{
	if (lifting->cut_signal < 0 || line->cells <= lifting->normal_cells || line->cells % lifting->normal_cells != 0 ||
	    !lifted_mostly_sync(lifting, line))
		return 1;
	return line->cells / lifting->normal_cells;
}

static bool split_long_lines(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	uint32_t lines = 0;
	for (uint32_t line = 0; line < lift->line_count; line++)
		lines += normal_lines(lifting, &lifting->lines[line]);
	if (lines == lift->line_count)
		return true;
	struct lifted_line *split = arena_array(lifting->arena, lines, sizeof *split), *next = split;
	if (split == NULL)
		return lift_memory(lifting);
	for (uint32_t line = 0; line < lift->line_count; line++) {
		const struct lifted_line *whole = &lifting->lines[line];
		const uint32_t parts = normal_lines(lifting, whole), cells = whole->cells / parts;
		for (uint32_t part = 0; part < parts; part++, next++)
			*next = (struct lifted_line){.first_cell = whole->first_cell + part * cells, .cells = cells};
	}
	lifting->lines = split;
	lift->line_count = lines;
	return true;
}

// Whether a line is of vertical sync: by the signal of that role, or by sync that takes more than half of it.
static bool is_vertical(const struct lifting *lifting, const struct lifted_line *line)
{
	const int *roles = lifting->plan->role_signal;
	const int signal = roles[ROLE_VERTICAL_SYNC] >= 0 ? roles[ROLE_VERTICAL_SYNC] : roles[ROLE_COMPOSITE_SYNC];
	uint32_t asserted = 0;
	for (uint32_t cell = 0; signal >= 0 && cell < line->cells; cell++)
		asserted += (lifting->lift->asserted[line->first_cell + cell] >> signal & 1) != 0;
	return asserted > line->cells / 2;
}

// The line after vertical sync: of several, the one with the most lines to the next vertical sync. Without vertical sync, line 0.
static uint32_t first_after_sync(const struct lifting *lifting)
{
	const uint32_t count = lifting->lift->line_count;
	uint32_t best = 0, best_run = 0, start = NO_INDEX, run = 0;
	bool before = is_vertical(lifting, &lifting->lines[count - 1]);
	// Twice around, so that the run that begins last is measured too.
	for (uint32_t step = 0; step < 2 * count; step++) {
		const uint32_t line = step % count;
		const bool vertical = is_vertical(lifting, &lifting->lines[line]);
		if (before && !vertical) {
			start = line;
			run = 0;
		}
		run += !vertical;
		if (!vertical && start != NO_INDEX && run > best_run && run <= count) {
			best = start;
			best_run = run;
		}
		before = vertical;
	}
	return best;
}

// Where spare rows go home: the first cell of the frame as it was planned. NO_INDEX if there are no spare rows; those that do not
// agree are outvoted.
static bool find_home(struct lifting *lifting, uint32_t *home)
{
	const struct lift *lift = lifting->lift;
	const uint32_t states = (uint32_t)1 << lifting->at.bits;
	uint32_t *cell_of = arena_array(lifting->arena, states, sizeof *cell_of);
	uint32_t *votes = arena_array(lifting->arena, lift->cell_count, sizeof *votes);
	if (cell_of == NULL || votes == NULL)
		return lift_memory(lifting);
	for (uint32_t cell = 0; cell < lift->cell_count; cell++)
		cell_of[lift->states[cell]] = cell + 1;
	for (uint32_t state = 0; state < states; state++) {
		const uint32_t cell = cell_of[state] == 0 ? cell_of[machine_next(lifting->machine, state)] : 0;
		if (cell > 0)
			votes[cell - 1]++;
	}
	uint32_t most = 0;
	for (uint32_t cell = 1; cell < lift->cell_count; cell++)
		if (votes[cell] > votes[most])
			most = cell;
	*home = votes[most] > 0 ? most : NO_INDEX;
	return true;
}

// The frame of a counter begins at 0, that of a plan which pins states where spare rows lead.
static bool fix_home(struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	lifting->home_cell = NO_INDEX;
	if (lifting->wiring.form == FORM_LINE_FRAME)
		return true;
	if (lifting->wiring.line.advance == ADVANCE_TABLE)
		return !lift->options.near || find_home(lifting, &lifting->home_cell);
	for (uint32_t cell = 0; cell < lift->cell_count; cell++)
		if (lift->states[cell] == 0)
			lifting->home_cell = cell;
	return true;
}

// The line in which the frame stage's state is 0, if it goes up by one with each; NO_INDEX otherwise.
static uint32_t numbered_first(const struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	uint32_t first = NO_INDEX;
	for (uint32_t line = 0; line < lift->line_count; line++)
		if (lift->states[lifting->lines[line].first_cell] >> lifting->at.frame == 0)
			first = line;
	for (uint32_t step = 0; first != NO_INDEX && step < lift->line_count; step++) {
		const uint32_t line = (first + step) % lift->line_count;
		if (lift->states[lifting->lines[line].first_cell] >> lifting->at.frame != step)
			return NO_INDEX;
	}
	return first;
}

// The line before which what lines show changes, from a line on; that line where it never does. Blocks are not torn apart then.
static uint32_t next_block(const struct lifting *lifting, uint32_t line)
{
	const uint32_t count = lifting->lift->line_count;
	const uint64_t *asserted = lifting->lift->asserted;
	for (uint32_t step = 0; step < count; step++) {
		const struct lifted_line *here = &lifting->lines[(line + step) % count];
		const struct lifted_line *before = &lifting->lines[(line + step + count - 1) % count];
		if (here->cells != before->cells ||
		    memcmp(asserted + here->first_cell, asserted + before->first_cell, here->cells * sizeof *asserted) != 0)
			return (line + step) % count;
	}
	return line;
}

static uint32_t choose_first(struct lifting *lifting)
{
	if (lifting->home_cell != NO_INDEX)
		return 0;
	if (lifting->ends != NULL) {
		const uint32_t first = numbered_first(lifting);
		lifting->lift->renumbered = first == NO_INDEX;
		if (first != NO_INDEX)
			return first;
	}
	const uint32_t first = first_after_sync(lifting);
	const bool any_vertical = is_vertical(lifting, &lifting->lines[(first + lifting->lift->line_count - 1) % lifting->lift->line_count]);
	return any_vertical ? first : next_block(lifting, first);
}

// Says why the frame begins where it does, once its lines are in order.
static bool judge_first(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	const bool loop = lifting->ends == NULL, counted = lifting->wiring.line.advance == ADVANCE_COUNT;
	for (uint32_t line = 0; line < lift->line_count && !lift->vertical_sync; line++)
		lift->vertical_sync = is_vertical(lifting, &lifting->lines[line]);
	if (is_vertical(lifting, &lifting->lines[lift->line_count - 1]) && !is_vertical(lifting, &lifting->lines[0]))
		lift->first = FIRST_AFTER_SYNC;
	else if (loop && lifting->home_cell != NO_INDEX)
		lift->first = counted ? FIRST_COUNTED : FIRST_HOME;
	else
		lift->first = loop || lift->renumbered ? FIRST_FREE : FIRST_NUMBERED;
	return true;
}

// Turns the loop so that a line becomes the first.
static bool turn_to(struct lifting *lifting, uint32_t start)
{
	const uint32_t turned = lifting->lines[start].first_cell, lines = lifting->lift->line_count;
	struct lifted_line *order = arena_array(lifting->arena, lines, sizeof *order);
	if (start == 0)
		return true;
	if (order == NULL || !turn_loop(lifting, turned))
		return lift_memory(lifting);
	for (uint32_t line = 0; line < lines; line++) {
		order[line] = lifting->lines[(start + line) % lines];
		order[line].first_cell = (order[line].first_cell + lifting->lift->cell_count - turned) % lifting->lift->cell_count;
	}
	lifting->lines = order;
	return true;
}

// What the lines take to describe: line types, and blocks of the frame. False when memory is out.
static bool describe(struct lifting *lifting, uint64_t *length)
{
	const uint32_t lines = lifting->lift->line_count;
	if (!lift_place(lifting))
		return false;
	*length = lifting->content_count;
	for (uint32_t line = 0; line < lines; line++)
		*length += lifting->lines[line].content != lifting->lines[line == 0 ? lines - 1 : line - 1].content;
	return true;
}

// A line that begins where, modulo the normal line, most do.
static bool find_phase(struct lifting *lifting, uint32_t *line)
{
	const uint32_t normal = lifting->normal_cells;
	uint32_t *votes = arena_array(lifting->arena, normal, sizeof *votes);
	*line = 0;
	if (votes == NULL)
		return lift_memory(lifting);
	for (uint32_t index = 0; index < lifting->lift->line_count; index++)
		votes[lifting->lines[index].first_cell % normal]++;
	for (uint32_t index = 1; index < lifting->lift->line_count; index++)
		if (votes[lifting->lines[index].first_cell % normal] > votes[lifting->lines[*line].first_cell % normal])
			*line = index;
	return true;
}

// On some boards vertical sync begins elsewhere in a line than sync does. Then lines of equal length are the shorter description: they
// are taken if they save a quarter.
static bool try_equal_lines(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	const uint32_t normal = lifting->normal_cells, lines = lift->cell_count / normal;
	uint32_t first = 0;
	uint64_t cut_length, equal_length;
	if (lifting->ends != NULL || lift->cell_count % normal != 0)
		return true;
	if (lifting->home_cell == NO_INDEX && !find_phase(lifting, &first))
		return false;
	struct lifted_line *equal = arena_array(lifting->arena, lines, sizeof *equal);
	if (equal == NULL)
		return lift_memory(lifting);
	if (!turn_to(lifting, first) || !describe(lifting, &cut_length))
		return false;
	struct lifted_line *cut = lifting->lines;
	const uint32_t cut_lines = lift->line_count;
	for (uint32_t line = 0; line < lines; line++)
		equal[line] = (struct lifted_line){.first_cell = line * normal, .cells = normal};
	lifting->lines = equal;
	lift->line_count = lines;
	if (!describe(lifting, &equal_length))
		return false;
	if (equal_length * 4 <= cut_length * 3)
		return true;
	lifting->lines = cut;
	lift->line_count = cut_lines;
	return true;
}

bool lift_cut(struct lifting *lifting)
{
	uint32_t first = next_line(lifting, 0), ahead = 0;
	if (first == NO_INDEX)
		return lift_report_no_lines(lifting);
	if (!fix_home(lifting))
		return false;
	if (lifting->home_cell != NO_INDEX) {
		const uint32_t count = lifting->lift->cell_count, cut = next_line(lifting, lifting->home_cell);
		first = lifting->home_cell;
		ahead = (cut + count - first) % count;
	}
	return turn_loop(lifting, first) && list_lines(lifting, ahead) && find_normal(lifting) && split_long_lines(lifting) &&
	       lift_check_raster(lifting) && try_equal_lines(lifting) && turn_to(lifting, choose_first(lifting)) && judge_first(lifting);
}
