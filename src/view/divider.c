#include "view/divider.h"

#include <inttypes.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "layout/divider.h"
#include "plan/plan.h"
#include "view/figures.h"

#define NAME_CHARACTERS 16

// A divider on its way to a report.
struct divider_view {
	struct divider divider;
	struct divider_span spans[DIVIDER_SPANS];
	size_t span_count;
};

static struct divider_view view_of_clock(const struct clock *clock)
{
	struct divider_view view = {.divider = divider_of_clock(clock)};
	view.span_count = divider_spans(&view.divider, view.spans);
	return view;
}

// Puts what a row has for a span: of a tap its levels, of no tap (NULL) the first count.
static void put_span(struct text *out, const struct divider_span *span, const struct divider_tap *tap)
{
	if (tap == NULL)
		text_printf(out, "%" PRId64, span->first);
	for (int64_t count = span->first; tap != NULL && count <= span->last; count++)
		text_put(out, divider_tap_is_high(tap, count) ? "H" : "L");
}

// The characters of a span in every row. No span but the last has fewer counts than its first one has digits.
static size_t span_width(const struct divider_span *span)
{
	return (size_t)(span->last - span->first) + 1;
}

static void put_row(struct text *out, const struct divider_view *view, const char *name, const struct divider_tap *tap)
{
	text_put(out, name);
	text_put_repeated(out, ' ', NAME_CHARACTERS - strlen(name));
	for (size_t index = 0; index < view->span_count; index++) {
		const struct divider_span *span = &view->spans[index];
		const size_t before = out->length;
		put_span(out, span, tap);
		if (index + 1 == view->span_count)
			break;
		text_put_repeated(out, ' ', span_width(span) - (out->length - before));
		const char *separator = span[1].stretched && !span->stretched ? " | " : " .. ";
		if (tap != NULL)
			text_put(out, separator);
		else
			text_put_repeated(out, ' ', strlen(separator));
	}
	text_put(out, "\n");
}

// Puts words after `before`, with further lines indented, and releases them.
static void put_words(struct text *out, const char *before, size_t indent, struct text *words)
{
	text_put(out, before);
	text_put_wrapped(out, text_string(words), strlen(before), indent);
	text_put(out, "\n");
	out->failed = out->failed || words->failed;
	text_release(words);
}

void put_divider_counts(struct text *words, const struct divider *divider)
{
	const int64_t last = divider->cell_ticks - 1, stretch = divider->stretch_ticks;
	if (divider->bits == 0) {
		text_put(words, "divider: none, a cell is one tick");
		return;
	}
	text_put(words, "divider of ");
	text_put_count(words, divider->bits, "bit", "bits");
	text_put(words, ": ");
	text_printf(words, last > 0 ? "counts 0 to %" PRId64 : "count %" PRId64, last);
	if (stretch > 0) {
		text_printf(words, "; in a stretched cell count %" PRId64 " lengthens by ", last);
		text_put_count(words, (uint64_t)stretch, "tick", "ticks");
		text_printf(words, stretch > 1 ? ", counts %" PRId64 " to %" PRId64 : ", count %" PRId64, last + 1, last + stretch);
	}
}

static const char *source_words(enum tap_source source)
{
	switch (source) {
	case TAP_MASTER: return "the master clock itself";
	case TAP_COUNTER: return "from this counter";
	case TAP_DIVIDER: return "from a divider of its own that runs on";
	case TAP_OSCILLATOR: return "from an oscillator or a loop of its own";
	case TAP_NONE: break;
	}
	return "none";
}

// Puts "2 ticks, from this counter".
static void put_source(struct text *words, const struct divider_tap *tap)
{
	if (!tap->exact) {
		text_printf(words, "%s; ticks a cycle do not fit 64 bits", source_words(tap->source));
		return;
	}
	text_put_fraction(words, tap->period_ticks);
	text_put(words, fraction_compare(tap->period_ticks, fraction_whole(1)) == 0 ? " tick, " : " ticks, ");
	text_put(words, source_words(tap->source));
}

static struct fraction cycle_rest(struct fraction cycles)
{
	const int64_t rest = cycles.numerator % cycles.denominator;
	return (struct fraction){rest, rest == 0 ? 1 : cycles.denominator};
}

// Puts the words of a tap, below its levels if it has any.
static void end_tap(struct text *out, const struct divider_view *view, const char *name, const struct divider_tap *tap,
                    struct text *words)
{
	const bool levels = divider_tap_has_levels(tap);
	char before[NAME_CHARACTERS + 1];
	if (levels)
		put_row(out, view, name, tap);
	snprintf(before, sizeof before, "%-*s", NAME_CHARACTERS, levels ? "" : name);
	put_words(out, before, NAME_CHARACTERS, words);
}

void put_dot_words(struct text *words, const struct divider *divider)
{
	const struct divider_tap *tap = &divider->dot;
	put_source(words, tap);
	if (tap->source == TAP_MASTER)
		return;
	text_put(words, "; a cell is ");
	text_put_fraction(words, tap->cell_cycles);
	if (divider->stretch_ticks > 0) {
		text_put(words, ", a stretched one ");
		text_put_fraction(words, tap->stretched_cycles);
	}
	text_put(words, tap->in_step ? " dots: in step" : " dots: out of step");
}

// Puts what a cell of so many cycles does with the phase: "keeps it" or "moves it by 1/4 cycle".
static void put_phase(struct text *words, const char *phase, struct fraction cycles)
{
	const struct fraction rest = cycle_rest(cycles);
	if (rest.numerator == 0) {
		text_printf(words, "keeps %s", phase);
		return;
	}
	text_printf(words, "moves %s by ", phase);
	text_put_fraction(words, rest);
	text_put(words, " cycle");
}

void put_subcarrier_words(struct text *words, const struct divider *divider)
{
	const struct divider_tap *tap = &divider->subcarrier;
	put_source(words, tap);
	if (tap->exact && tap->source != TAP_MASTER) {
		text_put(words, "; a cell ");
		put_phase(words, "its phase", tap->cell_cycles);
		if (divider->stretch_ticks > 0) {
			text_put(words, ", a stretched one ");
			put_phase(words, "it", tap->stretched_cycles);
		}
	}
	if (tap->source == TAP_COUNTER)
		text_put(words, tap->in_step ? ": in step" : ": out of step");
}

void view_divider(struct text *out, const struct clock *clock)
{
	const struct divider_view view = view_of_clock(clock);
	const struct divider *divider = &view.divider;
	struct text counts = {0}, dot = {0}, subcarrier = {0};
	put_divider_counts(&counts, divider);
	put_words(out, "", 2, &counts);
	if (divider_tap_has_levels(&divider->dot) || divider_tap_has_levels(&divider->subcarrier))
		put_row(out, &view, "count", NULL);
	put_dot_words(&dot, divider);
	end_tap(out, &view, "dot tap", &divider->dot, &dot);
	if (divider->subcarrier.source == TAP_NONE)
		return;
	put_subcarrier_words(&subcarrier, divider);
	end_tap(out, &view, "subcarrier tap", &divider->subcarrier, &subcarrier);
}

static json_t *tap_json(const struct divider *divider, const struct divider_tap *tap, bool phases)
{
	static const char *const names[] = {
		[TAP_NONE] = "none", [TAP_MASTER] = "master", [TAP_COUNTER] = "counter", [TAP_DIVIDER] = "divider",
		[TAP_OSCILLATOR] = "oscillator",
	};
	const bool stretched = divider->stretch_ticks > 0;
	json_t *object = json_object();
	json_put(&object, "from", json_string(names[tap->source]));
	if (tap->exact) {
		json_put(&object, "period_ticks", json_fraction(tap->period_ticks));
		json_put(&object, "cell_cycles", json_fraction(tap->cell_cycles));
		if (stretched)
			json_put(&object, "stretched_cell_cycles", json_fraction(tap->stretched_cycles));
		if (phases)
			json_put(&object, "cell_phase", json_fraction(cycle_rest(tap->cell_cycles)));
		if (phases && stretched)
			json_put(&object, "stretched_cell_phase", json_fraction(cycle_rest(tap->stretched_cycles)));
	}
	json_put(&object, "in_step", json_boolean(tap->in_step));
	return object;
}

// Sets NAME to the tap's levels over a span; leaves it out if the tap has none.
static void put_levels_json(json_t **object, const char *name, const struct divider_tap *tap, const struct divider_span *span)
{
	struct text levels = {0};
	if (!divider_tap_has_levels(tap))
		return;
	put_span(&levels, span, tap);
	json_put(object, name, levels.failed ? NULL : json_string(text_string(&levels)));
	text_release(&levels);
}

static json_t *sequence_json(const struct divider_view *view)
{
	json_t *sequence = json_array();
	for (size_t index = 0; index < view->span_count; index++) {
		const struct divider_span *span = &view->spans[index];
		json_t *object = json_object();
		json_put(&object, "first", json_ticks(span->first));
		json_put(&object, "last", json_ticks(span->last));
		json_put(&object, "stretched", json_boolean(span->stretched));
		put_levels_json(&object, "dot", &view->divider.dot, span);
		put_levels_json(&object, "subcarrier", &view->divider.subcarrier, span);
		json_append(&sequence, object);
	}
	return sequence;
}

json_t *view_divider_json(const struct clock *clock)
{
	const struct divider_view view = view_of_clock(clock);
	const struct divider *divider = &view.divider;
	json_t *object = json_object();
	json_put(&object, "cell_counts", json_ticks(divider->cell_ticks));
	if (divider->stretch_ticks > 0) {
		json_put(&object, "stretched_cell_counts", json_ticks(divider->cell_ticks + divider->stretch_ticks));
		json_put(&object, "lengthens", json_ticks(divider->cell_ticks - 1));
	}
	json_put(&object, "bits", json_integer(divider->bits));
	json_put(&object, "dot", tap_json(divider, &divider->dot, false));
	if (divider->subcarrier.source != TAP_NONE)
		json_put(&object, "subcarrier", tap_json(divider, &divider->subcarrier, true));
	json_put(&object, "sequence", sequence_json(&view));
	return object;
}
