#include "plan/read.h"

#include <string.h>

enum { CLOCK_MASTER, CLOCK_ACCURACY, CLOCK_DOT, CLOCK_CELL, CLOCK_STRETCH, CLOCK_SUBCARRIER, CLOCK_PHASE, CLOCK_KEYS };

static const struct shape frequency_shape = {.kind = SHAPE_QUANTITY, .dimensions = IN_HERTZ, .sign = QUANTITY_POSITIVE};
static const struct shape length_shape = {.kind = SHAPE_QUANTITY, .dimensions = IN_TICKS | IN_DOTS, .sign = QUANTITY_POSITIVE};
static const struct shape divided_shape = {.kind = SHAPE_TEXT, .pattern = "master *(/ *" ABOVE_ZERO_PATTERN ")?"};
static const struct shape phase_shape = {
	.kind = SHAPE_TEXT,
	.pattern = "free|every +(0*[1-9][0-9]* +)?(lines?|frames?)",
};

static const struct key clock_keys[CLOCK_KEYS] = {
	[CLOCK_MASTER] = {"master", KEY_REQUIRED, &frequency_shape, "The master clock, exactly; one period of it is a tick"},
	[CLOCK_ACCURACY] = {"accuracy", KEY_OPTIONAL, QUANTITY(IN_PPM, QUANTITY_NOT_NEGATIVE), "Of the crystal, in ppm; reported"},
	[CLOCK_DOT] = {"dot", KEY_OPTIONAL, QUANTITY(IN_TICKS, QUANTITY_POSITIVE), "A picture element, in ticks; 1 tick if left out"},
	[CLOCK_CELL] = {"cell", KEY_REQUIRED, &length_shape, "A normal cell, one step of the sequencer, in dots or ticks"},
	[CLOCK_STRETCH] = {"stretch", KEY_OPTIONAL, &length_shape,
	                   "What a stretched cell is longer, in dots or ticks; leave it out if there is none"},
	[CLOCK_SUBCARRIER] = {"subcarrier", KEY_OPTIONAL, EITHER(&frequency_shape, &divided_shape),
	                      "The colour subcarrier, a frequency or master / N; leave it out for monochrome"},
	[CLOCK_PHASE] = {"phase", KEY_OPTIONAL, &phase_shape,
	                 "After how long the subcarrier must be back in step: every line, every N lines, every frame, every N frames, or "
	                 "free, what it is when left out"},
};

const struct shape clock_shape = {
	.kind = SHAPE_MAPPING, .title = "clock", .keys = clock_keys, .key_count = CLOCK_KEYS,
	BONDS({.key = "phase", .but = "free", .needs = "subcarrier"}),
};

static bool read_frequency(struct reader *reader, const struct node *node, const char *what, struct fraction *hertz)
{
	struct quantity quantity;
	if (!read_quantity(reader, node, what, frequency_shape.dimensions, &quantity))
		return false;
	if (quantity.value.numerator <= 0) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "%s: must be above zero, found \"%s\"", what,
		         SHORT(node->text));
		return false;
	}
	*hertz = quantity.value;
	return true;
}

// A length of the clock in whole ticks. Dots are allowed where dot_ticks > 0.
static bool read_ticks(struct reader *reader, const struct node *node, const char *what, int64_t dot_ticks, int64_t *ticks)
{
	const unsigned dots = dot_ticks > 0 ? IN_DOTS : 0;
	struct quantity quantity;
	if (!read_quantity(reader, node, what, IN_TICKS | dots, &quantity))
		return false;
	struct fraction value = quantity.value;
	if (quantity.dimension == DIMENSION_DOTS && !fraction_multiply(value, fraction_whole(dot_ticks), &value))
		value = fraction_whole(INT64_MAX);
	if (!fraction_is_whole(value)) {
		diagnose(reader->diagnostics, RULE_NOT_WHOLE_TICKS, node->place, "%s: wanted a whole number of ticks, found \"%s\"", what,
		         SHORT(node->text));
		return false;
	}
	if (value.numerator < 1 || value.numerator > LIMIT_CELL_TICKS) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "%s: wanted 1 to %d ticks, found \"%s\"", what,
		         LIMIT_CELL_TICKS, SHORT(node->text));
		return false;
	}
	*ticks = value.numerator;
	return true;
}

static const char *skip_spaces(const char *text)
{
	while (*text == ' ')
		text++;
	return text;
}

// `master / N` or a frequency.
static bool read_subcarrier(struct reader *reader, const struct node *node, struct fraction *hertz)
{
	const char *text;
	if (!read_scalar(reader, node, "subcarrier", &text))
		return false;
	if (strncmp(text, "master", 6) != 0)
		return read_frequency(reader, node, "subcarrier", hertz);
	const char *rest = skip_spaces(text + 6);
	struct fraction divisor = fraction_whole(1), result;
	bool good = *rest == '\0';
	if (*rest == '/') {
		rest = skip_spaces(rest + 1);
		good = fraction_parse_decimal(rest, strlen(rest), &divisor) && divisor.numerator > 0;
	}
	if (!good || !fraction_divide(reader->plan->clock.master_hz, divisor, &result)) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place,
		         "subcarrier: wanted a frequency or \"master / N\" with N above zero, found \"%s\"", SHORT(text));
		return false;
	}
	*hertz = result;
	return true;
}

// Parses "free", "every line", "every N lines", "every frame", "every N frames".
static bool parse_phase(const char *text, enum phase_kind *kind, int64_t *count)
{
	if (strcmp(text, "free") == 0) {
		*kind = PHASE_FREE;
		*count = 1;
		return true;
	}
	if (strncmp(text, "every ", 6) != 0)
		return false;
	const char *rest = skip_spaces(text + 6);
	char digits[20] = "1";
	if (*rest >= '0' && *rest <= '9') {
		const size_t length = strspn(rest, "0123456789");
		if (length >= sizeof digits || rest[length] != ' ')
			return false;
		memcpy(digits, rest, length);
		digits[length] = '\0';
		rest = skip_spaces(rest + length);
	}
	int64_t number;
	if (!whole_number_parse(digits, &number) || number < 1 || number > LIMIT_LINES)
		return false;
	const bool lines = strcmp(rest, "line") == 0 || strcmp(rest, "lines") == 0;
	const bool frames = strcmp(rest, "frame") == 0 || strcmp(rest, "frames") == 0;
	if (!lines && !frames)
		return false;
	*kind = lines ? PHASE_LINES : PHASE_FRAMES;
	*count = number;
	return true;
}

static void read_phase(struct reader *reader, const struct node *node, bool subcarrier_asked)
{
	struct clock *clock = &reader->plan->clock;
	const char *text;
	if (!read_scalar(reader, node, "phase", &text))
		return;
	clock->phase_place = node->place;
	if (!parse_phase(text, &clock->phase, &clock->phase_count)) {
		diagnose(reader->diagnostics, RULE_BAD_CHOICE, node->place, "phase: \"%s\" is none of its choices", SHORT(text));
		diagnose_hint(reader->diagnostics,
		              "write every line, every N lines, every frame, every N frames (N from 1 to %d), or free", LIMIT_LINES);
		return;
	}
	if (clock->phase != PHASE_FREE && !subcarrier_asked) {
		diagnose(reader->diagnostics, RULE_PHASE_WITHOUT_SUBCARRIER, node->place,
		         "phase \"%s\" is asked, but the clock has no subcarrier", SHORT(text));
		diagnose_hint(reader->diagnostics, "add subcarrier: master / N or a frequency, or leave phase out");
	}
}

static void read_accuracy(struct reader *reader, const struct node *node)
{
	struct clock *clock = &reader->plan->clock;
	struct quantity quantity;
	if (!key_quantity(reader, &clock_keys[CLOCK_ACCURACY], node, &quantity))
		return;
	if (quantity.value.numerator < 0 || fraction_compare(quantity.value, fraction_whole(1000000)) >= 0) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "accuracy: wanted 0 to 1000000 ppm, found \"%s\"",
		         SHORT(node->text));
		return;
	}
	clock->has_accuracy = true;
	clock->accuracy_ppm = quantity.value;
}

void read_clock(struct reader *reader, const struct node *node)
{
	struct clock *clock = &reader->plan->clock;
	const struct node *values[CLOCK_KEYS];
	const size_t errors_before = diagnostics_error_count(reader->diagnostics);
	clock->place = node->place;
	clock->phase_place = node->place;
	clock->dot_ticks = 1;
	clock->phase_count = 1;
	if (!read_mapping(reader, node, "clock", clock_keys, CLOCK_KEYS, values))
		return;
	const bool master_known =
		values[CLOCK_MASTER] != NULL && read_frequency(reader, values[CLOCK_MASTER], "master", &clock->master_hz);
	bool dot_known = true;
	if (values[CLOCK_DOT] != NULL)
		dot_known = read_ticks(reader, values[CLOCK_DOT], "dot", 0, &clock->dot_ticks);
	clock->cell_place = values[CLOCK_CELL] != NULL ? values[CLOCK_CELL]->place : node->place;
	clock->stretch_place = values[CLOCK_STRETCH] != NULL ? values[CLOCK_STRETCH]->place : node->place;
	if (values[CLOCK_CELL] != NULL && dot_known)
		read_ticks(reader, values[CLOCK_CELL], "cell", clock->dot_ticks, &clock->cell_ticks);
	if (values[CLOCK_STRETCH] != NULL && dot_known)
		read_ticks(reader, values[CLOCK_STRETCH], "stretch", clock->dot_ticks, &clock->stretch_ticks);
	if (values[CLOCK_SUBCARRIER] != NULL && master_known)
		clock->has_subcarrier = read_subcarrier(reader, values[CLOCK_SUBCARRIER], &clock->subcarrier_hz);
	read_accuracy(reader, values[CLOCK_ACCURACY]);
	if (values[CLOCK_PHASE] != NULL)
		read_phase(reader, values[CLOCK_PHASE], values[CLOCK_SUBCARRIER] != NULL ||
		                                                key_is_misspelt(node, clock_keys, CLOCK_KEYS, CLOCK_SUBCARRIER));
	reader->clock_known = diagnostics_error_count(reader->diagnostics) == errors_before;
}
