// Where `stretch: auto` places its cells by limits. Cells are 9 us, stretched 12; a cycle is 4 us, so that lines of 17, 18 and 19 cells
// (153, 162 and 171 us) take one, two and three stretched cells: 156, 168 and 180 us.
#include "laid.h"

#include "layout/placement.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

enum { SYNC = 1, BLANK = 2, BURST = 4, LATE = 8 };

static struct laid lay_text(const char *text)
{
	struct laid laid = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	assert_non_null(laid.arena);
	assert_non_null(laid.diagnostics);
	struct source *source = arena_alloc(laid.arena, sizeof *source);
	assert_non_null(source);
	*source = (struct source){"quay.yaml", text, strlen(text)};
	const struct catalogue *catalogue = catalogue_load(laid.arena, laid.diagnostics);
	assert_non_null(catalogue);
	laid.plan = plan_read(source, catalogue, laid.diagnostics);
	laid.timeline = laid.plan != NULL ? timeline_create(laid.plan, laid.diagnostics) : NULL;
	return laid;
}

#define HEAD(clock, standard, signals) \
	"scanlatch: 1\nname: quay\n" standard \
	"clock: { master: 1 MHz, cell: 9 ticks, stretch: 3 ticks, subcarrier: master / 4, phase: every line" clock " }\n" \
	"signals:\n" signals \
	"machine: { form: loop, state: 18 bits }\nparts: { WIDE: { address pins: 18, data pins: 16, access: [100 ns] } }\nchips: { part: WIDE }\nlines:\n"

#define SIGNALS \
	"  sync: { role: composite sync, active: low }\n" \
	"  blank: { role: blanking, active: high }\n" \
	"  burst: { role: burst gate, active: high }\n" \
	"  late: { role: stretch, active: high }\n"

#define BROAD "  broad: { regions: [ { region: all, cells: 14, assert: [sync, blank] }, { region: rest, cells: 2, assert: [blank] } ] }\n"

// 18 cells: sync 0-1, breezeway 2, burst 3-4, porch 5, picture 6-15, front 16-17.
#define ALL_MARKED \
	"  picture:\n    regions:\n" \
	"      - { region: sync, cells: 2, assert: [sync, blank], stretch: auto }\n" \
	"      - { region: breezeway, cells: 1, assert: [blank], stretch: auto }\n" \
	"      - { region: burst, cells: 2, assert: [blank, burst], stretch: auto }\n" \
	"      - { region: porch, cells: 1, assert: [blank], stretch: auto }\n" \
	"      - { region: picture, cells: 10, stretch: auto }\n" \
	"      - { region: front, cells: 2, assert: [blank], stretch: auto }\n"

#define FRAME "frame: [ { repeat: 1, line: broad }, { repeat: 5, line: picture } ]\n"

#define OWN(limits) "standard: { limits: { " limits " } }\n"

static const struct placements *placements_of(const struct laid *laid)
{
	assert_laid(laid);
	assert_non_null(laid->timeline->placements);
	return laid->timeline->placements;
}

static void assert_counts(const struct placements *placements, const struct placement *placement, const char *counts)
{
	char found[64] = "";
	for (size_t segment = 0; segment < placements->segment_count; segment++)
		snprintf(found + strlen(found), sizeof found - strlen(found), "%u", placement->counts[segment]);
	assert_string_equal(found, counts);
}

static void assert_share(const struct placement *placement, int64_t numerator, int64_t denominator)
{
	assert_true(placement->has_share);
	assert_int_equal(placement->share.numerator, numerator);
	assert_int_equal(placement->share.denominator, denominator);
}

// Which cells of a line type are stretched, as text: "S" and ".".
static void assert_stretched(const struct laid *laid, size_t type, const char *cells)
{
	const struct laid_line *line = &laid->timeline->types[type];
	char found[64] = "";
	assert_true(line->cells < sizeof found);
	for (uint32_t cell = 0; cell < line->cells; cell++)
		found[cell] = line->asserted[cell] & LATE ? 'S' : '.';
	assert_string_equal(found, cells);
	for (uint32_t cell = 0; cell < laid->timeline->cell_count; cell++) {
		const struct cell_place place = timeline_place(laid->timeline, cell);
		const struct laid_line *of = &laid->timeline->types[laid->timeline->lines[place.line].type];
		assert_int_equal(laid->timeline->asserted[cell], of->asserted[place.cell]);
	}
}

// Burst is 18 us, 21 with one cell stretched and 24 with both. The other cell makes no difference: leftmost.
static void most_limits_then_leftmost(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("burst length: 20 us to 22 us"), SIGNALS) BROAD ALL_MARKED FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_true(placements->judged && placements->exhausted && placements->has_second);
	assert_int_equal(placements->segment_count, 6);
	assert_int_equal(placements->limits, 1);
	assert_counts(placements, &placements->best, "101000");
	assert_int_equal(placements->best.kept, 1);
	assert_share(&placements->best, 1, 1);
	assert_counts(placements, &placements->second, "011000");
	assert_share(&placements->second, 1, 1);
	assert_stretched(&laid, 1, "S..S..............");
	assert_int_equal(laid.timeline->types[1].ticks, 168);
	assert_int_equal(laid.timeline->types[1].regions[2].start_ticks, 30); // 2 + 1 cells and a stretch
	assert_int_equal(laid.timeline->types[1].regions[2].stretched, 1);
	release(&laid);
}

// Sync and burst may be 18 to 30: 18 has no margin, 21 half a tolerance, 24 a whole one. One cell each is best. Next best has no margin left in one
// of them: of these, the leftmost.
static void then_the_largest_smallest_margin(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("horizontal sync width: 18 us to 30 us, burst length: 18 us to 30 us"), SIGNALS) BROAD ALL_MARKED FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_counts(placements, &placements->best, "101000");
	assert_int_equal(placements->best.kept, 2);
	assert_share(&placements->best, 1, 2);
	assert_counts(placements, &placements->second, "200000");
	assert_int_equal(placements->second.kept, 2);
	assert_share(&placements->second, 0, 1);
	release(&laid);
}

// A limit kept is worth more than any margin: the front porch, 18 us, must have both cells to be kept, and then nothing else has margin.
static void a_limit_outweighs_margins(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("horizontal sync width: 18 us to 30 us, front porch: at least 24 us"), SIGNALS) BROAD ALL_MARKED FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_counts(placements, &placements->best, "000002");
	assert_int_equal(placements->best.kept, 2);
	assert_share(&placements->best, 0, 1);
	assert_counts(placements, &placements->second, "200000");
	assert_int_equal(placements->second.kept, 1);
	assert_share(&placements->second, 1, 1);
	assert_stretched(&laid, 1, "................SS");
	release(&laid);
}

// Breezeway is 9 us and has one cell: it cannot be 15.
static void segments_take_no_more_than_they_have(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("breezeway: 15 us to 16 us"), SIGNALS) BROAD ALL_MARKED FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_counts(placements, &placements->best, "200000");
	assert_int_equal(placements->best.kept, 0);
	assert_false(placements->best.has_share);
	assert_counts(placements, &placements->second, "110000");
	release(&laid);
}

// Of sync and breezeway alone none moves the picture: its limit is kept, but has no say.
static void what_does_not_move_has_no_say(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("picture width: 1 us to 1000 us"), SIGNALS) BROAD
	                            "  picture:\n    regions:\n"
	                            "      - { region: sync, cells: 2, assert: [sync, blank], stretch: auto }\n"
	                            "      - { region: breezeway, cells: 1, assert: [blank], stretch: auto }\n"
	                            "      - { region: picture, cells: 15 }\n" FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_true(placements->judged);
	assert_int_equal(placements->segment_count, 2);
	assert_counts(placements, &placements->best, "20");
	assert_int_equal(placements->best.kept, 1);
	assert_false(placements->best.has_share);
	assert_counts(placements, &placements->second, "11");
	release(&laid);
}

// Every cell has to be stretched: there is no second way.
static void one_way_alone(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("picture width: 1 us to 1000 us"), SIGNALS) BROAD
	                            "  picture:\n    regions:\n"
	                            "      - { region: sync, cells: 2, assert: [sync, blank] }\n"
	                            "      - { region: breezeway, cells: 1, assert: [blank], stretch: auto }\n"
	                            "      - { region: picture, cells: 14 }\n"
	                            "      - { region: front, cells: 1, assert: [blank], stretch: auto }\n" FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_true(placements->judged && placements->exhausted);
	assert_counts(placements, &placements->best, "11");
	assert_false(placements->has_second);
	release(&laid);
}

// With a clock that may be a tenth off, sync of 21 us may be 23.3.
static void the_accuracy_counts(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("horizontal sync width: at most 22 us"), SIGNALS) BROAD ALL_MARKED FRAME);
	assert_counts(placements_of(&laid), &placements_of(&laid)->best, "011000"); // 18 us has more margin than 21
	assert_counts(placements_of(&laid), &placements_of(&laid)->second, "010100");
	release(&laid);
	laid = lay_text(HEAD(", accuracy: 100000 ppm", OWN("horizontal sync width: 20 us to 22 us"), SIGNALS) BROAD ALL_MARKED FRAME);
	// 21 us may be 19.1 to 23.3; 18 us 16.4 to 20; 24 us 21.8 to 26.7: none is kept.
	assert_int_equal(placements_of(&laid)->best.kept, 0);
	release(&laid);
	laid = lay_text(HEAD("", OWN("horizontal sync width: 20 us to 22 us"), SIGNALS) BROAD ALL_MARKED FRAME);
	assert_counts(placements_of(&laid), &placements_of(&laid)->best, "110000");
	release(&laid);
}

// No standard, no limit of a line, a single segment or nothing to place: nothing is decided, and cells are leftmost.
static void nothing_to_decide(void **state)
{
	(void)state;
	static const char *const texts[] = {
		HEAD("", "", SIGNALS) BROAD ALL_MARKED FRAME,
		HEAD("", OWN("burst length: 20 us"), SIGNALS) BROAD ALL_MARKED FRAME, // for information
		HEAD("", OWN("vertical blanking: at least 19 lines"), SIGNALS) BROAD ALL_MARKED FRAME,
		HEAD("", OWN("subcarrier: at most 1 Hz"), SIGNALS) BROAD ALL_MARKED FRAME,
	};
	for (size_t index = 0; index < COUNT_OF(texts); index++) {
		struct laid laid = lay_text(texts[index]);
		assert_false(placements_of(&laid)->judged);
		assert_false(placements_of(&laid)->unweighed);
		assert_stretched(&laid, 1, "SS................");
		release(&laid);
	}
	struct laid laid = lay_text(HEAD("", OWN("picture width: 20 us to 22 us"), SIGNALS) BROAD
	                            "  picture:\n    regions:\n"
	                            "      - { region: sync, cells: 2, assert: [sync, blank] }\n"
	                            "      - { region: picture, cells: 16, stretch: auto }\n" FRAME);
	assert_false(placements_of(&laid)->judged);
	assert_stretched(&laid, 1, "..SS..............");
	release(&laid);
}

// Two regions with nothing between them that an edge of sync, blanking or burst could be are one segment; a third between them that is not marked
// takes no part in it.
static void segments_go_from_edge_to_edge(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("picture width: at least 141 us, horizontal sync width: at most 18 us"), SIGNALS "  load: { role: plain, active: high }\n") BROAD
	                            "  picture:\n    regions:\n"
	                            "      - { region: sync, cells: 2, assert: [sync, blank], stretch: auto }\n"
	                            "      - { region: porch, cells: 1, assert: [blank] }\n"
	                            "      - { region: first, cells: 1, stretch: auto }\n"
	                            "      - { region: second, cells: 3, assert: [load] }\n"
	                            "      - { region: third, cells: 11, assert: [load], stretch: auto }\n" FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_int_equal(placements->segment_count, 2);
	assert_int_equal(placements->segments[1].capacity, 12);
	assert_int_equal(placements->segments[1].cells[0], 3);
	assert_int_equal(placements->segments[1].cells[1], 7);
	assert_counts(placements, &placements->best, "02");
	assert_stretched(&laid, 1, "...S...S..........");
	release(&laid);
}

// An edge may be at the second cell of a line.
static void a_segment_of_one_cell(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("horizontal sync width: at most 10 us"), SIGNALS) BROAD
	                            "  picture:\n    regions:\n"
	                            "      - { region: sync, cells: 1, assert: [sync, blank], stretch: auto }\n"
	                            "      - { region: rest, cells: 17, assert: [blank], stretch: auto }\n" FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_int_equal(placements->segment_count, 2);
	assert_counts(placements, &placements->best, "02");
	release(&laid);
}

// A pulse of 4 cells is normal with 36 us, but broad with 39, a quarter of a line: what a stretched cell does cannot be added up.
static void a_cell_that_changes_a_pulse_to_another(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("horizontal sync width: at most 36 us"), SIGNALS) BROAD
	                            "  plain: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: rest, cells: 15, assert: [blank], stretch: 1 } ] }\n"
	                            "  wide: { regions: [ { region: sync, cells: 4, assert: [sync, blank], stretch: auto }, { region: rest, cells: 13, assert: [blank], stretch: auto } ] }\n"
	                            "frame: [ { repeat: 1, line: broad }, { repeat: 5, line: plain }, { repeat: 2, line: wide }, { repeat: 2, line: plain } ]\n");
	assert_true(placements_of(&laid)->unweighed);
	assert_false(placements_of(&laid)->judged);
	assert_stretched(&laid, 2, "S................");
	release(&laid);
}

// Horizontal and vertical sync make edges too.
static void separate_sync_makes_edges(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("horizontal sync width: at least 24 us"),
	                                 "  sync: { role: horizontal sync, active: low }\n"
	                                 "  blank: { role: blanking, active: high }\n"
	                                 "  field: { role: vertical sync, active: high }\n"
	                                 "  late: { role: stretch, active: high }\n")
	                            "  broad: { regions: [ { region: all, cells: 3, assert: [sync, field] }, { region: rest, cells: 13, assert: [field] } ] }\n"
	                            "  picture:\n    regions:\n"
	                            "      - { region: porch, cells: 3, assert: [blank], stretch: auto }\n"
	                            "      - { region: sync, cells: 2, assert: [blank, sync], stretch: auto }\n"
	                            "      - { region: field, cells: 3, assert: [blank, field], stretch: auto }\n"
	                            "      - { region: rest, cells: 10, assert: [blank], stretch: auto }\n" FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_int_equal(placements->segment_count, 4);
	assert_counts(placements, &placements->best, "0200");
	release(&laid);
}

// A marked region that asserts stretch by name is long already, and stays so: burst is 24 us; one cell more is placed elsewhere. 18 cells of
// which two are long are 168 us: none is needed. So the line has 17 others: 19 cells, 171 + 6 = 177, and one more.
static void what_is_stretched_by_name_stays(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("burst length: at most 18 us, picture width: at least 92 us"), SIGNALS) BROAD
	                            "  picture:\n    regions:\n"
	                            "      - { region: sync, cells: 2, assert: [sync, blank], stretch: auto }\n"
	                            "      - { region: breezeway, cells: 1, assert: [blank] }\n"
	                            "      - { region: burst, cells: 2, assert: [blank, burst, late], stretch: auto }\n"
	                            "      - { region: porch, cells: 2, assert: [blank] }\n"
	                            "      - { region: picture, cells: 10, stretch: auto }\n"
	                            "      - { region: front, cells: 2, assert: [blank] }\n" FRAME);
	const struct placements *placements = placements_of(&laid);
	assert_int_equal(placements->segment_count, 2);
	assert_counts(placements, &placements->best, "01");
	assert_stretched(&laid, 1, "...SS..S...........");
	assert_int_equal(laid.timeline->types[1].ticks, 180);
	release(&laid);
}

// Two line types of 17 cells with a cell to place each, sync 2 and 3 cells: 18 and 27 us. Between 26 and 28 only the second is kept, if it is
// not stretched; both together never. Burst lengths are 9 us each and may be 12: best of both in burst.
#define TYPE(name, sync, rest) \
	"  " name ":\n    regions:\n" \
	"      - { region: sync, cells: " sync ", assert: [sync, blank], stretch: auto }\n" \
	"      - { region: burst, cells: 1, assert: [blank, burst], stretch: auto }\n" \
	"      - { region: porch, cells: 2, assert: [blank], stretch: auto }\n" \
	"      - { region: picture, cells: " rest " }\n"

static void several_line_types(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("horizontal sync width: 18 us to 27 us, burst length: 8 us to 13 us"), SIGNALS) BROAD TYPE("narrow", "2", "12")
	                            TYPE("wide", "3", "11") "frame: [ { repeat: 1, line: broad }, { repeat: 3, line: narrow }, { repeat: 3, line: wide } ]\n");
	const struct placements *placements = placements_of(&laid);
	assert_int_equal(placements->segment_count, 6);
	assert_int_equal(placements->segments[2].type, 1);
	assert_int_equal(placements->segments[3].type, 2);
	// The wide sync may not have a cell (30 is too much): it has no margin, and 27 is kept with share 0. The narrow one, in all ways, is kept
	// with 18 or 21. All ways that keep both have the smallest share 0: leftmost.
	assert_counts(placements, &placements->best, "100010");
	assert_int_equal(placements->best.kept, 2);
	assert_share(&placements->best, 0, 1);
	assert_counts(placements, &placements->second, "100001");
	release(&laid);
	// Without sync's limit: burst of 9 us has a margin of 1 of 5/2, that of 12 as well; a cell in either does as well as none.
	laid = lay_text(HEAD("", OWN("burst length: 9 us to 13 us"), SIGNALS) BROAD TYPE("narrow", "2", "12")
	                TYPE("wide", "3", "11") "frame: [ { repeat: 1, line: broad }, { repeat: 3, line: narrow }, { repeat: 3, line: wide } ]\n");
	placements = placements_of(&laid);
	assert_counts(placements, &placements->best, "010010");
	assert_share(&placements->best, 1, 2);
	assert_counts(placements, &placements->second, "100100");
	assert_share(&placements->second, 0, 1);
	release(&laid);
}

// A line type that no block uses is placed leftmost.
static void line_types_that_are_not_used(void **state)
{
	(void)state;
	struct laid laid = lay_text(HEAD("", OWN("burst length: 11 us to 13 us"), SIGNALS) BROAD TYPE("narrow", "2", "12")
	                            TYPE("wide", "3", "11") "frame: [ { repeat: 1, line: broad }, { repeat: 3, line: narrow } ]\n");
	assert_counts(placements_of(&laid), &placements_of(&laid)->best, "010100");
	assert_int_equal(placements_of(&laid)->best.kept, 1);
	release(&laid);
}

// What would take too long is not reckoned, and what cannot be laid out is refused for its size.
static void plans_that_are_too_large(void **state)
{
	(void)state;
	struct text text = {0};
	text_put(&text, HEAD("", OWN("burst length: 11 us to 13 us"), SIGNALS) BROAD "  picture:\n    regions:\n"
	         "      - { region: sync, cells: 2, assert: [sync, blank], stretch: auto }\n");
	for (unsigned region = 0; region < 4000; region++)
		text_printf(&text, "      - { region: r%u, cells: 2, assert: [%s], stretch: auto }\n", region, region % 2 == 0 ? "" : "blank");
	text_put(&text, "frame: [ { repeat: 1, line: broad }, { repeat: 2, line: picture } ]\n");
	struct laid laid = lay_text(text_string(&text));
	assert_true(placements_of(&laid)->unweighed);
	assert_false(placements_of(&laid)->judged);
	release(&laid);
	text_release(&text);
	laid = lay_text(HEAD("", OWN("burst length: 11 us to 13 us"), SIGNALS) BROAD
	                "  picture: { regions: [ { region: sync, cells: 2, assert: [sync], stretch: auto }, { region: rest, cells: 9000000, stretch: auto } ] }\n"
	                "frame: [ { repeat: 1, line: broad }, { repeat: 1000, line: picture }, { repeat: 1000, line: picture } ]\n");
	assert_refused(&laid, RULE_FRAME_SIZE);
	release(&laid);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(most_limits_then_leftmost),
		cmocka_unit_test(then_the_largest_smallest_margin),
		cmocka_unit_test(a_limit_outweighs_margins),
		cmocka_unit_test(segments_take_no_more_than_they_have),
		cmocka_unit_test(what_does_not_move_has_no_say),
		cmocka_unit_test(one_way_alone),
		cmocka_unit_test(the_accuracy_counts),
		cmocka_unit_test(nothing_to_decide),
		cmocka_unit_test(segments_go_from_edge_to_edge),
		cmocka_unit_test(a_segment_of_one_cell),
		cmocka_unit_test(a_cell_that_changes_a_pulse_to_another),
		cmocka_unit_test(separate_sync_makes_edges),
		cmocka_unit_test(what_is_stretched_by_name_stays),
		cmocka_unit_test(several_line_types),
		cmocka_unit_test(line_types_that_are_not_used),
		cmocka_unit_test(plans_that_are_too_large),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
