#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "image/codec.h"
#include "library/library.h"
#include "plan/characters.h"
#include "view/listing.h"
#include "view/set.h"

// Where a member's frame begins, as far as its plan tells.
static struct member_images begin_as_planned(const struct plan *plan)
{
	const struct machine_plan *machine = &plan->machine;
	const bool counted = machine->line.advance == ADVANCE_COUNT;
	return (struct member_images){.has_start = machine->has_start || counted, .start = counted ? 0 : machine->start};
}

scanlatch_images *scanlatch_images_create(const scanlatch_plan *plan)
{
	struct arena *arena = arena_create();
	scanlatch_images *images = arena != NULL ? arena_alloc(arena, sizeof *images) : NULL;
	struct image *chips = images != NULL ? arena_array(arena, plan->plan->chip_count, sizeof *chips) : NULL;
	struct member_images *members = chips != NULL ? arena_array(arena, plan->member_count, sizeof *members) : NULL;
	const struct source **sources = members != NULL ? arena_array(arena, plan->plan->chip_count, sizeof *sources) : NULL;
	if (sources == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	*images = (scanlatch_images){.arena = arena, .plan = plan, .members = members, .images = chips, .sources = sources};
	for (size_t index = 0; index < plan->member_count; index++)
		members[index] = begin_as_planned(plan->members[index].plan);
	return images;
}

void scanlatch_images_destroy(scanlatch_images *images)
{
	if (images == NULL)
		return;
	for (size_t index = 0; index < images->plan->member_count; index++)
		table_destroy(images->members[index].table);
	arena_destroy(images->arena);
}

void scanlatch_images_begin_as(scanlatch_images *images, const scanlatch_images *made)
{
	for (size_t index = 0; index < images->plan->member_count; index++) {
		if (made->members[index].table == NULL)
			continue;
		images->members[index].has_start = true;
		images->members[index].start = made->members[index].table->state_of_cell[0];
	}
}

static void report_memory(scanlatch_messages *messages)
{
	diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
}

// `preferences`: one for each member, or NULL.
static bool create_tables(scanlatch_images *images, const struct preference *const *preferences, struct diagnostics *diagnostics)
{
	bool good = true;
	for (size_t index = 0; index < images->plan->member_count; index++) {
		if (images->plan->members[index].timeline == NULL)
			return false;
		images->members[index].table =
			table_create_near(images->plan->members[index].timeline, preferences != NULL ? preferences[index] : NULL, diagnostics);
		good = good && images->members[index].table != NULL;
	}
	return good;
}

scanlatch_images *scanlatch_images_make(const scanlatch_plan *plan, scanlatch_messages *messages)
{
	return images_make(plan, NULL, messages);
}

size_t scanlatch_images_differing(const scanlatch_images *left, const scanlatch_images *right, size_t chip)
{
	size_t count = 0;
	for (size_t index = 0; index < left->images[chip].length; index++)
		count += left->images[chip].bytes[index] != right->images[chip].bytes[index];
	return count;
}

scanlatch_images *images_make(const scanlatch_plan *plan, const struct preference *const *preferences, scanlatch_messages *messages)
{
	scanlatch_images *images = scanlatch_images_create(plan);
	if (images == NULL) {
		report_memory(messages);
		return NULL;
	}
	if (create_tables(images, preferences, messages->diagnostics) && banks_fill(images, messages))
		return images;
	scanlatch_images_destroy(images);
	return NULL;
}

static size_t find_chip(const struct plan *plan, const char *label)
{
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		if (strcmp(plan->chips[chip].label, label) == 0)
			return chip;
	return SIZE_MAX;
}

static bool report_unknown_chip(const struct plan *plan, struct place place, const char *label, struct diagnostics *diagnostics)
{
	diagnose(diagnostics, RULE_IMAGE_UNKNOWN_CHIP, place, "the plan has no chip \"%s\"", label);
	struct text labels = {0};
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		text_printf(&labels, "%s%s", chip == 0 ? "" : ", ", plan->chips[chip].label);
	diagnose_hint(diagnostics, "its chips are %s", text_string(&labels));
	text_release(&labels);
	return false;
}

static bool decode_hex(const struct chip *chip, struct place place, const void *bytes, size_t length, struct image *image,
                       struct diagnostics *diagnostics)
{
	struct hex_result result = {0};
	memset(image->bytes, 0xFF, image->length);
	const enum hex_status status = hex_decode(bytes, length, image->bytes, image->length, &result);
	place.line = (uint32_t)result.line;
	place.column = place.line > 0;
	if (status == HEX_OUT_OF_RANGE)
		diagnose(diagnostics, RULE_IMAGE_SIZE, place, "data at address 0x%X, but chip \"%s\" (%s) has %zu bytes", (unsigned)result.address,
		         chip->label, chip->part->name, image->length);
	else if (status == HEX_MEMORY)
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, place, "memory is out");
	else if (status != HEX_OK)
		diagnose(diagnostics, RULE_IMAGE_FORMAT, place, "Intel HEX: %s", hex_status_words(status));
	else if (result.missing > 0)
		diagnose(diagnostics, RULE_IMAGE_GAP, (struct place){place.source, 0, 0},
		         "Intel HEX leaves %zu of the %zu bytes of chip \"%s\" out, the first at 0x%X; taken as 0xFF (erased)", result.missing,
		         image->length, chip->label, (unsigned)result.first_missing);
	return status == HEX_OK;
}

static bool copy_binary(const struct chip *chip, struct place place, const void *bytes, size_t length, struct image *image,
                        struct diagnostics *diagnostics)
{
	if (length == image->length) {
		memcpy(image->bytes, bytes, length);
		return true;
	}
	diagnose(diagnostics, RULE_IMAGE_SIZE, place, "%zu bytes, but chip \"%s\" (%s) has %zu", length, chip->label, chip->part->name,
	         image->length);
	if (length > 0 && *(const char *)bytes == ':')
		diagnose_hint(diagnostics, "it begins as Intel HEX does, but its first record has other characters than digits");
	return false;
}

// Keeps the image of a chip, or compares it with the one that another file gave.
static bool keep_image(scanlatch_images *images, size_t chip, const struct image *image, struct place place,
                       struct diagnostics *diagnostics)
{
	struct image *kept = &images->images[chip];
	if (kept->bytes == NULL) {
		*kept = *image;
		images->sources[chip] = place.source;
		return true;
	}
	if (memcmp(kept->bytes, image->bytes, kept->length) == 0)
		return true;
	size_t address = 0;
	while (kept->bytes[address] == image->bytes[address])
		address++;
	diagnose(diagnostics, RULE_IMAGE_DISAGREES, place, "byte 0x%02X at 0x%zX, where another file for chip \"%s\" has 0x%02X",
	         image->bytes[address], address, images->plan->plan->chips[chip].label, kept->bytes[address]);
	diagnose_also(diagnostics, (struct place){images->sources[chip], 0, 0}, "the other file");
	return false;
}

// The proofs read open pins as low; if the bytes differ where they are high, that is no more than half of the story.
static void notice_open_pin(const struct chip *chip, const struct image *image, struct place place, struct diagnostics *diagnostics)
{
	unsigned pin;
	size_t offset, count;
	if (!image_reads_open_pin(chip, image, &pin, &offset, &count))
		return;
	diagnose(diagnostics, RULE_IMAGE_OPEN_PIN, place, "chip \"%s\" answers differently while its open pin A%u is high, %s the byte at 0x%zX",
	         chip->label, pin, count == 1 ? "but only for" : "first for", offset);
	if (count == 1) {
		diagnose_hint(diagnostics, "that byte, or its twin at 0x%zX, may be damaged; the proofs hold for A%u low",
		              offset + ((size_t)1 << pin) * (chip->part->data_pins / 8), pin);
		return;
	}
	diagnose_hint(diagnostics, "the proofs hold for A%u low: tie it low on the board", pin);
}

bool scanlatch_images_read(scanlatch_images *images, const char *label, const char *file, const void *bytes, size_t length,
                           scanlatch_messages *messages)
{
	const struct plan *plan = images->plan->plan;
	const struct place place = {source_of_name(messages, file), 0, 0};
	const size_t index = find_chip(plan, label);
	if (index == SIZE_MAX)
		return report_unknown_chip(plan, place, label, messages->diagnostics);
	const struct chip *chip = &plan->chips[index];
	struct image image = {.length = chip_bytes(chip)};
	image.bytes = arena_alloc(images->arena, image.length);
	if (place.source == NULL || image.bytes == NULL) {
		report_memory(messages);
		return false;
	}
	const bool good = image_is_hex(bytes, length, image.length)
	                      ? decode_hex(chip, place, bytes, length, &image, messages->diagnostics)
	                      : copy_binary(chip, place, bytes, length, &image, messages->diagnostics);
	if (good && images->images[index].bytes == NULL)
		notice_open_pin(chip, &image, place, messages->diagnostics);
	return good && keep_image(images, index, &image, place, messages->diagnostics);
}

bool images_complete(const scanlatch_images *images, const char *folder, scanlatch_messages *messages)
{
	const struct plan *plan = images->plan->plan;
	const char *name = scanlatch_plan_name(images->plan);
	bool complete = true;
	for (size_t chip = 0; chip < plan->chip_count; chip++) {
		if (images->images[chip].bytes != NULL)
			continue;
		diagnose(messages->diagnostics, RULE_IMAGE_MISSING, (struct place){images->plan->source, 0, 0}, "there is no image for chip \"%s\" (%s)",
		         plan->chips[chip].label, plan->chips[chip].part->name);
		struct text others = {0};
		if (folder != NULL && complete)
			put_other_images(images->plan, folder, &others);
		if (folder != NULL)
			diagnose_hint(messages->diagnostics, "the folder %s has neither %s.%s.bin nor %s.%s.hex%s", SHORT(folder), name,
			              plan->chips[chip].label, name, plan->chips[chip].label, text_string(&others));
		text_release(&others);
		complete = false;
	}
	return complete;
}

bool scanlatch_images_complete(const scanlatch_images *images, scanlatch_messages *messages)
{
	return images_complete(images, NULL, messages);
}

const uint8_t *scanlatch_images_bytes(const scanlatch_images *images, size_t chip, size_t *length)
{
	*length = images->images[chip].length;
	return images->images[chip].bytes;
}

char *scanlatch_images_hex(const scanlatch_images *images, size_t chip, unsigned record, size_t *length)
{
	struct text text = {0};
	hex_encode(images->images[chip].bytes, images->images[chip].length, record, &text);
	*length = text.length;
	if (text.failed)
		text_release(&text);
	return text.bytes;
}

char *scanlatch_images_listing(const scanlatch_images *images)
{
	struct text text = {0};
	for (size_t index = 0; index < images->plan->member_count; index++) {
		const struct member *member = &images->plan->members[index];
		if (images->members[index].table == NULL)
			return NULL;
		if (images->plan->set != NULL) {
			text_put(&text, index > 0 ? "\n# " : "# ");
			view_banks(&text, member->plan, member->banks, member->bank_count);
		}
		view_listing(&text, images->members[index].table, images->images, member->banks[0]);
	}
	return take_string(&text);
}
