#include "layout/layout.h"

#include <inttypes.h>

#include "base/text.h"

// The line lengths that meet a phase of N lines are the multiples of this many ticks: N × length × (subcarrier / master) is whole.
// 0 if the numbers do not fit.
static int64_t closing_ticks(const struct clock *clock)
{
	struct fraction cycles_per_tick;
	if (!fraction_divide(clock->subcarrier_hz, clock->master_hz, &cycles_per_tick))
		return 0;
	return cycles_per_tick.denominator / greatest_common_divisor(cycles_per_tick.denominator, clock->phase_count);
}

static bool may_stretch(const struct plan *plan, const struct line_type *line, const struct laid_line *laid, uint32_t cell)
{
	const uint64_t stretch = (uint64_t)1 << plan->role_signal[ROLE_STRETCH];
	return line->regions[laid->region_of_cell[cell]].stretch == STRETCH_AUTO && (laid->asserted[cell] & stretch) == 0;
}

static const struct region *first_auto_region(const struct line_type *line)
{
	for (size_t index = 0; index < line->region_count; index++)
		if (line->regions[index].stretch == STRETCH_AUTO)
			return &line->regions[index];
	return NULL;
}

// A ratio this near to a whole number was meant to be one: crystals are marked to 1 in 100,000 or finer.
#define ROUNDED_ONE_IN 10000

static bool is_rounded(struct fraction ratio, int64_t whole)
{
	struct fraction apart, limit;
	if (whole < 1 || !fraction_subtract(ratio, fraction_whole(whole), &apart) || !fraction_make(whole, ROUNDED_ONE_IN, &limit))
		return false;
	if (apart.numerator < 0)
		apart.numerator = -apart.numerator;
	return fraction_compare(apart, limit) <= 0;
}

// For lines that are far too short to close: the frequencies themselves are what does not fit.
static void hint_ratio(struct line_faults *faults, struct line_fault *fault, struct fraction ratio, int64_t closing)
{
	struct text decimal = {0};
	const int64_t whole = fraction_nearest(ratio);
	text_put_decimal(&decimal, ratio, 9);
	if (is_rounded(ratio, whole)) {
		line_fault_hint(faults, fault,
		                "the master clock is about %s times the subcarrier, not %" PRId64 " times; write"
		                " subcarrier: master / %" PRId64, text_string(&decimal), whole, whole);
		line_fault_hint(faults, fault, "a frequency that was rounded can be given exactly, as a fraction such as 315/22 MHz");
	} else {
		line_fault_hint(faults, fault,
		                "the master clock is about %s times the subcarrier, so only multiples of %" PRId64 " ticks"
		                " would; let it be a small whole multiple, subcarrier: master / N", text_string(&decimal), closing);
	}
	text_release(&decimal);
}

// Says which line lengths would meet the phase, or why none of a usable length does.
static void hint_lengths(struct line_faults *faults, struct line_fault *fault, const struct clock *clock, int64_t ticks,
                         int64_t longest, int64_t closing)
{
	const int64_t below = ticks / closing * closing;
	const int64_t above = below + closing;
	struct fraction ratio;
	if (closing > longest && fraction_divide(clock->master_hz, clock->subcarrier_hz, &ratio) && !fraction_is_whole(ratio))
		hint_ratio(faults, fault, ratio, closing);
	else if (below > 0)
		line_fault_hint(faults, fault,
		                "line lengths of %" PRId64 " or %" PRId64 " ticks would, as any multiple of %" PRId64 " does",
		                below, above, closing);
	else
		line_fault_hint(faults, fault, "a line length of %" PRId64 " ticks would, as any multiple of it does", above);
}

static bool report_unreachable(struct layout *layout, size_t type, const struct region *region, uint32_t available, int64_t closing)
{
	const struct laid_line *laid = &layout->types[type];
	const struct line_type *line = &layout->plan->lines[type];
	const struct clock *clock = &layout->plan->clock;
	const int64_t longest = laid->ticks + available * clock->stretch_ticks;
	struct line_fault *fault =
		line_faults_add(layout->faults, RULE_PHASE_UNREACHABLE, region->stretch_place, line,
		                "line type \"%s\" has %" PRId64 " ticks, and up to %" PRId64 " with %u cell%s stretched by"
		                " %" PRId64 ": none of these lengths meets the phase", line->name, laid->ticks, longest,
		                available, available == 1 ? "" : "s", clock->stretch_ticks);
	line_fault_also(layout->faults, fault, clock->phase_place, "the phase that is asked");
	hint_lengths(layout->faults, fault, clock, laid->ticks, longest, closing);
	return false;
}

static void stretch_leftmost(struct layout *layout, size_t type, uint32_t count)
{
	struct laid_line *laid = &layout->types[type];
	const struct line_type *line = &layout->plan->lines[type];
	const uint64_t stretch = (uint64_t)1 << layout->plan->role_signal[ROLE_STRETCH];
	laid->auto_stretched = count;
	for (uint32_t cell = 0; count > 0; cell++) {
		if (!may_stretch(layout->plan, line, laid, cell))
			continue;
		laid->asserted[cell] |= stretch;
		count--;
	}
}

bool layout_auto_stretch(struct layout *layout, size_t type)
{
	const struct plan *plan = layout->plan;
	const struct line_type *line = &plan->lines[type];
	const struct laid_line *laid = &layout->types[type];
	const struct region *region = first_auto_region(line);
	if (region == NULL)
		return true;
	const int64_t closing = closing_ticks(&plan->clock);
	if (closing == 0) {
		diagnose(layout->diagnostics, RULE_BAD_QUANTITY, plan->clock.place, "the subcarrier divided by the master clock needs numbers beyond 64 bits");
		return false;
	}
	uint32_t available = 0;
	for (uint32_t cell = 0; cell < laid->cells; cell++)
		available += may_stretch(plan, line, laid, cell);
	for (uint32_t count = 0; count <= available; count++) {
		if ((laid->ticks + count * plan->clock.stretch_ticks) % closing != 0)
			continue;
		stretch_leftmost(layout, type, count);
		return true;
	}
	return report_unreachable(layout, type, region, available, closing);
}
