// Clock, standard, machine, timing: what a plan says of each, one by one.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"
#include "view/figures.h"
#include "view/standards.h"

// Two texts to be compared.
struct both {
	struct text old, now;
};

static struct both no_texts(void)
{
	return (struct both){.old = {0}, .now = {0}};
}

static void compare_both(struct comparing *comparing, enum change_section section, const char *what, struct both *both)
{
	compare_texts(comparing, section, what, &both->old, &both->now);
}

// Clock.

static void put_frequency(struct text *out, struct fraction hertz)
{
	struct fraction megahertz;
	text_put_fraction(out, hertz);
	text_put(out, " Hz");
	if (!fraction_divide(hertz, fraction_whole(1000000), &megahertz))
		return;
	text_put(out, " (");
	text_put_rounded(out, megahertz, 6);
	text_put(out, " MHz)");
}

static void put_phase_asked(struct text *out, const struct clock *clock)
{
	static const char *const units[] = {[PHASE_LINES] = "line", [PHASE_FRAMES] = "frame"};
	if (clock->phase == PHASE_FREE)
		text_put(out, "free");
	else if (clock->phase_count == 1)
		text_printf(out, "every %s", units[clock->phase]);
	else
		text_printf(out, "every %" PRId64 " %ss", clock->phase_count, units[clock->phase]);
}

enum clock_property { CLOCK_MASTER, CLOCK_ACCURACY, CLOCK_DOT, CLOCK_CELL, CLOCK_STRETCH, CLOCK_SUBCARRIER, CLOCK_PHASE, CLOCK_PROPERTIES };

static const char *const clock_names[CLOCK_PROPERTIES] = {
	[CLOCK_MASTER] = "master clock", [CLOCK_ACCURACY] = "accuracy",     [CLOCK_DOT] = "dot",     [CLOCK_CELL] = "cell",
	[CLOCK_STRETCH] = "stretch",     [CLOCK_SUBCARRIER] = "subcarrier", [CLOCK_PHASE] = "phase",
};

static void put_clock(struct text *out, const struct clock *clock, enum clock_property property)
{
	switch (property) {
	case CLOCK_MASTER:
		put_frequency(out, clock->master_hz);
		break;
	case CLOCK_ACCURACY:
		if (clock->has_accuracy) {
			text_put_fraction(out, clock->accuracy_ppm);
			text_put(out, " ppm");
		}
		break;
	case CLOCK_DOT:
		text_put_count(out, (uint64_t)clock->dot_ticks, "tick", "ticks");
		break;
	case CLOCK_CELL:
		text_put_count(out, (uint64_t)clock->cell_ticks, "tick", "ticks");
		break;
	case CLOCK_STRETCH:
		if (clock->stretch_ticks > 0)
			text_put_count(out, (uint64_t)clock->stretch_ticks, "tick", "ticks");
		break;
	case CLOCK_SUBCARRIER:
		if (clock->has_subcarrier)
			put_frequency(out, clock->subcarrier_hz);
		break;
	default:
		put_phase_asked(out, clock);
	}
}

void compare_clock(struct comparing *comparing)
{
	for (unsigned property = 0; property < CLOCK_PROPERTIES; property++) {
		struct both both = no_texts();
		put_clock(&both.old, &comparing->old->clock, (enum clock_property)property);
		put_clock(&both.now, &comparing->now->clock, (enum clock_property)property);
		compare_both(comparing, CHANGE_CLOCK, clock_names[property], &both);
	}
}

// Standard.

static void put_given(struct text *out, enum limit_item item, const char *word, bool given, struct fraction value)
{
	if (!given)
		return;
	text_put(out, out->length > 0 ? " " : "");
	text_put(out, word);
	put_limit_value(out, item, value);
}

static void put_limit(struct text *out, const struct standard *standard, enum limit_item item, enum limit_grade grade)
{
	const struct limit *limit = standard_limit(standard, item, grade);
	if (limit == NULL)
		return;
	put_given(out, item, "", limit->has_nominal, limit->nominal);
	put_given(out, item, "from ", limit->has_low, limit->low);
	put_given(out, item, "to ", limit->has_high, limit->high);
	if (limit_item_facts(item)->unit[0] != '\0')
		text_printf(out, " %s", limit_item_facts(item)->unit);
}

// The limits of two standards of the catalogue are not told one by one; a plan's own are, at the grade that the new plan is held to.
static void compare_limits(struct comparing *comparing)
{
	const struct standard *old = comparing->old->standard, *now = comparing->now->standard;
	if (old == NULL || now == NULL || strcmp(old->name, now->name) != 0)
		return;
	for (unsigned item = 0; item < ITEM_COUNT; item++) {
		struct both both = no_texts();
		put_limit(&both.old, old, (enum limit_item)item, comparing->now->grade);
		put_limit(&both.now, now, (enum limit_item)item, comparing->now->grade);
		compare_both(comparing, CHANGE_STANDARD, keep_words(comparing, "limit of %s", limit_item_facts((enum limit_item)item)->name), &both);
	}
}

void compare_standard(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	compare_words(comparing, CHANGE_STANDARD, "standard", old->standard != NULL ? old->standard->name : NULL,
	              now->standard != NULL ? now->standard->name : NULL);
	// Without a standard, the grade is the grade of nothing.
	if (old->standard != NULL && now->standard != NULL)
		compare_words(comparing, CHANGE_STANDARD, "grade", limit_grade_name(old->grade), limit_grade_name(now->grade));
	compare_limits(comparing);
}

// Machine.

enum stage_property { PROPERTY_STATE, PROPERTY_OUTPUTS, PROPERTY_ADVANCE, PROPERTY_CLEAR, STAGE_PROPERTIES };

static const char *const property_names[STAGE_PROPERTIES] = {
	[PROPERTY_STATE] = "state", [PROPERTY_OUTPUTS] = "outputs", [PROPERTY_ADVANCE] = "advance", [PROPERTY_CLEAR] = "clear",
};

static void put_stage(struct text *out, const struct plan *plan, enum stage stage, enum stage_property property)
{
	const struct stage_plan *of = machine_stage(&plan->machine, stage);
	if (stage == STAGE_FRAME && plan->machine.form == FORM_LOOP)
		return;
	switch (property) {
	case PROPERTY_STATE: text_put_count(out, of->state_bits, "bit", "bits"); break;
	case PROPERTY_OUTPUTS: text_put(out, of->outputs == OUTPUTS_DIRECT ? "direct" : "registered"); break;
	case PROPERTY_ADVANCE: text_put(out, of->advance == ADVANCE_COUNT ? "count" : "table"); break;
	default:
		if (of->advance == ADVANCE_COUNT)
			text_put(out, of->clear == CLEAR_ASYNC ? "async" : "sync");
	}
}

static void compare_stage(struct comparing *comparing, enum stage stage)
{
	const bool loops = comparing->old->machine.form == FORM_LOOP && comparing->now->machine.form == FORM_LOOP;
	for (unsigned property = 0; property < STAGE_PROPERTIES; property++) {
		struct both both = no_texts();
		put_stage(&both.old, comparing->old, stage, (enum stage_property)property);
		put_stage(&both.now, comparing->now, stage, (enum stage_property)property);
		compare_both(comparing, CHANGE_MACHINE, loops ? property_names[property] :
		             keep_words(comparing, "%s stage, %s", stage_name(stage), property_names[property]), &both);
	}
}

static size_t find_named(const struct plan *plan, const char *name)
{
	for (size_t index = 0; index < plan->machine.field_count; index++)
		if (strcmp(plan->machine.fields[index].name, name) == 0)
			return index;
	return NONE;
}

// A field of the new plan with the same bits and a name that the old one does not have.
static size_t find_renamed(const struct comparing *comparing, const struct field *field)
{
	const struct machine_plan *machine = &comparing->now->machine;
	for (size_t index = 0; index < machine->field_count; index++)
		if (machine->fields[index].high == field->high && machine->fields[index].low == field->low &&
		    find_named(comparing->old, machine->fields[index].name) == NONE)
			return index;
	return NONE;
}

// By name; what is left over is the same if its bits are.
void match_fields(struct comparing *comparing)
{
	const struct machine_plan *machine = &comparing->old->machine;
	uint64_t taken = 0;
	comparing->field_of = arena_array(comparing->arena, machine->field_count, sizeof *comparing->field_of);
	comparing->failed = comparing->failed || comparing->field_of == NULL;
	for (size_t index = 0; !comparing->failed && index < machine->field_count; index++) {
		size_t match = find_named(comparing->now, machine->fields[index].name);
		if (match == NONE)
			match = find_renamed(comparing, &machine->fields[index]);
		if (match != NONE && (taken >> match & 1) != 0)
			match = NONE;
		taken |= match != NONE ? (uint64_t)1 << match : 0;
		comparing->field_of[index] = match;
	}
}

static void put_field(struct text *out, const struct field *field)
{
	if (field == NULL)
		return;
	text_printf(out, "bit%s %u", field->high == field->low ? "" : "s", field->high);
	if (field->high != field->low)
		text_printf(out, "..%u", field->low);
}

static void compare_field(struct comparing *comparing, const struct field *old, const struct field *now)
{
	struct both both = no_texts();
	put_field(&both.old, old);
	put_field(&both.now, now);
	if (old != NULL && now != NULL)
		compare_words(comparing, CHANGE_WORDS, "a field's name", old->name, now->name);
	compare_both(comparing, CHANGE_MACHINE, keep_words(comparing, "field %s", now != NULL ? now->name : old->name), &both);
}

static void compare_fields(struct comparing *comparing)
{
	const struct machine_plan *old = &comparing->old->machine, *now = &comparing->now->machine;
	uint64_t matched = 0;
	for (size_t index = 0; index < old->field_count; index++) {
		const size_t match = comparing->field_of[index];
		matched |= match != NONE ? (uint64_t)1 << match : 0;
		compare_field(comparing, &old->fields[index], match != NONE ? &now->fields[match] : NULL);
	}
	for (size_t index = 0; index < now->field_count; index++)
		if ((matched >> index & 1) == 0)
			compare_field(comparing, NULL, &now->fields[index]);
}

// A loop that is begun at another cell: where the first cell's state is set, that is another cell's now.
static void compare_first_cell(struct comparing *comparing)
{
	if (comparing->same_loop && comparing->loop_cell != 0 && (pins_first_cell(comparing->old) || pins_first_cell(comparing->now)))
		add_change(comparing, (struct change){.section = CHANGE_MACHINE, .kind = "start-moved", .what = "start",
		                                      .also = "it is the state of another cell now, where the frame begins"});
}

// The same number of another width is the same state.
static void compare_start(struct comparing *comparing)
{
	const struct machine_plan *old = &comparing->old->machine, *now = &comparing->now->machine;
	struct both both = no_texts();
	if (old->has_start == now->has_start && old->start == now->start) {
		compare_first_cell(comparing);
		return;
	}
	if (old->has_start)
		text_put_hex(&both.old, old->start, old->line.state_bits);
	if (now->has_start)
		text_put_hex(&both.now, now->start, now->line.state_bits);
	compare_both(comparing, CHANGE_MACHINE, "start", &both);
}

void compare_machine(struct comparing *comparing)
{
	const struct plan *plans[2] = {comparing->old, comparing->now};
	struct both form = no_texts(), kind = no_texts();
	for (unsigned side = 0; side < 2; side++) {
		const struct machine_plan *machine = &plans[side]->machine;
		text_put(side == 0 ? &form.old : &form.now, machine->form == FORM_LOOP ? "loop" : "line-frame");
		if (machine->kind_bits > 0)
			text_put_count(side == 0 ? &kind.old : &kind.now, machine->kind_bits, "bit", "bits");
	}
	compare_both(comparing, CHANGE_MACHINE, "form", &form);
	compare_stage(comparing, STAGE_LINE);
	compare_stage(comparing, STAGE_FRAME);
	compare_both(comparing, CHANGE_MACHINE, "kind", &kind);
	compare_fields(comparing);
	compare_start(comparing);
}

// Timing and sweeps.

enum timing_property { TIMING_LATCH, TIMING_COUNTERS, TIMING_DECODER, TIMING_SHARE, TIMING_MARGIN, TIMING_PROPERTIES };

static const char *const timing_names[TIMING_PROPERTIES] = {
	[TIMING_LATCH] = "latch", [TIMING_COUNTERS] = "counters", [TIMING_DECODER] = "decoder",
	[TIMING_SHARE] = "share", [TIMING_MARGIN] = "margin",
};

static void put_part_times(struct text *out, const char *part, struct fraction delay_s, const struct fraction *setup_s)
{
	text_printf(out, "%s, delay ", part != NULL ? part : "none");
	text_put_time_in(out, delay_s, UNIT_NANOSECONDS);
	if (setup_s != NULL) {
		text_put(out, ", setup ");
		text_put_time_in(out, *setup_s, UNIT_NANOSECONDS);
	}
}

static void put_timing(struct text *out, const struct plan *plan, enum timing_property property)
{
	const struct timing *timing = &plan->timing;
	switch (property) {
	case TIMING_LATCH:
		put_part_times(out, timing->latch_part, timing->latch_delay_s, &timing->latch_setup_s);
		break;
	case TIMING_COUNTERS:
		for (unsigned stage = 0; stage < machine_stages(&plan->machine); stage++) {
			if (machine_stage(&plan->machine, (enum stage)stage)->advance != ADVANCE_COUNT)
				continue;
			if (plan->machine.form == FORM_LINE_FRAME)
				text_printf(out, "%s%s stage ", out->length > 0 ? "; " : "", stage_name((enum stage)stage));
			put_part_times(out, timing->counter_part[stage], timing->counter_delay_s[stage], &timing->counter_setup_s[stage]);
		}
		break;
	case TIMING_DECODER:
		put_part_times(out, timing->decoder_part, timing->decoder_delay_s, NULL);
		break;
	case TIMING_SHARE:
		text_put_fraction(out, timing->share);
		break;
	case TIMING_MARGIN:
		text_put_time_in(out, timing->margin_s, UNIT_NANOSECONDS);
		break;
	default:
		break;
	}
}

// Sweeps: each that the other plan does not have too.

static bool has_sweep(const struct plan *plan, const struct sweep *wanted)
{
	for (size_t index = 0; index < plan->sweep_count; index++)
		if (plan->sweeps[index].high == wanted->high && plan->sweeps[index].low == wanted->low &&
		    fraction_compare(plan->sweeps[index].within_s, wanted->within_s) == 0)
			return true;
	return false;
}

static const struct sweep *same_bits(const struct plan *plan, const struct plan *other, const struct sweep *sweep)
{
	for (size_t index = 0; index < plan->sweep_count; index++)
		if (plan->sweeps[index].high == sweep->high && plan->sweeps[index].low == sweep->low && !has_sweep(other, &plan->sweeps[index]))
			return &plan->sweeps[index];
	return NULL;
}

static void compare_sweep(struct comparing *comparing, const struct sweep *old, const struct sweep *now)
{
	const struct sweep *sweep = now != NULL ? now : old;
	struct both both = no_texts();
	if (old != NULL)
		text_put_time(&both.old, old->within_s);
	if (now != NULL)
		text_put_time(&both.now, now->within_s);
	compare_both(comparing, CHANGE_TIMING, keep_words(comparing, "sweep of bits %u..%u within", sweep->high, sweep->low), &both);
}

static void compare_sweeps(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	for (size_t index = 0; index < old->sweep_count; index++)
		if (!has_sweep(now, &old->sweeps[index]))
			compare_sweep(comparing, &old->sweeps[index], same_bits(now, old, &old->sweeps[index]));
	for (size_t index = 0; index < now->sweep_count; index++)
		if (!has_sweep(old, &now->sweeps[index]) && same_bits(old, now, &now->sweeps[index]) == NULL)
			compare_sweep(comparing, NULL, &now->sweeps[index]);
}

void compare_timing(struct comparing *comparing)
{
	for (unsigned property = 0; property < TIMING_PROPERTIES; property++) {
		struct both both = no_texts();
		put_timing(&both.old, comparing->old, (enum timing_property)property);
		put_timing(&both.now, comparing->now, (enum timing_property)property);
		compare_both(comparing, CHANGE_TIMING, timing_names[property], &both);
	}
	compare_sweeps(comparing);
}
