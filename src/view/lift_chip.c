// A chip's image in words: of what each wired data pin means at each value of the wired address pins. Everything that is in the
// image shows, so that images that differ have texts that do.
#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/figures.h"
#include "view/lift.h"

// What a chip answers at an address.
struct word {
	uint32_t next, kind;
	uint64_t signals;              // asserted
	bool clear, step;
	uint32_t open;                 // data pins that carry nothing and are low
};

// Addresses that follow each other, from the first on: `next` stays or goes up by `unit` with each.
struct run {
	uint32_t first, count;
	struct word word, last;
	bool rises;
};

struct chip_view {
	struct text *out;
	const struct plan *plan;
	const struct chip *chip;
	const struct image *image;
	uint32_t state_pins;           // address pins that carry the state
	unsigned state_bits;
	uint32_t unit;                 // the lowest bit of next that the chip carries; 0 if none
	bool carries_next, carries_kind;
};

static uint32_t data_at(const struct chip_view *view, uint32_t address)
{
	const unsigned width = view->chip->part->data_pins / 8;
	uint32_t data = 0;
	for (unsigned lane = 0; lane < width; lane++)
		data |= (uint32_t)view->image->bytes[(size_t)address * width + lane] << 8 * lane;
	return data;
}

static struct word word_at(const struct chip_view *view, uint32_t address)
{
	const uint32_t data = data_at(view, address);
	struct word word = {0};
	for (unsigned pin = 0; pin < view->chip->part->data_pins; pin++) {
		const struct data_wire wire = view->chip->data[pin];
		const bool high = (data >> pin & 1) != 0;
		if (wire.kind == DATA_NEXT)
			word.next |= (uint32_t)high << wire.index;
		else if (wire.kind == DATA_KIND)
			word.kind |= (uint32_t)high << wire.index;
		else if (wire.kind == DATA_SIGNAL)
			word.signals |= (uint64_t)(high == view->plan->signals[wire.index].active_high) << wire.index;
		else if (wire.kind == DATA_OPEN)
			word.open |= (uint32_t)!high << pin;
		word.clear = word.clear || (wire.kind == DATA_CLEAR && high);
		word.step = word.step || (wire.kind == DATA_STEP && high);
	}
	return word;
}

static bool same_but_next(const struct word *left, const struct word *right)
{
	return left->kind == right->kind && left->signals == right->signals && left->clear == right->clear && left->step == right->step &&
	       left->open == right->open;
}

static bool extends(const struct chip_view *view, const struct run *run, const struct word *word)
{
	if (!same_but_next(&run->word, word))
		return false;
	if (run->count == 1)
		return word->next == run->last.next || word->next == run->last.next + view->unit;
	return word->next == run->last.next + (run->rises ? view->unit : 0);
}

static void put_run(const struct chip_view *view, const struct run *run)
{
	struct text *out = view->out;
	text_put_hex(out, run->first, view->state_bits);
	if (run->count > 1) {
		text_put(out, "..");
		text_put_hex(out, run->first + run->count - 1, view->state_bits);
	}
	if (view->carries_next) {
		text_put(out, "  next ");
		text_put_hex(out, run->word.next, view->state_bits);
		if (run->rises) {
			text_put(out, "..");
			text_put_hex(out, run->last.next, view->state_bits);
		}
	}
	if (view->carries_kind)
		text_printf(out, "  kind %u", (unsigned)run->word.kind);
	const bool says_nothing = !view->carries_next && !view->carries_kind && !run->word.step && !run->word.clear &&
	                          run->word.signals == 0 && run->word.open == 0;
	text_put(out, says_nothing ? "  -" : "");
	text_put(out, run->word.step ? "  step" : "");
	text_put(out, run->word.clear ? "  clear" : "");
	for (size_t signal = 0; signal < view->plan->signal_count; signal++)
		if ((run->word.signals >> signal & 1) != 0)
			text_printf(out, "  %s", view->plan->signals[signal].name);
	for (unsigned pin = 0; pin < LIMIT_DATA_PINS; pin++)
		if ((run->word.open >> pin & 1) != 0)
			text_printf(out, "  D%u low", pin);
	text_put(out, "\n");
}

// The chip's address with the state pins as a state has them, and the others as they are in `rest`.
static uint32_t address_of(const struct chip_view *view, uint32_t state, uint32_t rest)
{
	uint32_t address = rest;
	for (unsigned pin = 0; pin < view->chip->part->address_pins; pin++)
		if ((view->state_pins >> pin & 1) != 0 && (state >> view->chip->address[pin].index & 1) != 0)
			address |= (uint32_t)1 << pin;
	return address;
}

static bool same_part(const struct chip_view *view, uint32_t rest, uint32_t other)
{
	for (uint32_t state = 0; state >> view->state_bits == 0; state++)
		if (data_at(view, address_of(view, state, rest)) != data_at(view, address_of(view, state, other)))
			return false;
	return true;
}

// "bank.0 high, A16 low": the pins that do not carry the state.
static void put_rest(const struct chip_view *view, uint32_t rest)
{
	bool any = false;
	for (unsigned pin = 0; pin < view->chip->part->address_pins; pin++) {
		const struct address_wire wire = view->chip->address[pin];
		if ((view->state_pins >> pin & 1) != 0)
			continue;
		text_put(view->out, any ? ", " : "");
		if (wire.kind == ADDRESS_KIND || wire.kind == ADDRESS_BANK)
			text_printf(view->out, wire.kind == ADDRESS_KIND ? "kind.%u" : "bank.%u", wire.index);
		else
			text_printf(view->out, "A%u", pin);
		text_put(view->out, (rest >> pin & 1) != 0 ? " high" : " low");
		any = true;
	}
}

static void put_part(const struct chip_view *view, uint32_t rest)
{
	struct run run = {.count = 0};
	for (uint32_t state = 0; state >> view->state_bits == 0; state++) {
		const struct word word = word_at(view, address_of(view, state, rest));
		if (run.count > 0 && extends(view, &run, &word)) {
			run.rises = word.next != run.last.next;
			run.last = word;
			run.count++;
			continue;
		}
		if (run.count > 0)
			put_run(view, &run);
		run = (struct run){.first = state, .count = 1, .word = word, .last = word};
	}
	put_run(view, &run);
}

static void put_data_pin(const struct chip_view *view, struct data_wire wire)
{
	static const char *const words[] = {[DATA_OPEN] = "-",       [DATA_NEXT] = "next",   [DATA_KIND] = "kind",
	                                    [DATA_STEP] = "step", [DATA_CLEAR] = "clear", [DATA_SIGNAL] = NULL};
	const char *word = wire.kind == DATA_SIGNAL ? view->plan->signals[wire.index].name : words[wire.kind];
	text_printf(view->out, wire.kind == DATA_NEXT || wire.kind == DATA_KIND ? " %s.%u" : " %s", word, wire.index);
}

static void put_head(const struct chip_view *view)
{
	text_printf(view->out, "%s: chip %s, %s", view->plan->name, view->chip->label, view->chip->part->name);
	if (view->plan->machine.form == FORM_LINE_FRAME)
		text_printf(view->out, ", %s stage", stage_name(view->chip->stage));
	text_put(view->out, "\ndata pins:");
	for (unsigned pin = 0; pin < view->chip->part->data_pins; pin++)
		put_data_pin(view, view->chip->data[pin]);
	text_put(view->out, "\nstate, and what its row says in them:\n");
}

void view_chip_rows(struct text *out, const struct plan *board, size_t chip, const struct image *image)
{
	struct chip_view view = {.out = out, .plan = board, .chip = &board->chips[chip], .image = image};
	const uint32_t addresses = (uint32_t)1 << view.chip->part->address_pins;
	view.state_bits = machine_stage(&board->machine, view.chip->stage)->state_bits;
	for (unsigned pin = 0; pin < view.chip->part->address_pins && pin < LIMIT_ADDRESS_PINS; pin++)
		view.state_pins |= (uint32_t)(view.chip->address[pin].kind == ADDRESS_STATE) << pin;
	for (unsigned pin = 0; pin < view.chip->part->data_pins; pin++) {
		const struct data_wire wire = view.chip->data[pin];
		view.carries_kind = view.carries_kind || wire.kind == DATA_KIND;
		if (wire.kind == DATA_NEXT && (!view.carries_next || (uint32_t)1 << wire.index < view.unit))
			view.unit = (uint32_t)1 << wire.index;
		view.carries_next = view.carries_next || wire.kind == DATA_NEXT;
	}
	put_head(&view);
	for (uint32_t rest = 0, before = 0; rest < addresses; rest++) {
		if ((rest & view.state_pins) != 0)
			continue;
		if (view.state_pins != addresses - 1)
			put_rest(&view, rest);
		if (rest > 0 && same_part(&view, rest, before)) {
			text_put(out, ": as before\n");
			continue;
		}
		text_put(out, view.state_pins != addresses - 1 ? ":\n" : "");
		put_part(&view, rest);
		before = rest;
	}
}
