// Signals: which of the old plan is which of the new one, and what each is.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"

static size_t find_named(const struct plan *plan, const char *name)
{
	for (size_t index = 0; index < plan->signal_count; index++)
		if (strcmp(plan->signals[index].name, name) == 0)
			return index;
	return NONE;
}

static uint64_t hash_name(uint64_t hash, const char *name)
{
	for (; *name != '\0'; name++)
		hash = (hash ^ (unsigned char)*name) * 0x100000001B3u;
	return (hash ^ 0xFF) * 0x100000001B3u;
}

// A number that signals share if they are asserted in the same regions of the same line types, by name; 0 for no region.
static uint64_t hash_regions(const struct plan *plan, size_t signal)
{
	uint64_t hash = 0;
	for (size_t line = 0; line < plan->line_count; line++)
		for (size_t region = 0; region < plan->lines[line].region_count; region++)
			if ((plan->lines[line].regions[region].assert_mask >> signal & 1) != 0)
				hash = hash_name(hash_name(hash, plan->lines[line].name), plan->lines[line].regions[region].name);
	return hash;
}

static bool is_taken(const struct comparing *comparing, size_t before, size_t now)
{
	for (size_t index = 0; index < before; index++)
		if (comparing->signal_of[index] == now)
			return true;
	return false;
}

// Where the new plan's signals that have no old name are asserted.
struct left_over {
	bool is[LIMIT_SIGNALS];
	uint64_t regions[LIMIT_SIGNALS];
};

static void list_left(const struct comparing *comparing, struct left_over *left)
{
	for (size_t index = 0; index < comparing->now->signal_count; index++) {
		left->is[index] = find_named(comparing->old, comparing->now->signals[index].name) == NONE;
		left->regions[index] = left->is[index] ? hash_regions(comparing->now, index) : 0;
	}
}

// Only plain signals share their role: of those, the one that is asserted where the old one is.
static size_t find_renamed(const struct comparing *comparing, const struct left_over *left, size_t old)
{
	const struct signal *before = &comparing->old->signals[old];
	const uint64_t regions = hash_regions(comparing->old, old);
	for (size_t index = 0; index < comparing->now->signal_count; index++) {
		const struct signal *signal = &comparing->now->signals[index];
		if (left->is[index] && signal->role == before->role && !is_taken(comparing, old, index) &&
		    (signal->role != ROLE_PLAIN ||
		     (signal->origin == before->origin && signal->stage == before->stage && left->regions[index] == regions)))
			return index;
	}
	return NONE;
}

// By name; what is left over by role and by where it is asserted.
void match_signals(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	struct left_over left = {.is = {false}};
	list_left(comparing, &left);
	comparing->signal_of = arena_array(comparing->arena, old->signal_count, sizeof *comparing->signal_of);
	comparing->failed = comparing->failed || comparing->signal_of == NULL;
	for (size_t index = 0; !comparing->failed && index < old->signal_count; index++) {
		const size_t match = find_named(now, old->signals[index].name);
		comparing->signal_of[index] = match != NONE ? match : find_renamed(comparing, &left, index);
	}
}

// The field that a decoded signal comes from, by the name that the new plan has for it.
static const char *field_name(const struct comparing *comparing, const struct plan *plan, size_t field)
{
	const size_t match = plan == comparing->old ? comparing->field_of[field] : field;
	return match != NONE ? comparing->now->machine.fields[match].name : plan->machine.fields[field].name;
}

static void put_origin(struct text *out, const struct comparing *comparing, const struct plan *plan, const struct signal *signal)
{
	if (signal->origin == FROM_DATA) {
		text_put(out, "from data");
		return;
	}
	text_printf(out, "from field %s, code%s", field_name(comparing, plan, signal->field), signal->code_count == 1 ? "" : "s");
	if (signal->auto_codes)
		text_put(out, " chosen by the planner");
	for (size_t code = 0; code < signal->code_count; code++)
		text_printf(out, "%s %" PRIu32, code > 0 ? "," : "", signal->codes[code]);
}

enum signal_property { SIGNAL_ROLE, SIGNAL_ACTIVE, SIGNAL_LEAD, SIGNAL_STAGE, SIGNAL_ORIGIN, SIGNAL_PROPERTIES };

static void put_property(struct text *out, const struct comparing *comparing, const struct plan *plan, const struct signal *signal,
                         enum signal_property property)
{
	switch (property) {
	case SIGNAL_ROLE:
		text_put(out, role_name(signal->role));
		break;
	case SIGNAL_ACTIVE:
		text_printf(out, "active %s", signal->active_high ? "high" : "low");
		break;
	case SIGNAL_LEAD:
		text_printf(out, "lead %" PRId64 " cell%s", signal->lead_cells, signal->lead_cells == 1 || signal->lead_cells == -1 ? "" : "s");
		break;
	case SIGNAL_STAGE:
		text_printf(out, "%s stage", stage_name(signal->stage));
		break;
	default:
		put_origin(out, comparing, plan, signal);
	}
}

static void put_signal(struct text *out, const struct comparing *comparing, const struct plan *plan, const struct signal *signal)
{
	for (unsigned property = 0; property < SIGNAL_PROPERTIES; property++) {
		if ((property == SIGNAL_STAGE && plan->machine.form == FORM_LOOP) || (property == SIGNAL_LEAD && signal->lead_cells == 0))
			continue;
		text_put(out, property > 0 ? ", " : "");
		put_property(out, comparing, plan, signal, (enum signal_property)property);
	}
}

static const char *signal_words(struct comparing *comparing, const char *name)
{
	return keep_words(comparing, "signal %s", name);
}

// Of a signal that stays, property by property.
static void compare_signal(struct comparing *comparing, const struct signal *old, const struct signal *now)
{
	compare_words(comparing, CHANGE_WORDS, "a signal's name", old->name, now->name);
	for (unsigned property = 0; property < SIGNAL_PROPERTIES; property++) {
		struct text left = {0}, right = {0};
		put_property(&left, comparing, comparing->old, old, (enum signal_property)property);
		put_property(&right, comparing, comparing->now, now, (enum signal_property)property);
		compare_texts(comparing, CHANGE_SIGNALS, signal_words(comparing, now->name), &left, &right);
	}
}

static void add_signal(struct comparing *comparing, const struct plan *plan, const struct signal *signal)
{
	const bool removed = plan == comparing->old;
	struct text words = {0};
	put_signal(&words, comparing, plan, signal);
	const char *kept = keep_text(comparing, &words);
	add_change(comparing, (struct change){.section = CHANGE_SIGNALS, .kind = removed ? "removed" : "added",
	                                      .what = signal_words(comparing, signal->name), .old = removed ? kept : NULL,
	                                      .now = removed ? NULL : kept});
}

void compare_signals(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	uint64_t matched = 0;
	for (size_t index = 0; index < old->signal_count; index++) {
		const size_t match = comparing->signal_of[index];
		if (match == NONE) {
			add_signal(comparing, old, &old->signals[index]);
			continue;
		}
		matched |= (uint64_t)1 << match;
		compare_signal(comparing, &old->signals[index], &now->signals[match]);
	}
	for (size_t index = 0; index < now->signal_count; index++)
		if ((matched >> index & 1) == 0)
			add_signal(comparing, now, &now->signals[index]);
}
