// The picture of a table: a map of the addresses of each stage, what they are for, codes of decoders, banks.
#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/address_use.h"
#include "view/figures.h"
#include "view/palette.h"
#include "view/pictures.h"

#define MAP_LEFT PX(110)
#define MAP_SIDE PX(640)       // at most
#define LARGEST_BIN PX(40)
#define STRIP_WIDTH PX(210)    // for the codes of a decoder
#define LIST_WIDTH PX(430)
#define HEAD_HEIGHT PX(76)
#define STAGE_HEAD PX(52)
#define LINE_HEIGHT PX(24)
#define MOST_CODES 16u
#define MOST_COUNTED_BITS 8u
#define MOST_BANKS 16u
#define BANK_WIDTH PX(250)
#define BANK_HEIGHT PX(30)
#define BANKS_IN_ROW 4u

struct table_drawing {
	struct svg *svg;
	struct arena *arena;
	const struct table *table;
	const struct plan *plan;
	struct address_use uses[STAGE_COUNT];
	unsigned stages;
	bool has_strip;
};

// Line types have the patterns of the palette for signs; the letters beside them are those of the list.
static const enum hue use_hues[NAMED_USES] = {HUE_PICTURE, HUE_SYNC, HUE_BURST, HUE_OTHER, HUE_STRETCH, HUE_VERTICAL};
static const char letters[USE_COUNT + 1] = "ABCDEF+-";

static uint32_t columns_of(const struct address_use *use)
{
	return (uint32_t)1 << (use->bin_bits + 1) / 2;
}

static uint32_t rows_of(const struct address_use *use)
{
	return (uint32_t)1 << use->bin_bits / 2;
}

static int64_t bin_side(const struct address_use *use)
{
	const int64_t side = MAP_SIDE / columns_of(use);
	return side > LARGEST_BIN ? LARGEST_BIN : side;
}

static void fill_use(struct svg *svg, unsigned kind)
{
	if (kind < NAMED_USES)
		svg_reference(svg, "fill", palette_hue(use_hues[kind])->name);
	else if (kind == USE_OTHERS)
		svg_reference(svg, "fill", "blanking");
	else
		svg_attribute(svg, "class", "spare");
}

static const char *use_name(const struct table_drawing *drawing, const struct address_use *use, unsigned kind)
{
	if (kind == USE_SPARE)
		return "spare";
	return kind == USE_OTHERS ? "other line types" : drawing->plan->lines[use->types[kind]].name;
}

// The bins of a row of the map from one on that are alike.
static uint32_t alike(const struct address_use *use, uint32_t bin, unsigned kind, bool whole)
{
	const uint32_t columns = columns_of(use), end = (bin / columns + 1) * columns;
	uint32_t next = bin + 1;
	bool next_whole;
	while (next < end && bin_use(use, next, &next_whole) == kind && next_whole == whole)
		next++;
	return next;
}

static void put_rectangle(struct text *data, int64_t x, int64_t y, int64_t width, int64_t height)
{
	text_put(data, "M");
	svg_put_length(data, x);
	text_put(data, " ");
	svg_put_length(data, y);
	text_put(data, "h");
	svg_put_length(data, width);
	text_put(data, "v");
	svg_put_length(data, height);
	text_put(data, "h");
	svg_put_length(data, -width);
	text_put(data, "z");
}

// A rectangle of bins of one use: runs below each other.
struct bin_area {
	int64_t x, y, width, height;
};

// Grows the area by a run where that continues it, and keeps the largest.
static void note_area(struct bin_area *area, struct bin_area *largest, struct bin_area run)
{
	if (run.x == area->x && run.width == area->width && run.y == area->y + area->height)
		area->height += run.height;
	else
		*area = run;
	if (area->width * area->height > largest->width * largest->height)
		*largest = *area;
}

// A bin that is not all for one use is half as high. Returns where the most room for a letter is.
static struct bin_area draw_bins(const struct table_drawing *drawing, const struct address_use *use, unsigned kind, int64_t top)
{
	const int64_t side = bin_side(use);
	const uint32_t columns = columns_of(use);
	struct bin_area area = {0, 0, 0, 0}, largest = {0, 0, 0, 0};
	struct text data = {0};
	bool whole;
	for (uint32_t bin = 0; bin >> use->bin_bits == 0;) {
		const unsigned found = bin_use(use, bin, &whole);
		const uint32_t end = alike(use, bin, found, whole);
		const int64_t x = MAP_LEFT + bin % columns * side, y = top + bin / columns * side, width = (int64_t)(end - bin) * side;
		if (found == kind)
			put_rectangle(&data, x, whole ? y : y + side / 2, width, whole ? side : side - side / 2);
		if (found == kind)
			note_area(&area, &largest, (struct bin_area){x, y, width, side});
		bin = end;
	}
	if (data.length > 0) {
		svg_open(drawing->svg, "path");
		fill_use(drawing->svg, kind);
		svg_attribute(drawing->svg, "d", text_string(&data));
		svg_close(drawing->svg);
	}
	svg_release(drawing->svg, &data);
	return largest;
}

static void draw_letter(struct svg *svg, unsigned kind, const struct bin_area *area)
{
	const char words[] = {letters[kind], '\0'};
	const int64_t x = area->x + area->width / 2, y = area->y + area->height / 2;
	if (area->width < PX(30) || area->height == 0)
		return;
	svg_box(svg, "plate", x - PX(9), y - PX(9), PX(18), PX(18));
	svg_text(svg, "letter", x, y + PX(5), ANCHOR_MIDDLE, words);
}

static void draw_addresses(const struct table_drawing *drawing, const struct address_use *use, int64_t top)
{
	const int64_t side = bin_side(use);
	const uint32_t rows = rows_of(use), columns = columns_of(use);
	const uint32_t step = side >= PX(16) ? 1 : side >= PX(8) ? 4 : 8;
	struct text words = {0};
	for (uint32_t row = 0; row < rows; row += step) {
		words.length = 0;
		text_put_hex(&words, (uint64_t)row * columns << (use->bits - use->bin_bits), use->bits);
		svg_text(drawing->svg, "small", MAP_LEFT - PX(8), top + row * side + PX(11), ANCHOR_END, text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

static void put_asserting(const struct table_drawing *drawing, size_t field, uint32_t code, struct text *words)
{
	bool any = false;
	for (size_t signal = 0; signal < drawing->plan->signal_count; signal++) {
		const struct signal *decoded = &drawing->plan->signals[signal];
		if (decoded->origin != FROM_FIELD || decoded->field != field)
			continue;
		for (size_t index = 0; index < drawing->table->code_counts[signal]; index++) {
			if (drawing->table->codes[signal][index] != code)
				continue;
			text_printf(words, "%s%s", any ? ", " : "", decoded->name);
			any = true;
		}
	}
	text_put(words, any ? "" : "none");
}

static bool is_decoded(const struct plan *plan, size_t field)
{
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].origin == FROM_FIELD && plan->signals[signal].field == field)
			return true;
	return false;
}

// The decoded field whose codes are regions of the map: at the top of the address, and each code a row or more. SIZE_MAX: none.
static size_t strip_field(const struct table_drawing *drawing, const struct address_use *use)
{
	const struct machine_plan *machine = &drawing->plan->machine;
	for (size_t field = 0; use->stage == STAGE_LINE && field < machine->field_count; field++)
		if (is_decoded(drawing->plan, field) && machine->fields[field].high + 1 == use->bits &&
		    machine->fields[field].high - machine->fields[field].low + 1 <= use->bin_bits / 2)
			return field;
	return SIZE_MAX;
}

static void draw_strip(const struct table_drawing *drawing, const struct address_use *use, int64_t top)
{
	const size_t index = strip_field(drawing, use);
	if (index == SIZE_MAX)
		return;
	const struct field *field = &drawing->plan->machine.fields[index];
	const uint32_t codes = (uint32_t)1 << (field->high - field->low + 1);
	const int64_t height = rows_of(use) * bin_side(use), x = MAP_LEFT + columns_of(use) * bin_side(use) + PX(10);
	struct text words = {0};
	for (uint32_t code = 0; code < codes; code++) {
		const int64_t y = top + svg_share(height, code, codes), end = top + svg_share(height, code + 1, codes);
		svg_line(drawing->svg, "rule", x, y + PX(2), x, end - PX(2));
		if (end - y < PX(16))
			continue;
		words.length = 0;
		text_printf(&words, "%s %" PRIu32 ": ", field->name, code);
		put_asserting(drawing, index, code, &words);
		svg_fitted(drawing->svg, "small", x + PX(8), (y + end) / 2 + PX(5), ANCHOR_START, STRIP_WIDTH - PX(28), 13,
		           text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

// "A picture  17280 rows, 26.367 %, 0x0000 to 0x77FF".
static void draw_use(const struct table_drawing *drawing, const struct address_use *use, unsigned kind, int64_t x, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	struct fraction share;
	const char letter[] = {letters[kind], '\0'};
	svg_group(svg, "use");
	svg_attribute(svg, "data-type", use_name(drawing, use, kind));
	svg_whole(svg, "data-rows", use->rows[kind]);
	svg_open(svg, "rect");
	svg_length(svg, "x", x);
	svg_length(svg, "y", y);
	svg_length(svg, "width", PX(32));
	svg_length(svg, "height", PX(18));
	fill_use(svg, kind);
	svg_close(svg);
	if (kind < USE_OTHERS)
		svg_text(svg, "letter", x + PX(48), y + PX(14), ANCHOR_MIDDLE, letter);
	if (kind == USE_SPARE)
		text_put_count(&words, use->rows[kind], "address", "addresses");
	else
		text_put_count(&words, use->rows[kind], "row", "rows");
	if (fraction_make((int64_t)use->rows[kind] * 100, (int64_t)1 << use->bits, &share)) {
		text_put(&words, ", ");
		text_put_rounded(&words, share, 1);
		text_put(&words, " %");
	}
	if (kind != USE_SPARE) {
		text_put(&words, ", ");
		text_put_hex(&words, use->first[kind], use->bits);
		text_put(&words, " to ");
		text_put_hex(&words, use->last[kind], use->bits);
	}
	svg_named(svg, x + PX(62), y + PX(14), ANCHOR_START, LIST_WIDTH - PX(70), use_name(drawing, use, kind), text_string(&words));
	svg_close(svg);
	svg_release(svg, &words);
}

static int64_t draw_uses(const struct table_drawing *drawing, const struct address_use *use, int64_t x, int64_t y)
{
	for (unsigned kind = 0; kind < USE_COUNT; kind++) {
		if (use->rows[kind] == 0)
			continue;
		if (drawing->svg != NULL)
			draw_use(drawing, use, kind, x, y);
		y += LINE_HEIGHT;
	}
	return y;
}

static unsigned width_of(const struct field *field)
{
	return field->high - field->low + 1;
}

static bool code_used(const struct table_drawing *drawing, size_t field, uint32_t code)
{
	for (size_t signal = 0; signal < drawing->plan->signal_count; signal++) {
		const struct signal *decoded = &drawing->plan->signals[signal];
		const bool here = decoded->origin == FROM_FIELD && decoded->field == field;
		for (size_t index = 0; here && index < drawing->table->code_counts[signal]; index++)
			if (drawing->table->codes[signal][index] == code)
				return true;
	}
	return false;
}

// The codes of a field at which something is asserted, with the rows that have them. Returns where the next line is.
static int64_t draw_codes(const struct table_drawing *drawing, size_t index, int64_t x, int64_t y)
{
	const struct field *field = &drawing->plan->machine.fields[index];
	struct svg *svg = drawing->svg;
	struct text words = {0};
	uint32_t counts[1u << MOST_COUNTED_BITS] = {0};
	const bool counted = width_of(field) <= MOST_COUNTED_BITS;
	unsigned shown = 0;
	if (counted && svg != NULL)
		rows_by_code(drawing->table, field, counts);
	text_printf(&words, "decoder on %s, bits %u..%u", field->name, field->high, field->low);
	if (svg != NULL)
		svg_fitted(svg, "name", x, y + PX(20), ANCHOR_START, LIST_WIDTH - PX(20), SVG_NAME_SIZE, text_string(&words));
	y += PX(32);
	for (uint32_t code = 0; code >> width_of(field) == 0 && shown < MOST_CODES; code++) {
		if (!code_used(drawing, index, code))
			continue;
		words.length = 0;
		text_printf(&words, "code %" PRIu32 " asserts ", code);
		put_asserting(drawing, index, code, &words);
		if (counted) {
			text_put(&words, ": ");
			text_put_count(&words, counts[code], "row", "rows");
		}
		if (svg != NULL)
			svg_fitted(svg, "small", x, y + PX(14), ANCHOR_START, LIST_WIDTH - PX(20), 13, text_string(&words));
		y += PX(20);
		shown++;
	}
	if (drawing->svg != NULL)
		svg_release(svg, &words);
	else
		text_release(&words);
	return y;
}

static int64_t draw_lists(const struct table_drawing *drawing, const struct address_use *use, int64_t x, int64_t y)
{
	y = draw_uses(drawing, use, x, y) + PX(8);
	for (size_t field = 0; use->stage == STAGE_LINE && field < drawing->plan->machine.field_count; field++)
		if (is_decoded(drawing->plan, field))
			y = draw_codes(drawing, field, x, y);
	return y;
}

static int64_t stage_height(const struct table_drawing *drawing, const struct address_use *use)
{
	struct table_drawing measuring = *drawing;
	measuring.svg = NULL;
	const int64_t map = rows_of(use) * bin_side(use), lists = draw_lists(&measuring, use, 0, 0);
	return STAGE_HEAD + (map > lists ? map : lists) + PX(40);
}

static int64_t picture_width(const struct table_drawing *drawing)
{
	int64_t widest = 0;
	for (unsigned stage = 0; stage < drawing->stages; stage++) {
		const int64_t width = columns_of(&drawing->uses[stage]) * bin_side(&drawing->uses[stage]);
		widest = width > widest ? width : widest;
	}
	const int64_t width = MAP_LEFT + widest + (drawing->has_strip ? STRIP_WIDTH : PX(40)) + LIST_WIDTH;
	return width < PX(1100) ? PX(1100) : width;
}

static void put_stage_words(const struct table_drawing *drawing, const struct address_use *use, struct text *words)
{
	const struct stage_wiring *wiring = wiring_stage(&drawing->table->wiring, use->stage);
	if (drawing->stages > 1)
		text_printf(words, "%s stage: ", stage_name(use->stage));
	text_put_count(words, (uint64_t)1 << use->bits, "address", "addresses");
	text_printf(words, " of %u bits", use->bits);
	if (use->bits > wiring->state_bits)
		text_printf(words, ", %u of the kind above %u of the state", use->bits - wiring->state_bits, wiring->state_bits);
}

// "rom0, rom1 (28C010): 131072 words; what is not wired repeats".
static void put_chip_words(const struct table_drawing *drawing, const struct address_use *use, struct text *words)
{
	const struct chip *last = NULL;
	for (size_t index = 0; index < drawing->plan->chip_count; index++) {
		const struct chip *chip = &drawing->plan->chips[index];
		if (chip->stage != use->stage)
			continue;
		text_printf(words, "%s%s %s", last != NULL ? ", " : "in ", chip->label, chip->part->name);
		last = chip;
	}
	text_printf(words, "; a square is ");
	text_put_count(words, (uint64_t)1 << (use->bits - use->bin_bits), "address", "addresses");
	if (use->bits > use->bin_bits)
		text_put(words, ", one half as high is for more than one use");
}

static void draw_stage(const struct table_drawing *drawing, const struct address_use *use, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	const int64_t top = y + STAGE_HEAD, width = columns_of(use) * bin_side(use), height = rows_of(use) * bin_side(use);
	svg_group(svg, "map");
	svg_attribute(svg, "data-stage", drawing->stages > 1 ? stage_name(use->stage) : "loop");
	svg_whole(svg, "data-bits", use->bits);
	put_stage_words(drawing, use, &words);
	svg_text(svg, "name", PX(16), y + PX(16), ANCHOR_START, text_string(&words));
	words.length = 0;
	put_chip_words(drawing, use, &words);
	svg_fitted(svg, "small", PX(16), y + PX(36), ANCHOR_START, picture_width(drawing) - PX(32), 13, text_string(&words));
	svg_box(svg, "spare", MAP_LEFT, top, width, height);
	struct bin_area areas[USE_SPARE];
	for (unsigned kind = 0; kind < USE_SPARE; kind++)
		areas[kind] = draw_bins(drawing, use, kind, top);
	svg_box(svg, "rule outline", MAP_LEFT, top, width, height);
	for (unsigned kind = 0; kind < USE_OTHERS; kind++)
		draw_letter(svg, kind, &areas[kind]);
	draw_addresses(drawing, use, top);
	draw_strip(drawing, use, top);
	(void)draw_lists(drawing, use, MAP_LEFT + width + (drawing->has_strip ? STRIP_WIDTH : PX(40)), top);
	svg_close(svg);
	svg_release(svg, &words);
}

static int64_t banks_height(size_t count)
{
	if (count == 0)
		return 0;
	const size_t shown = count > MOST_BANKS ? MOST_BANKS : count;
	return PX(34) + (int64_t)((shown + BANKS_IN_ROW - 1) / BANKS_IN_ROW) * (BANK_HEIGHT + PX(6)) + PX(14);
}

static void draw_banks(const struct table_drawing *drawing, unsigned bank, const struct bank_words *banks, size_t count, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	if (count == 0)
		return;
	text_printf(&words, "banks, chosen by %u jumper%s; this picture is bank %u", drawing->plan->bank_bits,
	            drawing->plan->bank_bits == 1 ? "" : "s", bank);
	if (count > MOST_BANKS)
		text_printf(&words, " of %zu, of which %u are named here", count, MOST_BANKS);
	svg_text(svg, "name", PX(16), y + PX(16), ANCHOR_START, text_string(&words));
	for (size_t index = 0; index < count && index < MOST_BANKS; index++) {
		const int64_t x = PX(16) + (int64_t)(index % BANKS_IN_ROW) * (BANK_WIDTH + PX(8));
		const int64_t top = y + PX(30) + (int64_t)(index / BANKS_IN_ROW) * (BANK_HEIGHT + PX(6));
		svg_box(svg, banks[index].number == bank ? "edge outline" : "hair outline", x, top, BANK_WIDTH, BANK_HEIGHT);
		words.length = 0;
		text_printf(&words, "bank %u: %s", banks[index].number, banks[index].plan);
		svg_fitted(svg, banks[index].number == bank ? "name" : "small", x + PX(10), top + PX(20), ANCHOR_START, BANK_WIDTH - PX(18), 14,
		           text_string(&words));
	}
	svg_release(svg, &words);
}

static bool count_uses(struct table_drawing *drawing)
{
	drawing->stages = machine_stages(&drawing->plan->machine);
	for (unsigned stage = 0; stage < drawing->stages; stage++) {
		if (!address_use_count(&drawing->uses[stage], drawing->table, (enum stage)stage, drawing->arena))
			return false;
		drawing->has_strip = drawing->has_strip || strip_field(drawing, &drawing->uses[stage]) != SIZE_MAX;
	}
	return true;
}

static void put_description(const struct table_drawing *drawing, struct text *words)
{
	for (unsigned stage = 0; stage < drawing->stages; stage++) {
		const struct address_use *use = &drawing->uses[stage];
		text_put(words, stage > 0 ? " " : "");
		put_stage_words(drawing, use, words);
		text_put(words, ": ");
		for (unsigned kind = 0; kind < USE_COUNT; kind++) {
			if (use->rows[kind] > 0)
				text_printf(words, "%s %" PRIu32 "%s", use_name(drawing, use, kind), use->rows[kind], kind == USE_SPARE ? "" : ", ");
		}
		text_put(words, ".");
	}
}

static void draw_whole(struct table_drawing *drawing, struct text *out, const struct picture *picture, unsigned bank,
                       const struct bank_words *banks, size_t bank_count)
{
	struct svg *svg = drawing->svg;
	struct text title = {0}, description = {0};
	int64_t heights[STAGE_COUNT], height = HEAD_HEIGHT + banks_height(bank_count);
	for (unsigned stage = 0; stage < drawing->stages; stage++) {
		heights[stage] = stage_height(drawing, &drawing->uses[stage]);
		height += heights[stage];
	}
	text_printf(&title, "%s: the addresses of the EEPROMs", drawing->plan->name);
	put_description(drawing, &description);
	svg_begin(svg, out, picture, picture_width(drawing), height, text_string(&title), text_string(&description));
	svg_fitted(svg, "title", PX(16), PX(34), ANCHOR_START, picture_width(drawing) - PX(32), SVG_TITLE_SIZE, text_string(&title));
	svg_fitted(svg, "note", PX(16), PX(58), ANCHOR_START, picture_width(drawing) - PX(32), 15, drawing->plan->note);
	int64_t y = HEAD_HEIGHT;
	draw_banks(drawing, bank, banks, bank_count, y);
	y += banks_height(bank_count);
	for (unsigned stage = 0; stage < drawing->stages; stage++) {
		draw_stage(drawing, &drawing->uses[stage], y);
		y += heights[stage];
	}
	svg_end(svg);
	svg_release(svg, &title);
	svg_release(svg, &description);
}

bool view_table_svg(struct text *out, const struct picture *picture, const struct table *table, unsigned bank,
                    const struct bank_words *banks, size_t bank_count)
{
	struct arena *arena = arena_create();
	struct svg svg = {.out = out, .picture = picture};
	struct table_drawing drawing = {.svg = &svg, .arena = arena, .table = table, .plan = table->timeline->plan};
	const bool made = arena != NULL && count_uses(&drawing);
	if (made)
		draw_whole(&drawing, out, picture, bank, banks, bank_count);
	arena_destroy(arena);
	return made && !out->failed;
}
