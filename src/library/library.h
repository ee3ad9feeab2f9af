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
	struct arena *names;       // what messages quote: plans, names of image files, catalogues
};

// A plan among those of a set, or a plan alone.
struct member {
	struct plan *plan;
	struct timeline *timeline;
	uint32_t *banks;               // settings of the jumpers that show the plan
	uint32_t bank_count;
};

struct scanlatch_plan {
	struct arena *arena;           // what stands here
	const struct source *source;   // owned by the messages that the plan was read with
	struct plan *plan;             // the first member's: all have its chips, wiring and word
	struct plan_set *set;          // which owns the plans; NULL for a plan alone
	struct member *members;
	size_t member_count;
};

// The images of a member.
struct member_images {
	struct table *table;       // NULL if the images were read
	bool has_start;            // it is known where the frame begins, by the plan or by the maker
	uint32_t start;
};

struct scanlatch_images {
	struct arena *arena;
	const scanlatch_plan *plan;
	struct member_images *members; // [plan->member_count]
	struct image *images;      // [chip_count]; bytes NULL where a chip was not read
	const struct source **sources; // [chip_count]: the file that a chip was read from, NULL where there is none
};

struct scanlatch_proofs {
	const scanlatch_images *images;
	struct proofs **proofs;    // [plan->member_count]
};

struct scanlatch_lift {
	struct arena *arena;
	const scanlatch_images *images;
	struct lift *lift;
	const char *plan;          // the text
	const char *const *files;  // [chip_count]: names of the images' files, without folders
	bool found;
};

// Reads a plan that was lifted again: it must lay out the images' loop, and what it cannot be built for is reported as found. False after
// reporting that it is none, or that memory is out.
bool lift_verify(scanlatch_lift *lift, scanlatch_messages *messages);

// Takes the bytes of a text as a string of its own; NULL (and the text released) if it failed.
char *take_string(struct text *text);

// Dumps a document in a stable form, ends it with a newline, and gives up the reference. NULL when memory is out.
char *take_json(json_t *document);

// True if every chip has its bytes; otherwise adds an error for each that has not. `folder`: where they were looked for, or NULL.
bool images_complete(const scanlatch_images *images, const char *folder, scanlatch_messages *messages);

// Puts "; it has A.bin, B.hex" of the first few image files of a folder that no chip of the plan is read from, by name; nothing if there are none.
void put_other_images(const scanlatch_plan *plan, const char *folder, struct text *out);

// Fills the chips from the tables of all members, each in its banks. False after reporting; then members disagree, or memory is out.
bool banks_fill(scanlatch_images *images, scanlatch_messages *messages);

// Makes images of a plan. `preferences`: for each member the states that its cells should keep; NULL: none. NULL after reporting.
scanlatch_images *images_make(const scanlatch_plan *plan, const struct preference *const *preferences, scanlatch_messages *messages);

// What messages call a file: its path, "standard input" for "-", and two quotes for an empty one. Cannot fail.
const char *source_label(const char *file);

// A source of a file's label alone, for messages about it. NULL when memory is out.
const struct source *source_of_name(scanlatch_messages *messages, const char *file);

// A copy of a source in the arena of the messages: they quote it even when there is no plan to keep it. NULL when memory is out.
const struct source *keep_source(struct arena *arena, const char *name, const char *bytes, size_t length);

// Reads a plan's or set's file into an arena. False after reporting.
bool read_plan_file(struct arena *arena, const char *path, char **bytes, size_t *length, scanlatch_messages *messages);

// Reads a board from memory, as scanlatch_plan_read does a plan.
scanlatch_plan *board_read_text(const char *name, const char *bytes, size_t length, scanlatch_messages *messages);

// A set and the plans of its listed banks, which agree.
struct plan_set {
	struct arena *arena;       // what stands here
	struct set *set;
	struct plan **plans;       // [set->bank_count]
};

// Reads a set's bytes and the files that it names. `name` is what messages call it. NULL after reporting.
struct plan_set *plan_set_load(const char *name, const char *bytes, size_t length, scanlatch_messages *messages);
void plan_set_destroy(struct plan_set *plans);

// Lays out a set that was loaded, and takes it over, even if that fails: then NULL after reporting.
scanlatch_plan *plan_of_set(struct plan_set *set, scanlatch_messages *messages);

#endif
