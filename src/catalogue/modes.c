#include "catalogue/modes.h"

#include "base/arena.h"

#define LIMIT_DOTS 100000 // of a count

// The order in which a mode lists its dots and its lines. With borders, where there are any, in the porches.
enum { COUNT_ACTIVE, COUNT_FRONT_PORCH, COUNT_SYNC, COUNT_BACK_PORCH, COUNT_COUNT };

enum {
	MODE_TITLE, MODE_DOCUMENTS, MODE_CLOCK, MODE_HORIZONTAL, MODE_VERTICAL, MODE_HORIZONTAL_SYNC, MODE_VERTICAL_SYNC, MODE_SOURCE,
	MODE_NOTE, MODE_KEY_COUNT
};
enum { SHARE_LOW, SHARE_HIGH, SHARE_SOURCE, SHARE_KEY_COUNT };

static const struct key mode_keys[MODE_KEY_COUNT] = {
	[MODE_TITLE] = PLAIN_KEY("title", KEY_REQUIRED),
	[MODE_DOCUMENTS] = PLAIN_KEY("documents", KEY_REQUIRED),
	[MODE_CLOCK] = PLAIN_KEY("pixel clock", KEY_REQUIRED),
	[MODE_HORIZONTAL] = PLAIN_KEY("dots", KEY_REQUIRED),
	[MODE_VERTICAL] = PLAIN_KEY("lines", KEY_REQUIRED),
	[MODE_HORIZONTAL_SYNC] = PLAIN_KEY("horizontal sync", KEY_REQUIRED),
	[MODE_VERTICAL_SYNC] = PLAIN_KEY("vertical sync", KEY_REQUIRED),
	[MODE_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
	[MODE_NOTE] = PLAIN_KEY("note", KEY_OPTIONAL),
};
static const struct key share_keys[SHARE_KEY_COUNT] = {
	[SHARE_LOW] = PLAIN_KEY("low", KEY_OPTIONAL),
	[SHARE_HIGH] = PLAIN_KEY("high", KEY_OPTIONAL),
	[SHARE_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
};
static const struct key grade_keys[GRADE_COUNT] = {
	[GRADE_STUDIO] = PLAIN_KEY("studio", KEY_REQUIRED),
	[GRADE_MONITOR] = PLAIN_KEY("monitor", KEY_REQUIRED),
};

// What modes have, in the order of the items.
static const enum limit_item mode_items[] = {
	ITEM_LINE_RATE, ITEM_FRAME_RATE, ITEM_LINES_PER_FIELD, ITEM_PIXEL_CLOCK, ITEM_FRONT_PORCH, ITEM_SYNC_WIDTH, ITEM_BACK_PORCH,
	ITEM_HORIZONTAL_BLANKING, ITEM_PICTURE_START, ITEM_PICTURE_WIDTH, ITEM_HORIZONTAL_CENTRE, ITEM_VERTICAL_SYNC,
	ITEM_VERTICAL_FRONT_PORCH, ITEM_VERTICAL_BACK_PORCH, ITEM_VERTICAL_BLANKING, ITEM_PICTURE_TOP, ITEM_PICTURE_HEIGHT,
	ITEM_VERTICAL_CENTRE, ITEM_HORIZONTAL_POLARITY, ITEM_VERTICAL_POLARITY,
};

// False, with nothing reported, if there is no share to read.
static bool read_share_value(struct reader *reader, const struct node *node, const char *what, struct fraction *share)
{
	const char *text;
	if (node == NULL || !read_scalar(reader, node, what, &text))
		return false;
	if (fraction_parse_decimal(text, node->length, share))
		return true;
	diagnose(reader->diagnostics, RULE_BAD_NUMBER, node->place, "%s: wanted a decimal number, found \"%s\"", what, SHORT(text));
	return false;
}

static void read_share(struct reader *reader, const struct node *node, const char *what, struct mode_share *share)
{
	const struct node *values[SHARE_KEY_COUNT];
	if (node == NULL || !read_mapping(reader, node, what, share_keys, SHARE_KEY_COUNT, values))
		return;
	share->has_low = read_share_value(reader, values[SHARE_LOW], "low", &share->low);
	share->has_high = read_share_value(reader, values[SHARE_HIGH], "high", &share->high);
	catalogue_text(reader, values[SHARE_SOURCE], "source", &share->source);
	if ((share->has_low && fraction_compare(share->low, fraction_whole(1)) > 0) ||
	    (share->has_high && fraction_compare(share->high, fraction_whole(1)) < 0))
		diagnose(reader->diagnostics, RULE_BAD_NUMBER, node->place, "%s: low must not be above 1, nor high below it", what);
}

void read_mode_rules(struct reader *reader, const struct node *node, struct mode_rules *rules)
{
	struct key keys[COUNT_OF(mode_items)];
	const struct node *values[COUNT_OF(mode_items)], *grades[GRADE_COUNT];
	for (size_t index = 0; index < COUNT_OF(mode_items); index++)
		keys[index] = (struct key)PLAIN_KEY(limit_item_facts(mode_items[index])->name, KEY_REQUIRED);
	for (size_t item = 0; item < ITEM_COUNT; item++)
		for (size_t grade = 0; grade < GRADE_COUNT; grade++)
			rules->shares[item][grade] = (struct mode_share){false, false, FRACTION_ZERO, FRACTION_ZERO, ""};
	if (node == NULL || !read_mapping(reader, node, "mode limits", keys, COUNT_OF(mode_items), values))
		return;
	for (size_t index = 0; index < COUNT_OF(mode_items); index++)
		if (values[index] != NULL && read_mapping(reader, values[index], keys[index].name, grade_keys, GRADE_COUNT, grades))
			for (size_t grade = 0; grade < GRADE_COUNT; grade++)
				read_share(reader, grades[grade], keys[index].name, &rules->shares[mode_items[index]][grade]);
}

// Reads [active, front porch, sync, back porch]; false after reporting.
static bool read_counts(struct reader *reader, const struct node *node, const char *what, int64_t counts[COUNT_COUNT])
{
	if (node == NULL || !expect_kind(reader, node, NODE_LIST, what))
		return false;
	if (node->count != COUNT_COUNT) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "%s: wanted active, front porch, sync and back porch, found %zu",
		         what, node->count);
		return false;
	}
	bool good = true;
	for (size_t index = 0; index < COUNT_COUNT; index++)
		good = read_whole(reader, node->items[index], what, 1, LIMIT_DOTS, &counts[index]) && good;
	return good;
}

static bool read_polarity(struct reader *reader, const struct node *node, const char *what, int64_t *polarity)
{
	static const char *const words[] = {"positive", "negative"};
	size_t choice;
	if (node == NULL || !read_choice(reader, node, what, words, COUNT_OF(words), &choice))
		return false;
	*polarity = choice == 0 ? 1 : -1;
	return true;
}

struct mode {
	struct fraction clock_hz; // > 0
	int64_t dots[COUNT_COUNT], lines[COUNT_COUNT];
	int64_t horizontal_polarity, vertical_polarity;
};

static bool read_figures(struct reader *reader, const struct node *const *values, struct mode *mode)
{
	struct quantity clock = {FRACTION_ZERO, DIMENSION_FREQUENCY};
	bool good = values[MODE_CLOCK] != NULL &&
	            read_quantity(reader, values[MODE_CLOCK], "pixel clock", 1u << DIMENSION_FREQUENCY, &clock);
	if (good && clock.value.numerator <= 0) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, values[MODE_CLOCK]->place, "pixel clock: must be above zero");
		good = false;
	}
	mode->clock_hz = clock.value;
	good = read_counts(reader, values[MODE_HORIZONTAL], "dots", mode->dots) && good;
	good = read_counts(reader, values[MODE_VERTICAL], "lines", mode->lines) && good;
	good = read_polarity(reader, values[MODE_HORIZONTAL_SYNC], "horizontal sync", &mode->horizontal_polarity) && good;
	return read_polarity(reader, values[MODE_VERTICAL_SYNC], "vertical sync", &mode->vertical_polarity) && good;
}

static int64_t total(const int64_t counts[COUNT_COUNT])
{
	return counts[COUNT_ACTIVE] + counts[COUNT_FRONT_PORCH] + counts[COUNT_SYNC] + counts[COUNT_BACK_PORCH];
}

// Twice the count of dots or lines that an item is, or 0 if it is none.
static int64_t twice_the_count(const struct mode *mode, enum limit_item item)
{
	const int64_t *dots = mode->dots, *lines = mode->lines;
	switch (item) {
	case ITEM_FRONT_PORCH: return 2 * dots[COUNT_FRONT_PORCH];
	case ITEM_SYNC_WIDTH: return 2 * dots[COUNT_SYNC];
	case ITEM_BACK_PORCH: return 2 * dots[COUNT_BACK_PORCH];
	case ITEM_HORIZONTAL_BLANKING: return 2 * (total(dots) - dots[COUNT_ACTIVE]);
	case ITEM_PICTURE_START: return 2 * (dots[COUNT_SYNC] + dots[COUNT_BACK_PORCH]);
	case ITEM_PICTURE_WIDTH: return 2 * dots[COUNT_ACTIVE];
	case ITEM_HORIZONTAL_CENTRE: return 2 * (dots[COUNT_SYNC] + dots[COUNT_BACK_PORCH]) + dots[COUNT_ACTIVE];
	case ITEM_LINES_PER_FIELD: return 2 * total(lines);
	case ITEM_VERTICAL_SYNC: return 2 * lines[COUNT_SYNC];
	case ITEM_VERTICAL_FRONT_PORCH: return 2 * lines[COUNT_FRONT_PORCH];
	case ITEM_VERTICAL_BACK_PORCH: return 2 * lines[COUNT_BACK_PORCH];
	case ITEM_VERTICAL_BLANKING: return 2 * (total(lines) - lines[COUNT_ACTIVE]);
	case ITEM_PICTURE_TOP: return 2 * (lines[COUNT_SYNC] + lines[COUNT_BACK_PORCH]);
	case ITEM_PICTURE_HEIGHT: return 2 * lines[COUNT_ACTIVE];
	case ITEM_VERTICAL_CENTRE: return 2 * (lines[COUNT_SYNC] + lines[COUNT_BACK_PORCH]) + lines[COUNT_ACTIVE];
	default: return 0;
	}
}

// A mode's own value of an item; false if it does not fit.
static bool mode_value(const struct mode *mode, enum limit_item item, struct fraction *value)
{
	const int64_t twice = twice_the_count(mode, item);
	switch (item) {
	case ITEM_PIXEL_CLOCK: *value = mode->clock_hz; return true;
	case ITEM_LINE_RATE: return fraction_divide(mode->clock_hz, fraction_whole(total(mode->dots)), value);
	case ITEM_FRAME_RATE:
		return fraction_divide(mode->clock_hz, fraction_whole(total(mode->dots) * total(mode->lines)), value);
	case ITEM_HORIZONTAL_POLARITY: *value = fraction_whole(mode->horizontal_polarity); return true;
	case ITEM_VERTICAL_POLARITY: *value = fraction_whole(mode->vertical_polarity); return true;
	default: break;
	}
	if (!fraction_make(twice, 2, value))
		return false;
	return limit_item_facts(item)->dimension == DIMENSION_LINES || fraction_divide(*value, mode->clock_hz, value);
}

// False if a value does not fit or memory is out.
static bool make_limit(struct reader *reader, const struct mode *mode, const char *mode_source, const struct mode_share *share,
                       struct limit *limit)
{
	limit->has_nominal = true;
	limit->low = limit->high = FRACTION_ZERO;
	limit->has_low = share->has_low;
	limit->has_high = share->has_high;
	limit->source = arena_format(reader->arena, "%s; %s", mode_source, share->source);
	return limit->source != NULL && mode_value(mode, limit->item, &limit->nominal) &&
	       (!share->has_low || fraction_multiply(limit->nominal, share->low, &limit->low)) &&
	       (!share->has_high || fraction_multiply(limit->nominal, share->high, &limit->high));
}

static void make_limits(struct reader *reader, const struct node *place, const struct mode *mode, const char *source,
                        const struct mode_rules *rules, struct standard *standard)
{
	struct limit *limits = reader_array(reader, COUNT_OF(mode_items) * GRADE_COUNT, sizeof *limits);
	if (limits == NULL)
		return;
	standard->limits = limits;
	for (size_t index = 0; index < COUNT_OF(mode_items); index++)
		for (size_t grade = 0; grade < GRADE_COUNT; grade++) {
			struct limit *limit = &limits[standard->limit_count++];
			limit->item = mode_items[index];
			limit->grade = (enum limit_grade)grade;
			if (make_limit(reader, mode, source, &rules->shares[limit->item][grade], limit))
				continue;
			if (limit->source == NULL)
				diagnose(reader->diagnostics, RULE_OUT_OF_MEMORY, place->place, "memory is out");
			else
				diagnose(reader->diagnostics, RULE_BAD_QUANTITY, place->place, "%s cannot be kept exactly",
				         limit_item_facts(limit->item)->name);
			return;
		}
}

static void read_mode_note(struct reader *reader, const struct node *node, struct standard *mode)
{
	if (node == NULL)
		return;
	const char **notes = reader_array(reader, 1, sizeof *notes);
	if (notes == NULL || !read_scalar(reader, node, "note", &notes[0]))
		return;
	mode->notes = notes;
	mode->note_count = 1;
}

void read_mode(struct reader *reader, const struct node_pair *pair, const struct mode_rules *rules, struct standard *standard)
{
	const struct node *values[MODE_KEY_COUNT];
	const char *source = "";
	struct mode mode;
	*standard = (struct standard){.name = pair->key->text, .title = "", .documents = "", .fields = 1};
	if (!read_mapping(reader, pair->value, "a mode", mode_keys, MODE_KEY_COUNT, values))
		return;
	catalogue_text(reader, values[MODE_TITLE], "title", &standard->title);
	catalogue_text(reader, values[MODE_DOCUMENTS], "documents", &standard->documents);
	catalogue_text(reader, values[MODE_SOURCE], "source", &source);
	read_mode_note(reader, values[MODE_NOTE], standard);
	if (read_figures(reader, values, &mode))
		make_limits(reader, pair->value, &mode, source, rules, standard);
}
