#include "table/wiring.h"

#include "catalogue/catalogue.h"

static uint64_t data_signals_of(const struct plan *plan, enum stage stage)
{
	uint64_t signals = 0;
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]) && plan->signals[signal].stage == stage)
			signals |= (uint64_t)1 << signal;
	return signals;
}

static struct stage_wiring stage_wiring_of(const struct plan *plan, enum stage stage)
{
	const struct stage_plan *planned = machine_stage(&plan->machine, stage);
	return (struct stage_wiring){
		.state_bits = planned->state_bits,
		.address_bits = planned->state_bits + (stage == STAGE_LINE ? plan->machine.kind_bits : 0),
		.advance = planned->advance,
		.clear = planned->clear,
		.outputs = planned->outputs,
		.data_signals = data_signals_of(plan, stage),
	};
}

struct wiring wiring_of(const struct plan *plan)
{
	return (struct wiring){
		.chips = plan->chips,
		.chip_count = plan->chip_count,
		.bank_bits = plan->bank_bits,
		.form = plan->machine.form,
		.kind_bits = plan->machine.kind_bits,
		.line = stage_wiring_of(plan, STAGE_LINE),
		.frame = stage_wiring_of(plan, STAGE_FRAME),
	};
}

struct feedback feedback_of(const struct wiring *wiring)
{
	struct feedback feedback = {.bits = wiring->line.state_bits};
	if (wiring->form == FORM_LOOP)
		return feedback;
	feedback.has_step = wiring->line.outputs == OUTPUTS_REGISTERED;
	feedback.step = feedback.bits;
	feedback.kind = feedback.step + feedback.has_step;
	feedback.kind_bits = wiring->frame.outputs == OUTPUTS_REGISTERED ? wiring->kind_bits : 0;
	feedback.frame = feedback.kind + feedback.kind_bits;
	feedback.bits = feedback.frame + wiring->frame.state_bits;
	return feedback;
}

size_t chip_bytes(const struct chip *chip)
{
	return part_bytes(chip->part);
}
