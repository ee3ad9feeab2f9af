// Images near to older ones: what their manifest tells of these, and what their cells' states were.
#include <errno.h>
#include <string.h>
#include <sys/stat.h>

#include "base/arena.h"
#include "base/file.h"
#include "library/library.h"
#include "near/near.h"
#include "plan/read.h"

#define MANIFEST_BYTES ((size_t)16 << 20) // more than 256 banks need

struct nearing {
	struct arena *arena;
	const scanlatch_plan *plan;
	const scanlatch_images *old;
	scanlatch_messages *messages;
	const char *path;          // of the manifest
	json_t *manifest;          // NULL if there is none
	uint64_t known;            // data signals whose pins have not changed
};

static bool report_memory(const struct nearing *nearing)
{
	diagnose(nearing->messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){nearing->plan->source, 0, 0}, "memory is out");
	return false;
}

static struct place manifest_place(const struct nearing *nearing)
{
	return (struct place){source_of_name(nearing->messages, nearing->path), 0, 0};
}

// A manifest that is not there, or is none, is done without.
static bool read_manifest(struct nearing *nearing, const char *folder)
{
	char *bytes = NULL;
	size_t length = 0;
	nearing->path = arena_format(nearing->arena, "%s/%s.manifest.json", folder, scanlatch_plan_name(nearing->plan));
	if (nearing->path == NULL)
		return report_memory(nearing);
	const enum read_status status = file_read(nearing->arena, nearing->path, MANIFEST_BYTES, &bytes, &length);
	if (status == READ_MEMORY)
		return report_memory(nearing);
	if (status == READ_SYSTEM && (errno == ENOENT || errno == ENOTDIR))
		return true;
	if (status == READ_OK)
		nearing->manifest = json_loadb(bytes, length, JSON_REJECT_DUPLICATES, NULL);
	if (nearing->manifest == NULL)
		diagnose(nearing->messages->diagnostics, RULE_NEAR_MANIFEST, manifest_place(nearing),
		         "this is no manifest that can be read; the images are taken as wired like the plan, and their frame is looked for");
	return true;
}

static const json_t *chip_entry(const struct nearing *nearing, const char *label)
{
	const json_t *chips = json_object_get(nearing->manifest, "chips");
	for (size_t index = 0; index < json_array_size(chips); index++) {
		const json_t *chip = json_array_get(chips, index);
		const char *other = json_string_value(json_object_get(chip, "label"));
		if (other != NULL && strcmp(other, label) == 0)
			return chip;
	}
	return NULL;
}

static const char *wire_in(const json_t *chip, const char *row, unsigned pin)
{
	const char *wire = json_string_value(json_array_get(json_object_get(chip, row), pin));
	return wire != NULL ? wire : "-";
}

static bool report_pin(const struct nearing *nearing, const struct chip *chip, char row, unsigned pin, const char *old, const char *now)
{
	diagnose(nearing->messages->diagnostics, RULE_NEAR_WIRING, manifest_place(nearing),
	         "chip \"%s\" was wired otherwise: pin %c%u was %s, now %s", chip->label, row, pin, SHORT(strcmp(old, "-") == 0 ? "open" : old),
	         strcmp(now, "-") == 0 ? "open" : now);
	diagnose_also(nearing->messages->diagnostics, chip->place, "the chip in the plan");
	diagnose_hint(nearing->messages->diagnostics, "then every row is elsewhere: build without --near");
	return false;
}

// What carries the state must be where it was; a signal on another pin is only not known.
static bool check_data_pin(struct nearing *nearing, const json_t *entry, const struct chip *chip, unsigned pin)
{
	char name[WIRE_NAME_BYTES];
	const struct data_wire wire = chip->data[pin];
	const char *now = data_wire_name(nearing->plan->plan, wire, name), *old = wire_in(entry, "data", pin);
	const bool same = strcmp(old, now) == 0;
	const bool old_is_state = strncmp(old, "next.", 5) == 0 || strncmp(old, "kind.", 5) == 0 || strcmp(old, "step") == 0 ||
	                          strcmp(old, "clear") == 0;
	if (!same && wire.kind == DATA_SIGNAL)
		nearing->known &= ~((uint64_t)1 << wire.index);
	if (same || (!old_is_state && (wire.kind == DATA_SIGNAL || wire.kind == DATA_OPEN)))
		return true;
	return report_pin(nearing, chip, 'D', pin, old, now);
}

static bool check_chip(struct nearing *nearing, const struct chip *chip)
{
	char name[WIRE_NAME_BYTES];
	const json_t *entry = chip_entry(nearing, chip->label);
	for (unsigned pin = 0; entry != NULL && pin < chip->part->address_pins; pin++) {
		const char *now = address_wire_name(chip->address[pin], name), *old = wire_in(entry, "address", pin);
		if (strcmp(old, now) != 0)
			return report_pin(nearing, chip, 'A', pin, old, now);
	}
	for (unsigned pin = 0; entry != NULL && pin < chip->part->data_pins; pin++)
		if (!check_data_pin(nearing, entry, chip, pin))
			return false;
	return true;
}

static bool check_wiring(struct nearing *nearing)
{
	const struct plan *plan = nearing->plan->plan;
	bool good = true;
	nearing->known = UINT64_MAX;
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		good = check_chip(nearing, &plan->chips[chip]) && good;
	return good;
}

// The start of the line stage in a bank, as the manifest has it.
static void read_start(const struct nearing *nearing, struct old_machine *machine)
{
	const json_t *starts = json_object_get(nearing->manifest, "start");
	for (size_t index = 0; index < json_array_size(starts); index++) {
		const json_t *start = json_array_get(starts, index), *state = json_object_get(start, "state");
		const char *stage = json_string_value(json_object_get(start, "stage"));
		if (json_integer_value(json_object_get(start, "bank")) != (json_int_t)machine->bank || stage == NULL || strcmp(stage, "frame") == 0 ||
		    !json_is_integer(state) || json_integer_value(state) < 0 ||
		    json_integer_value(state) >> machine->plan->machine.line.state_bits != 0)
			continue;
		machine->has_start = true;
		machine->start = (uint32_t)json_integer_value(state);
	}
}

// The proofs of a bank in the manifest.
static const json_t *proofs_of_bank(const struct nearing *nearing, uint32_t bank)
{
	const json_t *banks = json_object_get(nearing->manifest, "banks");
	for (size_t index = 0; index < json_array_size(banks); index++) {
		const json_t *numbers = json_object_get(json_array_get(banks, index), "banks");
		for (size_t number = 0; number < json_array_size(numbers); number++)
			if (json_integer_value(json_array_get(numbers, number)) == (json_int_t)bank)
				return json_object_get(json_array_get(banks, index), "proofs");
	}
	return json_object_get(nearing->manifest, "proofs");
}

// The codes that the manifest has for a signal, in the arena; NULL if it has none.
static const uint32_t *read_codes(const struct nearing *nearing, const json_t *list, size_t *count)
{
	uint32_t *codes = json_is_array(list) ? arena_array(nearing->arena, json_array_size(list), sizeof *codes) : NULL;
	*count = codes != NULL ? json_array_size(list) : 0;
	for (size_t index = 0; index < *count; index++)
		codes[index] = (uint32_t)json_integer_value(json_array_get(list, index));
	return codes;
}

// Codes that a plan lists are taken as those of before; the planner's own are in the manifest.
static bool find_codes(const struct nearing *nearing, struct old_machine *machine)
{
	const struct plan *plan = machine->plan;
	const uint32_t **codes = arena_array(nearing->arena, plan->signal_count, sizeof *codes);
	size_t *counts = arena_array(nearing->arena, plan->signal_count, sizeof *counts);
	const json_t *found = json_object_get(json_object_get(proofs_of_bank(nearing, machine->bank), "signals"), "codes");
	if (codes == NULL || counts == NULL)
		return report_memory(nearing);
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		if (signal->origin != FROM_FIELD)
			continue;
		codes[index] = signal->codes;
		counts[index] = signal->code_count;
		if (signal->auto_codes)
			codes[index] = read_codes(nearing, json_object_get(found, signal->name), &counts[index]);
	}
	machine->codes = codes;
	machine->code_counts = counts;
	return true;
}

static void notice_open_frame(const struct nearing *nearing, const struct member *member, const struct old_frame *frame)
{
	diagnose(nearing->messages->diagnostics, RULE_NEAR_FRAME, (struct place){member->plan->source, 0, 0},
	         "the old images have no frame that comes back to its first cell: they are damaged, or another board's");
	diagnose_hint(nearing->messages->diagnostics, frame->cell_count > 0 ? "states are kept as far as they can be followed" : "no state can be kept");
}

// Walks the frame that a member's banks show. False after reporting.
static bool walk_member(const struct nearing *nearing, size_t index, struct old_frame *frame)
{
	const struct member *member = &nearing->plan->members[index];
	struct old_machine machine = {.plan = member->plan, .images = nearing->old->images, .bank = member->banks[0], .known = nearing->known};
	machine.has_start = nearing->old->members[index].has_start;
	machine.start = nearing->old->members[index].start;
	read_start(nearing, &machine);
	if (!find_codes(nearing, &machine))
		return false;
	if (!old_frame_walk(nearing->arena, &machine, frame) || !old_frame_read_likest(frame, member->timeline))
		return report_memory(nearing);
	if (!frame->closed)
		notice_open_frame(nearing, member, frame);
	return true;
}

// What there is to burn. A chip that keeps its bytes stays in its socket, so chips count before bytes.
struct change {
	size_t chips, bytes;
};

static struct change count_change(const struct nearing *nearing, const scanlatch_images *images)
{
	struct change change = {0, 0};
	for (size_t chip = 0; chip < scanlatch_plan_chips(nearing->plan); chip++) {
		const size_t bytes = scanlatch_images_differing(nearing->old, images, chip);
		change.chips += bytes > 0;
		change.bytes += bytes;
	}
	return change;
}

static bool is_less(struct change change, struct change other)
{
	return change.chips != other.chips ? change.chips < other.chips : change.bytes < other.bytes;
}

// Makes images with cells matched in one way. NULL if that does not go (plans of a set may come to different codes), or if memory is out, which
// `messages` says then.
static scanlatch_images *make_in_way(const struct nearing *nearing, const struct old_frame *frames, enum near_way way, scanlatch_messages *messages)
{
	struct arena *arena = arena_create();
	const struct preference **preferences = arena != NULL ? arena_array(arena, nearing->plan->member_count, sizeof *preferences) : NULL;
	bool good = preferences != NULL;
	for (size_t index = 0; good && index < nearing->plan->member_count; index++) {
		preferences[index] = near_preference(arena, nearing->plan->members[index].timeline, &frames[index], way);
		good = preferences[index] != NULL;
	}
	scanlatch_images *images = NULL;
	if (good)
		images = images_make(nearing->plan, preferences, messages);
	else
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){nearing->plan->source, 0, 0}, "memory is out");
	arena_destroy(arena);
	return images;
}

// The same. Only lack of memory is reported, and gives false.
static bool try_way(const struct nearing *nearing, const struct old_frame *frames, enum near_way way, scanlatch_images **images)
{
	scanlatch_messages *messages = scanlatch_messages_create();
	*images = messages != NULL ? make_in_way(nearing, frames, way, messages) : NULL;
	const bool good = *images != NULL || (messages != NULL && !scanlatch_messages_system(messages));
	if (messages != NULL)
		scanlatch_messages_destroy(messages);
	return good || report_memory(nearing);
}

// The nearest images so far.
struct nearest {
	scanlatch_images *images; // NULL: none yet
	struct change change;
};

static bool is_same(const struct nearest *nearest)
{
	return nearest->images != NULL && nearest->change.bytes == 0;
}

// Keeps others, NULL if there are none, if less changes in them; else they are given up.
static void keep_nearer(const struct nearing *nearing, struct nearest *nearest, scanlatch_images *other)
{
	if (other == NULL)
		return;
	const struct change change = count_change(nearing, other);
	const bool better = nearest->images == NULL || is_less(change, nearest->change);
	scanlatch_images_destroy(better ? nearest->images : other);
	if (better)
		*nearest = (struct nearest){other, change};
}

// Tries all ways to match cells.
static bool try_ways(const struct nearing *nearing, const struct old_frame *frames, struct nearest *nearest)
{
	scanlatch_images *images;
	bool good = true;
	for (unsigned way = 0; good && way < NEAR_WAYS && !is_same(nearest); way++) {
		good = try_way(nearing, frames, (enum near_way)way, &images);
		keep_nearer(nearing, nearest, images);
	}
	return good;
}

// Reads frames with the new plan's polarities that were read with others. False if there are none.
static bool read_as_planned(const struct nearing *nearing, struct old_frame *frames)
{
	bool any = false;
	for (size_t index = 0; index < nearing->plan->member_count; index++) {
		if (frames[index].inverted == 0)
			continue;
		old_frame_read(&frames[index], 0);
		any = true;
	}
	return any;
}

// Tries to match the likest frames, the same as planned, since fewer bytes may change where rows are not what they were meant to be, and, last, to
// keep nothing.
static scanlatch_images *make_nearest(const struct nearing *nearing, struct old_frame *frames)
{
	struct nearest nearest = {.images = NULL};
	bool good = try_ways(nearing, frames, &nearest);
	if (good && !is_same(&nearest) && read_as_planned(nearing, frames))
		good = try_ways(nearing, frames, &nearest);
	if (good && !is_same(&nearest)) {
		scanlatch_images *images = images_make(nearing->plan, NULL, nearing->messages);
		good = images != NULL;
		keep_nearer(nearing, &nearest, images);
	}
	if (good)
		return nearest.images;
	scanlatch_images_destroy(nearest.images);
	return NULL;
}

static scanlatch_images *make(struct nearing *nearing, const char *folder)
{
	struct old_frame *frames = arena_array(nearing->arena, nearing->plan->member_count, sizeof *frames);
	if (frames == NULL) {
		report_memory(nearing);
		return NULL;
	}
	if (!read_manifest(nearing, folder) || !check_wiring(nearing))
		return NULL;
	for (size_t index = 0; index < nearing->plan->member_count; index++)
		if (!walk_member(nearing, index, &frames[index]))
			return NULL;
	return make_nearest(nearing, frames);
}

scanlatch_images *scanlatch_images_make_near(const scanlatch_plan *plan, const scanlatch_images *old, const char *folder,
                                             scanlatch_messages *messages)
{
	struct nearing nearing = {.arena = arena_create(), .plan = plan, .old = old, .messages = messages};
	if (nearing.arena == NULL) {
		report_memory(&nearing);
		return NULL;
	}
	scanlatch_images *images = make(&nearing, folder);
	json_decref(nearing.manifest);
	arena_destroy(nearing.arena);
	return images;
}
