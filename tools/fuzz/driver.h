// The driver of a fuzzer: mutates inputs and hands each to a judge, which aborts when something is wrong. Same seed,
// same inputs.
//
//     PROGRAM [--seed N] [--seconds N] [--runs N] [--last FILE] CORPUS…
//         mutates the files of the corpus until time or runs are up
//     PROGRAM --replay FILE…
//         judges the files as they are
//
// Every input is written to --last before it is judged, so that one that crashes is there to look at. With clang and
// -DFUZZ_LIBFUZZER -fsanitize=fuzzer the same source is a target for libFuzzer, which then does all this.
#ifndef SCANLATCH_FUZZ_DRIVER_H
#define SCANLATCH_FUZZ_DRIVER_H

#include <inttypes.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#define FUZZ_INPUT_BYTES 65536u // longer mutants are cut
#define FUZZ_CORPUS 512u        // inputs that are kept

struct fuzz {
	// Judges an input; aborts when something is wrong. True if the input is worth mutating further. `context` is what
	// create gave, made once for all inputs; NULL without create.
	bool (*judge)(void *context, const uint8_t *bytes, size_t length);
	void *(*create)(void);
	void (*destroy)(void *context);
	// Words that mutation puts in place of others. NULL ends them.
	const char *const *words;
	// True: inputs are lines of hexadecimal digits rather than of words and numbers.
	bool digits;
	// Makes a mutant more like a good input, in place: three of four are given to it. NULL: none is.
	void (*repair)(uint8_t *bytes, size_t length);
};

// xorshift64 (G. Marsaglia, "Xorshift RNGs", Journal of Statistical Software 8(14), 2003).
static inline uint64_t fuzz_random(uint64_t *random)
{
	*random ^= *random << 13;
	*random ^= *random >> 7;
	*random ^= *random << 17;
	return *random;
}

static inline size_t fuzz_below(uint64_t *random, size_t limit)
{
	return (size_t)(fuzz_random(random) >> 16) % limit;
}

// A seed that belongs to an input: the same for the same bytes (FNV-1a, 64 bits).
static inline uint64_t fuzz_seed_of(const uint8_t *bytes, size_t length)
{
	uint64_t hash = 0xCBF29CE484222325u;
	for (size_t index = 0; index < length; index++)
		hash = (hash ^ bytes[index]) * 0x100000001B3u;
	return hash | 1;
}

static inline void *fuzz_need(void *memory)
{
	if (memory == NULL) {
		fprintf(stderr, "fuzz: error: memory is out\n");
		exit(3);
	}
	return memory;
}

// Says what is wrong and aborts.
#define FUZZ_REQUIRE(condition) \
	((condition) ? (void)0 : (fprintf(stderr, "%s:%d: judge: %s\n", __FILE__, __LINE__, #condition), abort()))

#ifdef FUZZ_LIBFUZZER

#define FUZZ_MAIN(fuzz) \
	int LLVMFuzzerTestOneInput(const uint8_t *bytes, size_t length); \
	int LLVMFuzzerTestOneInput(const uint8_t *bytes, size_t length) \
	{ \
		static void *context; \
		if (context == NULL && (fuzz).create != NULL) \
			context = (fuzz).create(); \
		(fuzz).judge(context, bytes, length); \
		return 0; \
	}

#else

struct fuzz_input {
	uint8_t *bytes;
	size_t length;
};

struct fuzz_run {
	const struct fuzz *fuzz;
	void *context;
	uint64_t random;
	double seconds;
	uint64_t runs;
	const char *last;
	struct fuzz_input corpus[FUZZ_CORPUS];
	size_t count, given; // inputs in the corpus, and how many of them came from files
	struct fuzz_input work;
};

static FILE *fuzz_open(const char *path, const char *mode)
{
	FILE *file = fopen(path, mode);
	if (file == NULL) {
		perror(path);
		exit(3);
	}
	return file;
}

// A file's first FUZZ_INPUT_BYTES bytes.
static struct fuzz_input fuzz_load(const char *path)
{
	FILE *file = fuzz_open(path, "rb");
	struct fuzz_input input = {fuzz_need(malloc(FUZZ_INPUT_BYTES)), 0};
	input.length = fread(input.bytes, 1, FUZZ_INPUT_BYTES, file);
	fclose(file);
	return input;
}

static void fuzz_store(const char *path, const struct fuzz_input *input)
{
	FILE *file = fuzz_open(path, "wb");
	fwrite(input->bytes, 1, input->length, file);
	fclose(file);
}

// The judge sees an input in memory of exactly its size, so that a read past its end is noticed.
static bool fuzz_judge(const struct fuzz *fuzz, void *context, const struct fuzz_input *input)
{
	uint8_t *exact = fuzz_need(malloc(input->length + (input->length == 0)));
	memcpy(exact, input->bytes, input->length);
	const bool worth = fuzz->judge(context, exact, input->length);
	free(exact);
	return worth;
}

// Replaces `removed` bytes at `offset` by `length` others, as far as there is room.
static void fuzz_splice(struct fuzz_input *work, size_t offset, size_t removed, const uint8_t *bytes, size_t length)
{
	const size_t rest = work->length - offset - removed;
	if (offset + length + rest > FUZZ_INPUT_BYTES)
		return;
	memmove(work->bytes + offset + length, work->bytes + offset + removed, rest);
	memcpy(work->bytes + offset, bytes, length);
	work->length = offset + length + rest;
}

static bool fuzz_is_digit(uint8_t byte)
{
	return byte >= '0' && byte <= '9';
}

static bool fuzz_is_word(uint8_t byte)
{
	return fuzz_is_digit(byte) || (byte >= 'a' && byte <= 'z') || (byte >= 'A' && byte <= 'Z') || byte == '_';
}

// A word of the text at or after a random place: its bounds. False if there is none.
static bool fuzz_word_at_random(struct fuzz_run *run, size_t *first, size_t *end, bool number)
{
	const struct fuzz_input *work = &run->work;
	size_t offset = fuzz_below(&run->random, work->length + 1);
	for (size_t tried = 0; tried <= work->length; tried++, offset++) {
		offset %= work->length + 1;
		if (offset == work->length || !fuzz_is_word(work->bytes[offset]))
			continue;
		if ((offset > 0 && fuzz_is_word(work->bytes[offset - 1])) || (number && !fuzz_is_digit(work->bytes[offset])))
			continue;
		*first = *end = offset;
		while (*end < work->length && fuzz_is_word(work->bytes[*end]))
			++*end;
		return true;
	}
	return false;
}

static void fuzz_put_text(struct fuzz_run *run, size_t first, size_t end, const char *text)
{
	fuzz_splice(&run->work, first, end - first, (const uint8_t *)text, strlen(text));
}

static void fuzz_change_number(struct fuzz_run *run)
{
	static const char *const numbers[] = {
		"0", "1", "2", "3", "7", "15", "16", "24", "25", "63", "64", "65", "255", "256", "65535", "65536", "1000000",
		"1048576", "16777216", "16777217", "2147483647", "2147483648", "4294967295", "4294967296",
		"9223372036854775807", "9223372036854775808", "18446744073709551616", "0x0", "0xFF", "0xFFFFFFFFFFFFFFFF",
		"-1", "0.5", "1/3", "4.7", "1e3", "00", "1.", ".5", "1_000",
	};
	size_t first, end;
	char text[32];
	if (!fuzz_word_at_random(run, &first, &end, true))
		return;
	if (fuzz_below(&run->random, 4) == 0) {
		fuzz_put_text(run, first, end, numbers[fuzz_below(&run->random, sizeof numbers / sizeof *numbers)]);
		return;
	}
	unsigned long long value = 0;
	for (size_t index = first; index < end && index < first + 9 && fuzz_is_digit(run->work.bytes[index]); index++)
		value = value * 10 + (run->work.bytes[index] - '0');
	const size_t kind = fuzz_below(&run->random, 6);
	if (kind == 0)
		value *= 2;
	else if (kind == 1)
		value /= 2;
	else if (kind < 4)
		value += 1 + fuzz_below(&run->random, 3);
	else
		value -= value > 0;
	snprintf(text, sizeof text, "%llu", value);
	fuzz_put_text(run, first, end, text);
}

static void fuzz_change_digit(struct fuzz_run *run)
{
	const size_t offset = fuzz_below(&run->random, run->work.length + 1);
	if (offset < run->work.length && fuzz_is_word(run->work.bytes[offset]))
		run->work.bytes[offset] = (uint8_t)"0123456789ABCDEFabcdef"[fuzz_below(&run->random, 22)];
}

static void fuzz_change_word(struct fuzz_run *run)
{
	size_t first, end, other, other_end, count = 0;
	if (!fuzz_word_at_random(run, &first, &end, false))
		return;
	while (run->fuzz->words[count] != NULL)
		count++;
	if (count > 0 && fuzz_below(&run->random, 2) == 0) {
		fuzz_put_text(run, first, end, run->fuzz->words[fuzz_below(&run->random, count)]);
	} else if (fuzz_word_at_random(run, &other, &other_end, false)) {
		uint8_t copy[64];
		const size_t length = other_end - other < sizeof copy ? other_end - other : sizeof copy;
		memcpy(copy, run->work.bytes + other, length);
		fuzz_splice(&run->work, first, end - first, copy, length);
	}
}

// The bounds of a random line, with its end.
static void fuzz_line_at_random(uint64_t *random, const struct fuzz_input *input, size_t *first, size_t *end)
{
	*first = *end = fuzz_below(random, input->length + 1);
	while (*first > 0 && input->bytes[*first - 1] != '\n')
		--*first;
	while (*end < input->length && input->bytes[*end] != '\n')
		++*end;
	*end += *end < input->length;
}

// Takes a line out, puts it in again, or puts in a line of another input.
static void fuzz_change_line(struct fuzz_run *run)
{
	size_t first, end, other, other_end;
	fuzz_line_at_random(&run->random, &run->work, &first, &end);
	const size_t kind = fuzz_below(&run->random, 4);
	if (kind == 0) {
		fuzz_splice(&run->work, first, end - first, (const uint8_t *)"", 0);
		return;
	}
	const struct fuzz_input *source = &run->corpus[fuzz_below(&run->random, run->count)];
	fuzz_line_at_random(&run->random, source, &other, &other_end);
	fuzz_splice(&run->work, first, kind == 1 ? end - first : 0, source->bytes + other, other_end - other);
}

static void fuzz_change_bytes(struct fuzz_run *run)
{
	struct fuzz_input *work = &run->work;
	const size_t offset = fuzz_below(&run->random, work->length + 1), kind = fuzz_below(&run->random, 4);
	const size_t rest = work->length - offset, span = fuzz_below(&run->random, (rest < 40 ? rest : 40) + 1);
	uint8_t noise[5], copy[40];
	for (size_t index = 0; index < sizeof noise; index++)
		noise[index] = (uint8_t)fuzz_random(&run->random);
	memcpy(copy, work->bytes + offset, span);
	if (kind == 0 && rest > 0)
		work->bytes[offset] ^= (uint8_t)(1u << fuzz_below(&run->random, 8));
	else if (kind == 1)
		fuzz_splice(work, offset, span, noise, 0);
	else if (kind == 2)
		fuzz_splice(work, offset, 0, noise, sizeof noise);
	else
		fuzz_splice(work, offset, 0, copy, span);
}

static void fuzz_mutate(struct fuzz_run *run)
{
	const struct fuzz_input *seed = &run->corpus[fuzz_below(&run->random, run->count)];
	memcpy(run->work.bytes, seed->bytes, seed->length);
	run->work.length = seed->length;
	for (size_t left = 1 + fuzz_below(&run->random, 1 + fuzz_below(&run->random, 5)); left > 0; left--) {
		const size_t kind = fuzz_below(&run->random, 10);
		if (kind < 5 && run->fuzz->digits)
			fuzz_change_digit(run);
		else if (kind < 4)
			fuzz_change_number(run);
		else if (kind < 6)
			fuzz_change_word(run);
		else if (kind < 8)
			fuzz_change_line(run);
		else
			fuzz_change_bytes(run);
	}
	if (run->fuzz->repair != NULL && fuzz_below(&run->random, 4) > 0)
		run->fuzz->repair(run->work.bytes, run->work.length);
}

// Inputs that are worth it join the corpus; once that is full, one of those that did not come from files makes room.
static void fuzz_keep(struct fuzz_run *run)
{
	if (run->given == FUZZ_CORPUS)
		return;
	size_t place = run->count;
	if (run->count < FUZZ_CORPUS)
		run->count++;
	else
		place = run->given + fuzz_below(&run->random, FUZZ_CORPUS - run->given);
	free(run->corpus[place].bytes);
	run->corpus[place] = (struct fuzz_input){fuzz_need(malloc(run->work.length + 1)), run->work.length};
	memcpy(run->corpus[place].bytes, run->work.bytes, run->work.length);
}

static double fuzz_now(void)
{
	struct timespec time;
	clock_gettime(CLOCK_MONOTONIC, &time);
	return (double)time.tv_sec + (double)time.tv_nsec * 1e-9;
}

static int fuzz_loop(struct fuzz_run *run)
{
	const double start = fuzz_now();
	uint64_t done = 0, worth = 0;
	run->work.bytes = fuzz_need(malloc(FUZZ_INPUT_BYTES));
	for (size_t index = 0; index < run->given; index++)
		fuzz_judge(run->fuzz, run->context, &run->corpus[index]);
	while (done < run->runs && fuzz_now() - start < run->seconds) {
		fuzz_mutate(run);
		if (run->last != NULL)
			fuzz_store(run->last, &run->work);
		done++;
		if (fuzz_judge(run->fuzz, run->context, &run->work)) {
			worth++;
			fuzz_keep(run);
		}
	}
	printf("%" PRIu64 " inputs judged, %" PRIu64 " of them good, from %zu\n", done, worth, run->given);
	for (size_t index = 0; index < run->count; index++)
		free(run->corpus[index].bytes);
	free(run->work.bytes);
	return 0;
}

static int fuzz_replay(const struct fuzz *fuzz, void *context, char **paths)
{
	for (; *paths != NULL; paths++) {
		struct fuzz_input input = fuzz_load(*paths);
		printf("%s: %s\n", *paths, fuzz_judge(fuzz, context, &input) ? "good" : "refused");
		free(input.bytes);
	}
	return 0;
}

// Takes the options and loads the corpus.
static void fuzz_prepare(struct fuzz_run *run, char **arguments)
{
	run->random = 1;
	run->seconds = 20;
	run->runs = UINT64_MAX;
	for (; *arguments != NULL && strncmp(*arguments, "--", 2) == 0 && arguments[1] != NULL; arguments += 2) {
		if (strcmp(*arguments, "--seed") == 0)
			run->random = strtoull(arguments[1], NULL, 10) * 0x9E3779B97F4A7C15u | 1;
		else if (strcmp(*arguments, "--seconds") == 0)
			run->seconds = strtod(arguments[1], NULL);
		else if (strcmp(*arguments, "--runs") == 0)
			run->runs = strtoull(arguments[1], NULL, 10);
		else if (strcmp(*arguments, "--last") == 0)
			run->last = arguments[1];
	}
	for (; *arguments != NULL && run->given < FUZZ_CORPUS; arguments++)
		run->corpus[run->given++] = fuzz_load(*arguments);
	run->count = run->given;
}

static int fuzz_main(char **arguments, const struct fuzz *fuzz)
{
	int status = 2;
	struct fuzz_run *run = fuzz_need(calloc(1, sizeof *run));
	run->fuzz = fuzz;
	run->context = fuzz->create != NULL ? fuzz->create() : NULL;
	if (arguments[1] != NULL && strcmp(arguments[1], "--replay") == 0) {
		status = fuzz_replay(fuzz, run->context, arguments + 2);
	} else {
		fuzz_prepare(run, arguments + 1);
		if (run->count > 0)
			status = fuzz_loop(run);
		else
			fprintf(stderr, "fuzz: error: no corpus\n");
	}
	if (fuzz->destroy != NULL)
		fuzz->destroy(run->context);
	free(run);
	return status;
}

#define FUZZ_MAIN(fuzz) \
	int main(int count, char **arguments) \
	{ \
		return count > 0 ? fuzz_main(arguments, &(fuzz)) : 2; \
	}

#endif

#endif
