#include <stdarg.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "catalogue/crystals.h"
#include "catalogue/standards.h"
#include "layout/fit.h"
#include "library/library.h"
#include "plan/read.h"
#include "view/fit.h"

#define MOST_NUMBERS FIT_LIMIT_DOTS
#define MOST_CRYSTALS 256
#define SHOWN 60 // characters of what was found

struct scanlatch_fit {
	struct arena *arena;
	struct diagnostics *diagnostics; // of the catalogues: there are none
	struct fit_space space;
	struct fit_result result;
};

// A request on its way to a space.
struct asking {
	const scanlatch_fit_request *request;
	scanlatch_fit *fit;
	struct text why;
	bool out_of_memory;
};

__attribute__((format(printf, 2, 3)))
static bool refuse(struct asking *asking, const char *format, ...)
{
	va_list arguments;
	va_start(arguments, format);
	text_vprintf(&asking->why, format, arguments);
	va_end(arguments);
	return false;
}

static bool forget(struct asking *asking)
{
	asking->out_of_memory = true;
	return false;
}

// Texts that must be given.
static bool is_given(struct asking *asking, const char *name, const char *text)
{
	return text != NULL || refuse(asking, "%s: wanted a text, found none", name);
}

static bool in_range(struct asking *asking, const char *name, unsigned value, unsigned least, unsigned most)
{
	return (value >= least && value <= most) || refuse(asking, "%s: wanted %u to %u, found %u", name, least, most, value);
}

// Offers the nearest of some names, or points to the list of all.
static void offer(struct asking *asking, const char *word, const char *const *names, size_t count, const char *list)
{
	const char *near = nearest_word(word, names, count);
	if (near != NULL)
		text_printf(&asking->why, "; did you mean \"%s\"?", near);
	else
		text_printf(&asking->why, "; \"scanlatch list %s\" has them all", list);
}

static bool find_standard(struct asking *asking)
{
	scanlatch_fit *fit = asking->fit;
	const char *name = asking->request->standard;
	const struct standards *standards = standards_load(fit->arena, fit->diagnostics);
	if (standards == NULL)
		return forget(asking);
	if (name == NULL || name[0] == '\0')
		return refuse(asking, "standard: wanted a standard of the catalogue, found none");
	fit->space.standard = catalogue_standard(standards, name);
	if (fit->space.standard != NULL)
		return true;
	const char **names = arena_array(fit->arena, standards->count, sizeof *names);
	if (names == NULL)
		return forget(asking);
	for (size_t index = 0; index < standards->count; index++)
		names[index] = standards->standards[index].name;
	refuse(asking, "standard: there is no standard \"%.*s\"", SHOWN, name);
	offer(asking, name, names, standards->count, "standards");
	return false;
}

static bool find_grade(struct asking *asking)
{
	const char *word = asking->request->grade;
	for (size_t grade = 0; grade < GRADE_COUNT; grade++)
		if (strcmp(word, limit_grade_name((enum limit_grade)grade)) == 0) {
			asking->fit->space.grade = (enum limit_grade)grade;
			return true;
		}
	return refuse(asking, "grade: wanted studio or monitor, found \"%.*s\"", SHOWN, word);
}

static bool find_phase(struct asking *asking)
{
	static const struct { const char *word; int64_t lines; } phases[] = {{"every line", 1}, {"every 2 lines", 2}, {"free", 0}};
	const char *word = asking->request->phase;
	for (size_t index = 0; index < sizeof phases / sizeof *phases; index++)
		if (strcmp(word, phases[index].word) == 0) {
			asking->fit->space.phase_lines = phases[index].lines;
			return true;
		}
	return refuse(asking, "phase: wanted \"every line\", \"every 2 lines\" or \"free\", found \"%.*s\"", SHOWN, word);
}

// Reads digits; false if there are none or they are more than a small number has.
static bool take_number(const char **rest, int64_t *number)
{
	const size_t length = strspn(*rest, "0123456789");
	if (length == 0 || length > 6)
		return false;
	*number = strtol(*rest, NULL, 10);
	*rest += length;
	return true;
}

// Marks the numbers of a list like "1,3-5". False if it is none.
static bool mark_numbers(const char *rest, bool marks[MOST_NUMBERS + 1])
{
	do {
		int64_t first, last;
		if (!take_number(&rest, &first))
			return false;
		last = first;
		if (*rest == '-') {
			rest++;
			if (!take_number(&rest, &last))
				return false;
		}
		if (first < 1 || last < first || last > MOST_NUMBERS)
			return false;
		for (int64_t number = first; number <= last; number++)
			marks[number] = true;
	} while (*rest++ == ',');
	return rest[-1] == '\0';
}

static bool find_numbers(struct asking *asking, const char *name, const char *list, const int64_t **numbers, size_t *count)
{
	bool marks[MOST_NUMBERS + 1] = {false};
	int64_t *found = arena_array(asking->fit->arena, MOST_NUMBERS, sizeof *found);
	if (found == NULL)
		return forget(asking);
	if (!mark_numbers(list, marks))
		return refuse(asking, "%s: wanted whole numbers from 1 to %d or ranges of them, such as 8,9 or 6-16, found \"%.*s\"", name,
		              MOST_NUMBERS, SHOWN, list);
	*count = 0;
	for (int64_t number = 1; number <= MOST_NUMBERS; number++)
		if (marks[number])
			found[(*count)++] = number;
	*numbers = found;
	return true;
}

// The catalogue's crystal of a name, or with the number that is printed on one: 14.31818 MHz is 315/22 MHz. NULL if there is none.
static const struct crystal *printed_crystal(const struct crystals *crystals, const char *name, const struct quantity *quantity)
{
	const struct crystal *crystal = catalogue_crystal(crystals, name);
	for (size_t index = 0; crystal == NULL && quantity != NULL && index < crystals->count; index++) {
		struct quantity printed;
		if (quantity_parse(crystals->crystals[index].name, &printed) == QUANTITY_OK &&
		    (fraction_compare(printed.value, quantity->value) == 0 ||
		     fraction_compare(crystals->crystals[index].frequency_hz, quantity->value) == 0))
			crystal = &crystals->crystals[index];
	}
	return crystal;
}

static bool find_crystal(struct asking *asking, const struct crystals *catalogue, const char *name, struct crystal *crystal)
{
	struct quantity quantity;
	const bool is_frequency = quantity_parse(name, &quantity) == QUANTITY_OK && quantity.dimension == DIMENSION_FREQUENCY &&
	                          quantity.value.numerator > 0;
	const struct crystal *printed = printed_crystal(catalogue, name, is_frequency ? &quantity : NULL);
	if (printed == NULL && !is_frequency)
		return refuse(asking, "crystal: wanted a crystal of the catalogue or a frequency, such as 14.31818 MHz, found \"%.*s\"",
		              SHOWN, name);
	*crystal = printed != NULL ? *printed : (struct crystal){name, quantity.value, "", ""};
	return true;
}

static bool find_listed_crystals(struct asking *asking, const struct crystals *catalogue, struct crystal *crystals)
{
	struct fit_space *space = &asking->fit->space;
	const char *rest = asking->request->crystal;
	for (;; rest++) {
		rest += strspn(rest, " ");
		size_t length = strcspn(rest, ",");
		const char *next = rest + length;
		while (length > 0 && rest[length - 1] == ' ')
			length--;
		const char *name = arena_copy(asking->fit->arena, rest, length);
		if (name == NULL)
			return forget(asking);
		if (space->crystal_count == MOST_CRYSTALS)
			return refuse(asking, "crystal: wanted at most %d, found more", MOST_CRYSTALS);
		if (!find_crystal(asking, catalogue, name, &crystals[space->crystal_count]))
			return false;
		size_t index = 0;
		while (fraction_compare(crystals[index].frequency_hz, crystals[space->crystal_count].frequency_hz) != 0)
			index++;
		space->crystal_count += index == space->crystal_count; // twice is once
		rest = next;
		if (*rest == '\0')
			return true;
	}
}

static bool find_crystals(struct asking *asking)
{
	scanlatch_fit *fit = asking->fit;
	const struct crystals *catalogue = crystals_load(fit->arena, fit->diagnostics);
	struct crystal *crystals = arena_array(fit->arena, MOST_CRYSTALS, sizeof *crystals);
	if (catalogue == NULL || crystals == NULL)
		return forget(asking);
	fit->space.crystals = catalogue->crystals;
	fit->space.crystal_count = catalogue->count;
	if (asking->request->crystal == NULL)
		return true;
	fit->space.crystals = crystals;
	fit->space.crystal_count = 0;
	return find_listed_crystals(asking, catalogue, crystals);
}

static bool find_lines(struct asking *asking)
{
	struct fit_space *space = &asking->fit->space;
	space->picture_lines = asking->request->lines;
	if (asking->request->lines != 0)
		return in_range(asking, "lines", asking->request->lines, 1, FIT_LIMIT_LINES);
	space->picture_lines = fit_default_lines(space->standard);
	return space->picture_lines > 0 || refuse(asking, "lines: wanted a number, as the standard has none, found none");
}

static bool make_space(struct asking *asking)
{
	const scanlatch_fit_request *request = asking->request;
	scanlatch_fit *fit = asking->fit;
	struct fit_space *space = &fit->space;
	space->parts = catalogue_load(fit->arena, fit->diagnostics);
	if (space->parts == NULL)
		return forget(asking);
	if (!is_given(asking, "grade", request->grade) || !is_given(asking, "phase", request->phase) ||
	    !is_given(asking, "ticks-per-dot", request->ticks_per_dot) || !is_given(asking, "dots-per-cell", request->dots_per_cell))
		return false;
	if (!find_standard(asking) || !in_range(asking, "columns", request->columns, 1, FIT_LIMIT_COLUMNS) || !find_lines(asking) ||
	    !find_crystals(asking) || !find_grade(asking) || !find_phase(asking) ||
	    !find_numbers(asking, "ticks-per-dot", request->ticks_per_dot, &space->dot_ticks, &space->dot_tick_count) ||
	    !find_numbers(asking, "dots-per-cell", request->dots_per_cell, &space->cell_dots, &space->cell_dot_count) ||
	    !in_range(asking, "stretched", request->stretched, 0, FIT_LIMIT_STRETCHED) ||
	    !in_range(asking, "width", request->width, 0, 100) || !in_range(asking, "top", request->top, 1, FIT_LIMIT_TOP))
		return false;
	space->columns = request->columns;
	space->most_stretched = request->stretched;
	space->least_percent = request->width;
	space->top = request->top;
	return true;
}

static bool search(struct asking *asking)
{
	scanlatch_fit *fit = asking->fit;
	switch (fit_search(fit->arena, &fit->space, &fit->result)) {
	case FIT_OK: return true;
	case FIT_TOO_MANY:
		return refuse(asking, "dots-per-cell: with ticks-per-dot and stretched there are too many kinds of cells; ask for fewer");
	case FIT_UNFIT: return refuse(asking, "crystal: figures of a layout do not fit fractions of 64 bits");
	default: return forget(asking);
	}
}

static scanlatch_fit *create(void)
{
	struct arena *arena = arena_create();
	scanlatch_fit *fit = arena != NULL ? arena_alloc(arena, sizeof *fit) : NULL;
	struct diagnostics *diagnostics = fit != NULL ? diagnostics_create() : NULL;
	if (diagnostics == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	*fit = (scanlatch_fit){.arena = arena, .diagnostics = diagnostics};
	return fit;
}

scanlatch_fit_request scanlatch_fit_defaults(void)
{
	return (scanlatch_fit_request){.ticks_per_dot = "1-4", .dots_per_cell = "6-16", .stretched = 4, .width = 50,
	                               .phase = "every line", .grade = "monitor", .top = 10};
}

scanlatch_fit *scanlatch_fit_search(const scanlatch_fit_request *request, char **why)
{
	struct asking asking = {.request = request, .fit = create()};
	*why = NULL;
	if (asking.fit == NULL)
		return NULL;
	if (make_space(&asking) && search(&asking))
		return asking.fit;
	scanlatch_fit_destroy(asking.fit);
	if (asking.out_of_memory)
		text_release(&asking.why);
	else
		*why = take_string(&asking.why);
	return NULL;
}

void scanlatch_fit_destroy(scanlatch_fit *fit)
{
	if (fit == NULL)
		return;
	diagnostics_destroy(fit->diagnostics);
	arena_destroy(fit->arena);
}

size_t scanlatch_fit_count(const scanlatch_fit *fit)
{
	return fit->result.layout_count;
}

char *scanlatch_fit_text(const scanlatch_fit *fit)
{
	struct text text = {0};
	view_fit(&text, &fit->space, &fit->result);
	return take_string(&text);
}

char *scanlatch_fit_json(const scanlatch_fit *fit)
{
	return take_json(view_fit_json(&fit->space, &fit->result));
}

char *scanlatch_fit_plan(const scanlatch_fit *fit, size_t index, size_t *length)
{
	struct text text = {0};
	view_fit_plan(&text, &fit->space, &fit->result.layouts[index]);
	*length = text.length;
	return take_string(&text);
}
