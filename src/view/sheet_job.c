// The job in a paragraph.
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/check.h"
#include "view/figures.h"
#include "view/nets.h"
#include "view/page.h"
#include "view/sheet_parts.h"

// "rom0 (28C010, 120 ns), rom1 (28C010, 120 ns)".
static void put_parts(struct text *words, const struct plan *plan, enum stage stage)
{
	bool first = true;
	for (size_t index = 0; index < plan->chip_count; index++) {
		const struct chip *chip = &plan->chips[index];
		if (chip->stage != stage)
			continue;
		text_printf(words, "%s%s (%s, ", first ? "" : ", ", chip->label, chip->part->name);
		text_put_time_in(words, chip->access_s, UNIT_NANOSECONDS);
		text_put(words, ")");
		first = false;
	}
}

static void put_logic(struct text *words, const struct plan *plan, enum stage stage)
{
	const struct stage_nets nets = nets_of_stage(plan, stage);
	const unsigned counters = nets_counters(&nets, plan), latches = nets_latches(&nets);
	if (counters > 0)
		text_printf(words, " %u x %s count its state.", counters, plan->timing.counter_part[stage]);
	if (latches > 0)
		text_printf(words, " %u x %s latch %s.", latches, plan->timing.latch_part, nets.latched ? "what they answer" : "the next state");
	if (!nets.latched)
		text_put(words, " Its signals are taken straight from the EEPROMs.");
}

static void put_stage(struct text *words, const struct plan *plan, enum stage stage)
{
	const struct stage_plan *planned = machine_stage(&plan->machine, stage);
	if (plan->machine.form == FORM_LINE_FRAME)
		text_printf(words, " The %s stage has %u bits of state, ", stage_name(stage), planned->state_bits);
	else
		text_printf(words, "A loop: one stage with %u bits of state, ", planned->state_bits);
	text_put(words, planned->advance == ADVANCE_COUNT ? "counted; the EEPROMs " : "looked up; the EEPROMs ");
	put_parts(words, plan, stage);
	text_printf(words, " answer once a %s.", stage == STAGE_LINE ? "cell" : "line");
	put_logic(words, plan, stage);
}

static void put_phase_asked(struct text *words, const struct clock *clock)
{
	if (clock->phase == PHASE_FREE) {
		text_put(words, " is free");
		return;
	}
	const char *unit = clock->phase == PHASE_LINES ? "line" : "frame";
	if (clock->phase_count == 1)
		text_printf(words, " is to repeat every %s", unit);
	else
		text_printf(words, " is to repeat every %lld %ss", (long long)clock->phase_count, unit);
}

void sheet_clock_words(struct text *words, const struct timeline *timeline)
{
	const struct plan *plan = timeline->plan;
	const struct clock *clock = &plan->clock;
	text_put(words, "The master clock of ");
	put_hertz(words, clock->master_hz);
	if (clock->has_accuracy) {
		text_put(words, ", good to ");
		text_put_rounded(words, clock->accuracy_ppm, 6);
		text_put(words, " ppm,");
	}
	text_put(words, " makes cells of ");
	text_put_count(words, (uint64_t)clock->cell_ticks, "tick", "ticks");
	if (clock->stretch_ticks > 0)
		text_printf(words, ", stretched ones of %lld", (long long)(clock->cell_ticks + clock->stretch_ticks));
	text_put(words, ". A frame is ");
	put_frame_figures(words, timeline);
	text_put(words, ".");
	if (clock->has_subcarrier) {
		text_put(words, " The colour subcarrier is ");
		put_hertz(words, clock->subcarrier_hz);
		text_put(words, "; its phase");
		put_phase_asked(words, clock);
		text_put(words, ".");
	}
	if (plan->standard != NULL)
		text_printf(words, " The lines are measured against %s, grade %s.", plan->standard->name, limit_grade_name(plan->grade));
}

void sheet_job(struct text *out, const struct sheet *sheet)
{
	const struct plan *plan = sheet_plan(sheet);
	struct text words = {0};
	if (sheet->view->set != NULL)
		text_printf(&words, "%zu plans in the banks of the same chips, chosen by jumpers. ", sheet->view->count);
	if (plan->machine.form == FORM_LINE_FRAME)
		text_put(&words, "Two stages.");
	for (enum stage stage = STAGE_LINE; stage < machine_stages(&plan->machine); stage++)
		put_stage(&words, plan, stage);
	if (sheet->view->set == NULL) {
		text_put(&words, " ");
		sheet_clock_words(&words, sheet->view->proofs[0]->timeline);
	}
	page_element_of(out, "p", "", &words);
}
