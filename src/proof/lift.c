#include "proof/lift.h"

#include "base/arena.h"
#include "base/diagnostics.h"
#include "proof/lift_work.h"

#define MOST_LAPS 32 // of a frame: what takes longer to come round was not meant to
#define MOST_PINNED_CELLS 4096 // of all line types, each of which may take a region

bool lift_memory(struct lifting *lifting)
{
	diagnose(lifting->diagnostics, RULE_OUT_OF_MEMORY, lifting->place, "memory is out");
	return false;
}

// A signal whose codes the planner chooses can be read only against a timeline.
static bool check_codes(const struct lifting *lifting)
{
	bool good = true;
	for (size_t index = 0; index < lifting->plan->signal_count; index++) {
		const struct signal *signal = &lifting->plan->signals[index];
		if (!signal->auto_codes)
			continue;
		diagnose(lifting->diagnostics, RULE_BOARD_CODES, signal->place,
		         "signal \"%s\" has codes: auto, but codes cannot be read out of images without a timeline", signal->name);
		diagnose_hint(lifting->diagnostics, "list the codes that its decoder is wired for");
		good = false;
	}
	return good;
}

static bool choose_cut_signal(struct lifting *lifting)
{
	const struct plan *plan = lifting->plan;
	const size_t asked = lifting->lift->options.cut_signal;
	int signal = plan->role_signal[ROLE_COMPOSITE_SYNC];
	if (signal < 0)
		signal = plan->role_signal[ROLE_HORIZONTAL_SYNC];
	lifting->cut_signal = asked != SIZE_MAX ? (int)asked : signal;
	if (lifting->wiring.form == FORM_LINE_FRAME && asked != SIZE_MAX) {
		diagnose(lifting->diagnostics, RULE_BOARD_SYNC, lifting->place,
		         "the lines of a line-frame machine end where step is asserted, and so cannot be cut at signal \"%s\"",
		         plan->signals[asked].name);
		return false;
	}
	if (lifting->wiring.form == FORM_LINE_FRAME) {
		lifting->cut_signal = -1;
		return true;
	}
	if (lifting->cut_signal >= 0)
		return true;
	diagnose(lifting->diagnostics, RULE_BOARD_SYNC, lifting->place,
	         "no signal of the board has role composite sync or horizontal sync, at whose leading edge lines could be cut");
	diagnose_hint(lifting->diagnostics, "give one that role, or name a signal by --cut");
	return false;
}

static bool begin(struct lifting *lifting, const struct image *images)
{
	const struct plan *plan = lifting->plan;
	const int stretch = plan->role_signal[ROLE_STRETCH];
	lifting->wiring = wiring_of(plan);
	lifting->at = feedback_of(&lifting->wiring);
	lifting->lift->state_bits = lifting->at.bits;
	lifting->stretch_mask = stretch < 0 ? 0 : (uint64_t)1 << stretch;
	const bool codes_listed = check_codes(lifting);
	if (!choose_cut_signal(lifting) || !codes_listed)
		return false;
	lifting->images = images;
	lifting->machine = machine_create(lifting->arena, &lifting->wiring, images, lifting->lift->options.bank);
	return lifting->machine != NULL || lift_memory(lifting);
}

// A frame that is to keep the subcarrier's phase may be several laps of the loop.
static uint32_t laps_in_phase(const struct lifting *lifting)
{
	const struct clock *clock = &lifting->plan->clock;
	struct fraction cycles, laps;
	if (lifting->wiring.form == FORM_LINE_FRAME || !clock->has_subcarrier || clock->phase != PHASE_FRAMES ||
	    !fraction_divide(clock->subcarrier_hz, clock->master_hz, &cycles) ||
	    !fraction_multiply(cycles, fraction_whole(lifting->lift->tick_count), &cycles) ||
	    !fraction_multiply(cycles, fraction_whole(clock->phase_count), &laps))
		return 1;
	if (laps.denominator > MOST_LAPS || laps.denominator > LIMIT_CELLS / lifting->lift->cell_count ||
	    laps.denominator > LIMIT_LINES / lifting->lift->line_count)
		return 1;
	return (uint32_t)laps.denominator;
}

// The state that the plan is to name for its first cell: what the images have there, if the board names one or it is no choice.
static void find_start(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	const struct machine_plan *machine = &lifting->plan->machine;
	const uint32_t mask = low_bits(machine->line.state_bits);
	lift->start = lift->states[0] & mask;
	lift->has_start = machine->line.advance == ADVANCE_TABLE && (machine->has_start || lift->options.near);
	for (uint32_t line = 0; lifting->ends != NULL && line < lift->line_count; line++)
		lift->uneven_starts = lift->uneven_starts || (lift->states[lifting->lines[line].first_cell] & mask) != lift->start;
	if (lift->uneven_starts)
		lift->has_start = false;
}

// The type at a kind's place: the one of that kind, or one that no line is of.
static bool place_type(struct lift *lift, struct lift_type *place, const struct lift_type *type, uint32_t kind)
{
	const uint32_t cells = 2;
	struct lift_region *whole = type == NULL ? arena_array(lift->arena, 1, sizeof *whole) : NULL;
	if (type != NULL) {
		*place = *type;
		return true;
	}
	*place = (struct lift_type){.name = arena_format(lift->arena, "unused %u", (unsigned)kind), .cells = cells,
	                            .ticks = cells * lift->plan->clock.cell_ticks, .regions = whole, .region_count = 1};
	if (whole != NULL)
		*whole = (struct lift_region){.name = "unused", .cells = cells};
	return whole != NULL && place->name != NULL;
}

// Orders line types by the kinds that the images have for them. Kinds that the frame does not use keep their places if states are pinned;
// otherwise, and where lines of one kind differ, kinds are given out anew.
static bool order_kinds(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	uint32_t kinds = 0;
	uint32_t *type_of_kind = arena_array(lifting->arena, (size_t)1 << lifting->wiring.kind_bits, sizeof *type_of_kind);
	if (type_of_kind == NULL)
		return lift_memory(lifting);
	for (uint32_t type = 0; type < lift->type_count; type++) {
		const uint32_t kind = lifting->contents[lift->types[type].content].kind;
		if (type_of_kind[kind] != 0)
			return true;
		type_of_kind[kind] = type + 1;
		kinds = kind + 1 > kinds ? kind + 1 : kinds;
	}
	if (lift->type_count < kinds && !lift->options.near)
		return true;
	struct lift_type *ordered = arena_array(lift->arena, kinds, sizeof *ordered);
	for (uint32_t kind = 0; ordered != NULL && kind < kinds; kind++)
		if (!place_type(lift, &ordered[kind], type_of_kind[kind] == 0 ? NULL : &lift->types[type_of_kind[kind] - 1], kind))
			return lift_memory(lifting);
	if (ordered == NULL)
		return lift_memory(lifting);
	for (size_t block = 0; block < lift->block_count; block++)
		lift->blocks[block].type = lifting->contents[lift->types[lift->blocks[block].type].content].kind;
	lift->types = ordered;
	lift->type_count = kinds;
	return true;
}

static bool has_holds(const struct lift *lift)
{
	for (size_t type = 0; type < lift->type_count; type++)
		for (size_t region = 0; region < lift->types[type].region_count; region++)
			if (lift->types[type].regions[region].hold_count > 0)
				return true;
	return false;
}

// Whether states must be pinned for the images to keep to the plan: without holds and decoded signals, the line stage of a plan numbers the
// cells, and the images' does not. Where the plan may have no room for that, they stay as they are.
static bool wants_pins(const struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	uint64_t cells = 0;
	for (size_t content = 0; content < lifting->content_count; content++)
		cells += lifting->contents[content].cells;
	for (size_t signal = 0; signal < lifting->plan->signal_count; signal++)
		if (!signal_is_data(&lifting->plan->signals[signal]))
			return false;
	return lifting->wiring.form == FORM_LINE_FRAME && lifting->wiring.line.advance == ADVANCE_TABLE && !has_holds(lift) &&
	       lifting->plan->machine.field_count < LIMIT_FIELDS && cells <= MOST_PINNED_CELLS && lift_starts_evenly(lifting) &&
	       !lift_numbers_cells(lifting);
}

static bool hold_states(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	if (lift->options.near)
		return lift_pin(lifting);
	if (!lift_hold(lifting))
		return false;
	lift->pinned = wants_pins(lifting);
	if (!lift->pinned)
		return true;
	lift->types = NULL;
	lift->blocks = NULL;
	lift->type_count = lift->block_count = lift->field_count = 0;
	lifting->types = (struct type_table){0};
	lifting->node_count = lifting->region_count = 0;
	return lift_pin(lifting);
}

static bool run(struct lifting *lifting, const struct image *images)
{
	struct lift *lift = lifting->lift;
	if (!begin(lifting, images) || !lift_walk(lifting) || !lift_find_loops(lifting) || !lift_cut(lifting))
		return false;
	lift_report_loops(lifting);
	if (!lift_place(lifting) || !lift_divide(lifting) || !lift_check_size(lifting) || !lift_name(lifting))
		return false;
	if (!hold_states(lifting) || !lift_name_types(lifting))
		return false;
	find_start(lifting);
	lift->copies = laps_in_phase(lifting);
	return lifting->wiring.form == FORM_LOOP || order_kinds(lifting);
}

struct lift *lift_images(const struct plan *board, const struct image *images, struct lift_options options,
                         struct diagnostics *diagnostics)
{
	struct arena *arena = arena_create(), *scratch = arena_create();
	struct lift *lift = arena != NULL ? arena_alloc(arena, sizeof *lift) : NULL;
	struct lifting lifting = {.lift = lift, .arena = scratch, .plan = board, .diagnostics = diagnostics,
	                          .place = {board->source, 0, 0}};
	bool good = false;
	if (lift != NULL && scratch != NULL) {
		*lift = (struct lift){.arena = arena, .plan = board, .options = options};
		good = run(&lifting, images);
	} else {
		lift_memory(&lifting);
	}
	arena_destroy(scratch);
	if (good)
		return lift;
	arena_destroy(arena);
	return NULL;
}

void lift_destroy(struct lift *lift)
{
	if (lift != NULL)
		arena_destroy(lift->arena);
}
