// Whether what the images go through is a raster at all. A raster's sync comes and goes; its lines have one length for most of the time, but
// for half lines around vertical sync and long ones without serrations, or few lengths; and lines as short as chance makes them look made.
#include "base/diagnostics.h"
#include "base/text.h"
#include "proof/lift_work.h"

#define SHORT_LINE_CELLS 16
// So few lengths of lines, each for so many lines in the mean, are meant, if the commonest is no shorter than ODD_LINE_CELLS.
#define FEW_LENGTHS 4
#define LINES_OF_LENGTH 4
#define ODD_LINE_CELLS 8 // of shorter lines, lengths twice as long and few lengths come by chance
// The longest way from power-up into short lines: two of them, in which a line stage comes to step and a frame stage to its first line.
#define SHORT_LEAD_IN_LINES 2
// Of a loop's states, frames of short lines take one in so many at least; and with other loops, as random bytes make them, in so many.
#define SHORT_STATES 1024
#define SHORT_STATES_LOOPS 16
// Beside other loops, so many lines are meant all the same: long ones of a loop, short ones that two stages begin evenly.
#define LONG_LINES_LOOPS 8
#define EVEN_LINES_LOOPS 4

struct lengths {
	uint64_t regular_cells, regular_ticks;
	uint32_t shortest, longest;
};

// Whether a length is the normal one or its half, or, of lines that are not short, twice as long.
static bool is_regular(const struct lifting *lifting, int64_t length, int64_t normal)
{
	return length == normal || 2 * length == normal || (length == 2 * normal && lifting->normal_cells >= ODD_LINE_CELLS);
}

static struct lengths measure(const struct lifting *lifting)
{
	struct lengths lengths = {.shortest = UINT32_MAX};
	for (uint32_t index = 0; index < lifting->lift->line_count; index++) {
		const struct lifted_line *line = &lifting->lines[index];
		const int64_t ticks = lifted_line_ticks(lifting, line);
		lengths.regular_cells += is_regular(lifting, line->cells, lifting->normal_cells) ? line->cells : 0;
		lengths.regular_ticks += is_regular(lifting, ticks, lifting->normal_ticks) ? (uint64_t)ticks : 0;
		lengths.shortest = line->cells < lengths.shortest ? line->cells : lengths.shortest;
		lengths.longest = line->cells > lengths.longest ? line->cells : lengths.longest;
	}
	return lengths;
}

// Whether spare rows come home as they were made to: those of a loop at once, those of two stages as soon as the line ends that they are
// in. Rows that chance made lead far, and most often into other loops too.
static bool comes_home_at_once(const struct lifting *lifting)
{
	if (!lifting->comes_home || lifting->ends == NULL)
		return lifting->comes_home && lifting->way_cells <= 1;
	return lifting->lines != NULL && lift_starts_evenly(lifting) && lifting->way_cells <= measure(lifting).longest + 2;
}

// Says which chips may be blank: those whose signals and bits of the state never change. False if none is.
static bool hint_blank(struct lifting *lifting)
{
	bool any = false;
	for (size_t chip = 0; chip < lifting->plan->chip_count; chip++) {
		const struct image *image = &lifting->images[chip];
		const uint8_t first = image->bytes[0];
		size_t same = 1;
		while (same < image->length && image->bytes[same] == first)
			same++;
		if (same < image->length || (first != 0x00 && first != 0xFF))
			continue;
		diagnose_hint(lifting->diagnostics, "chip \"%s\" may be blank: its %zu bytes are all 0x%02X", lifting->plan->chips[chip].label,
		              image->length, first);
		any = true;
	}
	return any;
}

// What may be the matter with images that are no raster; returns false.
static bool hint_images(struct lifting *lifting)
{
	if (hint_blank(lifting))
		return false;
	const bool swapped = lifting->plan->chip_count > 1 && !comes_home_at_once(lifting);
	diagnose_hint(lifting->diagnostics, "are these the board's images? %swires and polarities %sothers than it says",
	              swapped ? "chips may be swapped, or " : "", swapped ? "" : "may be ");
	if (lifting->ends == NULL)
		diagnose_hint(lifting->diagnostics, "lines are cut at the leading edge of \"%s\"; --cut names another signal",
		              lifting->plan->signals[lifting->cut_signal].name);
	return false;
}

// Whether a signal is never asserted, or always.
static bool is_constant(const struct lifting *lifting, size_t signal)
{
	const uint64_t *asserted = lifting->lift->asserted, mask = (uint64_t)1 << signal;
	for (uint32_t cell = 1; cell < lifting->lift->cell_count; cell++)
		if (((asserted[cell] ^ asserted[0]) & mask) != 0)
			return false;
	return true;
}

static bool is_asserted_first(const struct lifting *lifting, size_t signal)
{
	return (lifting->lift->asserted[0] >> signal & 1) != 0;
}

static bool report_constant(struct lifting *lifting, size_t signal)
{
	const uint32_t cells = lifting->lift->cell_count;
	diagnose(lifting->diagnostics, RULE_LIFT_RASTER, lifting->place, "no raster: signal \"%s\" is asserted %s in the images' loop of %u cell%s",
	         lifting->plan->signals[signal].name, is_asserted_first(lifting, signal) ? "everywhere" : "nowhere", cells, cells == 1 ? "" : "s");
	return hint_images(lifting);
}

bool lift_report_no_lines(struct lifting *lifting)
{
	const uint32_t cells = lifting->lift->cell_count;
	if (lifting->ends == NULL)
		return report_constant(lifting, (size_t)lifting->cut_signal);
	diagnose(lifting->diagnostics, RULE_LIFT_RASTER, lifting->place,
	         "the images go through %u cell%s and never end a line: step is asserted nowhere in their loop", cells, cells == 1 ? "" : "s");
	return hint_images(lifting);
}

// Sync that comes and goes. Where lines are cut at another signal that was asked for, sync may be absent, and vertical sync always may.
static bool check_sync(struct lifting *lifting)
{
	const int *roles = lifting->plan->role_signal;
	const int lines = roles[ROLE_COMPOSITE_SYNC] >= 0 ? roles[ROLE_COMPOSITE_SYNC] : roles[ROLE_HORIZONTAL_SYNC];
	const int fields = roles[ROLE_VERTICAL_SYNC];
	if (lifting->lift->options.cut_signal != SIZE_MAX)
		return true;
	if (lines >= 0 && is_constant(lifting, (size_t)lines))
		return report_constant(lifting, (size_t)lines);
	if (fields >= 0 && is_asserted_first(lifting, (size_t)fields) && is_constant(lifting, (size_t)fields))
		return report_constant(lifting, (size_t)fields);
	return true;
}

// Half of the time at least.
static bool is_enough(uint64_t part, uint64_t all)
{
	return 2 * part >= all;
}

// Whether lengths are few, or, where rows are made, in some way like each other.
static bool has_few_lengths(const struct lifting *lifting, const struct lengths *lengths)
{
	if (comes_home_at_once(lifting))
		return lifting->length_count <= FEW_LENGTHS || 2 * lifting->length_count <= lifting->lift->line_count ||
		       lengths->longest <= 2 * lengths->shortest;
	return lifting->normal_cells >= ODD_LINE_CELLS && lifting->length_count <= FEW_LENGTHS &&
	       lifting->length_count * LINES_OF_LENGTH <= lifting->lift->line_count;
}

static bool check_lengths(struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	const struct lengths lengths = measure(lifting);
	struct text cut = {0};
	if (is_enough(lengths.regular_cells, lift->cell_count) || is_enough(lengths.regular_ticks, (uint64_t)lift->tick_count) ||
	    has_few_lengths(lifting, &lengths))
		return true;
	if (lifting->ends == NULL)
		text_printf(&cut, "cut at \"%s\", ", lifting->plan->signals[lifting->cut_signal].name);
	diagnose(lifting->diagnostics, RULE_LIFT_RASTER, lifting->place,
	         "no raster: %sthe images' loop of %u cells has %u lines of %u to %u cells; the commonest length, %u cells, and half of it "
	         "take less than half of the time", text_string(&cut), lift->cell_count, lift->line_count, lengths.shortest, lengths.longest,
	         lifting->normal_cells);
	text_release(&cut);
	return hint_images(lifting);
}

// Whether more than half of the time is in lines that are mostly sync; a signal that was asked for may be anything.
static bool is_mostly_sync(const struct lifting *lifting)
{
	const bool by_sync = lifting->ends == NULL && lifting->lift->options.cut_signal == SIZE_MAX;
	uint64_t cells = 0;
	for (uint32_t line = 0; by_sync && line < lifting->lift->line_count; line++)
		cells += lifted_mostly_sync(lifting, &lifting->lines[line]) ? lifting->lines[line].cells : 0;
	return cells > 0 && is_enough(cells - 1, lifting->lift->cell_count);
}

bool lift_starts_evenly(const struct lifting *lifting)
{
	const uint32_t *states = lifting->lift->states, mask = low_bits(lifting->wiring.line.state_bits);
	for (uint32_t line = 1; line < lifting->lift->line_count; line++)
		if (((states[lifting->lines[line].first_cell] ^ states[lifting->lines[0].first_cell]) & mask) != 0)
			return false;
	return true;
}

// Whether the only other loop is of erased rows: the state that is all ones.
static bool loops_erased(const struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	return lift->loop_count == 1 && lift->loops[0].cells == 1 && lift->loops[0].state == low_bits(lifting->at.bits);
}

static bool is_alone(const struct lifting *lifting)
{
	return lifting->lift->loop_count == 0 || loops_erased(lifting);
}

// Whether a loop's frame takes enough of the states.
static bool takes_enough(const struct lifting *lifting)
{
	return (uint64_t)lifting->lift->cell_count * (is_alone(lifting) ? SHORT_STATES : SHORT_STATES_LOOPS) >= (uint64_t)1 << lifting->at.bits;
}

// Whether a frame of few or short lines looks made. Chance makes such too, of random bytes: but most often beside other loops, in sync for
// most of the time, at the end of a long way from power-up, in few of many states, or with lines that begin anyhow.
static bool is_made(const struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	const bool stages = lifting->ends != NULL, alone = is_alone(lifting);
	if (lifting->normal_cells == 1 || comes_home_at_once(lifting))
		return lifting->normal_cells > 1;
	if (lifting->normal_cells >= SHORT_LINE_CELLS)
		return stages || alone || lift->line_count >= LONG_LINES_LOOPS || takes_enough(lifting);
	if (lift->lead_in_cells > SHORT_LEAD_IN_LINES * lifting->normal_cells || is_mostly_sync(lifting))
		return false;
	if (stages)
		return lift_starts_evenly(lifting) && (alone || lift->line_count >= EVEN_LINES_LOOPS);
	return takes_enough(lifting);
}

static bool check_short_lines(struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	if (is_made(lifting))
		return true;
	diagnose(lifting->diagnostics, RULE_LIFT_RASTER, lifting->place,
	         "no raster: the images' loop, %u cell%s from power-up, has %u line%s of %u cell%s in all, as random bytes make them",
	         lift->lead_in_cells, lift->lead_in_cells == 1 ? "" : "s", lift->line_count, lift->line_count == 1 ? "" : "s", lift->cell_count,
	         lift->cell_count == 1 ? "" : "s");
	return hint_images(lifting);
}

bool lift_check_raster(struct lifting *lifting)
{
	return check_sync(lifting) && check_lengths(lifting) && check_short_lines(lifting);
}
