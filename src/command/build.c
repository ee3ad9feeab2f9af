#include <getopt.h>
#include <jansson.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include "base/arena.h"
#include "base/file.h"
#include "base/text.h"
#include "command/command.h"
#include "view/figures.h"

static const char help[] =
	"Usage: scanlatch build [options] PLAN|SET... -o DIR\n"
	"\n"
	"Lays out each plan, chooses states, fills the tables and proves the images as they will be on disk.\n"
	"Then writes NAME.LABEL.bin and NAME.LABEL.hex for each chip and NAME.manifest.json into DIR, which is\n"
	"made if it is not there. NAME is the plan's; of a set, whose plans share the chips, it is the set's,\n"
	"and each bank is proved against its plan. If a must fails, or a plan is bad, nothing is written for any\n"
	"of them. PLAN or SET may be - for standard input; the plans of such a set are looked for in the current\n"
	"folder.\n"
	"\n"
	"Options:\n"
	"  -o, --output DIR   where the images go\n"
	"      --format LIST  bin, hex or bin,hex (the default)\n"
	"      --record N     data bytes in a record of Intel HEX: 16 (the default) or 32\n"
	"      --listing      write NAME.lst too: every row of the frame\n"
	"      --near DIR     keep the states of the images in DIR, made before, as far as the plan allows, so that\n"
	"                     chips whose rows do not change keep their bytes; the report counts bytes that change\n"
	"      --unproven     write even if a proof fails; the exit code is still 1\n"
	"      --strict       advice that fails (upset, limits, glitches, speed) counts like a must\n"
	"      --json         one JSON document instead of text (a list of them for several plans)\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {
	COMMON_LONG_OPTIONS,
	{"output", required_argument, NULL, 'o'},
	{"format", required_argument, NULL, OPTION_FORMAT},
	{"record", required_argument, NULL, OPTION_RECORD},
	{"listing", no_argument, NULL, OPTION_LISTING},
	{"near", required_argument, NULL, OPTION_NEAR},
	{"unproven", no_argument, NULL, OPTION_UNPROVEN},
	{"strict", no_argument, NULL, OPTION_STRICT},
	{NULL, 0, NULL, 0},
};

struct build_options {
	struct common_options common;
	const char *directory;
	const char *near;          // the folder of older images, or NULL
	unsigned files; // SCANLATCH_FILE_BIN, SCANLATCH_FILE_HEX
	unsigned record;
	bool listing;
	bool unproven;
};

// A plan on its way to its files.
struct job {
	scanlatch_messages *messages;
	scanlatch_plan *plan;
	scanlatch_images *old, *plain; // with --near: the older images, and what would be made without
	scanlatch_images *made;    // by the planner
	scanlatch_images *proved;  // read back from the bytes of the files
	scanlatch_proofs *proofs;
	char *report, *missed;     // of the proofs: made before anything is written, so that lack of memory writes nothing
	const char *manifest;      // of the build's files
	bool failed;               // a proof that counts failed
	size_t first_file, file_count; // in the build's files
};

#define MOST_FILES (2 * 16 + 2) // of a plan: two for each chip, manifest and listing

struct build {
	const struct build_options *options;
	struct arena *arena;
	struct job *jobs;
	size_t job_count;
	struct output_file *files; // of all jobs, in order
	char **owned;              // [file_count]: the bytes of a file if they are a string to be freed
	size_t file_count;
	struct progress progress;
};

// Adds a file NAME.LABEL.ENDING (or NAME.ENDING without label); `owned` is freed with the build. False when memory is out.
static bool add_file(struct build *build, const struct job *job, const char *label, const char *ending, const void *bytes, size_t length,
                     char *owned)
{
	const char *plan = scanlatch_plan_name(job->plan);
	build->owned[build->file_count] = owned;
	struct output_file *file = &build->files[build->file_count++];
	file->name = label != NULL ? arena_format(build->arena, "%s.%s.%s", plan, label, ending) : arena_format(build->arena, "%s.%s", plan, ending);
	file->bytes = bytes;
	file->length = length;
	return file->name != NULL && bytes != NULL;
}

static bool add_image_files(struct build *build, struct job *job)
{
	const struct build_options *options = build->options;
	bool good = true;
	for (size_t chip = 0; good && chip < scanlatch_plan_chips(job->plan); chip++) {
		const char *label = scanlatch_plan_chip_label(job->plan, chip);
		size_t length;
		const uint8_t *bytes = scanlatch_images_bytes(job->made, chip, &length);
		if ((options->files & SCANLATCH_FILE_BIN) != 0)
			good = add_file(build, job, label, "bin", bytes, length, NULL);
		if (good && (options->files & SCANLATCH_FILE_HEX) != 0) {
			char *hex = scanlatch_images_hex(job->made, chip, options->record, &length);
			good = add_file(build, job, label, "hex", hex, length, hex);
		}
	}
	return good;
}

// Reads the images back from the bytes that the files will have. False after adding messages.
static bool read_back(const struct build *build, struct job *job)
{
	size_t file = job->first_file;
	for (size_t chip = 0; chip < scanlatch_plan_chips(job->plan); chip++)
		for (unsigned format = SCANLATCH_FILE_BIN; format <= SCANLATCH_FILE_HEX; format <<= 1) {
			if ((build->options->files & format) == 0)
				continue;
			const struct output_file *made = &build->files[file++];
			if (!scanlatch_images_read(job->proved, scanlatch_plan_chip_label(job->plan, chip), made->name, made->bytes, made->length,
			                           job->messages))
				return false;
		}
	return scanlatch_images_complete(job->proved, job->messages);
}

// Files that speak of the images: the manifest and, if asked, the listing. False when memory is out.
static bool add_report_files(struct build *build, struct job *job)
{
	char *manifest = scanlatch_manifest(job->proofs, build->options->files);
	job->manifest = manifest;
	if (!add_file(build, job, NULL, "manifest.json", manifest, manifest != NULL ? strlen(manifest) : 0, manifest))
		return false;
	if (!build->options->listing)
		return true;
	char *listing = scanlatch_images_listing(job->made);
	return add_file(build, job, NULL, "lst", listing, listing != NULL ? strlen(listing) : 0, listing);
}

// Leaves the planner's images in job->made, NULL after adding messages. False when memory is out.
static bool plan_images(const struct build *build, struct job *job)
{
	const char *near = build->options->near;
	if (near == NULL) {
		job->made = scanlatch_images_make(job->plan, job->messages);
		return true;
	}
	job->old = scanlatch_images_create(job->plan);
	if (job->old != NULL && scanlatch_images_read_folder(job->old, near, job->messages))
		job->plain = scanlatch_images_make(job->plan, job->messages);
	if (job->plain != NULL)
		job->made = scanlatch_images_make_near(job->plan, job->old, near, job->messages);
	return job->old != NULL;
}

// Makes and proves a plan's images. Returns an exit code other than EXIT_FOUND; job->failed says how the proofs went.
static int make_images(struct build *build, struct job *job, const char *path)
{
	job->first_file = build->file_count;
	progress_begin(&build->progress, "planning");
	job->plan = scanlatch_plan_read_file(path, job->messages);
	if (job->plan != NULL && !plan_images(build, job))
		return EXIT_SYSTEM;
	if (job->made == NULL)
		return EXIT_BAD;
	job->proved = scanlatch_images_create(job->plan);
	if (job->proved == NULL || !add_image_files(build, job))
		return EXIT_SYSTEM;
	if (!read_back(build, job))
		return EXIT_BAD;
	scanlatch_images_begin_as(job->proved, job->made);
	progress_begin(&build->progress, "proving");
	job->proofs = scanlatch_prove(job->proved);
	if (job->proofs == NULL || !add_report_files(build, job))
		return EXIT_SYSTEM;
	job->report = scanlatch_proofs_text(job->proofs, colour_on(build->options->common.colour, STDOUT_FILENO));
	job->missed = scanlatch_proofs_missed(job->proofs);
	if (job->report == NULL || job->missed == NULL)
		return EXIT_SYSTEM;
	job->failed = scanlatch_proofs_failed(job->proofs, build->options->common.strict);
	job->file_count = build->file_count - job->first_file;
	return EXIT_GOOD;
}

static int run_job(struct build *build, struct job *job, const char *path)
{
	job->messages = scanlatch_messages_create();
	if (job->messages == NULL)
		return memory_error();
	const int code = make_images(build, job, path);
	progress_end(&build->progress);
	const int message_code = print_messages(job->messages, build->options->common.colour);
	if (code == EXIT_SYSTEM && message_code == EXIT_GOOD)
		return memory_error();
	return code == EXIT_GOOD ? message_code : worse(message_code, message_code == EXIT_GOOD ? code : EXIT_GOOD);
}

// Two plans of one name would write the same files.
static bool names_differ(const struct build *build)
{
	for (size_t left = 0; left < build->job_count; left++)
		for (size_t right = left + 1; right < build->job_count; right++) {
			const scanlatch_plan *first = build->jobs[left].plan, *second = build->jobs[right].plan;
			if (first == NULL || second == NULL || strcmp(scanlatch_plan_name(first), scanlatch_plan_name(second)) != 0)
				continue;
			usage_error("build", "two plans have the name \"%s\" and would write the same files", scanlatch_plan_name(first));
			return false;
		}
	return true;
}

static bool any_failed(const struct build *build)
{
	for (size_t index = 0; index < build->job_count; index++)
		if (build->jobs[index].failed)
			return true;
	return false;
}

static void report_write_failure(const struct write_failure *failure)
{
	fflush(stdout);
	print_line(stderr, "scanlatch: cannot %s %s: %s; %s", failure->step, failure->path, strerror(failure->error),
	        failure->begun ? "files before it may be new already" : "nothing was written");
}

// What the files came to, last, so that it is what a reader sees first. What the system refused is said by report_write_failure.
static void print_outcome(const struct job *job, bool written, bool refused)
{
	const char *name = scanlatch_plan_name(job->plan);
	if (refused)
		return;
	if (job->failed)
		printf("%s: %s\n", name, written ? "written though a proof failed, as asked by --unproven"
		                                : "a proof failed: nothing was written (--unproven writes all the same)");
	else if (written && job->missed[0] != '\0')
		printf("%s: written; advice missed: %s\n", name, job->missed);
}

// Bytes that change, with --near and without.
static void print_near(const struct build *build, const struct job *job)
{
	if (job->old == NULL)
		return;
	print_line(stdout, "near %s", build->options->near);
	for (size_t chip = 0; chip < scanlatch_plan_chips(job->plan); chip++) {
		const size_t changed = scanlatch_images_differing(job->old, job->made, chip), plain = scanlatch_images_differing(job->old, job->plain, chip);
		printf("  %s: ", scanlatch_plan_chip_label(job->plan, chip));
		if (changed == 0)
			printf("keeps its bytes; ");
		else
			printf("%zu of %zu bytes change; ", changed, scanlatch_plan_chip_bytes(job->plan, chip));
		printf("%zu without --near\n", plain);
	}
}

static void print_text(const struct build *build, bool written, bool refused)
{
	for (size_t index = 0; index < build->job_count; index++) {
		const struct job *job = &build->jobs[index];
		printf("%s%s\n%s", index == 0 ? "" : "\n", scanlatch_plan_name(job->plan), job->report);
		print_near(build, job);
		for (size_t file = job->first_file; written && file < job->first_file + job->file_count; file++)
			print_line(stdout, "%-5s %s/%s (%zu bytes)", build->files[file].kept ? "kept" : "wrote", build->options->directory,
			       build->files[file].name, build->files[file].length);
		print_outcome(job, written, refused);
	}
	if (!written && !refused && build->job_count > 1)
		puts("\nnothing was written for any of the plans");
}

static json_t *file_json(const struct output_file *file)
{
	json_t *object = json_object();
	json_put(&object, "name", json_string(file->name));
	json_put(&object, "bytes", json_integer((json_int_t)file->length));
	json_put(&object, "kept", json_boolean(file->kept));
	return object;
}

static json_t *near_json(const struct job *job)
{
	json_t *list = json_array();
	for (size_t chip = 0; chip < scanlatch_plan_chips(job->plan); chip++) {
		json_t *object = json_object();
		json_put(&object, "label", json_string(scanlatch_plan_chip_label(job->plan, chip)));
		json_put(&object, "bytes", json_integer((json_int_t)scanlatch_plan_chip_bytes(job->plan, chip)));
		json_put(&object, "changed", json_integer((json_int_t)scanlatch_images_differing(job->old, job->made, chip)));
		json_put(&object, "changed_without", json_integer((json_int_t)scanlatch_images_differing(job->old, job->plain, chip)));
		json_append(&list, object);
	}
	return list;
}

// What is reported beside the manifest.
static json_t *job_json(const struct build *build, const struct job *job, bool written)
{
	json_t *document = json_object(), *files = json_array();
	for (size_t file = job->first_file; written && file < job->first_file + job->file_count; file++)
		json_append(&files, file_json(&build->files[file]));
	json_put(&document, "name", json_string(scanlatch_plan_name(job->plan)));
	json_put(&document, "failed", json_boolean(job->failed));
	json_put(&document, "written", json_boolean(written));
	json_put(&document, "files", files);
	if (job->old != NULL)
		json_put(&document, "near", near_json(job));
	return document;
}

// Puts lines, all but the first a level deeper. In JSON no text has line ends.
static void put_deeper(struct text *out, const char *lines, size_t length)
{
	for (size_t at = 0; at < length; at++) {
		text_put_bytes(out, &lines[at], 1);
		if (lines[at] == '\n')
			text_put(out, "  ");
	}
}

// Puts a plan's report. The manifest goes in as the text that it is: read again it would need memory that jansson (2.14) takes for granted.
static void put_job(struct text *out, const struct build *build, const struct job *job, bool written)
{
	static const char end[] = "\n}\n";
	json_t *document = job_json(build, job, written);
	char *head = json_text(document);
	if (head != NULL) {
		text_put_bytes(out, head, strlen(head) - strlen(end));
		text_put(out, ",\n  \"manifest\": ");
		put_deeper(out, job->manifest, strlen(job->manifest) - strlen("\n"));
		text_put(out, end);
	}
	out->failed = out->failed || head == NULL;
	free(head);
	json_decref(document);
}

static int print_json(const struct build *build, bool written)
{
	const bool list = build->job_count > 1;
	struct text text = {0};
	text_put(&text, list ? "[\n" : "");
	for (size_t index = 0; index < build->job_count; index++) {
		text_put(&text, index > 0 ? ",\n" : "");
		put_job(&text, build, &build->jobs[index], written);
	}
	text_put(&text, list ? "]\n" : "");
	const int code = text.failed ? memory_error() : EXIT_GOOD;
	if (code == EXIT_GOOD)
		fputs(text_string(&text), stdout);
	text_release(&text);
	return code;
}

// Writes all files. A signal that would end the program waits until the temporaries are gone. False with *failure filled.
static bool write_files(struct build *build, struct write_failure *failure)
{
	sigset_t before;
	hold_ending_signals(&before); // before the thread that shows progress, which inherits it
	progress_begin(&build->progress, "writing");
	const bool written = file_write_all(build->arena, build->options->directory, build->files, build->file_count, failure);
	progress_end(&build->progress);
	pthread_sigmask(SIG_SETMASK, &before, NULL);
	return written;
}

// Everything is made and proved: writes what may be written, and reports.
static int finish(struct build *build)
{
	const bool failed = any_failed(build), write = !failed || build->options->unproven;
	struct write_failure failure;
	const bool refused = write && !write_files(build, &failure);
	int code = failed ? EXIT_FOUND : EXIT_GOOD;
	if (build->options->common.json)
		code = worse(code, print_json(build, write && !refused));
	else
		print_text(build, write && !refused, refused);
	if (!refused)
		return code;
	report_write_failure(&failure);
	return EXIT_SYSTEM;
}

static int build_plans(const struct build_options *options, char **paths, size_t count)
{
	struct build build = {
		.options = options, .arena = arena_create(), .job_count = count, .progress = PROGRESS_NONE};
	if (build.arena == NULL)
		return memory_error();
	build.jobs = arena_array(build.arena, count, sizeof *build.jobs);
	build.files = arena_array(build.arena, count, MOST_FILES * sizeof *build.files);
	build.owned = arena_array(build.arena, count, MOST_FILES * sizeof *build.owned);
	int code = build.jobs != NULL && build.files != NULL && build.owned != NULL ? EXIT_GOOD : memory_error();
	for (size_t index = 0; code != EXIT_SYSTEM && index < count; index++)
		code = worse(code, run_job(&build, &build.jobs[index], paths[index]));
	if (code == EXIT_GOOD)
		code = names_differ(&build) ? finish(&build) : EXIT_BAD;
	else if (count > 1)
		fputs("scanlatch: nothing was written, since not all plans could be built\n", stderr);
	for (size_t index = 0; index < build.file_count; index++)
		scanlatch_free(build.owned[index]);
	for (size_t index = 0; build.jobs != NULL && index < count; index++) {
		scanlatch_free(build.jobs[index].report);
		scanlatch_free(build.jobs[index].missed);
		scanlatch_proofs_destroy(build.jobs[index].proofs);
		scanlatch_images_destroy(build.jobs[index].proved);
		scanlatch_images_destroy(build.jobs[index].made);
		scanlatch_images_destroy(build.jobs[index].plain);
		scanlatch_images_destroy(build.jobs[index].old);
		scanlatch_plan_destroy(build.jobs[index].plan);
		scanlatch_messages_destroy(build.jobs[index].messages);
	}
	arena_destroy(build.arena);
	return code;
}

static bool take_format(struct build_options *options, const char *value)
{
	options->files = 0;
	const char *rest = value;
	do {
		const size_t length = strcspn(rest, ",");
		if (length == 3 && strncmp(rest, "bin", 3) == 0)
			options->files |= SCANLATCH_FILE_BIN;
		else if (length == 3 && strncmp(rest, "hex", 3) == 0)
			options->files |= SCANLATCH_FILE_HEX;
		else {
			usage_error("build", "--format: wanted bin, hex or bin,hex, found \"%s\"", value);
			return false;
		}
		rest += length;
	} while (*rest++ == ',');
	return true;
}

static bool take_record(struct build_options *options, const char *value)
{
	if (strcmp(value, "16") != 0 && strcmp(value, "32") != 0) {
		usage_error("build", "--record: wanted 16 or 32, found \"%s\"", value);
		return false;
	}
	options->record = strcmp(value, "32") == 0 ? 32 : 16;
	return true;
}

static bool take_option(void *context, int option, const char *value)
{
	struct build_options *options = context;
	if (option == OPTION_FORMAT)
		return take_format(options, value);
	if (option == OPTION_RECORD)
		return take_record(options, value);
	if (option == 'o')
		options->directory = value;
	if (option == OPTION_NEAR)
		options->near = value;
	options->listing = options->listing || option == OPTION_LISTING;
	options->unproven = options->unproven || option == OPTION_UNPROVEN;
	return true;
}

static const struct option_table table = {"build", help, "hVo:", long_options, take_option};

int command_build(int argument_count, char **arguments)
{
	struct build_options options = {.files = SCANLATCH_FILE_BIN | SCANLATCH_FILE_HEX, .record = 16};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	if (optind == argument_count)
		return usage_error("build", "wanted at least one plan, found none");
	if (options.directory == NULL || options.directory[0] == '\0')
		return usage_error("build", "wanted -o DIR, the folder that the images go to");
	return build_plans(&options, arguments + optind, (size_t)(argument_count - optind));
}
