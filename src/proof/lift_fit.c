#include "proof/lift_fit.h"

#include <inttypes.h>

#include "base/text.h"

// a*((x + phase)/period) + b*((x + phase)%period) + constant; period 0: b*x + constant.
struct form {
	int64_t a, b, constant;
	uint32_t period, phase;
};

struct sequence sequence_start(int64_t modulus)
{
	return (struct sequence){.modulus = modulus};
}

// A difference nearest to zero; without a modulus, as it is.
static int64_t centred(int64_t difference, int64_t modulus)
{
	if (modulus == 0)
		return difference;
	difference = ((difference % modulus) + modulus) % modulus;
	return difference > modulus / 2 ? difference - modulus : difference;
}

static int64_t step_to(const struct sequence *sequence, int64_t value)
{
	return centred(value - sequence->last, sequence->modulus);
}

bool sequence_takes(const struct sequence *sequence, int64_t value)
{
	const int64_t step = step_to(sequence, value);
	const uint32_t index = sequence->count, since = index - sequence->first_jump;
	if (index < 2 || sequence->first_jump == 0)
		return true;
	if (sequence->period > 0)
		return step == (since % sequence->period == 0 ? sequence->jump : sequence->slope);
	return step == sequence->slope || (step == sequence->jump && since >= sequence->first_jump);
}

void sequence_add(struct sequence *sequence, int64_t value)
{
	const int64_t step = step_to(sequence, value);
	const uint32_t index = sequence->count++;
	sequence->last = value;
	if (index == 0) {
		sequence->first = value;
	} else if (index == 1) {
		sequence->slope = step;
	} else if (step != sequence->slope && sequence->first_jump == 0) {
		sequence->first_jump = index;
		sequence->jump = step;
	} else if (step != sequence->slope && sequence->period == 0) {
		sequence->period = index - sequence->first_jump;
	}
}

// Where only one jump was seen, its period is as long as what stands before and after it.
static struct form form_of(const struct sequence *sequence)
{
	const uint32_t before = sequence->first_jump, after = sequence->count - before;
	struct form form = {.b = sequence->slope, .constant = sequence->first};
	if (before == 0)
		return form;
	form.period = sequence->period > 0 ? sequence->period : before > after ? before : after;
	form.phase = form.period - before;
	form.a = centred(sequence->jump + form.b * (form.period - 1), sequence->modulus);
	form.constant -= form.b * form.phase;
	return form;
}

static int64_t form_at(const struct form *form, uint32_t index)
{
	if (form->period == 0)
		return form->constant + form->b * index;
	const int64_t shifted = (int64_t)index + form->phase;
	return form->constant + form->a * (shifted / form->period) + form->b * (shifted % form->period);
}

int64_t sequence_at(const struct sequence *sequence, uint32_t index)
{
	const struct form form = form_of(sequence);
	return form_at(&form, index);
}

unsigned sequence_terms(const struct sequence *sequence)
{
	const struct form form = form_of(sequence);
	return (form.b != 0 ? 1u : 0u) + (form.period > 0 && form.a != 0 ? 1u : 0u);
}

// Terms in the order in which they are put.
struct sum {
	struct text *out;
	bool any;
};

static void put_number(struct text *out, int64_t value)
{
	text_printf(out, value < 256 ? "%" PRId64 : "0x%" PRIX64, value);
}

// One term: a variable, or its quotient or remainder, times a factor. The language has no sign in front of a term.
static void put_term(struct sum *sum, int64_t factor, const char *variable, char operation, uint32_t period)
{
	const bool times = factor != 1 && factor != -1, compound = operation != '\0';
	if (factor == 0)
		return;
	if (!sum->any && factor < 0)
		text_put(sum->out, "0");
	text_put(sum->out, factor < 0 ? " - " : sum->any ? " + " : "");
	if (times)
		text_printf(sum->out, "%" PRId64 "*%s", factor < 0 ? -factor : factor, compound ? "(" : "");
	text_put(sum->out, variable);
	if (compound)
		text_printf(sum->out, "%c%u%s", operation, (unsigned)period, times ? ")" : "");
	sum->any = true;
}

static void put_form(struct sum *sum, const struct form *form, const char *variable)
{
	struct text shifted = {0};
	if (form->period == 0) {
		put_term(sum, form->b, variable, '\0', 0);
		return;
	}
	text_printf(&shifted, form->phase > 0 ? "(%s + %u)" : "%s", variable, (unsigned)form->phase);
	put_term(sum, form->a, text_string(&shifted), '/', form->period);
	put_term(sum, form->b, text_string(&shifted), '%', form->period);
	sum->out->failed = sum->out->failed || shifted.failed;
	text_release(&shifted);
}

void sequences_put(struct text *out, const struct sequence *rows, const char *row, const struct sequence *columns, const char *column,
                   int64_t modulus)
{
	const struct form of_rows = form_of(rows), of_columns = form_of(columns);
	int64_t constant = of_rows.constant + of_columns.constant - columns->first;
	struct text inner = {0};
	struct sum sum = {.out = &inner};
	if (modulus > 0)
		constant = ((constant % modulus) + modulus) % modulus;
	if (constant > 0) {
		put_number(&inner, constant);
		sum.any = true;
	}
	put_form(&sum, &of_rows, row);
	put_form(&sum, &of_columns, column);
	if (constant < 0) {
		text_printf(&inner, "%s - ", sum.any ? "" : "0");
		put_number(&inner, -constant);
		sum.any = true;
	}
	if (!sum.any)
		text_put(&inner, "0");
	if (modulus > 0)
		text_printf(out, "(%s) %% %" PRId64, text_string(&inner), modulus);
	else
		text_put(out, text_string(&inner));
	out->failed = out->failed || inner.failed;
	text_release(&inner);
}
