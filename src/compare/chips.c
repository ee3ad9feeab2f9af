// Parts and wiring, chip by chip.
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "compare/parts.h"
#include "plan/read.h"
#include "view/figures.h"

// A signal or field that only has another name is on the same wire.
static bool same_data_wire(const struct comparing *comparing, struct data_wire old, struct data_wire now)
{
	if (old.kind != now.kind)
		return false;
	return old.kind == DATA_SIGNAL ? comparing->signal_of[old.index] == now.index : old.index == now.index;
}

static bool same_address_wire(struct address_wire old, struct address_wire now)
{
	return old.kind == now.kind && old.index == now.index;
}

static bool wired_alike(const struct comparing *comparing, const struct chip *old, const struct chip *now)
{
	bool same = old->stage == now->stage && strcmp(old->part->name, now->part->name) == 0;
	for (unsigned pin = 0; same && pin < LIMIT_ADDRESS_PINS; pin++)
		same = same_address_wire(old->address[pin], now->address[pin]);
	for (unsigned pin = 0; same && pin < LIMIT_DATA_PINS; pin++)
		same = same_data_wire(comparing, old->data[pin], now->data[pin]);
	return same;
}

static bool is_taken(const struct comparing *comparing, size_t old)
{
	for (size_t now = 0; now < comparing->now->chip_count; now++)
		if (comparing->old_chip_of[now] == old)
			return true;
	return false;
}

// By label; what is left over is the same chip if its part and all its wires are.
static bool match_chips(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	comparing->old_chip_of = arena_array(comparing->arena, now->chip_count, sizeof *comparing->old_chip_of);
	comparing->failed = comparing->failed || comparing->old_chip_of == NULL;
	if (comparing->failed)
		return false;
	for (size_t index = 0; index < now->chip_count; index++) {
		comparing->old_chip_of[index] = NONE;
		for (size_t other = 0; other < old->chip_count; other++)
			if (strcmp(old->chips[other].label, now->chips[index].label) == 0)
				comparing->old_chip_of[index] = other;
	}
	for (size_t index = 0; index < now->chip_count; index++)
		for (size_t other = 0; comparing->old_chip_of[index] == NONE && other < old->chip_count; other++)
			if (!is_taken(comparing, other) && wired_alike(comparing, &old->chips[other], &now->chips[index]))
				comparing->old_chip_of[index] = other;
	return true;
}

// Parts of the plans' own can have one name and not be alike.
static bool parts_differ(const struct part *left, const struct part *right)
{
	return left->address_pins != right->address_pins || left->data_pins != right->data_pins;
}

static void put_part(struct text *out, const struct plan *plan, const struct chip *chip, bool whole)
{
	text_put(out, chip->part->name);
	if (whole)
		text_printf(out, " of %u address pins and %u data pins", chip->part->address_pins, chip->part->data_pins);
	text_put(out, ", ");
	text_put_time_in(out, chip->access_s, UNIT_NANOSECONDS);
	if (plan->machine.form == FORM_LINE_FRAME)
		text_printf(out, ", %s stage", stage_name(chip->stage));
}

// A pin of an old and a new chip; NULL for a part that has no such pin.
static void compare_pin(struct comparing *comparing, const struct chip *chip, char row, unsigned pin, const char *old, const char *now)
{
	static const char open[] = "-";
	if (strcmp(old != NULL ? old : open, now != NULL ? now : open) == 0)
		return;
	struct change change = {.section = CHANGE_CHIPS, .kind = "pin", .what = keep_words(comparing, "chip %s, pin %c%u", chip->label, row, pin)};
	if (old != NULL)
		change.old = keep_words(comparing, "%s", strcmp(old, open) == 0 ? "open" : old);
	if (now != NULL)
		change.now = keep_words(comparing, "%s", strcmp(now, open) == 0 ? "open" : now);
	add_change(comparing, change);
}

static const char *address_name(const struct chip *chip, unsigned pin, char *into)
{
	return pin < chip->part->address_pins ? address_wire_name(chip->address[pin], into) : NULL;
}

static const char *data_name(const struct plan *plan, const struct chip *chip, unsigned pin, char *into)
{
	return pin < chip->part->data_pins ? data_wire_name(plan, chip->data[pin], into) : NULL;
}

static void compare_pins(struct comparing *comparing, const struct chip *old, const struct chip *now)
{
	char left[WIRE_NAME_BYTES], right[WIRE_NAME_BYTES];
	for (unsigned pin = 0; pin < LIMIT_ADDRESS_PINS; pin++)
		compare_pin(comparing, now, 'A', pin, address_name(old, pin, left), address_name(now, pin, right));
	for (unsigned pin = 0; pin < LIMIT_DATA_PINS; pin++)
		if (!same_data_wire(comparing, old->data[pin], now->data[pin]))
			compare_pin(comparing, now, 'D', pin, data_name(comparing->old, old, pin, left), data_name(comparing->now, now, pin, right));
}

static void compare_chip(struct comparing *comparing, const struct chip *old, const struct chip *now)
{
	const bool whole = old != NULL && now != NULL && strcmp(old->part->name, now->part->name) == 0 && parts_differ(old->part, now->part);
	struct text before = {0}, after = {0};
	if (old != NULL)
		put_part(&before, comparing->old, old, whole);
	if (now != NULL)
		put_part(&after, comparing->now, now, whole);
	compare_texts(comparing, CHANGE_CHIPS, keep_words(comparing, "chip %s", now != NULL ? now->label : old->label), &before, &after);
	if (old == NULL || now == NULL)
		return;
	compare_words(comparing, CHANGE_WORDS, "a chip's label", old->label, now->label);
	compare_pins(comparing, old, now);
}

void compare_chips(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	if (!match_chips(comparing))
		return;
	for (size_t index = 0; index < now->chip_count; index++) {
		const size_t match = comparing->old_chip_of[index];
		compare_chip(comparing, match != NONE ? &old->chips[match] : NULL, &now->chips[index]);
	}
	for (size_t index = 0; index < old->chip_count; index++)
		if (!is_taken(comparing, index))
			compare_chip(comparing, &old->chips[index], NULL);
}
