#include "view/set.h"

#include "catalogue/catalogue.h"
#include "image/image.h"
#include "plan/set.h"
#include "proof/proof.h"
#include "scanlatch/scanlatch.h"
#include "view/chips.h"
#include "view/figures.h"
#include "view/frame.h"
#include "view/proofs.h"
#include "view/proofs_shared.h"

static json_t *file_names(const char *name, const char *label, unsigned files)
{
	json_t *names = json_array();
	if ((files & SCANLATCH_FILE_BIN) != 0)
		json_append(&names, json_sprintf("%s.%s.bin", name, label));
	if ((files & SCANLATCH_FILE_HEX) != 0)
		json_append(&names, json_sprintf("%s.%s.hex", name, label));
	return names;
}

static json_t *crc32_json(uint32_t crc32)
{
	return json_sprintf("%08x", (unsigned)crc32);
}

static json_t *chip_json(const struct plan *plan, const char *name, const struct chip *chip, const struct image *image, unsigned files)
{
	json_t *entry = json_object();
	json_put(&entry, "label", json_string(chip->label));
	json_put(&entry, "part", json_string(chip->part->name));
	json_put(&entry, "bytes", json_integer((json_int_t)image->length));
	json_put(&entry, "crc32", crc32_json(image_crc32(image)));
	json_put(&entry, "sum16", json_integer(image_sum16(image)));
	json_put(&entry, "files", file_names(name, chip->label, files));
	if (plan->machine.form == FORM_LINE_FRAME)
		json_put(&entry, "stage", json_string(stage_name(chip->stage)));
	json_put(&entry, "address", view_address_json(chip));
	json_put(&entry, "data", view_data_json(plan, chip));
	return entry;
}

static json_t *chips_json(const struct plan *plan, const char *name, const struct image *images, unsigned files)
{
	json_t *chips = json_array();
	for (size_t index = 0; index < plan->chip_count; index++)
		json_append(&chips, chip_json(plan, name, &plan->chips[index], &images[index], files));
	return chips;
}

static void append_start(json_t **start, uint32_t bank, const char *stage, uint32_t state)
{
	json_t *entry = json_object();
	json_put(&entry, "bank", json_integer(bank));
	json_put(&entry, "stage", json_string(stage));
	json_put(&entry, "state", json_integer(state));
	json_append(start, entry);
}

// Where each stage begins in a plan's bank.
static void append_starts(json_t **start, const struct proofs *proofs, uint32_t bank)
{
	const struct wiring wiring = wiring_of(plan_of(proofs));
	const uint32_t state = proofs->closure.start_state, mask = low_bits(wiring.line.state_bits);
	if (wiring.form == FORM_LOOP) {
		append_start(start, bank, "loop", state);
		return;
	}
	append_start(start, bank, stage_name(STAGE_LINE), state & mask);
	append_start(start, bank, stage_name(STAGE_FRAME), state >> feedback_of(&wiring).frame);
}

// By ascending bank.
static json_t *start_json(const struct set_view *view)
{
	json_t *start = json_array();
	const uint32_t banks = (uint32_t)1 << plan_of(view->proofs[0])->bank_bits;
	for (uint32_t bank = 0; bank < banks; bank++)
		for (size_t member = 0; member < view->count; member++)
			for (uint32_t index = 0; index < view->proofs[member]->banks; index++)
				if (view->proofs[member]->bank_numbers[index] == bank)
					append_starts(&start, view->proofs[member], bank);
	return start;
}

static json_t *source_json(const char *file, uint32_t crc32)
{
	json_t *source = json_object();
	json_put(&source, "file", json_string(file));
	json_put(&source, "crc32", crc32_json(crc32));
	return source;
}

static const char *view_name(const struct set_view *view)
{
	return view->set != NULL ? view->set->name : plan_of(view->proofs[0])->name;
}

static json_t *jumpers_json(const struct set_view *view)
{
	return json_string(set_comes_home(view) ? "pass" : "fail");
}

static json_t *bank_json(const struct proofs *proofs, bool frame)
{
	json_t *object = json_object(), *numbers = json_array();
	for (uint32_t index = 0; index < proofs->banks; index++)
		json_append(&numbers, json_integer(proofs->bank_numbers[index]));
	json_put(&object, "banks", numbers);
	json_put(&object, "name", json_string(plan_of(proofs)->name));
	json_put(&object, "plan", source_json(plan_of(proofs)->file_name, plan_of(proofs)->source_crc32));
	if (frame)
		json_put(&object, "frame", view_frame_json(proofs->timeline));
	json_put(&object, "proofs", view_proofs_json(proofs));
	return object;
}

static json_t *banks_json(const struct set_view *view, bool frame)
{
	json_t *banks = json_array();
	for (size_t member = 0; member < view->count; member++)
		json_append(&banks, bank_json(view->proofs[member], frame));
	return banks;
}

json_t *view_manifest(const struct set_view *view, const struct image *images, unsigned files)
{
	const struct plan *plan = plan_of(view->proofs[0]);
	json_t *manifest = json_object();
	json_put(&manifest, "format", json_integer(1));
	json_put(&manifest, "name", json_string(view_name(view)));
	json_put(&manifest, "plan", view->set != NULL ? source_json(view->set->file_name, view->set->source_crc32)
	                                              : source_json(plan->file_name, plan->source_crc32));
	json_put(&manifest, "chips", chips_json(plan, view_name(view), images, files));
	json_put(&manifest, "start", start_json(view));
	if (view->set == NULL) {
		json_put(&manifest, "frame", view_frame_json(view->proofs[0]->timeline));
		json_put(&manifest, "proofs", view_proofs_json(view->proofs[0]));
		return manifest;
	}
	json_put(&manifest, "banks", banks_json(view, true));
	json_put(&manifest, "jumpers", jumpers_json(view));
	return manifest;
}

json_t *view_set_json(const struct set_view *view)
{
	json_t *document = json_object(), *missed = json_array();
	bool failed = false;
	for (size_t member = 0; member < view->count; member++)
		failed = failed || proofs_failed(view->proofs[member], false);
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (set_misses(view, kind))
			json_append(&missed, json_string(proof_name(kind)));
	json_put(&document, "name", json_string(view_name(view)));
	json_put(&document, "failed", json_boolean(failed));
	json_put(&document, "missed", missed);
	if (view->set == NULL) {
		json_put(&document, "proofs", view_proofs_json(view->proofs[0]));
		return document;
	}
	json_put(&document, "banks", banks_json(view, false));
	json_put(&document, "jumpers", jumpers_json(view));
	return document;
}
