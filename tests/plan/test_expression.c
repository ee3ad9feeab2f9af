#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "plan/expression.h"

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

static int set_up(void **state)
{
	*state = arena_create();
	return *state == NULL ? -1 : 0;
}

static int tear_down(void **state)
{
	arena_destroy(*state);
	return 0;
}

static const struct expression *compile(struct arena *arena, const char *text)
{
	const struct expression *expression = NULL;
	size_t offset = 0;
	const enum expression_status status = expression_compile(arena, text, &expression, &offset);

	if (status != EXPRESSION_OK)
		fail_msg("'%s' is refused at %zu: %s", text, offset, expression_status_words(status));
	return expression;
}

// line 1000, cell 7, col 5, row 23 in all of these.
static const int64_t sample_variables[VARIABLE_COUNT] = {
	[VARIABLE_LINE] = 1000, [VARIABLE_CELL] = 7, [VARIABLE_COL] = 5, [VARIABLE_ROW] = 23,
};

struct value_case {
	const char *text;
	int64_t value;
};

static const struct value_case value_cases[] = {
	{"0", 0},
	{"42", 42},
	{"007", 7},
	{"0x1F", 31},
	{"9223372036854775807", INT64_MAX},
	{"line", 1000},
	{"cell", 7},
	{"col", 5},
	{"row", 23},
	{"80*(row/9) + col", 165},       // 80 * 2 + 5
	{"row%9", 5},
	{"2+3*4", 14},
	{"2*3+4", 10},
	{"(2+3)*4", 20},
	{"20-3-4", 13},
	{"20-(3-4)", 21},
	{"100/7/2", 7},                  // (100/7)/2 = 14/2
	{"100/(7/2)", 33},               // 100/3
	{"100%30*2", 20},                // (100%30)*2
	{"100*2%30", 20},                // 200 = 6*30 + 20
	{"7/2*2", 6},
	{"1+2*3-8/4%3", 5},              // 1 + 6 - (2 % 3)
	{"((((((col))))))", 5},
	{" \t1\n+ 2 ", 3},
	{"1-3+2", 0},                    // below zero on the way
	{"(0-7)/2+10", 6},               // floor(-3.5) = -4
	{"7/(0-2)+10", 6},
	{"(0-7)/(0-2)", 3},              // floor(3.5)
	{"(0-8)/2+10", 6},               // exact: -4
	{"(0-7)%3", 2},                  // -7 - 3 * -3
	{"7%(0-3)+10", 8},               // 7 - -3 * -3 = -2
	{"(0-7)%(0-3)+10", 9},           // -7 - -3 * 2 = -1
	{"(0-6)%3", 0},
	{"5%(0-1)", 0},
	{"(0-5)/(0-1)", 5},
	{"(0-9223372036854775807-1)%(0-1)", 0},
	{"(0-9223372036854775807-1)/2+4611686018427387904", 0},
	{"0-(0-9223372036854775807)", INT64_MAX},
	{"4294967296/4294967295", 1},    // either side of 32 bits
	{"4294967295/4294967296", 0},
	{"4294967295*2147483647%4294967295", 0},
	{"4294967297%4294967296", 1},
};

static void evaluates(void **state)
{
	for (size_t index = 0; index < COUNT(value_cases); index++) {
		const struct expression *const expression = compile(*state, value_cases[index].text);
		int64_t value = -1;
		const enum expression_status status = expression_value(expression, sample_variables, &value);
		if (status != EXPRESSION_OK || value != value_cases[index].value)
			fail_msg("'%s' is %lld, status %d", value_cases[index].text, (long long)value, (int)status);
	}
}

struct failure_case {
	const char *text;
	enum expression_status status;
};

static const struct failure_case evaluation_failures[] = {
	{"0-1", EXPRESSION_NEGATIVE},
	{"col-row", EXPRESSION_NEGATIVE},
	{"1/0", EXPRESSION_DIVISION},
	{"1%0", EXPRESSION_DIVISION},
	{"line/(col-5)", EXPRESSION_DIVISION},
	{"0-1/0", EXPRESSION_DIVISION},
	{"9223372036854775807+1", EXPRESSION_OVERFLOW},
	{"9223372036854775807+1-1", EXPRESSION_OVERFLOW},
	{"0-9223372036854775807-2", EXPRESSION_OVERFLOW},
	{"4294967296*4294967296", EXPRESSION_OVERFLOW},
	{"(0-9223372036854775807-1)/(0-1)", EXPRESSION_OVERFLOW},
};

static void fails_to_evaluate(void **state)
{
	for (size_t index = 0; index < COUNT(evaluation_failures); index++) {
		const struct expression *const expression = compile(*state, evaluation_failures[index].text);
		int64_t value = 77;
		const enum expression_status status = expression_value(expression, sample_variables, &value);
		if (status != evaluation_failures[index].status || value != 77)
			fail_msg("'%s' is %lld, status %d", evaluation_failures[index].text, (long long)value, (int)status);
	}
}

struct refusal_case {
	const char *text;
	enum expression_status status;
	size_t offset;
};

static const struct refusal_case refusals[] = {
	{"", EXPRESSION_SYNTAX, 0},
	{"  ", EXPRESSION_SYNTAX, 2},
	{"+", EXPRESSION_SYNTAX, 0},
	{"-1", EXPRESSION_SYNTAX, 0},
	{"1+-1", EXPRESSION_SYNTAX, 2},
	{"1 +", EXPRESSION_SYNTAX, 3},
	{"1 + ", EXPRESSION_SYNTAX, 4},
	{"1 2", EXPRESSION_SYNTAX, 2},
	{"2 row", EXPRESSION_SYNTAX, 2},
	{"2row", EXPRESSION_SYNTAX, 1},
	{"(1", EXPRESSION_SYNTAX, 2},
	{"((1)", EXPRESSION_SYNTAX, 4},
	{"1)", EXPRESSION_SYNTAX, 1},
	{"(1))", EXPRESSION_SYNTAX, 3},
	{"()", EXPRESSION_SYNTAX, 1},
	{"2(3)", EXPRESSION_SYNTAX, 1},
	{"(2)(3)", EXPRESSION_SYNTAX, 3},
	{"1.5", EXPRESSION_SYNTAX, 1},
	{"0x", EXPRESSION_SYNTAX, 2},
	{"0xg", EXPRESSION_SYNTAX, 2},
	{"0X1", EXPRESSION_SYNTAX, 1},
	{"1 ** 2", EXPRESSION_SYNTAX, 3},
	{"1 & 2", EXPRESSION_SYNTAX, 2},
	{"1 + \xC3\xA9", EXPRESSION_SYNTAX, 4},
	{"lines", EXPRESSION_UNKNOWN_VARIABLE, 0},
	{"1 + Row", EXPRESSION_UNKNOWN_VARIABLE, 4},
	{"(x+1)", EXPRESSION_UNKNOWN_VARIABLE, 1},
	{"row2", EXPRESSION_UNKNOWN_VARIABLE, 0},
	{"ro", EXPRESSION_UNKNOWN_VARIABLE, 0},
	{"9223372036854775808", EXPRESSION_NUMBER, 0},
	{"1+0x8000000000000000", EXPRESSION_NUMBER, 2},
	{"99999999999999999999999999999", EXPRESSION_NUMBER, 0},
};

static void refuses(void **state)
{
	const struct expression *const untouched = compile(*state, "1");

	for (size_t index = 0; index < COUNT(refusals); index++) {
		const struct expression *expression = untouched;
		size_t offset = 999;
		const enum expression_status status = expression_compile(*state, refusals[index].text, &expression,
		                                                         &offset);
		if (status != refusals[index].status || offset != refusals[index].offset)
			fail_msg("'%s' has status %d at %zu", refusals[index].text, (int)status, offset);
		assert_ptr_equal(expression, untouched);
	}
}

static void put_repeated_text(struct text *text, const char *piece, size_t count)
{
	for (size_t index = 0; index < count; index++)
		text_put(text, piece);
}

static void assert_compiles(struct arena *arena, struct text *text, enum expression_status status, size_t offset)
{
	const struct expression *expression = NULL;
	size_t found_offset = 0;

	assert_false(text->failed);
	assert_int_equal(expression_compile(arena, text_string(text), &expression, &found_offset), status);
	assert_int_equal(found_offset, offset);
	text_release(text);
}

// 1,000 operators and operands are allowed; with n operands there are n - 1 operators.
static void limits_the_length(void **state)
{
	struct text text = {0};

	put_repeated_text(&text, "1+", 499);
	text_put(&text, "1");
	assert_compiles(*state, &text, EXPRESSION_OK, 0);
	put_repeated_text(&text, "1+", 500);
	text_put(&text, "1");
	assert_compiles(*state, &text, EXPRESSION_TOO_LONG, 1000);
	put_repeated_text(&text, "1*", 100000);
	assert_compiles(*state, &text, EXPRESSION_TOO_LONG, 1000);
}

static void limits_the_depth(void **state)
{
	struct text text = {0};

	put_repeated_text(&text, "(", 100);
	text_put(&text, "1");
	put_repeated_text(&text, ")", 100);
	assert_compiles(*state, &text, EXPRESSION_OK, 0);
	put_repeated_text(&text, "(", 101);
	text_put(&text, "1");
	put_repeated_text(&text, ")", 101);
	assert_compiles(*state, &text, EXPRESSION_TOO_LONG, 100);
	put_repeated_text(&text, "(", 100000);
	assert_compiles(*state, &text, EXPRESSION_TOO_LONG, 100);
}

// As many values wait at once as ever can: 1 + 1*(1 + 1*( … (1 + 1*1) … )) with 101 levels is 102.
static void holds_the_deepest_stack(void **state)
{
	struct text text = {0};
	int64_t value = 0;

	put_repeated_text(&text, "1+1*(", 100);
	text_put(&text, "1+1*1");
	put_repeated_text(&text, ")", 100);
	assert_int_equal(expression_value(compile(*state, text_string(&text)), sample_variables, &value), EXPRESSION_OK);
	assert_int_equal(value, 102);
	text_release(&text);
}

static void tells_the_variables(void **state)
{
	const struct expression *const expression = compile(*state, "80*(row/9) + col");

	assert_false(expression_uses(expression, VARIABLE_LINE));
	assert_false(expression_uses(expression, VARIABLE_CELL));
	assert_true(expression_uses(expression, VARIABLE_COL));
	assert_true(expression_uses(expression, VARIABLE_ROW));
	assert_false(expression_uses(compile(*state, "17"), VARIABLE_ROW));
	assert_string_equal(variable_name(VARIABLE_LINE), "line");
	assert_string_equal(variable_name(VARIABLE_CELL), "cell");
	assert_string_equal(variable_name(VARIABLE_COL), "col");
	assert_string_equal(variable_name(VARIABLE_ROW), "row");
}

// ---- Random trees, valued by themselves in 128 bits and as text through the compiler ----

__extension__ typedef __int128 wide;

#define TREE_LEVELS 6
#define TREE_NODES (1 << TREE_LEVELS)

// A full binary tree in an array: node n has the children 2n and 2n + 1. A leaf has operation 0.
struct tree_node {
	char operation;
	int variable; // of a leaf; VARIABLE_COUNT for a constant
	int64_t constant;
};

struct tree {
	struct tree_node nodes[TREE_NODES];
	int64_t variables[VARIABLE_COUNT];
};

// xorshift64 (G. Marsaglia, "Xorshift RNGs", Journal of Statistical Software 8(14), 2003).
static uint64_t next_random(uint64_t *random)
{
	*random ^= *random << 13;
	*random ^= *random >> 7;
	*random ^= *random << 17;
	return *random;
}

static unsigned random_below(uint64_t *random, unsigned limit)
{
	return (unsigned)(next_random(random) >> 32) % limit;
}

// Of every size, so that products overflow now and then, and small ones often.
static int64_t random_constant(uint64_t *random)
{
	const unsigned bits = random_below(random, 4) == 0 ? random_below(random, 63) + 1 : random_below(random, 6) + 1;

	return (int64_t)(next_random(random) >> (64 - bits));
}

static void grow(struct tree *tree, uint64_t *random)
{
	for (size_t variable = 0; variable < VARIABLE_COUNT; variable++)
		tree->variables[variable] = random_constant(random) & 0x7FFFFFFF;
	for (size_t node = 1; node < TREE_NODES; node++) {
		const bool is_leaf = node >= TREE_NODES / 2 || random_below(random, 4) == 0;
		tree->nodes[node].operation = is_leaf ? '\0' : "+-*/%"[random_below(random, 5)];
		tree->nodes[node].variable = (int)random_below(random, 2 * VARIABLE_COUNT);
		if (tree->nodes[node].variable > VARIABLE_COUNT)
			tree->nodes[node].variable = VARIABLE_COUNT;
		tree->nodes[node].constant = random_constant(random);
	}
}

static wide floor_of_quotient(wide left, wide right)
{
	wide quotient = left / right;

	while (quotient * right > left && right > 0)
		quotient--;
	while (quotient * right < left && right < 0)
		quotient--;
	return quotient;
}

static enum expression_status apply(char operation, wide left, wide right, wide *result)
{
	if ((operation == '/' || operation == '%') && right == 0)
		return EXPRESSION_DIVISION;
	if (operation == '+')
		*result = left + right;
	else if (operation == '-')
		*result = left - right;
	else if (operation == '*')
		*result = left * right;
	else if (operation == '/')
		*result = floor_of_quotient(left, right);
	else
		*result = left - right * floor_of_quotient(left, right);
	return *result < INT64_MIN || *result > INT64_MAX ? EXPRESSION_OVERFLOW : EXPRESSION_OK;
}

// At most TREE_LEVELS deep.
static enum expression_status value_of(const struct tree *tree, size_t node, wide *result)
{
	const struct tree_node *const here = &tree->nodes[node];
	enum expression_status status;
	wide left, right;

	if (here->operation == '\0') {
		*result = here->variable < VARIABLE_COUNT ? tree->variables[here->variable] : here->constant;
		return EXPRESSION_OK;
	}
	status = value_of(tree, 2 * node, &left);
	if (status == EXPRESSION_OK)
		status = value_of(tree, 2 * node + 1, &right);
	return status == EXPRESSION_OK ? apply(here->operation, left, right, result) : status;
}

// 3 for a leaf, 2 for * / %, 1 for + -.
static int binding(const struct tree *tree, size_t node)
{
	const char operation = tree->nodes[node].operation;

	if (operation == '\0')
		return 3;
	return operation == '+' || operation == '-' ? 1 : 2;
}

static void put_blank(struct text *text, uint64_t *random)
{
	if (random_below(random, 3) == 0)
		text_put(text, " ");
}

static void put_leaf(struct text *text, const struct tree_node *leaf, uint64_t *random)
{
	if (leaf->variable < VARIABLE_COUNT)
		text_put(text, variable_name((enum variable)leaf->variable));
	else
		text_printf(text, random_below(random, 4) == 0 ? "0x%llx" : "%llu", (unsigned long long)leaf->constant);
}

// With the parentheses that the tree needs, and some more. At most TREE_LEVELS deep.
static void put_tree(struct text *text, const struct tree *tree, size_t node, int least, uint64_t *random)
{
	const struct tree_node *const here = &tree->nodes[node];
	const int own = binding(tree, node);
	const bool enclosed = own < least || random_below(random, 8) == 0;

	put_blank(text, random);
	if (enclosed)
		text_put(text, "(");
	if (here->operation == '\0') {
		put_leaf(text, here, random);
	} else {
		put_tree(text, tree, 2 * node, own, random);
		put_blank(text, random);
		text_put_bytes(text, &here->operation, 1);
		put_tree(text, tree, 2 * node + 1, own + 1, random);
	}
	if (enclosed)
		text_put(text, ")");
	put_blank(text, random);
}

static enum expression_status check_tree(struct arena *arena, const struct tree *tree, uint64_t *random)
{
	struct text text = {0};
	wide expected = 0;
	int64_t value = -1;
	enum expression_status expected_status = value_of(tree, 1, &expected);

	if (expected_status == EXPRESSION_OK && expected < 0)
		expected_status = EXPRESSION_NEGATIVE;
	put_tree(&text, tree, 1, 0, random);
	assert_false(text.failed);
	const enum expression_status status = expression_value(compile(arena, text.bytes), tree->variables, &value);
	if (status != expected_status || (status == EXPRESSION_OK && value != (int64_t)expected))
		fail_msg("'%s' is %lld with status %d, wanted %lld with %d", text.bytes, (long long)value, (int)status,
		         (long long)expected, (int)expected_status);
	text_release(&text);
	return status;
}

static void agrees_with_trees(void **state)
{
	uint64_t random = 0x7469646573;
	size_t met[EXPRESSION_OVERFLOW + 1] = {0};

	for (unsigned round = 0; round < 20000; round++) {
		struct tree tree;
		grow(&tree, &random);
		met[check_tree(*state, &tree, &random)]++;
	}
	// The trees are of use only if each outcome comes up often.
	assert_true(met[EXPRESSION_OK] > 2000);
	assert_true(met[EXPRESSION_NEGATIVE] > 500);
	assert_true(met[EXPRESSION_DIVISION] > 500);
	assert_true(met[EXPRESSION_OVERFLOW] > 500);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(evaluates),
		cmocka_unit_test(fails_to_evaluate),
		cmocka_unit_test(refuses),
		cmocka_unit_test(limits_the_length),
		cmocka_unit_test(limits_the_depth),
		cmocka_unit_test(holds_the_deepest_stack),
		cmocka_unit_test(tells_the_variables),
		cmocka_unit_test(agrees_with_trees),
	};
	return cmocka_run_group_tests(tests, set_up, tear_down);
}
