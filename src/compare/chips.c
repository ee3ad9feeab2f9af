// Parts and wiring, chip by chip.
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "compare/parts.h"
#include "plan/read.h"
#include "view/figures.h"

static const struct chip *find_chip(const struct plan *plan, const char *label)
{
	for (size_t index = 0; index < plan->chip_count; index++)
		if (strcmp(plan->chips[index].label, label) == 0)
			return &plan->chips[index];
	return NULL;
}

static void put_part(struct text *out, const struct plan *plan, const struct chip *chip)
{
	text_printf(out, "%s, ", chip->part->name);
	text_put_time_in(out, chip->access_s, UNIT_NANOSECONDS);
	if (plan->machine.form == FORM_LINE_FRAME)
		text_printf(out, ", %s stage", stage_name(chip->stage));
}

static const char *chip_words(struct comparing *comparing, const char *label, const char *pin, unsigned number)
{
	const char *words = pin == NULL ? arena_format(comparing->arena, "chip %s", label)
	                                : arena_format(comparing->arena, "chip %s, %s%u", label, pin, number);
	comparing->failed = comparing->failed || words == NULL;
	return words != NULL ? words : "";
}

static const char *keep_name(struct comparing *comparing, const char *name)
{
	const char *kept = strcmp(name, "-") == 0 ? NULL : arena_copy(comparing->arena, name, strlen(name));
	comparing->failed = comparing->failed || (kept == NULL && strcmp(name, "-") != 0);
	return kept;
}

// A signal that only has another name is on the same wire.
static bool same_data_wire(const struct comparing *comparing, struct data_wire old, struct data_wire now)
{
	return old.kind == DATA_SIGNAL && now.kind == DATA_SIGNAL && comparing->signal_of[old.index] == now.index;
}

static void compare_pins(struct comparing *comparing, const struct chip *old, const struct chip *now)
{
	char name[WIRE_NAME_BYTES];
	for (unsigned pin = 0; pin < LIMIT_ADDRESS_PINS; pin++) {
		const char *before = keep_name(comparing, address_wire_name(old->address[pin], name));
		compare_words(comparing, CHANGE_CHIPS, chip_words(comparing, now->label, "A", pin), before,
		              keep_name(comparing, address_wire_name(now->address[pin], name)));
	}
	for (unsigned pin = 0; pin < LIMIT_DATA_PINS; pin++) {
		if (same_data_wire(comparing, old->data[pin], now->data[pin]))
			continue;
		const char *before = keep_name(comparing, data_wire_name(comparing->old, old->data[pin], name));
		compare_words(comparing, CHANGE_CHIPS, chip_words(comparing, now->label, "D", pin), before,
		              keep_name(comparing, data_wire_name(comparing->now, now->data[pin], name)));
	}
}

void compare_chips(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	for (size_t index = 0; index < old->chip_count; index++) {
		const struct chip *chip = &old->chips[index], *match = find_chip(now, chip->label);
		struct text before = {0}, after = {0};
		put_part(&before, old, chip);
		if (match != NULL)
			put_part(&after, now, match);
		compare_texts(comparing, CHANGE_CHIPS, chip_words(comparing, chip->label, NULL, 0), &before, &after);
		if (match != NULL)
			compare_pins(comparing, chip, match);
	}
	for (size_t index = 0; index < now->chip_count; index++) {
		struct text before = {0}, after = {0};
		if (find_chip(old, now->chips[index].label) != NULL)
			continue;
		put_part(&after, now, &now->chips[index]);
		compare_texts(comparing, CHANGE_CHIPS, chip_words(comparing, now->chips[index].label, NULL, 0), &before, &after);
	}
}
