#include "plan/read.h"

#include <string.h>

#include "base/arena.h"

enum {
	TIMING_LATCH,
	TIMING_COUNTER,
	TIMING_DECODER,
	TIMING_LATCH_DELAY,
	TIMING_LATCH_SETUP,
	TIMING_COUNTER_DELAY,
	TIMING_COUNTER_SETUP,
	TIMING_DECODER_DELAY,
	TIMING_SHARE,
	TIMING_MARGIN,
	TIMING_KEYS
};

static const struct shape part_time_shape = {.kind = SHAPE_QUANTITY, .dimensions = IN_SECONDS, .sign = QUANTITY_NOT_NEGATIVE};
static const struct shape share_shape = {
	.kind = SHAPE_TEXT, .pattern = ABOVE_ZERO_PATTERN "(/" ABOVE_ZERO_PATTERN ")?", .also = ALSO_SHARE,
};

static const struct key timing_keys[TIMING_KEYS] = {
	[TIMING_LATCH] = {"latch", KEY_OPTIONAL, LISTED(LISTED_LATCHES), "The latch, of the catalogue; 74HC574 if left out"},
	[TIMING_COUNTER] = {"counter", KEY_OPTIONAL, LISTED(LISTED_COUNTERS),
	                    "The counter, of the catalogue; if left out 74HC163, or 74HC161 for clear: async"},
	[TIMING_DECODER] = {"decoder", KEY_OPTIONAL, LISTED(LISTED_DECODERS), "The decoder, of the catalogue; 74HC138 if left out"},
	[TIMING_LATCH_DELAY] = {"latch delay", KEY_OPTIONAL, &part_time_shape,
	                        "From the clock edge to the latch's outputs; the part's if left out"},
	[TIMING_LATCH_SETUP] = {"latch setup", KEY_OPTIONAL, &part_time_shape, "The latch's setup time; the part's if left out"},
	[TIMING_COUNTER_DELAY] = {"counter delay", KEY_OPTIONAL, &part_time_shape,
	                          "From the clock edge to the counter's outputs; the part's if left out"},
	[TIMING_COUNTER_SETUP] = {"counter setup", KEY_OPTIONAL, &part_time_shape, "The counter's setup time; the part's if left out"},
	[TIMING_DECODER_DELAY] = {"decoder delay", KEY_OPTIONAL, &part_time_shape, "Through the decoder; the part's if left out"},
	[TIMING_SHARE] = {"share", KEY_OPTIONAL, &share_shape,
	                  "The part n/m of the shortest cell in which the EEPROMs must answer, as 1/2; 1 if left out"},
	[TIMING_MARGIN] = {"margin", KEY_OPTIONAL, &part_time_shape, "A time to keep free; 0 if left out"},
};

const struct shape timing_shape = {.kind = SHAPE_MAPPING, .title = "timing", .keys = timing_keys, .key_count = TIMING_KEYS};

enum { SWEEP_BITS, SWEEP_WITHIN, SWEEP_KEYS };

static const struct shape sweep_bits_shape = {
	.kind = SHAPE_TEXT, .pattern = IDENTIFIER_PATTERN "(\\." BIT_RANGE_PATTERN ")?", .also = ALSO_TRUTH,
};

static const struct key sweep_keys[SWEEP_KEYS] = {
	[SWEEP_BITS] = {"bits", KEY_REQUIRED, &sweep_bits_shape, "Bits of the state: FIELD, FIELD.hi..lo (within the field) or state.hi..lo"},
	[SWEEP_WITHIN] = {"within", KEY_REQUIRED, &time_shape, "The time in which every value of them must come up at least once"},
};

static const struct shape sweep_shape = {.kind = SHAPE_MAPPING, .title = "sweep", .keys = sweep_keys, .key_count = SWEEP_KEYS};

const struct shape sweeps_shape = {.kind = SHAPE_LIST, .item = &sweep_shape, .most = LIMIT_SIGNALS};

static const char *const logic_words[] = {[LOGIC_LATCH] = "latch", [LOGIC_COUNTER] = "counter", [LOGIC_DECODER] = "decoder"};

// `named` is a part of another kind that has the name, or NULL.
static void report_unknown_logic(struct reader *reader, const struct node *node, const struct logic_part *named, enum logic_kind kind)
{
	const struct catalogue *catalogue = reader->catalogue;
	const char *what = logic_words[kind];
	const char *names[64];
	size_t count = 0;
	for (size_t index = 0; index < catalogue->logic_count && count < COUNT_OF(names); index++)
		if (catalogue->logic[index].kind == kind)
			names[count++] = catalogue->logic[index].name;
	if (named != NULL)
		diagnose(reader->diagnostics, RULE_UNKNOWN_PART, node->place, "%s: \"%s\" is a %s", what, SHORT(node->text),
		         logic_words[named->kind]);
	else
		diagnose(reader->diagnostics, RULE_UNKNOWN_PART, node->place, "%s: there is no %s \"%s\" in the catalogue", what, what,
		         SHORT(node->text));
	hint_words(reader, named != NULL ? "" : node->text, names, count);
}

// The part of the catalogue that `node` names, or the default.
static const struct logic_part *read_logic(struct reader *reader, const struct node *node, enum logic_kind kind, const char *usual)
{
	const struct logic_part *part = catalogue_logic(reader->catalogue, usual);
	const char *name;
	if (node == NULL || !read_scalar(reader, node, logic_words[kind], &name))
		return part;
	const struct logic_part *named = catalogue_logic(reader->catalogue, name);
	if (named != NULL && named->kind == kind)
		return named;
	report_unknown_logic(reader, node, named, kind);
	return part;
}

// The two stages of a machine may have counters of different kinds; what the plan names is both.
static void read_counter(struct reader *reader, const struct node *node, enum stage stage)
{
	struct timing *timing = &reader->plan->timing;
	const bool async = machine_stage(&reader->plan->machine, stage)->clear == CLEAR_ASYNC;
	const char *usual = async ? "74HC161" : "74HC163";
	const struct logic_part *counter = stage == STAGE_LINE || node == NULL
	                                       ? read_logic(reader, node, LOGIC_COUNTER, usual)
	                                       : catalogue_logic(reader->catalogue, timing->counter_part[STAGE_LINE]);
	timing->counter_part[stage] = counter->name;
	timing->counter_delay_s[stage] = counter->delay_s;
	timing->counter_setup_s[stage] = counter->setup_s;
}

static void read_logic_parts(struct reader *reader, const struct node *const *values)
{
	struct timing *timing = &reader->plan->timing;
	const struct logic_part *latch = read_logic(reader, values[TIMING_LATCH], LOGIC_LATCH, "74HC574");
	const struct logic_part *decoder = read_logic(reader, values[TIMING_DECODER], LOGIC_DECODER, "74HC138");
	read_counter(reader, values[TIMING_COUNTER], STAGE_LINE);
	read_counter(reader, values[TIMING_COUNTER], STAGE_FRAME);
	timing->latch_part = latch->name;
	timing->latch_delay_s = latch->delay_s;
	timing->latch_setup_s = latch->setup_s;
	timing->decoder_part = decoder->name;
	timing->decoder_delay_s = decoder->delay_s;
}

// "n/m" or "n", above 0 and at most 1.
static void read_share(struct reader *reader, const struct node *node)
{
	const char *text;
	if (!read_scalar(reader, node, "share", &text))
		return;
	const char *slash = strchr(text, '/');
	struct fraction numerator, denominator = fraction_whole(1), share;
	bool good = fraction_parse_decimal(text, slash != NULL ? (size_t)(slash - text) : strlen(text), &numerator);
	if (good && slash != NULL)
		good = fraction_parse_decimal(slash + 1, strlen(slash + 1), &denominator);
	good = good && fraction_divide(numerator, denominator, &share) && share.numerator > 0 &&
	       fraction_compare(share, fraction_whole(1)) <= 0;
	if (good)
		reader->plan->timing.share = share;
	else
		diagnose(reader->diagnostics, RULE_BAD_NUMBER, node->place, "share: wanted n/m, above 0 and at most 1/1, found \"%s\"",
		         SHORT(text));
}

void read_timing(struct reader *reader, const struct node *node)
{
	struct timing *timing = &reader->plan->timing;
	const struct node *values[TIMING_KEYS] = {NULL};
	timing->share = fraction_whole(1);
	timing->margin_s = FRACTION_ZERO;
	if (node != NULL && !read_mapping(reader, node, "timing", timing_keys, TIMING_KEYS, values))
		return;
	read_logic_parts(reader, values);
	struct fraction *const overrides[TIMING_KEYS] = {
		[TIMING_LATCH_DELAY] = &timing->latch_delay_s,     [TIMING_LATCH_SETUP] = &timing->latch_setup_s,
		[TIMING_COUNTER_DELAY] = &timing->counter_delay_s[STAGE_LINE], [TIMING_COUNTER_SETUP] = &timing->counter_setup_s[STAGE_LINE],
		[TIMING_DECODER_DELAY] = &timing->decoder_delay_s, [TIMING_MARGIN] = &timing->margin_s,
	};
	for (size_t key = 0; key < TIMING_KEYS; key++)
		if (overrides[key] != NULL)
			key_time(reader, &timing_keys[key], values[key], overrides[key]);
	if (values[TIMING_COUNTER_DELAY] != NULL)
		timing->counter_delay_s[STAGE_FRAME] = timing->counter_delay_s[STAGE_LINE];
	if (values[TIMING_COUNTER_SETUP] != NULL)
		timing->counter_setup_s[STAGE_FRAME] = timing->counter_setup_s[STAGE_LINE];
	if (values[TIMING_SHARE] != NULL)
		read_share(reader, values[TIMING_SHARE]);
}

// "FIELD", "FIELD.hi..lo" (bits within the field) or "state.hi..lo", as bits of the state.
static bool read_sweep_bits(struct reader *reader, const struct node *node, struct sweep *sweep)
{
	const struct machine_plan *machine = &reader->plan->machine;
	const char *text;
	if (!read_scalar(reader, node, "bits", &text) || !reader->machine_known)
		return false;
	const char *dot = strchr(text, '.');
	const char *name = arena_copy(reader->arena, text, dot != NULL ? (size_t)(dot - text) : strlen(text));
	if (name == NULL) {
		diagnose(reader->diagnostics, RULE_OUT_OF_MEMORY, node->place, "memory is out");
		return false;
	}
	struct field whole = {.high = machine->line.state_bits - 1, .low = 0};
	if (strcmp(name, "state") != 0) {
		const size_t field = find_field(reader->plan, name);
		if (field == SIZE_MAX) {
			diagnose(reader->diagnostics, RULE_UNKNOWN_FIELD, node->place, "bits: the machine has no field \"%s\"",
			         SHORT(name));
			diagnose_hint(reader->diagnostics, "write FIELD.hi..lo with a field of the machine, or state.hi..lo");
			return false;
		}
		whole = machine->fields[field];
	}
	unsigned high = whole.high - whole.low, low = 0;
	if (dot != NULL && !read_bits(reader, node, dot + 1, "bits", whole.high - whole.low + 1, &high, &low))
		return false;
	sweep->text = text;
	sweep->high = whole.low + high;
	sweep->low = whole.low + low;
	return true;
}

void read_sweeps(struct reader *reader, const struct node *node)
{
	struct plan *plan = reader->plan;
	if (!expect_kind(reader, node, NODE_LIST, "sweep"))
		return;
	if (node->count > LIMIT_SIGNALS) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "sweep: wanted at most %d, found %zu", LIMIT_SIGNALS, node->count);
		return;
	}
	plan->sweeps = reader_array(reader, node->count, sizeof *plan->sweeps);
	if (plan->sweeps == NULL)
		return;
	plan->sweep_count = node->count;
	for (size_t index = 0; index < node->count; index++) {
		struct sweep *sweep = &plan->sweeps[index];
		const struct node *values[SWEEP_KEYS];
		sweep->place = node->items[index]->place;
		if (!read_mapping(reader, node->items[index], "a sweep", sweep_keys, SWEEP_KEYS, values))
			continue;
		if (values[SWEEP_BITS] != NULL)
			read_sweep_bits(reader, values[SWEEP_BITS], sweep);
		key_time(reader, &sweep_keys[SWEEP_WITHIN], values[SWEEP_WITHIN], &sweep->within_s);
	}
}
