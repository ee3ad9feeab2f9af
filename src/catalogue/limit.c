#include "catalogue/standards.h"

#include <string.h>

#include "plan/read.h"

#define QUANTITY_BYTES 64

enum limit_form { FORM_NOMINAL, FORM_TOLERANCE, FORM_RANGE_BESIDE, FORM_EXACTLY, FORM_RANGE };

static enum limit_status status_of_quantity(enum quantity_status status)
{
	switch (status) {
	case QUANTITY_OK: return LIMIT_OK;
	case QUANTITY_NO_UNIT: return LIMIT_NO_UNIT;
	case QUANTITY_UNKNOWN_UNIT: return LIMIT_UNIT;
	case QUANTITY_OVERFLOW: return LIMIT_OVERFLOW;
	case QUANTITY_MALFORMED: break;
	}
	return LIMIT_MALFORMED;
}

// The quantity that `length` bytes are, without spaces at their ends.
static enum limit_status parse_quantity(const char *bytes, size_t length, struct quantity *result)
{
	char text[QUANTITY_BYTES];
	for (; length > 0 && bytes[0] == ' '; length--)
		bytes++;
	while (length > 0 && bytes[length - 1] == ' ')
		length--;
	if (length >= sizeof text)
		return LIMIT_MALFORMED;
	memcpy(text, bytes, length);
	text[length] = '\0';
	return status_of_quantity(quantity_parse(text, result));
}

static enum limit_status parse_value(const char *bytes, size_t length, enum limit_item item, struct fraction *value)
{
	struct quantity quantity;
	const enum limit_status status = parse_quantity(bytes, length, &quantity);
	if (status != LIMIT_OK)
		return status;
	if (quantity.dimension != limit_item_facts(item)->dimension)
		return LIMIT_UNIT;
	*value = quantity.value;
	return LIMIT_OK;
}

static enum limit_status parse_range(const char *bytes, size_t length, struct limit *limit)
{
	static const char least[] = "at least ", most[] = "at most ", to[] = " to ";
	if (length >= strlen(least) && strncmp(bytes, least, strlen(least)) == 0) {
		limit->has_low = true;
		return parse_value(bytes + strlen(least), length - strlen(least), limit->item, &limit->low);
	}
	if (length >= strlen(most) && strncmp(bytes, most, strlen(most)) == 0) {
		limit->has_high = true;
		return parse_value(bytes + strlen(most), length - strlen(most), limit->item, &limit->high);
	}
	const char *between = strstr(bytes, to);
	if (between == NULL || (size_t)(between - bytes) + strlen(to) > length)
		return LIMIT_MALFORMED;
	const size_t first = (size_t)(between - bytes), second = first + strlen(to);
	limit->has_low = limit->has_high = true;
	const enum limit_status status = parse_value(bytes, first, limit->item, &limit->low);
	return status != LIMIT_OK ? status : parse_value(bytes + second, length - second, limit->item, &limit->high);
}

// A tolerance in ppm as one in the nominal's unit.
static bool scale_tolerance(struct fraction nominal, struct quantity *tolerance)
{
	return fraction_multiply(nominal, tolerance->value, &tolerance->value) &&
	       fraction_divide(tolerance->value, fraction_whole(1000000), &tolerance->value);
}

static enum limit_status parse_tolerance(const char *text, struct limit *limit)
{
	struct quantity tolerance;
	const enum limit_status status = parse_quantity(text, strlen(text), &tolerance);
	if (status != LIMIT_OK)
		return status;
	if (tolerance.dimension != DIMENSION_PPM && tolerance.dimension != limit_item_facts(limit->item)->dimension)
		return LIMIT_UNIT;
	if (tolerance.dimension == DIMENSION_PPM && !scale_tolerance(limit->nominal, &tolerance))
		return LIMIT_OVERFLOW;
	limit->has_low = limit->has_high = true;
	return fraction_subtract(limit->nominal, tolerance.value, &limit->low) &&
	       fraction_add(limit->nominal, tolerance.value, &limit->high) ? LIMIT_OK : LIMIT_OVERFLOW;
}

static enum limit_status parse_polarity(const char *text, struct limit *limit)
{
	const bool positive = strcmp(text, "positive") == 0;
	if (!positive && strcmp(text, "negative") != 0)
		return LIMIT_MALFORMED;
	limit->has_nominal = limit->has_low = limit->has_high = true;
	limit->nominal = limit->low = limit->high = fraction_whole(positive ? 1 : -1);
	return LIMIT_OK;
}

// Which form a text has; *nominal is how many bytes its nominal takes, *rest where what follows the nominal starts.
static enum limit_form find_form(const char *text, size_t *nominal, const char **rest)
{
	static const char exactly[] = "exactly ";
	const char *tolerance = strstr(text, "+-"), *bracket = strchr(text, '(');
	*nominal = strlen(text);
	*rest = text;
	if (strncmp(text, exactly, strlen(exactly)) == 0) {
		*rest = text + strlen(exactly);
		return FORM_EXACTLY;
	}
	if (bracket != NULL || tolerance != NULL) {
		const char *mark = bracket != NULL ? bracket : tolerance;
		*nominal = (size_t)(mark - text);
		*rest = mark + (bracket != NULL ? 1 : 2);
		return bracket != NULL ? FORM_RANGE_BESIDE : FORM_TOLERANCE;
	}
	return strncmp(text, "at ", 3) == 0 || strstr(text, " to ") != NULL ? FORM_RANGE : FORM_NOMINAL;
}

static enum limit_status parse_exactly(const char *text, struct limit *limit)
{
	const enum limit_status status = parse_value(text, strlen(text), limit->item, &limit->nominal);
	limit->has_nominal = limit->has_low = limit->has_high = true;
	limit->low = limit->high = limit->nominal;
	return status;
}

static enum limit_status parse_form(const char *text, struct limit *limit)
{
	size_t nominal;
	const char *rest;
	const enum limit_form form = find_form(text, &nominal, &rest);
	if (form == FORM_EXACTLY)
		return parse_exactly(rest, limit);
	if (form == FORM_RANGE)
		return parse_range(text, strlen(text), limit);
	limit->has_nominal = true;
	const enum limit_status status = parse_value(text, nominal, limit->item, &limit->nominal);
	if (status != LIMIT_OK || form == FORM_NOMINAL)
		return status;
	if (form == FORM_TOLERANCE)
		return parse_tolerance(rest, limit);
	const size_t length = strlen(rest);
	return length > 0 && rest[length - 1] == ')' ? parse_range(rest, length - 1, limit) : LIMIT_MALFORMED;
}

static bool is_negative(bool given, struct fraction value)
{
	return given && value.numerator < 0;
}

static bool is_ordered(const struct limit *limit)
{
	return !(limit->has_low && limit->has_high && fraction_compare(limit->low, limit->high) > 0) &&
	       !(limit->has_low && limit->has_nominal && fraction_compare(limit->low, limit->nominal) > 0) &&
	       !(limit->has_nominal && limit->has_high && fraction_compare(limit->nominal, limit->high) > 0) &&
	       !is_negative(limit->has_low, limit->low) && !is_negative(limit->has_nominal, limit->nominal) &&
	       !is_negative(limit->has_high, limit->high);
}

enum limit_status limit_parse(const char *text, enum limit_item item, struct limit *limit)
{
	struct limit parsed = {.item = item, .nominal = FRACTION_ZERO, .low = FRACTION_ZERO, .high = FRACTION_ZERO};
	const bool is_polarity = limit_item_facts(item)->is_polarity;
	const enum limit_status status = is_polarity ? parse_polarity(text, &parsed) : parse_form(text, &parsed);
	if (status != LIMIT_OK)
		return status;
	if (!is_polarity && !is_ordered(&parsed))
		return LIMIT_ORDER;
	parsed.grade = limit->grade;
	parsed.source = limit->source;
	*limit = parsed;
	return LIMIT_OK;
}

const char *limit_status_words(enum limit_status status)
{
	switch (status) {
	case LIMIT_OK: return "the limit is well-formed";
	case LIMIT_MALFORMED: break;
	case LIMIT_NO_UNIT: return "a number needs a unit";
	case LIMIT_UNIT: return "a unit does not fit";
	case LIMIT_ORDER: return "low, nominal and high must rise from zero on";
	case LIMIT_OVERFLOW: return "a number is too large, or has too many digits, to be kept exactly";
	}
	return "it is not of the form that limits have";
}

bool read_limit(struct reader *reader, const struct node *node, enum limit_item item, struct limit *limit)
{
	const struct limit_item_facts *facts = limit_item_facts(item);
	const char *text;
	if (!read_scalar(reader, node, facts->name, &text))
		return false;
	const enum limit_status status = limit_parse(text, item, limit);
	if (status == LIMIT_OK)
		return true;
	diagnose(reader->diagnostics, status == LIMIT_ORDER ? RULE_LIMIT_ORDER : RULE_BAD_QUANTITY, node->place, "%s: %s, found \"%s\"", facts->name, limit_status_words(status),
	         SHORT(text));
	if (facts->is_polarity)
		diagnose_hint(reader->diagnostics, "write positive or negative");
	else if (status == LIMIT_MALFORMED)
		diagnose_hint(reader->diagnostics, "write NOMINAL +- TOLERANCE, NOMINAL (LOW to HIGH), LOW to HIGH, at least LOW or "
		              "at most HIGH");
	else if (status == LIMIT_NO_UNIT || status == LIMIT_UNIT)
		diagnose_hint(reader->diagnostics, "give it in %s", facts->unit);
	return false;
}
