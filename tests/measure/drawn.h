// Frames drawn cell by cell, for tests of what is measured on them.
//
// A cell is a letter and takes 10 ticks, a stretched one 14; a tick is 1 us; a cycle of the subcarrier is 8 ticks.
//
//     .  picture            -  blanking           s  sync        b  burst gate      n  sync without blanking
//     :  the same,          =  the same,          S  the same,   B  the same,
//        stretched             stretched             stretched      stretched
//     h  horizontal sync    v  vertical sync      w  both        H V W  stretched   (all three with blanking)
//
// Spaces and bars may stand anywhere.
#ifndef SCANLATCH_TESTS_MEASURE_DRAWN_H
#define SCANLATCH_TESTS_MEASURE_DRAWN_H

#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include <ctype.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "measure/measure.h"

enum { DRAWN_SYNC, DRAWN_HORIZONTAL, DRAWN_VERTICAL, DRAWN_BLANK, DRAWN_BURST, DRAWN_STRETCH, DRAWN_SIGNALS };

struct drawn {
	struct arena *arena;
	struct plan plan;
	struct signal signals[DRAWN_SIGNALS];
	uint64_t *asserted;            // [cells]
	uint32_t cells;
	struct standard standard;      // progressive, lines without numbers, no limits
	struct recording recording;    // of the timeline
};

static const enum role drawn_roles[DRAWN_SIGNALS] = {ROLE_COMPOSITE_SYNC, ROLE_HORIZONTAL_SYNC, ROLE_VERTICAL_SYNC, ROLE_BLANKING,
                                                     ROLE_BURST_GATE, ROLE_STRETCH};

// What a letter asserts; UINT64_MAX for what is no cell.
static inline uint64_t drawn_cell(char letter)
{
	static const char letters[] = ".:-=sSbBhHvVwWn";
	static const unsigned char masks[] = {0, 0, 8, 8, 9, 9, 24, 24, 10, 10, 12, 12, 14, 14, 1};
	const char *found = strchr(letters, letter);
	if (letter == '\0' || found == NULL) {
		assert_true(letter == ' ' || letter == '|');
		return UINT64_MAX;
	}
	const bool stretched = letter == ':' || letter == '=' || isupper((unsigned char)letter);
	return masks[found - letters] | (stretched ? 1u << DRAWN_STRETCH : 0);
}

static inline void take_signal(struct drawn *drawn, unsigned signal)
{
	drawn->plan.role_signal[drawn_roles[signal]] = -1;
}

// A frame of several texts, one after the other; NULL ends them. Composite sync where no horizontal sync is drawn; all signals are
// active high but blanking.
static inline struct drawn *draw(const char *const *texts)
{
	struct arena *arena = arena_create();
	assert_non_null(arena);
	struct drawn *drawn = arena_alloc(arena, sizeof *drawn);
	assert_non_null(drawn);
	drawn->arena = arena;
	size_t length = 0;
	for (const char *const *text = texts; *text != NULL; text++)
		length += strlen(*text);
	drawn->asserted = arena_array(arena, length, sizeof *drawn->asserted);
	assert_non_null(drawn->asserted);
	uint64_t seen = 0;
	for (const char *const *text = texts; *text != NULL; text++)
		for (const char *letter = *text; *letter != '\0'; letter++) {
			const uint64_t cell = drawn_cell(*letter);
			if (cell == UINT64_MAX)
				continue;
			drawn->asserted[drawn->cells++] = cell;
			seen |= cell;
		}
	drawn->plan.signals = drawn->signals;
	drawn->plan.signal_count = DRAWN_SIGNALS;
	for (unsigned signal = 0; signal < DRAWN_SIGNALS; signal++) {
		drawn->signals[signal] = (struct signal){.name = role_name(drawn_roles[signal]), .role = drawn_roles[signal],
		                                         .active_high = signal != DRAWN_BLANK};
		drawn->plan.role_signal[drawn_roles[signal]] = (int)signal;
	}
	drawn->plan.role_signal[ROLE_PLAIN] = -1;
	if ((seen & 1u << DRAWN_HORIZONTAL) != 0)
		take_signal(drawn, DRAWN_SYNC);
	else
		take_signal(drawn, DRAWN_HORIZONTAL);
	drawn->plan.clock = (struct clock){.master_hz = {1000000, 1}, .accuracy_ppm = FRACTION_ZERO, .dot_ticks = 5, .cell_ticks = 10,
	                                   .stretch_ticks = 4, .has_subcarrier = true, .subcarrier_hz = {125000, 1}};
	drawn->standard = (struct standard){.name = "drawn", .fields = 1};
	drawn->recording = (struct recording){.plan = &drawn->plan, .asserted = drawn->asserted, .cells = drawn->cells};
	return drawn;
}

#define DRAW(...) draw((const char *const[]){__VA_ARGS__, NULL})

static inline void erase(struct drawn *drawn)
{
	arena_destroy(drawn->arena);
}

// The frame begins so many cells later.
static inline void rotate(struct drawn *drawn, uint32_t cells)
{
	uint64_t *rotated = arena_array(drawn->arena, drawn->cells, sizeof *rotated);
	assert_non_null(rotated);
	for (uint32_t cell = 0; cell < drawn->cells; cell++)
		rotated[cell] = drawn->asserted[(cell + cells) % drawn->cells];
	drawn->recording.asserted = drawn->asserted = rotated;
}

// The recording is what the pins show of signals with leads: at cell i what the timeline has at cell i + lead.
static inline void record_pins(struct drawn *drawn, const int64_t leads[DRAWN_SIGNALS])
{
	uint64_t *pins = arena_array(drawn->arena, drawn->cells, sizeof *pins);
	assert_non_null(pins);
	for (int64_t signal = 0; signal < DRAWN_SIGNALS; signal++) {
		drawn->signals[signal].lead_cells = leads[signal];
		for (int64_t cell = 0; cell < drawn->cells; cell++) {
			const int64_t from = ((cell + leads[signal]) % drawn->cells + drawn->cells) % drawn->cells;
			pins[cell] |= drawn->asserted[from] & (uint64_t)1 << signal;
		}
	}
	drawn->recording.asserted = pins;
	drawn->recording.at_pins = true;
}

static inline const struct measurement *measure(struct drawn *drawn)
{
	const struct measurement *found = measure_recording(drawn->arena, &drawn->recording, &drawn->standard);
	assert_non_null(found);
	return found;
}

// "N" or "N/D", perhaps with a minus sign.
static inline struct fraction drawn_fraction(const char *text)
{
	const char *slash = strchr(text, '/');
	struct fraction value;
	assert_true(fraction_make(atoll(text), slash != NULL ? atoll(slash + 1) : 1, &value));
	return value;
}

// Times in microseconds, that is ticks; rates by their period in ticks (the longest first); all else in its unit.
static inline bool drawn_same(enum limit_item item, struct fraction found, const char *wanted)
{
	struct fraction value = found;
	const enum dimension dimension = limit_item_facts(item)->dimension;
	if (dimension == DIMENSION_TIME)
		assert_true(fraction_multiply(found, fraction_whole(1000000), &value));
	else if (dimension == DIMENSION_FREQUENCY)
		assert_true(fraction_divide(fraction_whole(1000000), found, &value));
	return fraction_compare(value, drawn_fraction(wanted)) == 0;
}

// low NULL: it must not be known.
static inline void assert_item(const struct measurement *found, enum limit_item item, const char *low, const char *high)
{
	const struct measured *measured = &found->items[item];
	const char *name = limit_item_facts(item)->name;
	if (low == NULL ? measured->known : !measured->known)
		fail_msg("%s: known %d, %s", name, measured->known, measured->why == NULL ? "" : measured->why);
	if (low == NULL)
		assert_non_null(measured->why);
	else if (!drawn_same(item, measured->values.low, low) || !drawn_same(item, measured->values.high, high))
		fail_msg("%s: wanted %s to %s, found %lld/%lld to %lld/%lld", name, low, high, (long long)measured->values.low.numerator,
		         (long long)measured->values.low.denominator, (long long)measured->values.high.numerator,
		         (long long)measured->values.high.denominator);
}

// An item's values; those that are not listed are unknown, see assert_all.
struct item_values {
	enum limit_item item;
	const char *low, *high;        // high NULL: as low
};

// Every item is as listed, and those that are not listed could not be measured; but for those of the clock.
static inline void assert_all(const struct measurement *found, const struct item_values *list, size_t count)
{
	for (unsigned item = 0; item < ITEM_COUNT; item++) {
		size_t index = 0;
		while (index < count && list[index].item != item)
			index++;
		if (item == ITEM_PIXEL_CLOCK || item == ITEM_SUBCARRIER)
			continue;
		if (index == count)
			assert_item(found, (enum limit_item)item, NULL, NULL);
		else
			assert_item(found, (enum limit_item)item, list[index].low, list[index].high == NULL ? list[index].low : list[index].high);
	}
}

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

#endif
