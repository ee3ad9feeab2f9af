#include "table/wiring.h"

#include "catalogue/catalogue.h"

static uint64_t data_signals_of(const struct plan *plan)
{
	uint64_t signals = 0;
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]))
			signals |= (uint64_t)1 << signal;
	return signals;
}

struct wiring wiring_of(const struct plan *plan)
{
	return (struct wiring){
		.chips = plan->chips,
		.chip_count = plan->chip_count,
		.state_bits = plan->machine.state_bits,
		.bank_bits = plan->bank_bits,
		.advance = plan->machine.advance,
		.clear = plan->machine.clear,
		.outputs = plan->machine.outputs,
		.data_signals = data_signals_of(plan),
	};
}

size_t chip_bytes(const struct chip *chip)
{
	return part_bytes(chip->part);
}
