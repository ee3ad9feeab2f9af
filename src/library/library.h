// Inside the library: what stands behind the opaque types of scanlatch.h.
#ifndef SCANLATCH_LIBRARY_LIBRARY_H
#define SCANLATCH_LIBRARY_LIBRARY_H

#include <jansson.h>

#include "base/text.h"
#include "image/image.h"
#include "layout/timeline.h"
#include "plan/set.h"
#include "proof/proof.h"
#include "scanlatch/scanlatch.h"
#include "table/table.h"

struct scanlatch_messages {
	struct diagnostics *diagnostics;
	struct arena *names;       // sources that messages quote: plans and the names of image files
};

struct scanlatch_plan {
	struct arena *arena;           // the catalogue
	const struct source *source;   // owned by the messages that the plan was read with
	struct plan *plan;
	struct timeline *timeline;
};

struct scanlatch_images {
	struct arena *arena;
	const scanlatch_plan *plan;
	struct table *table;       // NULL if the images were read
	struct image *images;      // [chip_count]; bytes NULL where a chip was not read
	bool has_start;            // it is known where the frame begins, by the plan or by the maker
	uint32_t start;
	const struct source **sources; // [chip_count]: the file that a chip was read from, NULL where there is none
};

struct scanlatch_proofs {
	const scanlatch_images *images;
	struct proofs *proofs;
};

// Takes the bytes of a text as a string of its own; NULL (and the text released) if it failed.
char *take_string(struct text *text);

// Dumps a document in a stable form, ends it with a newline, and gives up the reference. NULL when memory is out.
char *take_json(json_t *document);

// True if every chip has its bytes; otherwise adds an error for each that has not. `folder`: where they were looked for, or NULL.
bool images_complete(const scanlatch_images *images, const char *folder, scanlatch_messages *messages);

// What messages call a file: its path, or "standard input" for "-". Cannot fail.
const char *source_label(const char *file);

// A source of a file's label alone, for messages about it. NULL when memory is out.
const struct source *source_of_name(scanlatch_messages *messages, const char *file);

// A copy of a source in the arena of the messages: they quote it even when there is no plan to keep it. NULL when memory is out.
const struct source *keep_source(struct arena *arena, const char *name, const char *bytes, size_t length);

// Reads a plan's or set's file into an arena. False after reporting.
bool read_plan_file(struct arena *arena, const char *path, char **bytes, size_t *length, scanlatch_messages *messages);

// A set and the plans of its listed banks, which agree.
struct plan_set {
	struct arena *arena;       // the catalogue and what stands here
	struct set *set;
	struct plan **plans;       // [set->bank_count]
};

// Reads a set's bytes and the files that it names. `name` is what messages call it. NULL after reporting.
struct plan_set *plan_set_load(const char *name, const char *bytes, size_t length, scanlatch_messages *messages);
void plan_set_destroy(struct plan_set *plans);

#endif
