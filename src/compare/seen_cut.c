// Cuts the plan's frame and the images' at the same place in a line: as far before the leading edge of sync as the plan's lines begin.
#include "base/arena.h"
#include "compare/seen_work.h"

#define MOST_LAPS 8u // of the images' loop in a frame
#define MOST_SHIFT 16u // cells that a frame's first cell is looked for in, either way
#define MOST_SHIFTED_CELLS 1048576u // of a frame in which it is
#define NEAR_SHARE 16u // of a line: so far from where the plan has it may sync be for the frame's first cell to be believed

static bool rises(const uint64_t *asserted, uint32_t cells, uint32_t cell, uint64_t cut)
{
	return (asserted[cell] & cut) != 0 && (asserted[cell == 0 ? cells - 1 : cell - 1] & cut) == 0;
}

// Cells from one to the next at which sync rises, going around; `cells` if it never does.
static uint32_t cells_to_rise(const uint64_t *asserted, uint32_t cells, uint32_t cell, uint64_t cut)
{
	uint32_t ahead = 0;
	while (ahead < cells && !rises(asserted, cells, cell, cut)) {
		ahead++;
		cell = cell + 1 == cells ? 0 : cell + 1;
	}
	return ahead;
}

// How far before sync most of the plan's lines begin. Each cell is looked at by one line or two. False when memory is out.
static bool find_ahead(struct seeing *seeing, uint32_t *ahead)
{
	const struct timeline *planned = seeing->planned;
	uint32_t *votes = arena_array(seeing->arena, (size_t)planned->cell_count + 1, sizeof *votes), from = planned->cell_count, best = 0;
	if (votes == NULL)
		return seen_memory(seeing);
	uint32_t next = cells_to_rise(planned->asserted, planned->cell_count, 0, seeing->cut);
	// Backwards, so that the distance is known from the line after.
	for (uint32_t line = planned->line_count; line-- > 0;) {
		const uint32_t first = planned->lines[line].first_cell;
		uint32_t here = 0;
		while (first + here < from && !rises(planned->asserted, planned->cell_count, first + here, seeing->cut))
			here++;
		next = first + here < from ? here : here + next;
		from = first;
		votes[next < planned->cell_count ? next : planned->cell_count]++;
	}
	for (uint32_t cells = 1; cells < planned->cell_count; cells++)
		best = votes[cells] > votes[best] ? cells : best;
	*ahead = best;
	return true;
}

// The segments of a circle that begins with one. `starts`: where line-frame machines begin lines, in the circle's own cells.
static bool list_segments(struct seeing *seeing, struct circle *circle, const uint8_t *starts)
{
	struct segment *last = NULL;
	for (uint32_t cell = 0; cell < circle->cells; cell++)
		circle->count += starts[cell];
	circle->segments = arena_array(seeing->arena, circle->count, sizeof *circle->segments);
	circle->count = 0;
	if (circle->segments == NULL)
		return seen_memory(seeing);
	for (uint32_t cell = 0; cell < circle->cells; cell++) {
		if (starts[cell])
			circle->segments[circle->count++] = (struct segment){.first = cell};
		last = circle->count > 0 ? &circle->segments[circle->count - 1] : NULL;
		if (last != NULL)
			last->cells++;
	}
	return true;
}

// A circle of so many cells, whose cuts are marked: turned to begin with the last cut up to its cell 0.
static bool make_circle(struct seeing *seeing, struct circle *circle, const uint64_t *asserted, uint32_t cells, const uint8_t *cuts)
{
	uint32_t first = 0;
	while (first < cells && !cuts[(cells - first) % cells])
		first++;
	if (first == cells)
		return seen_refuse(seeing, "lines are cut at the leading edge of sync, but it has none");
	first = (cells - first) % cells;
	const uint8_t *starts = turned_copy(seeing->arena, cuts, cells, sizeof *cuts, first);
	*circle = (struct circle){.asserted = turned_copy(seeing->arena, asserted, cells, sizeof *asserted, first), .cells = cells,
	                          .turned = first};
	if (starts == NULL || circle->asserted == NULL)
		return seen_memory(seeing);
	return list_segments(seeing, circle, starts);
}

static void mark_rises(const struct seeing *seeing, const uint64_t *asserted, uint32_t cells, uint32_t ahead, uint8_t *cuts)
{
	for (uint32_t cell = 0; cell < cells; cell++)
		if (rises(asserted, cells, cell, seeing->cut))
			cuts[(cell + cells - ahead % cells) % cells] = 1;
}

static bool cut_plan(struct seeing *seeing, uint32_t ahead)
{
	const struct timeline *planned = seeing->planned;
	const bool by_lines = seeing->cut == 0 || seeing->try == TRY_PLANNED_LINES;
	uint8_t *cuts = arena_alloc(seeing->arena, planned->cell_count);
	if (cuts == NULL)
		return seen_memory(seeing);
	for (uint32_t line = 0; line < planned->line_count && by_lines; line++)
		cuts[planned->lines[line].first_cell] = 1;
	if (!by_lines)
		mark_rises(seeing, planned->asserted, planned->cell_count, ahead, cuts);
	return make_circle(seeing, &seeing->plan, planned->asserted, planned->cell_count, cuts);
}

// Where lines of a line-frame machine begin, as lifted: lap after lap.
static void mark_lines(const struct seeing *seeing, uint8_t *cuts)
{
	const struct lift *lift = seeing->lift;
	uint32_t cell = 0;
	for (uint32_t lap = 0; lap < seeing->laps; lap++)
		for (size_t block = 0; block < lift->block_count; block++)
			for (uint32_t line = 0; line < lift->blocks[block].repeat; line++) {
				cuts[cell] = 1;
				cell += lift->types[lift->blocks[block].type].cells;
			}
}

// The cell of the loop in which the frame begins, if its state is known and comes up; otherwise the loop's length.
static uint32_t find_start(const struct seeing *seeing)
{
	const struct lift *lift = seeing->lift;
	uint32_t cell = 0;
	if (seeing->cut == 0)
		return lift->renumbered ? lift->cell_count : 0;
	while (seeing->options.has_start && cell < lift->cell_count && lift->states[cell] != seeing->options.start)
		cell++;
	return seeing->options.has_start ? cell : lift->cell_count;
}

// If the first line's sync is about as far from the frame's first cell as in the plan, all lines are taken to be cut where it tells.
static uint32_t ahead_in_images(const struct seeing *seeing, const uint64_t *asserted, uint32_t cells, uint32_t start, uint32_t ahead)
{
	const struct timeline *planned = seeing->planned;
	const uint32_t line = planned->cell_count / planned->line_count;
	if (start == seeing->lift->cell_count)
		return ahead;
	const int64_t later = (int64_t)cells_to_rise(asserted, cells, start, seeing->cut) -
	                      cells_to_rise(planned->asserted, planned->cell_count, 0, seeing->cut);
	return (later < 0 ? -later : later) <= line / NEAR_SHARE && ahead + later >= 0 ? (uint32_t)(ahead + later) : ahead;
}

// How many signals differ over the frame if its first cell is a cell of the loop.
static uint64_t count_differing(const struct seeing *seeing, const uint64_t *asserted, uint32_t cells, uint32_t start)
{
	uint64_t count = 0;
	for (uint32_t cell = 0, from = start; cell < cells; cell++, from = from + 1 == cells ? 0 : from + 1)
		for (uint64_t differing = asserted[from] ^ seeing->planned->asserted[cell]; differing != 0; differing &= differing - 1)
			count++;
	return count;
}

// Where the frame begins, if it is not known: of the cells near to one, that from which most is as planned.
static uint32_t best_start(const struct seeing *seeing, const uint64_t *asserted, uint32_t cells, uint32_t near)
{
	uint32_t best = near;
	uint64_t fewest = count_differing(seeing, asserted, cells, near);
	for (uint32_t off = 1; off <= MOST_SHIFT && off < cells && cells <= MOST_SHIFTED_CELLS; off++) {
		const uint32_t starts[2] = {(near + off) % cells, (near + cells - off) % cells};
		for (unsigned side = 0; side < 2; side++) {
			const uint64_t differing = count_differing(seeing, asserted, cells, starts[side]);
			best = differing < fewest ? starts[side] : best;
			fewest = differing < fewest ? differing : fewest;
		}
	}
	return best;
}

static void mark_planned_lines(const struct seeing *seeing, uint32_t cells, uint32_t start, uint8_t *cuts)
{
	for (uint32_t line = 0; line < seeing->planned->line_count; line++)
		cuts[(start + seeing->planned->lines[line].first_cell) % cells] = 1;
}

static void find_start_segment(struct seeing *seeing, uint32_t start)
{
	const struct circle *images = &seeing->images;
	const uint32_t first = (start + images->cells - images->turned) % images->cells;
	for (size_t index = 0; index < images->count; index++)
		if (images->segments[index].first == first)
			seeing->start_segment = index;
}

static bool cut_images(struct seeing *seeing, uint32_t ahead)
{
	const struct lift *lift = seeing->lift;
	const uint32_t cells = seeing->laps * lift->cell_count;
	uint32_t start = find_start(seeing);
	uint64_t *asserted = arena_array(seeing->arena, cells, sizeof *asserted);
	uint32_t *states = arena_array(seeing->arena, cells, sizeof *states);
	uint8_t *cuts = arena_alloc(seeing->arena, cells);
	if (asserted == NULL || states == NULL || cuts == NULL)
		return seen_memory(seeing);
	for (uint32_t cell = 0; cell < cells; cell++) {
		asserted[cell] = lift->asserted[cell % lift->cell_count];
		states[cell] = lift->states[cell % lift->cell_count];
	}
	seeing->inverted = seeing->try != TRY_AS_READ ? seen_inverted(seeing, asserted, cells) : 0;
	seeing->inverts = seeing->inverted != 0;
	for (uint32_t cell = 0; cell < cells && seeing->inverted != 0; cell++)
		asserted[cell] ^= seeing->inverted;
	if (seeing->try == TRY_PLANNED_LINES && start == lift->cell_count)
		start = best_start(seeing, asserted, cells, seeing->near_start);
	if (seeing->try == TRY_PLANNED_LINES)
		mark_planned_lines(seeing, cells, start, cuts);
	else if (seeing->cut == 0)
		mark_lines(seeing, cuts);
	else
		mark_rises(seeing, asserted, cells, ahead_in_images(seeing, asserted, cells, start, ahead), cuts);
	if (!make_circle(seeing, &seeing->images, asserted, cells, cuts))
		return false;
	seeing->states = turned_copy(seeing->arena, states, cells, sizeof *states, seeing->images.turned);
	seeing->start_segment = NONE;
	if (seeing->try == TRY_PLANNED_LINES || start < lift->cell_count)
		find_start_segment(seeing, start);
	return seeing->states != NULL || seen_memory(seeing);
}

// A frame is several laps of the images' loop if that is about as long: an eighth more or less.
static uint32_t laps_in_frame(const struct seeing *seeing)
{
	const uint64_t frame = seeing->planned->cell_count, loop = seeing->lift->cell_count;
	const uint64_t laps = (frame + loop / 2) / loop;
	const uint64_t cells = laps * loop, off = cells < frame ? frame - cells : cells - frame;
	return laps > 1 && laps <= MOST_LAPS && off <= frame / 8 && cells <= LIMIT_CELLS ? (uint32_t)laps : 1;
}

bool seen_cut(struct seeing *seeing)
{
	uint32_t ahead = 0;
	seeing->laps = laps_in_frame(seeing);
	if (seeing->cut != 0 && !find_ahead(seeing, &ahead))
		return false;
	return cut_plan(seeing, ahead) && cut_images(seeing, ahead);
}
