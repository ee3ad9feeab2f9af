#include "proof/line_phases.h"

#include <assert.h>

#include "base/arena.h"
#include "proof/modulo.h"

// Lines advance the phase alike if their ticks leave the same rest: cycles per tick are a reduced fraction of so many parts.
struct line_rests {
	const int64_t *line_ticks;
	uint32_t lines;
	int64_t parts;
};

static int64_t rest_of(const struct line_rests *rests, uint32_t line)
{
	return rests->line_ticks[line] % rests->parts;
}

// The smallest shift that maps the rests of the lines onto themselves, around the frame: the classic failure function of a
// string gives its shortest period, which counts here only if it divides the length. 0 when memory is out.
static uint32_t rest_period(const struct line_rests *rests, struct arena *arena)
{
	uint32_t *border = arena_array(arena, rests->lines, sizeof *border);
	if (border == NULL)
		return 0;
	uint32_t length = 0;
	for (uint32_t line = 1; line < rests->lines; line++) {
		while (length > 0 && rest_of(rests, line) != rest_of(rests, length))
			length = border[length - 1];
		length += rest_of(rests, line) == rest_of(rests, length);
		border[line] = length;
	}
	const uint32_t period = rests->lines - border[rests->lines - 1];
	return rests->lines % period == 0 ? period : rests->lines;
}

static bool starts_run(const struct line_rests *rests, uint32_t line)
{
	return line == 0 || rest_of(rests, line) != rest_of(rests, line - 1);
}

static uint32_t count_runs(const struct line_rests *rests, uint32_t lines)
{
	uint32_t count = 0;
	for (uint32_t line = 0; line < lines; line++)
		count += starts_run(rests, line);
	return count;
}

// Fills in the runs of so many lines and returns what they advance in all. `cycles` are those of a tick, in parts.
static int64_t fill_runs(struct phase_run *runs, const struct line_rests *rests, uint32_t lines, int64_t cycles)
{
	int64_t phase = 0;
	struct phase_run *run = runs;
	for (uint32_t line = 0; line < lines; line++) {
		if (starts_run(rests, line)) {
			run = line == 0 ? runs : run + 1;
			*run = (struct phase_run){line, 0, phase, multiply_modulo(rest_of(rests, line), cycles, rests->parts)};
		}
		run->lines++;
		phase = add_modulo(phase, run->advance, rests->parts);
	}
	return phase;
}

bool line_phases_measure(const int64_t *line_ticks, uint32_t lines, struct fraction cycles_per_tick, struct arena *arena,
                         struct line_phases *phases)
{
	const struct line_rests rests = {line_ticks, lines, cycles_per_tick.denominator};
	struct line_phases found = {.parts = rests.parts, .period_lines = rest_period(&rests, arena)};
	if (found.period_lines == 0)
		return false;
	found.run_count = count_runs(&rests, found.period_lines);
	struct phase_run *runs = arena_array(arena, found.run_count, sizeof *runs);
	if (runs == NULL)
		return false;
	found.period_advance = fill_runs(runs, &rests, found.period_lines, cycles_per_tick.numerator % rests.parts);
	found.runs = runs;
	*phases = found;
	return true;
}

// The last run that begins at a line of the period or before it.
static const struct phase_run *run_at(const struct line_phases *phases, uint32_t line)
{
	uint32_t low = 0, high = phases->run_count;
	while (high - low > 1) {
		const uint32_t middle = low + (high - low) / 2;
		if (phases->runs[middle].first_line <= line)
			low = middle;
		else
			high = middle;
	}
	return &phases->runs[low];
}

struct fraction phase_fraction(const struct line_phases *phases, int64_t parts)
{
	struct fraction fraction = FRACTION_ZERO;
	const bool fits = fraction_make(parts, phases->parts, &fraction);
	assert(fits);
	(void)fits;
	return fraction;
}

struct fraction line_phase(const struct line_phases *phases, int64_t line)
{
	const int64_t parts = phases->parts;
	const int64_t periods = line / phases->period_lines;
	const uint32_t place = (uint32_t)(line % phases->period_lines);
	const struct phase_run *run = run_at(phases, place);
	int64_t phase = multiply_modulo(periods % parts, phases->period_advance, parts);
	phase = add_modulo(phase, run->phase, parts);
	phase = add_modulo(phase, multiply_modulo((place - run->first_line) % parts, run->advance, parts), parts);
	return phase_fraction(phases, phase);
}

// From period to period a phase goes through all that leave its rest modulo `step`. So rests tell phases apart.
struct rest_list {
	int64_t step;
	int64_t found[PHASES_LISTED];
	size_t count, most;
};

// False if there are more than `most`.
static bool note_rest(struct rest_list *list, int64_t rest)
{
	for (size_t index = 0; index < list->count; index++)
		if (list->found[index] == rest)
			return true;
	if (list->count == list->most)
		return false;
	size_t place = list->count++;
	for (; place > 0 && list->found[place - 1] > rest; place--)
		list->found[place] = list->found[place - 1];
	list->found[place] = rest;
	return true;
}

// After as many lines as their advance needs to come round, a run has no new rest; until then each is another.
static bool note_run(struct rest_list *list, const struct phase_run *run)
{
	const int64_t advance = run->advance % list->step;
	const int64_t round = list->step / greatest_common_divisor(list->step, advance);
	int64_t rest = run->phase % list->step;
	for (int64_t line = 0; line < run->lines && line < round; line++) {
		if (!note_rest(list, rest))
			return false;
		rest = add_modulo(rest, advance, list->step);
	}
	return true;
}

size_t line_phases_distinct(const struct line_phases *phases, struct fraction values[PHASES_LISTED])
{
	struct rest_list list = {.step = greatest_common_divisor(phases->parts, phases->period_advance)};
	const int64_t rounds = phases->parts / list.step;
	list.most = (size_t)(PHASES_LISTED / rounds);
	for (uint32_t run = 0; run < phases->run_count; run++)
		if (!note_run(&list, &phases->runs[run]))
			return 0;
	size_t count = 0;
	for (int64_t round = 0; round < rounds; round++)
		for (size_t index = 0; index < list.count; index++)
			values[count++] = phase_fraction(phases, round * list.step + list.found[index]);
	return count;
}
