/* scanlatch: from a plan of video lines to proved EEPROM images.
 *
 * Objects are opaque. There is no global state; the library never prints and never exits. Any function may be called from two
 * threads at once on different objects. Strings returned as `char *` belong to the caller and are freed with scanlatch_free.
 * Every function that can fail says how; running out of memory is a failure like others and leaves arguments as they were.
 */
#ifndef SCANLATCH_SCANLATCH_H
#define SCANLATCH_SCANLATCH_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

#define SCANLATCH_VERSION "0.1.0"

/* The version of the library that is linked, as SCANLATCH_VERSION. Cannot fail. */
const char *scanlatch_version(void);

/* Frees a string that the library returned. NULL is allowed. */
void scanlatch_free(char *string);

/* ---- Messages: what was wrong or worth saying, with places in the plan ---- */

typedef struct scanlatch_messages scanlatch_messages;

/* NULL when memory is out. */
scanlatch_messages *scanlatch_messages_create(void);
void scanlatch_messages_destroy(scanlatch_messages *messages);

size_t scanlatch_messages_count(const scanlatch_messages *messages);
size_t scanlatch_messages_errors(const scanlatch_messages *messages);
/* True if an error is a refusal of the system (memory, reading, writing) and not a fault of the input. */
bool scanlatch_messages_system(const scanlatch_messages *messages);

/* All messages as text, in file order. NULL when memory is out. */
char *scanlatch_messages_text(const scanlatch_messages *messages, bool colour);

/* ---- Plans ---- */

typedef struct scanlatch_plan scanlatch_plan;

/* The largest plan, in bytes. A reader of files may stop there. */
#define SCANLATCH_PLAN_BYTES (1024 * 1024)

/* Reads a plan from memory (copied) and lays out its timeline. `name` is what messages call it; its last part becomes the
 * manifest's file name. NULL after adding at least one error to messages. The messages keep the text, so they must outlive the plan. */
scanlatch_plan *scanlatch_plan_read(const char *name, const char *bytes, size_t length, scanlatch_messages *messages);
/* The same from a file; "-" is standard input, and called so. The file may also hold a set: then its plans are read too, and the result
 * stands for all of them: its name is the set's, its chips are those that they share, its images hold every bank, and its proofs judge each. */
scanlatch_plan *scanlatch_plan_read_file(const char *path, scanlatch_messages *messages);
/* The same, where the file stands for another one: messages call it `name`, and the plans of a set are looked for in the folder of `name`. */
scanlatch_plan *scanlatch_plan_read_file_as(const char *path, const char *name, scanlatch_messages *messages);
void scanlatch_plan_destroy(scanlatch_plan *plan);

/* The files that scanlatch_plan_read_file_as would read a set's plans from, each once, each ended by NUL, and a NUL after the last; none if there are
 * mistakes in the set. *plans is NULL if the file holds no set or cannot be read. False when memory is out, then *plans is as it was. */
bool scanlatch_set_plans(const char *path, const char *name, char **plans);

/* The plan's name, as file names use it. Owned by the plan. Cannot fail. */
const char *scanlatch_plan_name(const scanlatch_plan *plan);

size_t scanlatch_plan_chips(const scanlatch_plan *plan);
/* Label and capacity in bytes of chip 0 … chips-1. Owned by the plan. Cannot fail. */
const char *scanlatch_plan_chip_label(const scanlatch_plan *plan, size_t chip);
size_t scanlatch_plan_chip_bytes(const scanlatch_plan *plan, size_t chip);

/* What `scanlatch check` reports. *kept (may be NULL) is set to false if the colour phase, which is a must, is not what the plan
 * demands, *advice_kept if the speed does not suffice or a limit of its standard is missed. NULL when memory is out. */
char *scanlatch_plan_text(const scanlatch_plan *plan, bool *kept, bool *advice_kept);
/* The same as a JSON document. */
char *scanlatch_plan_json(const scanlatch_plan *plan, bool *kept, bool *advice_kept);

/* ---- Images: the bytes of every chip of a plan ---- */

typedef struct scanlatch_images scanlatch_images;

/* Chooses states, fills the tables and makes the images of a plan. NULL after adding an error to messages (a plan for which no states
 * can be found). The plan must outlive the images. */
scanlatch_images *scanlatch_images_make(const scanlatch_plan *plan, scanlatch_messages *messages);

/* The same, near to images that were read: cells keep the states that those gave them wherever the plan still allows it, so that as few chips as
 * may be change, and of these as few bytes. What stands in the way is given up; damaged images are only less near. `old` are of this plan's chips,
 * and of its name; `folder` is where they were read from: if there is a manifest, it tells where the old frame begins, and whether chips were wired
 * otherwise, which is an error. */
scanlatch_images *scanlatch_images_make_near(const scanlatch_plan *plan, const scanlatch_images *old, const char *folder,
                                             scanlatch_messages *messages);

/* How many bytes of a chip differ between two sets of images of one plan. Both must be complete. Cannot fail. */
size_t scanlatch_images_differing(const scanlatch_images *left, const scanlatch_images *right, size_t chip);

/* An empty set of images of a plan, to be read from files. NULL when memory is out. */
scanlatch_images *scanlatch_images_create(const scanlatch_plan *plan);
void scanlatch_images_destroy(scanlatch_images *images);

/* Reads a chip's bytes from a file's content, binary or Intel HEX, told apart by content. `file` is what messages call it. A chip
 * may be read from two files, which must agree. False after adding an error. */
bool scanlatch_images_read(scanlatch_images *images, const char *label, const char *file, const void *bytes, size_t length,
                           scanlatch_messages *messages);

/* The same from a file; "-" is standard input. */
bool scanlatch_images_read_file(scanlatch_images *images, const char *label, const char *path, scanlatch_messages *messages);

/* Reads every chip's NAME.LABEL.bin and NAME.LABEL.hex, whichever are there, from a folder. False after adding an error. */
bool scanlatch_images_read_folder(scanlatch_images *images, const char *folder, scanlatch_messages *messages);

/* Tells images that were read from what `made` images became where the frame of those begins. It only spares the proofs a search when the plan has no
 * start: what begins there is proved all the same. Cannot fail. */
void scanlatch_images_begin_as(scanlatch_images *images, const scanlatch_images *made);

/* True if every chip has its bytes; otherwise adds an error for each that has not. */
bool scanlatch_images_complete(const scanlatch_images *images, scanlatch_messages *messages);

/* The bytes of a chip, whole capacity. Owned by the images; NULL if they were not read. */
const uint8_t *scanlatch_images_bytes(const scanlatch_images *images, size_t chip, size_t *length);

/* A chip's image as Intel HEX with records of 16 or 32 data bytes. NULL when memory is out. */
char *scanlatch_images_hex(const scanlatch_images *images, size_t chip, unsigned record, size_t *length);

/* Every row of the frame as text. Only for images that were made, not read; NULL otherwise and when memory is out. */
char *scanlatch_images_listing(const scanlatch_images *images);

/* ---- Proofs ---- */

typedef struct scanlatch_proofs scanlatch_proofs;

/* Simulates the machine from the images' bytes and proves it against the plan. The images must be complete and outlive the proofs.
 * NULL when memory is out. */
scanlatch_proofs *scanlatch_prove(const scanlatch_images *images);
void scanlatch_proofs_destroy(scanlatch_proofs *proofs);

/* True if a must failed or, with strict, anything that is advice. Cannot fail. */
bool scanlatch_proofs_failed(const scanlatch_proofs *proofs, bool strict);

/* The names of the advice that fails, separated by ", "; "" if there is none. NULL when memory is out. */
char *scanlatch_proofs_missed(const scanlatch_proofs *proofs);

/* The report, a line for each proof. NULL when memory is out. */
char *scanlatch_proofs_text(const scanlatch_proofs *proofs, bool colour);
/* { "name": of the plan, "failed": true if a must failed, "missed": [names of advice that fails], "proofs": { … } }, the last as
 * src/view/proofs.h says; of a set, "banks" and "jumpers" instead, as src/view/set.h says. NULL when memory is out. */
char *scanlatch_proofs_json(const scanlatch_proofs *proofs);

/* The manifest of a build, as a JSON document. Which files were written for each chip: bit 0 .bin, bit 1 .hex. NULL when memory is out. */
enum { SCANLATCH_FILE_BIN = 1, SCANLATCH_FILE_HEX = 2 };
char *scanlatch_manifest(const scanlatch_proofs *proofs, unsigned files);

/* The build sheet, a page of HTML that is XML too and loads nothing: verdicts, files to burn, wiring, bring-up, limits. If a must failed, or with
 * strict any advice, it says so first and is not approved. `made`: images of the same plan that were made, with those bytes, whose addresses
 * are drawn too; NULL if there are none. NULL when memory is out. */
char *scanlatch_sheet(const scanlatch_proofs *proofs, const scanlatch_images *made, bool strict);

/* ---- Fit: layouts of lines that suit a standard ---- */

/* What is asked. Texts stay the caller's and are not needed once the search is done. */
typedef struct scanlatch_fit_request {
	const char *standard;      /* a name of the catalogue */
	unsigned columns;          /* cells of picture in a line, 1 to 4096 */
	unsigned lines;            /* lines with picture, up to 4096; 0: as many as a field of the standard has, halves left out */
	const char *crystal;       /* names of the catalogue or frequencies, separated by commas; NULL: all of the catalogue */
	const char *ticks_per_dot; /* whole numbers and ranges, 1 to 256: "1,2", "1-4" */
	const char *dots_per_cell; /* the same */
	unsigned stretched;        /* cells of a line that may be stretched at most, 0 to 64; only where there is a subcarrier */
	unsigned width;            /* the least width of the picture, 0 to 100 percent of the published one */
	const char *phase;         /* "every line", "every 2 lines" or "free"; only where there is a subcarrier */
	const char *grade;         /* "studio" or "monitor" */
	unsigned top;              /* how many layouts are kept at most, 1 to 1000 */
} scanlatch_fit_request;

/* What is not asked otherwise: all crystals, 1-4 ticks a dot, 6-16 dots a cell, 4 stretched cells, half the width, every line,
 * monitor, 10 layouts. The standard and the columns are left to be filled in. Cannot fail. */
scanlatch_fit_request scanlatch_fit_defaults(void);

typedef struct scanlatch_fit scanlatch_fit;

/* Searches; finding nothing is no failure. NULL if the request is bad, then *why says what was wanted and what was found, beginning
 * with the member's name with "-" for "_", and is to be freed with scanlatch_free; or if memory is out, then *why is NULL. */
scanlatch_fit *scanlatch_fit_search(const scanlatch_fit_request *request, char **why);
void scanlatch_fit_destroy(scanlatch_fit *fit);

/* How many layouts were kept. Cannot fail. */
size_t scanlatch_fit_count(const scanlatch_fit *fit);

/* What `scanlatch fit` reports, and the same as a JSON document (shape: src/view/fit.h). NULL when memory is out. */
char *scanlatch_fit_text(const scanlatch_fit *fit);
char *scanlatch_fit_json(const scanlatch_fit *fit);

/* Layout 0 … count-1 as a complete plan, with its length in bytes. NULL when memory is out. */
char *scanlatch_fit_plan(const scanlatch_fit *fit, size_t index, size_t *length);
/* ---- Pictures: SVG documents, well-formed XML; what is too much to be drawn is left out, and the picture says so ---- */

/* Of a set the plan that a bank shows is drawn; a plan alone has bank 0, and more if pins are wired for them. All return NULL after
 * adding an error to messages: there is no such bank or line, or nothing to draw. */

/* The signals of a line at their pins. `line` is the name of a line type, whose first line in the frame is drawn, or a line's number in
 * the frame, from 0; NULL: the type that most lines have. */
char *scanlatch_draw_line(const scanlatch_plan *plan, unsigned bank, const char *line, scanlatch_messages *messages);
/* The same as text for a terminal of so many columns (fewer than 20 count as 20), in Unicode or ASCII. */
char *scanlatch_draw_line_text(const scanlatch_plan *plan, unsigned bank, const char *line, unsigned columns, bool ascii,
                               scanlatch_messages *messages);
/* The whole frame. `interleaved`: the lines of two fields between each other; for interlaced frames only. */
char *scanlatch_draw_frame(const scanlatch_plan *plan, unsigned bank, bool interleaved, scanlatch_messages *messages);
/* The addresses of each stage and what their rows are for. Only for images that were made, not read; NULL without an error otherwise. */
char *scanlatch_draw_table(const scanlatch_images *images, unsigned bank, scanlatch_messages *messages);
/* The phase of the subcarrier at the start of each line. */
char *scanlatch_draw_phase(const scanlatch_plan *plan, unsigned bank, scanlatch_messages *messages);
/* ---- Lifting: a plan read back out of images ---- */

/* Reads a board from a file ("-" is standard input): a plan without lines and frame. A plan is taken too, its lines and frame are passed over; so
 * is a set, whole. The result is for images that are read, and for lifting: what wants a plan's lines gives NULL, as if memory were
 * out. NULL after adding at least one error to messages, which keep the text and must outlive the board. */
scanlatch_plan *scanlatch_board_read_file(const char *path, scanlatch_messages *messages);

typedef struct scanlatch_lift scanlatch_lift;

struct scanlatch_lift_options {
	const char *cut;    /* name of the signal at whose leading edge lines are cut; NULL: the board's composite or horizontal sync */
	bool near;          /* pin the state of every cell */
	unsigned bank;      /* setting of the jumpers */
};

/* Lifts a plan from images that are complete; both must outlive the result. What it lays out is compared with the images' loop, and with `near`
 * its images with theirs. NULL after adding an error: the images go through no raster, or memory is out. */
scanlatch_lift *scanlatch_lift_images(const scanlatch_images *images, const struct scanlatch_lift_options *options,
                                      scanlatch_messages *messages);
void scanlatch_lift_destroy(scanlatch_lift *lift);

/* True if the images have other loops too or, with `near`, rows that the plan does not give back; the messages say more. Cannot fail. */
bool scanlatch_lift_found(const scanlatch_lift *lift);

/* The plan. Owned by the lift. Cannot fail. */
const char *scanlatch_lift_plan(const scanlatch_lift *lift);
/* What was found, as text and as JSON (its shape: src/view/lift.h). NULL when memory is out. */
char *scanlatch_lift_text(const scanlatch_lift *lift);
char *scanlatch_lift_json(const scanlatch_lift *lift);

/* The image of a chip in words, a line for each run of addresses whose rows follow each other alike. NULL when memory is out. The image
 * must have been read. */
char *scanlatch_images_chip_text(const scanlatch_images *images, size_t chip);
/* ---- Differences ---- */

typedef struct scanlatch_difference scanlatch_difference;

/* Compares two plans (or sets) by meaning, and the images that were proved against them byte by byte. With both proofs of one plan, the images that
 * were read are compared with those that were made; where a must fails in them, what they do is read back out of them and compared with the
 * plan. The names are what reports call the two, their last parts. NULL when memory is out. The proofs,
 * with what they are of, must outlive the difference. */
scanlatch_difference *scanlatch_compare(const char *old_name, const scanlatch_proofs *old, const char *new_name, const scanlatch_proofs *now);
void scanlatch_difference_destroy(scanlatch_difference *difference);

/* True if anything changed but words: names, notes, and how the same cells are divided into regions, lines and blocks; of a plan and images, if a
 * must fails in the images that were read. Bytes may differ all the same: states can be allotted in many ways. Cannot fail. */
bool scanlatch_difference_found(const scanlatch_difference *difference);

/* The report for a terminal, as Markdown for a review, as JSON (shape: src/view/diff.h); as an SVG picture, the lines that differ over each other. NULL
 * when memory is out. */
char *scanlatch_difference_text(const scanlatch_difference *difference);
char *scanlatch_difference_markdown(const scanlatch_difference *difference);
char *scanlatch_difference_svg(const scanlatch_difference *difference);
char *scanlatch_difference_json(const scanlatch_difference *difference);

/* ---- Catalogues ---- */

/* The catalogues of parts, of standards and of crystals as text or JSON (shapes: src/view/parts.h, standards.h, crystals.h).
 * NULL when memory is out. */
char *scanlatch_parts_text(void);
char *scanlatch_parts_json(void);
char *scanlatch_standards_text(void);
char *scanlatch_standards_json(void);
char *scanlatch_crystals_text(void);
char *scanlatch_crystals_json(void);

/* ---- Schemas: JSON Schema (draft 2020-12) of the languages and of the reports ---- */

/* How many there are: of the languages of plans, sets and boards, of each report in JSON, and of the manifest. Cannot fail. */
size_t scanlatch_schema_count(void);
/* The name of schema 0 … count-1: "plan", "set", "board", then those of reports. Cannot fail. */
const char *scanlatch_schema_name(size_t schema);
/* One of them as a JSON document. NULL when memory is out. */
char *scanlatch_schema_json(size_t schema);

#ifdef __cplusplus
}
#endif

#endif
