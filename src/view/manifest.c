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
		json_array_append_new(names, json_sprintf("%s.%s.bin", name, label));
	if ((files & SCANLATCH_FILE_HEX) != 0)
		json_array_append_new(names, json_sprintf("%s.%s.hex", name, label));
	return names;
}

static json_t *chips_json(const struct plan *plan, const struct image *images, unsigned files)
{
	json_t *chips = json_array();
	for (size_t index = 0; index < plan->chip_count; index++) {
		const struct chip *chip = &plan->chips[index];
		json_t *entry = json_pack("{s:s, s:s, s:I, s:o, s:i}", "label", chip->label, "part", chip->part->name, "bytes",
		                          (json_int_t)images[index].length, "crc32", json_sprintf("%08x", (unsigned)image_crc32(&images[index])),
		                          "sum16", (int)image_sum16(&images[index]));
		json_object_set_new(entry, "files", file_names(plan->name, chip->label, files));
		json_object_set_new(entry, "address", view_address_json(chip));
		json_object_set_new(entry, "data", view_data_json(plan, chip));
		json_array_append_new(chips, entry);
	}
	return chips;
}

static json_t *start_json(const struct proofs *proofs)
{
	json_t *start = json_array();
	for (uint32_t bank = 0; bank < proofs->banks; bank++)
		json_array_append_new(start, json_pack("{s:I, s:s, s:I}", "bank", (json_int_t)bank, "stage", "loop", "state",
		                                       (json_int_t)proofs->closure.start_state));
	return start;
}

json_t *view_frame_json(const struct timeline *timeline)
{
	struct fraction rate;
	if (!fraction_divide(timeline->plan->clock.master_hz, fraction_whole(timeline->tick_count), &rate))
		return json_pack("{s:I, s:I, s:o, s:n}", "lines", (json_int_t)timeline->line_count, "cells", (json_int_t)timeline->cell_count,
		                 "ticks", json_sprintf("%lld", (long long)timeline->tick_count), "rate");
	return json_pack("{s:I, s:I, s:o, s:{s:o, s:o}}", "lines", (json_int_t)timeline->line_count, "cells",
	                 (json_int_t)timeline->cell_count, "ticks", json_sprintf("%lld", (long long)timeline->tick_count), "rate", "fraction",
	                 json_fraction(rate), "decimal", json_rounded(rate));
}

json_t *view_manifest(const struct proofs *proofs, const struct image *images, unsigned files)
{
	const struct plan *plan = proofs->timeline->plan;
	return json_pack("{s:i, s:s, s:{s:s, s:o}, s:o, s:o, s:o, s:o}", "format", 1, "name", plan->name, "plan", "file", plan->file_name,
	                 "crc32", json_sprintf("%08x", (unsigned)plan->source_crc32), "chips", chips_json(plan, images, files), "start",
	                 start_json(proofs), "frame", view_frame_json(proofs->timeline), "proofs", view_proofs_json(proofs));
}
