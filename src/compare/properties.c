// Clock, standard, signals, machine, timing: what a plan says of each, one by one.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"
#include "view/figures.h"

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

static void put_limit(struct text *out, const struct standard *standard, enum limit_item item, enum limit_grade grade)
{
	const struct limit *limit = standard != NULL ? standard_limit(standard, item, grade) : NULL;
	if (limit == NULL)
		return;
	text_put(out, limit->has_nominal ? "nominal " : "");
	if (limit->has_nominal)
		text_put_fraction(out, limit->nominal);
	if (limit->has_low) {
		text_put(out, " from ");
		text_put_fraction(out, limit->low);
	}
	if (limit->has_high) {
		text_put(out, " to ");
		text_put_fraction(out, limit->high);
	}
}

// Limits of a plan's own; those of two standards of the catalogue are not told one by one.
static void compare_own_limits(struct comparing *comparing)
{
	const struct standard *old = comparing->old->standard, *now = comparing->now->standard;
	if (old == NULL || now == NULL || strcmp(old->name, now->name) != 0)
		return;
	for (unsigned item = 0; item < ITEM_COUNT; item++) {
		struct both both = no_texts();
		put_limit(&both.old, old, (enum limit_item)item, comparing->old->grade);
		put_limit(&both.now, now, (enum limit_item)item, comparing->old->grade);
		compare_both(comparing, CHANGE_STANDARD, limit_item_facts((enum limit_item)item)->name, &both);
	}
}

void compare_standard(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	compare_words(comparing, CHANGE_STANDARD, "standard", old->standard != NULL ? old->standard->name : NULL,
	              now->standard != NULL ? now->standard->name : NULL);
	compare_words(comparing, CHANGE_STANDARD, "grade", limit_grade_name(old->grade), limit_grade_name(now->grade));
	compare_own_limits(comparing);
}

// Signals.

static size_t find_named(const struct plan *plan, const char *name)
{
	for (size_t index = 0; index < plan->signal_count; index++)
		if (strcmp(plan->signals[index].name, name) == 0)
			return index;
	return NONE;
}

// By name; what is left over by role, since only plain signals share theirs.
void match_signals(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	comparing->signal_of = arena_array(comparing->arena, old->signal_count, sizeof *comparing->signal_of);
	comparing->failed = comparing->failed || comparing->signal_of == NULL;
	for (size_t index = 0; !comparing->failed && index < old->signal_count; index++) {
		const enum role role = old->signals[index].role;
		size_t match = find_named(now, old->signals[index].name);
		if (match == NONE && role != ROLE_PLAIN && now->role_signal[role] >= 0 &&
		    find_named(old, now->signals[now->role_signal[role]].name) == NONE)
			match = (size_t)now->role_signal[role];
		comparing->signal_of[index] = match;
	}
}

static void put_origin(struct text *out, const struct plan *plan, const struct signal *signal)
{
	if (signal->origin == FROM_DATA) {
		text_put(out, "data");
		return;
	}
	text_printf(out, "field %s, codes", plan->machine.fields[signal->field].name);
	if (signal->auto_codes)
		text_put(out, " auto");
	for (size_t code = 0; code < signal->code_count; code++)
		text_printf(out, " %" PRIu32, signal->codes[code]);
}

static void put_signal(struct text *out, const struct plan *plan, const struct signal *signal)
{
	text_printf(out, "%s, active %s", role_name(signal->role), signal->active_high ? "high" : "low");
	if (signal->lead_cells != 0)
		text_printf(out, ", lead %" PRId64, signal->lead_cells);
	if (plan->machine.form == FORM_LINE_FRAME)
		text_printf(out, ", %s stage", stage_name(signal->stage));
	text_put(out, ", from ");
	put_origin(out, plan, signal);
}

static const char *signal_words(struct comparing *comparing, const char *name)
{
	const char *words = arena_format(comparing->arena, "signal %s", name);
	comparing->failed = comparing->failed || words == NULL;
	return words != NULL ? words : "";
}

void compare_signals(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	uint64_t matched = 0;
	for (size_t index = 0; index < old->signal_count; index++) {
		const size_t match = comparing->signal_of[index];
		struct both both = no_texts();
		put_signal(&both.old, old, &old->signals[index]);
		if (match != NONE) {
			put_signal(&both.now, now, &now->signals[match]);
			matched |= (uint64_t)1 << match;
			if (strcmp(old->signals[index].name, now->signals[match].name) != 0)
				compare_words(comparing, CHANGE_WORDS, "a signal's name", old->signals[index].name, now->signals[match].name);
		}
		compare_both(comparing, CHANGE_SIGNALS, signal_words(comparing, match != NONE ? now->signals[match].name : old->signals[index].name),
		             &both);
	}
	for (size_t index = 0; index < now->signal_count; index++) {
		if (matched >> index & 1)
			continue;
		struct both both = no_texts();
		put_signal(&both.now, now, &now->signals[index]);
		compare_both(comparing, CHANGE_SIGNALS, signal_words(comparing, now->signals[index].name), &both);
	}
}

// Machine.

static void put_stage(struct text *out, const struct plan *plan, enum stage stage)
{
	const struct stage_plan *of = machine_stage(&plan->machine, stage);
	if (stage == STAGE_FRAME && plan->machine.form == FORM_LOOP)
		return;
	text_printf(out, "%u bits, outputs %s, advance %s", of->state_bits, of->outputs == OUTPUTS_DIRECT ? "direct" : "registered",
	            of->advance == ADVANCE_COUNT ? "count" : "table");
	if (of->advance == ADVANCE_COUNT)
		text_printf(out, ", clear %s", of->clear == CLEAR_ASYNC ? "async" : "sync");
}

static void put_fields(struct text *out, const struct plan *plan)
{
	for (size_t index = 0; index < plan->machine.field_count; index++) {
		const struct field *field = &plan->machine.fields[index];
		text_printf(out, "%s%s: %u..%u", index > 0 ? ", " : "", field->name, field->high, field->low);
	}
}

void compare_machine(struct comparing *comparing)
{
	const struct plan *plans[2] = {comparing->old, comparing->now};
	struct both form = no_texts(), line = no_texts(), frame = no_texts(), kind = no_texts(), fields = no_texts(), start = no_texts();
	for (unsigned side = 0; side < 2; side++) {
		const struct machine_plan *machine = &plans[side]->machine;
		text_put(side == 0 ? &form.old : &form.now, machine->form == FORM_LOOP ? "loop" : "line-frame");
		put_stage(side == 0 ? &line.old : &line.now, plans[side], STAGE_LINE);
		put_stage(side == 0 ? &frame.old : &frame.now, plans[side], STAGE_FRAME);
		if (machine->kind_bits > 0)
			text_printf(side == 0 ? &kind.old : &kind.now, "%u bits", machine->kind_bits);
		put_fields(side == 0 ? &fields.old : &fields.now, plans[side]);
		if (machine->has_start)
			text_put_hex(side == 0 ? &start.old : &start.now, machine->start, machine->line.state_bits);
	}
	compare_both(comparing, CHANGE_MACHINE, "form", &form);
	compare_both(comparing, CHANGE_MACHINE, "line stage", &line);
	compare_both(comparing, CHANGE_MACHINE, "frame stage", &frame);
	compare_both(comparing, CHANGE_MACHINE, "kind", &kind);
	compare_both(comparing, CHANGE_MACHINE, "fields", &fields);
	compare_both(comparing, CHANGE_MACHINE, "start", &start);
}

// Timing and sweeps.

enum timing_property { TIMING_LATCH, TIMING_COUNTERS, TIMING_DECODER, TIMING_SHARE, TIMING_MARGIN, TIMING_SWEEPS, TIMING_PROPERTIES };

static const char *const timing_names[TIMING_PROPERTIES] = {
	[TIMING_LATCH] = "latch", [TIMING_COUNTERS] = "counters", [TIMING_DECODER] = "decoder",
	[TIMING_SHARE] = "share", [TIMING_MARGIN] = "margin",     [TIMING_SWEEPS] = "sweeps",
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
		for (size_t index = 0; index < plan->sweep_count; index++) {
			text_printf(out, "%s%s within ", index > 0 ? ", " : "", plan->sweeps[index].text);
			text_put_time(out, plan->sweeps[index].within_s);
		}
	}
}

void compare_timing(struct comparing *comparing)
{
	for (unsigned property = 0; property < TIMING_PROPERTIES; property++) {
		struct both both = no_texts();
		put_timing(&both.old, comparing->old, (enum timing_property)property);
		put_timing(&both.now, comparing->now, (enum timing_property)property);
		compare_both(comparing, CHANGE_TIMING, timing_names[property], &both);
	}
}
