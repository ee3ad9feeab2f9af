// Aligns the segments of the images' frame with the plan's, in order, by what they show, and cuts the images into lines: where the
// plan's begin in the segment that one is.
#include <string.h>

#include "base/arena.h"
#include "compare/seen_work.h"

// Segments that show the same are the same. One that the plan has nowhere was changed, from one that the images have nowhere if these
// are alike, the more the better; for want of that, from any that is in its place.
#define WORTH_SAME 1000u
#define WORTH_ALIKE 400u
#define WORTH_UNKNOWN 100u
#define WORTH_PLACE 1u
#define MOST_LIKENESSES 65536u // of changed contents that are worked out

// A content, of segments of either frame.
struct content {
	size_t planned, seen;      // a segment of the plan, of the images, that has it; NONE
	size_t like;               // the segment of the plan that one of the images is: its own, or what such a one was aligned with; NONE
	size_t changed;            // its number among those that only one of the frames has
};

struct pairing {
	struct seeing *seeing;
	struct content *contents;
	size_t content_count;
	size_t changed_seen, changed_planned;
	uint16_t *likeness;        // [changed_seen][changed_planned]: 1 more than what they are worth, 0 if not known yet; NULL: too many
	uint64_t sync;
};

static unsigned count_bits(uint64_t bits)
{
	unsigned count = 0;
	for (; bits != 0; bits &= bits - 1)
		count++;
	return count;
}

// How many signals differ in the cells that two segments have in common, from the front or from the back.
static uint64_t count_differing(const uint64_t *left, const uint64_t *right, uint32_t cells, uint64_t mask)
{
	uint64_t count = 0;
	for (uint32_t cell = 0; cell < cells; cell++)
		count += ((left[cell] ^ right[cell]) & mask) != 0 ? count_bits((left[cell] ^ right[cell]) & mask) : 0;
	return count;
}

static uint64_t any_asserted(const uint64_t *asserted, uint32_t cells)
{
	uint64_t any = 0;
	for (uint32_t cell = 0; cell < cells; cell++)
		any |= asserted[cell];
	return any;
}

// A line whose sync differs in a quarter of its cells is the same line changed only if there is none better.
static uint32_t likeness_of(const struct pairing *pairing, const struct segment *seen, const struct segment *planned)
{
	const uint64_t *left = pairing->seeing->images.asserted + seen->first, *right = pairing->seeing->plan.asserted + planned->first;
	const uint32_t least = seen->cells < planned->cells ? seen->cells : planned->cells;
	const uint32_t most = seen->cells < planned->cells ? planned->cells : seen->cells;
	const uint32_t left_off = seen->cells - least, right_off = planned->cells - least;
	const uint64_t all = any_asserted(left, seen->cells) | any_asserted(right, planned->cells), sync = all & pairing->sync;
	const uint64_t front = count_differing(left, right, least, all), back = count_differing(left + left_off, right + right_off, least, all);
	const bool by_front = front <= back;
	const uint64_t differing = (by_front ? front : back) + (uint64_t)(most - least) * count_bits(all);
	const uint64_t sync_differing =
		by_front ? count_differing(left, right, least, sync) : count_differing(left + left_off, right + right_off, least, sync);
	const uint64_t of = (uint64_t)most * (all != 0 ? count_bits(all) : 1);
	if (4 * sync_differing > most || 2 * differing > of)
		return WORTH_PLACE;
	return WORTH_PLACE + (uint32_t)(WORTH_ALIKE * (of - differing) / of);
}

static uint32_t worth_of_segments(const void *context, size_t seen, size_t planned)
{
	const struct pairing *pairing = context;
	const struct segment *left = &pairing->seeing->images.segments[seen], *right = &pairing->seeing->plan.segments[planned];
	if (left->content == right->content)
		return WORTH_SAME;
	if (pairing->contents[left->content].planned != NONE)
		return 0;
	if (pairing->contents[right->content].seen != NONE)
		return WORTH_PLACE;
	if (pairing->likeness == NULL)
		return left->cells == right->cells ? WORTH_UNKNOWN : WORTH_PLACE;
	uint16_t *known = &pairing->likeness[pairing->contents[left->content].changed * pairing->changed_planned +
	                                     pairing->contents[right->content].changed];
	if (*known == 0)
		*known = (uint16_t)(likeness_of(pairing, left, right) + 1);
	return *known - 1u;
}

static bool list_contents(struct pairing *pairing)
{
	struct seeing *seeing = pairing->seeing;
	const struct circle *plan = &seeing->plan, *images = &seeing->images;
	pairing->content_count = plan->count + images->count;
	pairing->contents = arena_array(seeing->arena, pairing->content_count, sizeof *pairing->contents);
	if (pairing->contents == NULL)
		return seen_memory(seeing);
	for (size_t index = 0; index < pairing->content_count; index++)
		pairing->contents[index] = (struct content){NONE, NONE, NONE, 0};
	for (size_t index = plan->count; index-- > 0;)
		pairing->contents[plan->segments[index].content].planned = index;
	for (size_t index = images->count; index-- > 0;)
		pairing->contents[images->segments[index].content].seen = index;
	for (size_t index = 0; index < pairing->content_count; index++) {
		struct content *content = &pairing->contents[index];
		if (content->planned == NONE && content->seen != NONE)
			content->changed = pairing->changed_seen++;
		else if (content->planned != NONE && content->seen == NONE)
			content->changed = pairing->changed_planned++;
	}
	return true;
}

static void find_alike(struct pairing *pairing)
{
	const struct seeing *seeing = pairing->seeing;
	for (size_t index = 0; index < seeing->images.count; index++) {
		struct content *content = &pairing->contents[seeing->images.segments[index].content];
		if (content->like == NONE)
			content->like = content->planned != NONE ? content->planned : seeing->segments.now_of[index];
	}
}

// Too many segments to align, but for what is alike at both ends: each with the one that is as many after the first.
static void pair_in_place(struct pairing *pairing)
{
	struct alignment *segments = &pairing->seeing->segments;
	for (size_t index = 0; index < segments->old_count && index < segments->now_count; index++) {
		if (segments->now_of[index] != NONE || segments->old_of[index] != NONE || worth_of_segments(pairing, index, index) == 0)
			continue;
		segments->now_of[index] = index;
		segments->old_of[index] = index;
	}
}

static bool align_segments(struct pairing *pairing)
{
	struct seeing *seeing = pairing->seeing;
	struct comparing *steps = &seeing->steps;
	seeing->segments.old_count = seeing->images.count;
	seeing->segments.now_count = seeing->plan.count;
	if (pairing->changed_planned == 0 || pairing->changed_seen <= MOST_LIKENESSES / pairing->changed_planned) {
		pairing->likeness = arena_array(seeing->arena, pairing->changed_seen * pairing->changed_planned, sizeof *pairing->likeness);
		if (pairing->likeness == NULL)
			return seen_memory(seeing);
	}
	if (!alignment_begin(steps, &seeing->segments))
		return seen_memory(seeing);
	const bool aligned = align_lists(steps, worth_of_segments, WORTH_SAME, pairing, &seeing->segments);
	if (steps->failed)
		return seen_memory(seeing);
	if (!aligned)
		pair_in_place(pairing);
	find_alike(pairing);
	return true;
}

// Where the plan's lines begin.
struct boundary {
	uint32_t cell;             // in its segment
	size_t line;
};

struct boundaries {
	struct boundary *list;     // in the order of the plan's circle
	size_t *first_of;          // [plan segments + 1]: the first that lies in a segment
};

static bool list_boundaries(struct seeing *seeing, struct boundaries *boundaries)
{
	const struct circle *plan = &seeing->plan;
	const struct timeline *planned = seeing->planned;
	size_t line = 0, count = 0;
	boundaries->list = arena_array(seeing->arena, planned->line_count, sizeof *boundaries->list);
	boundaries->first_of = arena_array(seeing->arena, plan->count + 1, sizeof *boundaries->first_of);
	if (boundaries->list == NULL || boundaries->first_of == NULL)
		return seen_memory(seeing);
	while (line < planned->line_count && planned->lines[line].first_cell < plan->turned)
		line++;
	for (size_t segment = 0; segment < plan->count; segment++) {
		const struct segment *here = &plan->segments[segment];
		boundaries->first_of[segment] = count;
		for (; count < planned->line_count; count++, line++) {
			line %= planned->line_count;
			const uint32_t cell = (planned->lines[line].first_cell + plan->cells - plan->turned) % plan->cells;
			if (cell >= here->first + here->cells)
				break;
			boundaries->list[count] = (struct boundary){cell - here->first, line};
		}
	}
	boundaries->first_of[plan->count] = count;
	return true;
}

// A cell of a segment of the plan in one of the images that is another length: as far from the nearer end.
static uint32_t moved_cell(const struct segment *planned, const struct segment *seen, uint32_t cell)
{
	const uint32_t back = planned->cells - cell;
	if (cell <= planned->cells / 2)
		return cell < seen->cells ? cell : seen->cells - 1;
	return back <= seen->cells ? seen->cells - back : 0;
}

static void add_line(struct seeing *seeing, uint32_t first, size_t planned, size_t planned_type)
{
	struct seen_line *last = seeing->line_count > 0 ? &seeing->lines[seeing->line_count - 1] : NULL;
	if (last == NULL || last->first < first)
		seeing->lines[seeing->line_count++] = (struct seen_line){.first = first, .planned = planned, .planned_type = planned_type};
}

// The lines that begin in a segment of the images: those of the segment that it is, or else of what one that shows the same is.
static void cut_segment(const struct pairing *pairing, const struct boundaries *boundaries, size_t index)
{
	struct seeing *seeing = pairing->seeing;
	const struct segment *seen = &seeing->images.segments[index];
	const size_t paired = seeing->segments.now_of[index], like = paired != NONE ? paired : pairing->contents[seen->content].like;
	if (like == NONE) {
		add_line(seeing, seen->first, NONE, NONE);
		return;
	}
	for (size_t boundary = boundaries->first_of[like]; boundary < boundaries->first_of[like + 1]; boundary++) {
		const struct boundary *here = &boundaries->list[boundary];
		const bool at_cut = seeing->try == TRY_CUTS && boundaries->first_of[like + 1] - boundaries->first_of[like] == 1;
		const uint32_t cell = at_cut ? 0 : moved_cell(&seeing->plan.segments[like], seen, here->cell);
		add_line(seeing, seen->first + cell, paired != NONE ? here->line : NONE, seeing->planned->lines[here->line].type);
	}
}

static size_t count_lines(const struct pairing *pairing, const struct boundaries *boundaries)
{
	const struct seeing *seeing = pairing->seeing;
	size_t count = 0;
	for (size_t index = 0; index < seeing->images.count; index++) {
		const size_t paired = seeing->segments.now_of[index];
		const size_t like = paired != NONE ? paired : pairing->contents[seeing->images.segments[index].content].like;
		count += like != NONE ? boundaries->first_of[like + 1] - boundaries->first_of[like] : 1;
	}
	return count;
}

// Turns frame and lines so that one becomes the first, and measures them.
static bool begin_at(struct seeing *seeing, size_t index)
{
	struct circle *images = &seeing->images;
	const uint32_t first = seeing->lines[index].first;
	images->asserted = turned_copy(seeing->arena, images->asserted, images->cells, sizeof *images->asserted, first);
	seeing->states = turned_copy(seeing->arena, seeing->states, images->cells, sizeof *seeing->states, first);
	seeing->lines = turned_copy(seeing->arena, seeing->lines, seeing->line_count, sizeof *seeing->lines, index);
	if (images->asserted == NULL || seeing->states == NULL || seeing->lines == NULL)
		return seen_memory(seeing);
	images->turned = (images->turned + first) % images->cells;
	for (size_t line = 0; line < seeing->line_count; line++)
		seeing->lines[line].first = (seeing->lines[line].first + images->cells - first) % images->cells;
	for (size_t line = 0; line < seeing->line_count; line++)
		seeing->lines[line].cells = (line + 1 < seeing->line_count ? seeing->lines[line + 1].first : images->cells) - seeing->lines[line].first;
	return true;
}

static bool cut_lines(struct pairing *pairing)
{
	struct seeing *seeing = pairing->seeing;
	struct boundaries boundaries;
	size_t first = 0;
	if (!list_boundaries(seeing, &boundaries))
		return false;
	seeing->lines = arena_array(seeing->arena, count_lines(pairing, &boundaries), sizeof *seeing->lines);
	if (seeing->lines == NULL)
		return seen_memory(seeing);
	for (size_t index = 0; index < seeing->images.count; index++)
		cut_segment(pairing, &boundaries, index);
	if (seeing->line_count == 0)
		return seen_refuse(seeing, "no line of the images begins where one of the plan does");
	// Where the plan's frame begins within a segment, that is turned to begin there too.
	for (size_t line = 0; line < seeing->line_count && seeing->plan.turned != 0; line++)
		if (seeing->lines[line].planned == 0)
			first = line;
	return begin_at(seeing, first);
}

bool seen_pair(struct seeing *seeing)
{
	struct pairing pairing = {.seeing = seeing, .sync = seen_sync(seeing)};
	return seen_number(seeing, UINT64_MAX) && list_contents(&pairing) && align_segments(&pairing) && cut_lines(&pairing);
}
