#include "view/manifest.h"

#include "catalogue/catalogue.h"
#include "image/image.h"
#include "proof/proof.h"
#include "scanlatch/scanlatch.h"
#include "view/chips.h"
#include "view/figures.h"
#include "view/proofs.h"

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

static json_t *chip_json(const struct plan *plan, const struct chip *chip, const struct image *image, unsigned files)
{
	json_t *entry = json_object();
	json_put(&entry, "label", json_string(chip->label));
	json_put(&entry, "part", json_string(chip->part->name));
	json_put(&entry, "bytes", json_integer((json_int_t)image->length));
	json_put(&entry, "crc32", crc32_json(image_crc32(image)));
	json_put(&entry, "sum16", json_integer(image_sum16(image)));
	json_put(&entry, "files", file_names(plan->name, chip->label, files));
	json_put(&entry, "address", view_address_json(chip));
	json_put(&entry, "data", view_data_json(plan, chip));
	return entry;
}

static json_t *chips_json(const struct plan *plan, const struct image *images, unsigned files)
{
	json_t *chips = json_array();
	for (size_t index = 0; index < plan->chip_count; index++)
		json_append(&chips, chip_json(plan, &plan->chips[index], &images[index], files));
	return chips;
}

static json_t *start_json(const struct proofs *proofs)
{
	json_t *start = json_array();
	for (uint32_t bank = 0; bank < proofs->banks; bank++) {
		json_t *entry = json_object();
		json_put(&entry, "bank", json_integer(bank));
		json_put(&entry, "stage", json_string("loop"));
		json_put(&entry, "state", json_integer(proofs->closure.start_state));
		json_append(&start, entry);
	}
	return start;
}

json_t *view_frame_json(const struct timeline *timeline)
{
	json_t *frame = json_object(), *rate_object = json_object();
	struct fraction rate;
	json_put(&frame, "lines", json_integer(timeline->line_count));
	json_put(&frame, "cells", json_integer(timeline->cell_count));
	json_put(&frame, "ticks", json_sprintf("%lld", (long long)timeline->tick_count));
	if (!fraction_divide(timeline->plan->clock.master_hz, fraction_whole(timeline->tick_count), &rate)) {
		json_decref(rate_object);
		json_put(&frame, "rate", json_null());
		return frame;
	}
	json_put(&rate_object, "fraction", json_fraction(rate));
	json_put(&rate_object, "decimal", json_rounded(rate));
	json_put(&frame, "rate", rate_object);
	return frame;
}

json_t *view_manifest(const struct proofs *proofs, const struct image *images, unsigned files)
{
	const struct plan *plan = proofs->timeline->plan;
	json_t *manifest = json_object(), *source = json_object();
	json_put(&source, "file", json_string(plan->file_name));
	json_put(&source, "crc32", crc32_json(plan->source_crc32));
	json_put(&manifest, "format", json_integer(1));
	json_put(&manifest, "name", json_string(plan->name));
	json_put(&manifest, "plan", source);
	json_put(&manifest, "chips", chips_json(plan, images, files));
	json_put(&manifest, "start", start_json(proofs));
	json_put(&manifest, "frame", view_frame_json(proofs->timeline));
	json_put(&manifest, "proofs", view_proofs_json(proofs));
	return manifest;
}
