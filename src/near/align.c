#include <string.h>

#include "base/arena.h"
#include "near/near.h"

#define NO_CELL UINT32_MAX
#define MOST_TABLE 4000000u          // pairs of lines, or of runs of lines that show the same
#define MOST_SPANS 1000u             // of a line, if its cells are to be matched by what they show
#define MOST_WORK ((uint64_t)1 << 28) // cells that are looked at to weigh them

// A line, or what is before the first edge of sync.
struct piece {
	uint32_t first, cells;
	uint64_t hash;       // of what its cells show
};

// Pieces that follow each other and show the same. Where there are not too many pieces, they are aligned one by one, each a run of its own.
struct run {
	uint32_t first;      // piece
	uint32_t count;
	uint32_t shows;      // number of what it shows: as its neighbours, if they show the same
};

// Cells of a line that follow each other and show the same.
struct span {
	uint32_t first, cells; // first: in the line
	uint64_t shown;
};

struct side {
	const uint64_t *pins;
	uint64_t known;      // signals that are compared
	struct piece *pieces;
	uint32_t piece_count;
	struct run *runs;
	uint32_t run_count;
	uint32_t shows_count;
	uint32_t longest;    // cells of a piece
};

struct near {
	struct arena *arena;
	enum near_way way;
	uint32_t *matched;   // [longest new line]: cells of an old line that those of a new one are, or NO_CELL
	uint32_t matched_old, matched_now; // what these lines show
	bool *used;          // [longest old line]: cells that a new one is
	struct span *old_spans, *now_spans; // [MOST_SPANS]
	uint32_t *table;     // [MOST_SPANS + 1][MOST_SPANS + 1]
	const struct timeline *timeline;
	const struct old_frame *old_frame;
	struct side old, now;
	uint32_t *common;    // [old.shows_count][now.shows_count]: cells that they have in common
	uint32_t *old_cells; // [cell_count]: the old cell of each new one, or NO_CELL
	uint32_t *best;      // [line types]: cells that the best line of the type so far has in common with an old one, plus one
	uint32_t *first;     // [line types]: the first cell of the first line of the type
};

static uint64_t shown(const struct side *side, uint32_t cell)
{
	return side->pins[cell] & side->known;
}

static void add_piece(struct side *side, uint32_t first, uint32_t end)
{
	struct piece *piece = &side->pieces[side->piece_count++];
	*piece = (struct piece){first, end - first, end - first};
	for (uint32_t cell = first; cell < end; cell++) {
		piece->hash = (piece->hash ^ shown(side, cell)) * 0x9E3779B97F4A7C15u;
		piece->hash ^= piece->hash >> 29;
	}
	side->longest = piece->cells > side->longest ? piece->cells : side->longest;
}

// Lines of a loop: from leading edge to leading edge of a signal; 0: there is none to cut at.
static bool cut_at_edges(struct near *near, struct side *side, uint32_t cells, uint64_t signal)
{
	uint32_t edges = 1, first = 0;
	for (uint32_t cell = 1; cell < cells; cell++)
		edges += (side->pins[cell] & ~side->pins[cell - 1] & signal) != 0;
	side->pieces = arena_array(near->arena, edges, sizeof *side->pieces);
	for (uint32_t cell = 1; side->pieces != NULL && cell < cells; cell++)
		if ((side->pins[cell] & ~side->pins[cell - 1] & signal) != 0) {
			add_piece(side, first, cell);
			first = cell;
		}
	if (side->pieces != NULL && cells > 0)
		add_piece(side, first, cells);
	return side->pieces != NULL;
}

static bool cut_old_lines(struct near *near)
{
	const struct old_frame *old = near->old_frame;
	near->old.pieces = arena_array(near->arena, old->line_count, sizeof *near->old.pieces);
	for (uint32_t line = 0; near->old.pieces != NULL && line < old->line_count; line++)
		add_piece(&near->old, old->lines[line], line + 1 < old->line_count ? old->lines[line + 1] : old->cell_count);
	return near->old.pieces != NULL;
}

static bool cut_new_lines(struct near *near)
{
	const struct timeline *timeline = near->timeline;
	near->now.pieces = arena_array(near->arena, timeline->line_count, sizeof *near->now.pieces);
	for (uint32_t line = 0; near->now.pieces != NULL && line < timeline->line_count; line++) {
		const uint32_t first = timeline->lines[line].first_cell;
		add_piece(&near->now, first, first + timeline->types[timeline->lines[line].type].cells);
	}
	return near->now.pieces != NULL;
}

// The signal that begins lines, of those that are known.
static uint64_t line_signal(const struct near *near)
{
	static const enum role roles[] = {ROLE_COMPOSITE_SYNC, ROLE_HORIZONTAL_SYNC, ROLE_BLANKING};
	for (size_t index = 0; index < sizeof roles / sizeof *roles; index++) {
		const int signal = near->timeline->plan->role_signal[roles[index]];
		if (signal >= 0 && (near->now.known >> signal & 1) != 0)
			return (uint64_t)1 << signal;
	}
	return 0;
}

static bool cut(struct near *near)
{
	if (near->timeline->plan->machine.form == FORM_LINE_FRAME)
		return cut_old_lines(near) && cut_new_lines(near);
	const uint64_t signal = line_signal(near);
	return cut_at_edges(near, &near->old, near->old_frame->cell_count, signal) &&
	       cut_at_edges(near, &near->now, near->timeline->cell_count, signal);
}

// `joined`: neighbours that show the same are one run.
static bool collect_runs(struct near *near, struct side *side, bool joined)
{
	side->runs = arena_array(near->arena, side->piece_count, sizeof *side->runs);
	side->run_count = side->shows_count = 0;
	for (uint32_t piece = 0; side->runs != NULL && piece < side->piece_count; piece++) {
		const bool same = piece > 0 && side->pieces[piece].hash == side->pieces[piece - 1].hash;
		side->shows_count += !same;
		if (same && joined)
			side->runs[side->run_count - 1].count++;
		else
			side->runs[side->run_count++] = (struct run){piece, 1, side->shows_count - 1};
	}
	return side->runs != NULL;
}

// How many cells two pieces have in common at their beginnings, and beyond those at their ends.
struct common {
	uint32_t begin, end;
};

static struct common compare_ends(const struct near *near, const struct piece *old, const struct piece *now)
{
	const uint32_t cells = old->cells < now->cells ? old->cells : now->cells;
	struct common common = {0, 0};
	while (common.begin < cells && shown(&near->old, old->first + common.begin) == shown(&near->now, now->first + common.begin))
		common.begin++;
	while (common.begin + common.end < cells &&
	       shown(&near->old, old->first + old->cells - 1 - common.end) == shown(&near->now, now->first + now->cells - 1 - common.end))
		common.end++;
	return common;
}

// Cells that show the same: of pieces as long as each other wherever they are, else from both ends.
static uint32_t count_common(const struct near *near, const struct piece *old, const struct piece *now)
{
	uint32_t count = 0;
	if (old->cells != now->cells) {
		const struct common common = compare_ends(near, old, now);
		return common.begin + common.end;
	}
	for (uint32_t cell = 0; cell < old->cells; cell++)
		count += shown(&near->old, old->first + cell) == shown(&near->now, now->first + cell);
	return count;
}

// The cells of two pieces that are the same line, by their places. Where lengths differ, what is alike at both ends is kept there; the rest goes
// by order.
static void match_places(struct near *near, const struct piece *old, const struct piece *now)
{
	struct common common = {0, 0};
	if (old->cells != now->cells)
		common = compare_ends(near, old, now);
	const uint32_t old_rest = old->cells - common.end, now_rest = now->cells - common.end;
	for (uint32_t cell = 0; cell < now_rest; cell++)
		near->matched[cell] = cell < old_rest ? cell : NO_CELL;
	for (uint32_t cell = 0; cell < common.end; cell++)
		near->matched[now_rest + cell] = old_rest + cell;
}

// The spans of a piece; 0 if there are too many.
static uint32_t list_spans(const struct side *side, const struct piece *piece, struct span *spans)
{
	uint32_t count = 0;
	for (uint32_t cell = 0; cell < piece->cells; cell++) {
		const uint64_t here = shown(side, piece->first + cell);
		if (count > 0 && spans[count - 1].shown == here) {
			spans[count - 1].cells++;
			continue;
		}
		if (count == MOST_SPANS)
			return 0;
		spans[count++] = (struct span){cell, 1, here};
	}
	return count;
}

static uint32_t *spans_left(const struct near *near, uint32_t old, uint32_t now)
{
	return &near->table[(size_t)old * (MOST_SPANS + 1) + now];
}

static uint32_t span_worth(const struct near *near, uint32_t old, uint32_t now)
{
	const struct span *before = &near->old_spans[old], *after = &near->now_spans[now];
	return before->shown != after->shown ? 0 : before->cells < after->cells ? before->cells : after->cells;
}

// Of two spans of unequal length, the ends that are at the same place stay together; otherwise the beginnings, and where nothing is held the last
// cells too, since with registered outputs their rows have what the next span shows.
static void match_span(struct near *near, const struct span *old, const struct span *now, bool held)
{
	const uint32_t cells = old->cells < now->cells ? old->cells : now->cells;
	const bool at_end = old->first != now->first && old->first + old->cells == now->first + now->cells;
	const uint32_t from_begin = at_end ? 0 : held ? cells : cells - 1;
	for (uint32_t cell = 0; cell < from_begin; cell++)
		near->matched[now->first + cell] = old->first + cell;
	for (uint32_t cell = 0; cell < cells - from_begin; cell++)
		near->matched[now->first + now->cells - 1 - cell] = old->first + old->cells - 1 - cell;
}

static bool is_held(const struct near *near, uint32_t cell)
{
	return near->timeline->has_holds && near->timeline->hold_mask[cell] != 0;
}

static void match_spans(struct near *near, const struct piece *piece, uint32_t old_count, uint32_t now_count)
{
	for (uint32_t old = old_count + 1; old-- > 0;)
		for (uint32_t now = now_count + 1; now-- > 0;) {
			uint32_t *here = spans_left(near, old, now);
			*here = 0;
			if (old == old_count || now == now_count)
				continue;
			const uint32_t down = *spans_left(near, old + 1, now), right = *spans_left(near, old, now + 1);
			const uint32_t paired = span_worth(near, old, now) + *spans_left(near, old + 1, now + 1);
			*here = paired > down && paired > right ? paired : down > right ? down : right;
		}
	for (uint32_t old = 0, now = 0; old < old_count && now < now_count;) {
		const uint32_t here = *spans_left(near, old, now), worth = span_worth(near, old, now);
		if (worth > 0 && here == worth + *spans_left(near, old + 1, now + 1)) {
			const struct span *span = &near->now_spans[now++];
			match_span(near, &near->old_spans[old++], span, is_held(near, piece->first + span->first + span->cells - 1));
		} else if (here == *spans_left(near, old + 1, now))
			old++;
		else
			now++;
	}
}

// The next cell of an old span, from one of its cells on, that no new cell is; the span's end if there is none.
static uint32_t next_free(const struct near *near, const struct span *span, uint32_t cell)
{
	while (cell < span->cells && near->used[span->first + cell])
		cell++;
	return cell;
}

// New cells of a span on which nothing is held take what is free of old spans that show the same.
static void fill_span(struct near *near, const struct piece *piece, const struct span *span, uint32_t old_count)
{
	uint32_t old = 0, free = 0;
	for (uint32_t cell = span->first; cell < span->first + span->cells; cell++) {
		if (near->matched[cell] != NO_CELL || is_held(near, piece->first + cell))
			continue;
		while (old < old_count && (near->old_spans[old].shown != span->shown ||
		                           (free = next_free(near, &near->old_spans[old], free)) == near->old_spans[old].cells)) {
			old++;
			free = 0;
		}
		if (old == old_count)
			return;
		near->matched[cell] = near->old_spans[old].first + free;
		near->used[near->matched[cell]] = true;
	}
}

// Cells that are gone give their states to those that are new, so that of a region that went to another place only the ends change.
static void match_rest(struct near *near, const struct piece *old, const struct piece *now, uint32_t old_count, uint32_t now_count)
{
	memset(near->used, 0, old->cells * sizeof *near->used);
	for (uint32_t cell = 0; cell < now->cells; cell++)
		if (near->matched[cell] != NO_CELL)
			near->used[near->matched[cell]] = true;
	for (uint32_t span = 0; span < now_count; span++)
		fill_span(near, now, &near->now_spans[span], old_count);
}

// The cells of two pieces that are the same line, by what they show.
static void match_shown(struct near *near, const struct piece *old, const struct piece *now)
{
	const uint32_t old_count = list_spans(&near->old, old, near->old_spans), now_count = list_spans(&near->now, now, near->now_spans);
	if (old_count == 0 || now_count == 0) {
		match_places(near, old, now);
		return;
	}
	for (uint32_t cell = 0; cell < now->cells; cell++)
		near->matched[cell] = NO_CELL;
	match_spans(near, now, old_count, now_count);
	match_rest(near, old, now, old_count, now_count);
}

static void match_cells(struct near *near, const struct piece *old, const struct piece *now)
{
	if (near->way == NEAR_SHOWN)
		match_shown(near, old, now);
	else
		match_places(near, old, now);
}

// Keeps which cells of the old line those from now_first on are.
static void prefer(struct near *near, const struct piece *old, const struct piece *now, uint32_t now_first)
{
	for (uint32_t cell = 0; cell < now->cells; cell++)
		near->old_cells[now_first + cell] = near->matched[cell] == NO_CELL ? NO_CELL : old->first + near->matched[cell];
}

// In a line-frame machine the first line of a type stands for all: it takes the states of the line that has most in common with an old one.
static void pair_line(struct near *near, const struct piece *old, const struct piece *now, uint32_t line)
{
	const uint32_t type = near->timeline->lines[line].type, common = count_common(near, old, now) + 1;
	if (common <= near->best[type])
		return;
	near->best[type] = common;
	match_cells(near, old, now);
	prefer(near, old, now, near->first[type]);
}

static uint64_t worth(const struct near *near, size_t old, size_t now)
{
	const struct run *before = &near->old.runs[old], *after = &near->now.runs[now];
	const uint32_t common = near->common[(size_t)before->shows * near->now.shows_count + after->shows];
	return ((uint64_t)common + 1) * (before->count < after->count ? before->count : after->count);
}

// The first run that shows what a number stands for.
static const struct piece *piece_showing(const struct side *side, uint32_t *run, uint32_t shows)
{
	while (side->runs[*run].shows != shows)
		(*run)++;
	return &side->pieces[side->runs[*run].first];
}

static bool compare_shown(struct near *near)
{
	near->common = arena_array(near->arena, (size_t)near->old.shows_count * near->now.shows_count, sizeof *near->common);
	uint32_t old_run = 0;
	for (uint32_t old = 0; near->common != NULL && old < near->old.shows_count; old++) {
		const struct piece *before = piece_showing(&near->old, &old_run, old);
		uint32_t now_run = 0;
		for (uint32_t now = 0; now < near->now.shows_count; now++)
			near->common[(size_t)old * near->now.shows_count + now] =
				count_common(near, before, piece_showing(&near->now, &now_run, now));
	}
	return near->common != NULL;
}

// Of lines that are alike, cells are matched once.
static void pair_runs(struct near *near, uint32_t old, uint32_t now)
{
	const struct run *before = &near->old.runs[old], *after = &near->now.runs[now];
	const bool two = near->timeline->plan->machine.form == FORM_LINE_FRAME;
	for (uint32_t line = 0; line < before->count && line < after->count; line++) {
		const struct piece *old_piece = &near->old.pieces[before->first + line], *now_piece = &near->now.pieces[after->first + line];
		if (two) {
			pair_line(near, old_piece, now_piece, after->first + line);
			continue;
		}
		if (before->shows != near->matched_old || after->shows != near->matched_now)
			match_cells(near, old_piece, now_piece);
		near->matched_old = before->shows;
		near->matched_now = after->shows;
		prefer(near, old_piece, now_piece, now_piece->first);
	}
}

// The alignment of runs whose worth sums to the most, by the classic table; of equal ones, that which pairs what comes first.
static bool align_runs(struct near *near)
{
	const size_t rows = near->old.run_count, columns = near->now.run_count, width = columns + 1;
	uint64_t *best = compare_shown(near) ? arena_array(near->arena, (rows + 1) * width, sizeof *best) : NULL;
	for (size_t row = rows; best != NULL && row-- > 0;)
		for (size_t column = columns; column-- > 0;) {
			uint64_t *here = &best[row * width + column];
			const uint64_t paired = worth(near, row, column) + here[width + 1];
			*here = here[1] > here[width] ? here[1] : here[width];
			*here = paired > *here ? paired : *here;
		}
	for (size_t row = 0, column = 0; best != NULL && row < rows && column < columns;) {
		const uint64_t *here = &best[row * width + column];
		if (*here == worth(near, row, column) + here[width + 1])
			pair_runs(near, (uint32_t)row++, (uint32_t)column++);
		else if (*here == here[width])
			row++;
		else
			column++;
	}
	return best != NULL;
}

// Where lines are too many and too different to be weighed: by their order.
static void pair_in_order(struct near *near)
{
	const bool two = near->timeline->plan->machine.form == FORM_LINE_FRAME;
	for (uint32_t line = 0; line < near->old.piece_count && line < near->now.piece_count; line++) {
		const struct piece *old = &near->old.pieces[line], *now = &near->now.pieces[line];
		if (two) {
			pair_line(near, old, now, line);
			continue;
		}
		match_places(near, old, now);
		prefer(near, old, now, now->first);
	}
}

static bool can_weigh(const struct near *near)
{
	const uint64_t shown = (uint64_t)near->old.shows_count * near->now.shows_count;
	const uint32_t longest = near->old.longest > near->now.longest ? near->old.longest : near->now.longest;
	return (uint64_t)near->old.run_count * near->now.run_count <= MOST_TABLE && shown * (longest + (uint64_t)1) <= MOST_WORK;
}

static const struct preference *keep(struct near *near)
{
	struct preference *preference = arena_alloc(near->arena, sizeof *preference);
	uint32_t *states = arena_array(near->arena, near->timeline->cell_count, sizeof *states);
	if (preference == NULL || states == NULL)
		return NULL;
	for (uint32_t cell = 0; cell < near->timeline->cell_count; cell++)
		states[cell] = near->old_cells[cell] == NO_CELL ? NO_STATE : near->old_frame->states[near->old_cells[cell]];
	preference->state_of_cell = states;
	return preference;
}

static bool begin(struct near *near, struct arena *arena, const struct timeline *timeline, const struct old_frame *old, enum near_way way)
{
	const uint64_t *pins = timeline_pins(timeline, arena);
	*near = (struct near){.arena = arena, .way = way, .timeline = timeline, .old_frame = old, .old = {.pins = old->pins, .known = old->known},
	                      .now = {.pins = pins, .known = old->known}};
	near->old_cells = arena_array(arena, timeline->cell_count, sizeof *near->old_cells);
	near->best = arena_array(arena, timeline->plan->line_count, sizeof *near->best);
	near->first = arena_array(arena, timeline->plan->line_count, sizeof *near->first);
	if (pins == NULL || near->old_cells == NULL || near->best == NULL || near->first == NULL)
		return false;
	for (uint32_t line = timeline->line_count; line-- > 0;)
		near->first[timeline->lines[line].type] = timeline->lines[line].first_cell;
	memset(near->old_cells, 0xFF, timeline->cell_count * sizeof *near->old_cells);
	return true;
}

static bool begin_matching(struct near *near)
{
	near->matched = arena_array(near->arena, near->now.longest, sizeof *near->matched);
	near->matched_old = near->matched_now = UINT32_MAX;
	if (near->way != NEAR_SHOWN)
		return near->matched != NULL;
	near->used = arena_array(near->arena, near->old.longest, sizeof *near->used);
	near->old_spans = arena_array(near->arena, MOST_SPANS, sizeof *near->old_spans);
	near->now_spans = arena_array(near->arena, MOST_SPANS, sizeof *near->now_spans);
	near->table = arena_array(near->arena, (MOST_SPANS + 1) * (MOST_SPANS + 1), sizeof *near->table);
	return near->matched != NULL && near->used != NULL && near->old_spans != NULL && near->now_spans != NULL && near->table != NULL;
}

static bool pair_lines(struct near *near)
{
	if (!cut(near) || !begin_matching(near))
		return false;
	const bool joined = (uint64_t)near->old.piece_count * near->now.piece_count > MOST_TABLE;
	if (!collect_runs(near, &near->old, joined) || !collect_runs(near, &near->now, joined))
		return false;
	if (can_weigh(near))
		return align_runs(near);
	pair_in_order(near);
	return true;
}

const struct preference *near_preference(struct arena *arena, const struct timeline *timeline, const struct old_frame *old, enum near_way way)
{
	struct near near;
	if (!begin(&near, arena, timeline, old, way))
		return NULL;
	if (way != NEAR_FRAME)
		return pair_lines(&near) ? keep(&near) : NULL;
	for (uint32_t cell = 0; cell < timeline->cell_count && cell < old->cell_count; cell++)
		near.old_cells[cell] = cell;
	return keep(&near);
}

bool near_likeness(struct arena *arena, const struct timeline *timeline, const struct old_frame *old, uint64_t *alike)
{
	struct near near;
	if (!begin(&near, arena, timeline, old, NEAR_LINES) || !pair_lines(&near))
		return false;
	*alike = 0;
	for (uint32_t cell = 0; cell < timeline->cell_count; cell++) {
		const uint32_t before = near.old_cells[cell], held = is_held(&near, cell) ? timeline->hold_mask[cell] : 0;
		if (before == NO_CELL)
			continue;
		*alike += shown(&near.old, before) == shown(&near.now, cell);
		*alike += held != 0 && ((old->states[before] ^ timeline->hold_value[cell]) & held) == 0;
	}
	return true;
}
