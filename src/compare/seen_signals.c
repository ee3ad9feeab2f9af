// Signals that are in all cells the other way round, or all earlier or later, than the plan has them: another active level, another lead.
#include <string.h>

#include "base/arena.h"
#include "compare/seen_work.h"

#define MOST_LEAD 16 // cells that a lead is looked for in, and of a line at most a quarter
#define LEFT_SHARE 8 // of the lines that tell a lead: more may not have another
#define INVERTED_SHARE 16 // of the cells: more may not be as planned

// How many cells of a circle a signal is asserted in, and how often it begins to be.
struct duty {
	uint32_t cells, pulses;
};

// Of all signals: duties[]. Cells that show the same are counted at once.
static void count_duties(const uint64_t *asserted, uint32_t cells, size_t signals, struct duty *duties)
{
	uint64_t before = asserted[cells - 1];
	for (uint32_t first = 0, end; first < cells; first = end) {
		const uint64_t shown = asserted[first];
		for (end = first + 1; end < cells && asserted[end] == shown;)
			end++;
		for (size_t signal = 0; signal < signals; signal++) {
			if ((shown >> signal & 1) == 0)
				continue;
			duties[signal].cells += end - first;
			duties[signal].pulses += (before >> signal & 1) == 0;
		}
		before = shown;
	}
}

static uint64_t distance(uint64_t left, uint64_t right)
{
	return left > right ? left - right : right - left;
}

// How far shares of circles are apart, of a whole that is the product of their lengths: as they are, or one the other way round.
static uint64_t duties_apart(struct duty images, uint32_t cells, struct duty plan, uint32_t planned_cells, bool inverted)
{
	const uint64_t asserted = inverted ? cells - images.cells : images.cells;
	return distance(asserted * planned_cells, (uint64_t)plan.cells * cells);
}

uint64_t seen_inverted(const struct seeing *seeing, const uint64_t *asserted, uint32_t cells)
{
	const struct timeline *planned = seeing->planned;
	const uint32_t planned_cells = planned->cell_count;
	struct duty plan[LIMIT_SIGNALS] = {{0, 0}}, images[LIMIT_SIGNALS] = {{0, 0}};
	uint64_t inverted = 0;
	count_duties(planned->asserted, planned_cells, planned->plan->signal_count, plan);
	count_duties(asserted, cells, planned->plan->signal_count, images);
	for (size_t signal = 0; signal < planned->plan->signal_count; signal++)
		if (images[signal].pulses > 0 && plan[signal].pulses > 0 &&
		    duties_apart(images[signal], cells, plan[signal], planned_cells, true) <
		            duties_apart(images[signal], cells, plan[signal], planned_cells, false))
			inverted |= (uint64_t)1 << signal;
	return inverted;
}

// Whether the images show a signal so many cells before the plan's frame does, in every cell.
static bool leads_by(const struct seeing *seeing, size_t signal, int lead)
{
	const uint64_t *planned = seeing->plan.asserted, *seen = seeing->images.asserted;
	const uint32_t cells = seeing->plan.cells;
	uint32_t from = (uint32_t)((lead % (int64_t)cells + cells) % cells), cell = 0;
	while (cell < cells && ((seen[cell] ^ planned[from]) >> signal & 1) == 0) {
		cell++;
		from = from + 1 == cells ? 0 : from + 1;
	}
	return cell == cells;
}

// Whether a signal changes in the plan's frame with others somewhere that still change there in the images. One that changes alone, or takes
// all others with it, is a region that was moved.
static bool leaves_others(const struct seeing *seeing, uint64_t mask, uint64_t others)
{
	const uint64_t *planned = seeing->plan.asserted, *seen = seeing->images.asserted;
	uint32_t before = seeing->plan.cells - 1;
	for (uint32_t cell = 0; cell < seeing->plan.cells; cell++) {
		const uint64_t changed = planned[cell] ^ planned[before], changed_now = seen[cell] ^ seen[before];
		if ((changed & mask) != 0 && (changed & others) != 0 && (changed & others) == (changed_now & others))
			return true;
		before = cell;
	}
	return false;
}

// The nearest lead that explains all cells; 0 if none does, or none is needed.
static int find_lead(const struct seeing *seeing, size_t signal)
{
	if (leads_by(seeing, signal, 0))
		return 0;
	const uint32_t quarter = seeing->planned->cell_count / seeing->planned->line_count / 4;
	for (int lead = 1; lead <= MOST_LEAD && (uint32_t)lead <= quarter; lead++) {
		if (leads_by(seeing, signal, lead))
			return lead;
		if (leads_by(seeing, signal, -lead))
			return -lead;
	}
	return 0;
}

// A segment of the images, and the first of the plan in which all signals but one are the same.
struct twin {
	uint32_t seen, planned, cells;
};

// Twins in which the signal changes somewhere, without segments that the plan has as they are.
struct twins {
	struct twin *list;
	size_t count;
	bool some_as_planned;      // there are such segments
};

static bool changes_within(const uint64_t *asserted, uint32_t cells, uint64_t mask)
{
	uint32_t cell = 1;
	while (cell < cells && ((asserted[cell] ^ asserted[cell - 1]) & mask) == 0)
		cell++;
	return cell < cells;
}

// What segments of the plan have which contents: the first, counted from 1. NULL after reporting.
static uint32_t *list_planned(struct seeing *seeing, uint64_t mask)
{
	const struct circle *plan = &seeing->plan;
	uint32_t *planned = arena_array(seeing->arena, plan->count + seeing->images.count, sizeof *planned);
	if (planned == NULL)
		seen_memory(seeing);
	if (planned == NULL || !seen_number(seeing, mask))
		return NULL;
	for (size_t index = plan->count; index-- > 0;)
		planned[plan->segments[index].content] = (uint32_t)index + 1;
	return planned;
}

// False after reporting.
static bool find_twins(struct seeing *seeing, uint64_t mask, struct twins *twins)
{
	const struct circle *plan = &seeing->plan, *images = &seeing->images;
	bool *as_planned = arena_array(seeing->arena, images->count, sizeof *as_planned);
	*twins = (struct twins){.list = arena_array(seeing->arena, images->count, sizeof *twins->list)};
	if (as_planned == NULL || twins->list == NULL)
		return seen_memory(seeing);
	const uint32_t *planned = list_planned(seeing, UINT64_MAX);
	for (size_t index = 0; planned != NULL && index < images->count; index++)
		as_planned[index] = planned[images->segments[index].content] != 0;
	planned = planned != NULL ? list_planned(seeing, ~(mask | seeing->stretch)) : NULL;
	for (size_t index = 0; planned != NULL && index < images->count; index++) {
		const struct segment *segment = &images->segments[index];
		const bool changes = changes_within(images->asserted + segment->first, segment->cells, mask);
		const uint32_t found = planned[segment->content];
		const uint32_t first = found != 0 ? plan->segments[found - 1].first : 0;
		twins->some_as_planned = twins->some_as_planned || (as_planned[index] && changes);
		if (found != 0 && !as_planned[index] && (changes || changes_within(plan->asserted + first, segment->cells, mask)))
			twins->list[twins->count++] = (struct twin){segment->first, first, segment->cells};
	}
	return planned != NULL;
}

// Whether the images show a signal so many cells before the plan does, as far as both are within the segment, where it must change.
static bool twin_leads_by(const struct seeing *seeing, struct twin twin, uint64_t mask, int lead)
{
	const uint32_t off = (uint32_t)(lead < 0 ? -lead : lead);
	const uint64_t *seen = seeing->images.asserted + twin.seen + (lead < 0 ? off : 0);
	const uint64_t *planned = seeing->plan.asserted + twin.planned + (lead > 0 ? off : 0);
	uint32_t cell = 0;
	while (cell + off < twin.cells && ((seen[cell] ^ planned[cell]) & mask) == 0)
		cell++;
	return cell + off >= twin.cells && changes_within(seen, cell, mask);
}

static size_t count_leading(const struct seeing *seeing, const struct twins *twins, uint64_t mask, int lead)
{
	size_t count = 0;
	for (size_t index = 0; index < twins->count; index++)
		count += twin_leads_by(seeing, twins->list[index], mask, lead);
	return count;
}

// Whether a signal changes in some twin with others, which are the same there: one that changes alone is a region that was moved.
static bool leaves_twins(const struct seeing *seeing, const struct twins *twins, uint64_t mask, uint64_t others)
{
	for (size_t index = 0; index < twins->count; index++) {
		const uint64_t *planned = seeing->plan.asserted + twins->list[index].planned;
		for (uint32_t cell = 1; cell < twins->list[index].cells; cell++) {
			const uint64_t changed = planned[cell] ^ planned[cell - 1];
			if ((changed & mask) != 0 && (changed & others) != 0)
				return true;
		}
	}
	return false;
}

// The nearest lead in nearly all lines in which all other signals are as planned, if it is planned in none of these; otherwise 0. False after
// reporting.
static bool find_lead_of_twins(struct seeing *seeing, uint64_t mask, int *lead)
{
	const uint32_t quarter = seeing->planned->cell_count / seeing->planned->line_count / 4;
	struct twins twins;
	*lead = 0;
	if (!find_twins(seeing, mask, &twins))
		return false;
	if (twins.count == 0 || twins.some_as_planned || count_leading(seeing, &twins, mask, 0) > 0 ||
	    !leaves_twins(seeing, &twins, mask, ~(mask | seeing->stretch)))
		return true;
	for (int cells = 1; cells <= MOST_LEAD && (uint32_t)cells <= quarter && *lead == 0; cells++) {
		if (twins.count - count_leading(seeing, &twins, mask, cells) <= twins.count / LEFT_SHARE)
			*lead = cells;
		else if (twins.count - count_leading(seeing, &twins, mask, -cells) <= twins.count / LEFT_SHARE)
			*lead = -cells;
	}
	return true;
}

// Shows a signal so many cells later, around the frame. False when memory is out.
static bool undo_lead(struct seeing *seeing, uint64_t mask, int lead)
{
	struct circle *images = &seeing->images;
	const int64_t cells = images->cells;
	uint64_t *before = turned_copy(seeing->arena, images->asserted, images->cells, sizeof *before, (size_t)((cells - lead % cells) % cells));
	if (before == NULL)
		return seen_memory(seeing);
	for (uint32_t cell = 0; cell < images->cells; cell++)
		images->asserted[cell] = (images->asserted[cell] & ~mask) | (before[cell] & mask);
	return true;
}

static bool copy_signals(struct seeing *seeing)
{
	struct plan *plan = seeing->seen->plan;
	struct signal *signals = arena_array(seeing->seen->arena, plan->signal_count, sizeof *signals);
	if (signals == NULL)
		return seen_memory(seeing);
	memcpy(signals, plan->signals, plan->signal_count * sizeof *signals);
	plan->signals = signals;
	return true;
}

static void invert(struct circle *images, uint64_t mask)
{
	for (uint32_t cell = 0; cell < images->cells; cell++)
		images->asserted[cell] ^= mask;
}

// How many segments of the images show a signal as some segment of the plan does. False after reporting.
static bool count_known(struct seeing *seeing, uint64_t mask, size_t *known)
{
	const struct circle *plan = &seeing->plan, *images = &seeing->images;
	uint8_t *planned = arena_alloc(seeing->arena, plan->count + images->count);
	if (planned == NULL)
		return seen_memory(seeing);
	if (!seen_number(seeing, mask))
		return false;
	for (size_t index = 0; index < plan->count; index++)
		planned[plan->segments[index].content] = 1;
	*known = 0;
	for (size_t index = 0; index < images->count; index++)
		*known += planned[images->segments[index].content];
	return true;
}

static bool differs_in_place(const struct seeing *seeing, uint64_t mask)
{
	const struct circle *images = &seeing->images;
	uint32_t other = 0;
	if (images->cells != seeing->plan.cells)
		return true;
	for (uint32_t cell = 0; cell < images->cells; cell++)
		other += ((images->asserted[cell] ^ seeing->plan.asserted[cell]) & mask) != 0;
	return other > images->cells / INVERTED_SHARE;
}

// Where lines do not tell: whether a signal of a frame of another length is on for about as long as planned, and as read would be far from that.
static bool duty_tells(const struct seeing *seeing, size_t signal)
{
	const struct circle *images = &seeing->images, *plan = &seeing->plan;
	struct duty seen[LIMIT_SIGNALS] = {{0, 0}}, planned[LIMIT_SIGNALS] = {{0, 0}};
	count_duties(images->asserted, images->cells, signal + 1, seen);
	count_duties(plan->asserted, plan->cells, signal + 1, planned);
	const uint64_t inverted = duties_apart(seen[signal], images->cells, planned[signal], plan->cells, false);
	const uint64_t as_read = duties_apart(seen[signal], images->cells, planned[signal], plan->cells, true);
	return images->cells != plan->cells && as_read > (uint64_t)images->cells * plan->cells / 4 && inverted < as_read / 4;
}

// Leaves a signal as it is read if it is not the other way round in nearly all cells, nor so like the plan's in far more lines.
static bool check_inverted(struct seeing *seeing, size_t signal)
{
	const uint64_t mask = (uint64_t)1 << signal;
	size_t inverted, as_read;
	if (!differs_in_place(seeing, mask))
		return true;
	if (!count_known(seeing, mask, &inverted))
		return false;
	invert(&seeing->images, mask);
	if (!count_known(seeing, mask, &as_read))
		return false;
	invert(&seeing->images, mask);
	if (inverted > 2 * as_read || (inverted == as_read && duty_tells(seeing, signal)))
		return true;
	seeing->inverted &= ~mask;
	invert(&seeing->images, mask);
	return true;
}

static bool find_level_and_lead(struct seeing *seeing, size_t index, struct signal *signal)
{
	const uint64_t mask = (uint64_t)1 << index;
	const bool in_place = seeing->images.cells == seeing->plan.cells;
	int lead = 0;
	if ((seeing->inverted & mask) != 0 && !check_inverted(seeing, index))
		return false;
	const bool may_lead = (mask & (seeing->cut | seeing->stretch | seeing->inverted)) == 0;
	if (may_lead && in_place && leaves_others(seeing, mask, ~(mask | seeing->stretch)))
		lead = find_lead(seeing, index);
	if (may_lead && lead == 0 && !find_lead_of_twins(seeing, mask, &lead))
		return false;
	signal->active_high ^= (seeing->inverted & mask) != 0;
	signal->lead_cells += lead;
	return lead == 0 || undo_lead(seeing, mask, lead);
}

bool seen_signals(struct seeing *seeing)
{
	struct plan *plan = seeing->seen->plan;
	if (!copy_signals(seeing))
		return false;
	for (size_t signal = 0; seeing->try != TRY_AS_READ && signal < plan->signal_count; signal++)
		if (!find_level_and_lead(seeing, signal, &plan->signals[signal]))
			return false;
	return true;
}
