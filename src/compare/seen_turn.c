// Turns the images' frame so that it begins where the plan's does: at the state that its first cell is known to have, or where most
// lines from there on and back from there show the same.
#include "base/arena.h"
#include "compare/seen_work.h"

#define MOST_STEPS 16000000u // lines that are looked at in search of the best turn

struct turning {
	const struct circle *plan, *images;
	size_t best, best_alike;
	size_t steps_left;
};

static uint32_t image_at(const struct turning *turning, size_t index)
{
	return turning->images->segments[index % turning->images->count].content;
}

// How many segments show the same from both ends on, if the images' frame begins with a segment.
static size_t count_alike(struct turning *turning, size_t first)
{
	const struct segment *plan = turning->plan->segments;
	const size_t planned = turning->plan->count, found = turning->images->count, most = planned < found ? planned : found;
	size_t front = 0, back = 0;
	while (front < most && plan[front].content == image_at(turning, first + front))
		front++;
	while (front + back < most && plan[planned - 1 - back].content == image_at(turning, first + found - 1 - back))
		back++;
	turning->steps_left -= front + back < turning->steps_left ? front + back : turning->steps_left;
	return front + back;
}

static void try_turn(struct turning *turning, size_t first)
{
	first %= turning->images->count;
	const size_t alike = turning->steps_left > 0 ? count_alike(turning, first) : 0;
	if (alike <= turning->best_alike)
		return;
	turning->best = first;
	turning->best_alike = alike;
}

// Of segments that show the same as one, how many there are from it on, or before it: up to all.
static size_t run_length(const struct circle *circle, size_t index, bool forward)
{
	size_t length = 1;
	for (size_t step = forward ? 1 : circle->count - 1; length < circle->count; length++) {
		const size_t next = (index + step) % circle->count;
		if (circle->segments[next].content != circle->segments[index].content)
			break;
		index = next;
	}
	return length;
}

// A run of lines that the plan's frame begins in may begin before it.
static void try_runs(struct turning *turning)
{
	const struct circle *plan = turning->plan, *images = turning->images;
	const size_t lead = run_length(plan, 0, true), before = run_length(plan, 0, false) - 1;
	for (size_t index = 0, length; index < images->count; index += length) {
		length = run_length(images, index, true);
		if (length > images->count - index)
			length = images->count - index;
		const size_t begin = index + images->count + 1 - run_length(images, index, false);
		try_turn(turning, begin + before);
		if (length >= lead)
			try_turn(turning, index + length - lead);
	}
}

bool seen_number(struct seeing *seeing, uint64_t mask)
{
	struct circle *circles[2] = {&seeing->plan, &seeing->images};
	struct shelf *shelf = shelf_create(seeing->arena, seeing->plan.count + seeing->images.count);
	if (shelf == NULL)
		return seen_memory(seeing);
	for (unsigned side = 0; side < 2; side++)
		for (size_t index = 0; index < circles[side]->count; index++) {
			struct segment *segment = &circles[side]->segments[index];
			segment->content = shelf_number(shelf, circles[side]->asserted + segment->first, segment->cells, mask);
		}
	return true;
}

static bool turn_to(struct seeing *seeing, size_t index)
{
	struct circle *images = &seeing->images;
	const uint32_t first = images->segments[index].first;
	images->asserted = turned_copy(seeing->arena, images->asserted, images->cells, sizeof *images->asserted, first);
	seeing->states = turned_copy(seeing->arena, seeing->states, images->cells, sizeof *seeing->states, first);
	images->segments = turned_copy(seeing->arena, images->segments, images->count, sizeof *images->segments, index);
	if (images->asserted == NULL || seeing->states == NULL || images->segments == NULL)
		return seen_memory(seeing);
	images->turned = (images->turned + first) % images->cells;
	for (size_t segment = 0; segment < images->count; segment++)
		images->segments[segment].first = (images->segments[segment].first + images->cells - first) % images->cells;
	return true;
}

uint64_t seen_sync(const struct seeing *seeing)
{
	const int *roles = seeing->planned->plan->role_signal;
	uint64_t mask = 0;
	for (enum role role = ROLE_COMPOSITE_SYNC; role <= ROLE_VERTICAL_SYNC; role++)
		mask |= roles[role] >= 0 ? (uint64_t)1 << roles[role] : 0;
	return mask;
}

static bool find_turn(struct seeing *seeing, struct turning *turning, uint64_t mask)
{
	*turning = (struct turning){.plan = &seeing->plan, .images = &seeing->images, .steps_left = MOST_STEPS};
	if (!seen_number(seeing, mask))
		return false;
	if (seeing->start_segment != NONE)
		try_turn(turning, seeing->start_segment);
	try_runs(turning);
	return true;
}

// A state that the plan does not name for its first cell may be anything's in images of another.
static size_t choose_turn(const struct seeing *seeing, struct turning *turning)
{
	const size_t start = seeing->start_segment;
	if (start == NONE)
		return turning->best;
	if (seeing->options.start_is_planned || seeing->try == TRY_PLANNED_LINES || 2 * count_alike(turning, start) >= turning->best_alike)
		return start;
	return turning->best;
}

bool seen_turn(struct seeing *seeing)
{
	struct turning turning;
	if (!find_turn(seeing, &turning, UINT64_MAX))
		return false;
	// Sync alone tells lines apart where all of them show something else.
	if (turning.best_alike == 0 && !find_turn(seeing, &turning, seen_sync(seeing)))
		return false;
	return turn_to(seeing, choose_turn(seeing, &turning));
}
