#include "plan/expression.h"

#include <string.h>

#include "base/arena.h"

#define TERM_LIMIT 1000       // operators and operands together
#define PARENTHESIS_LIMIT 100
// With two levels of precedence, at most two operators wait at each depth of parentheses, each for one value.
#define WAITING_LIMIT (3 * (PARENTHESIS_LIMIT + 1))
#define VALUE_LIMIT (2 * (PARENTHESIS_LIMIT + 1) + 2)

enum operation { OPERATION_LOAD, OPERATION_ADD, OPERATION_SUBTRACT, OPERATION_MULTIPLY, OPERATION_DIVIDE,
                 OPERATION_REMAINDER, OPERATION_PARENTHESIS };

enum operand { OPERAND_STACK, OPERAND_VARIABLE, OPERAND_CONSTANT };

// One step of a machine with an accumulator and a stack below it. LOAD pushes the accumulator and loads the operand;
// the others combine the accumulator (left) with the operand (right), or, with OPERAND_STACK, the popped value (left)
// with the accumulator (right).
struct instruction {
	enum operation operation;
	enum operand operand;
	int64_t constant; // or the number of the variable
};

struct expression {
	unsigned variables; // bit n: variable n is used
	size_t count;
	struct instruction code[];
};

struct compiler {
	const char *text;
	size_t offset;
	enum operation waiting[WAITING_LIMIT]; // operators and parentheses whose right side is not complete
	size_t waiting_count;
	size_t parentheses;
	size_t terms;
	unsigned variables;
	struct instruction code[TERM_LIMIT];
	size_t count;
};

static const char *const variable_names[VARIABLE_COUNT] = {
	[VARIABLE_LINE] = "line",
	[VARIABLE_CELL] = "cell",
	[VARIABLE_COL] = "col",
	[VARIABLE_ROW] = "row",
};

const char *variable_name(enum variable variable)
{
	return variable_names[variable];
}

const char *expression_status_words(enum expression_status status)
{
	switch (status) {
	case EXPRESSION_OK:
		return "the expression is well-formed";
	case EXPRESSION_SYNTAX:
		return "wanted numbers, line, cell, col or row, joined by + - * / % and parentheses";
	case EXPRESSION_UNKNOWN_VARIABLE:
		return "there is no such variable; there are line, cell, col and row";
	case EXPRESSION_TOO_LONG:
		return "the expression has more than 1,000 numbers, variables and operators, or parentheses over 100 deep";
	case EXPRESSION_NUMBER:
		return "the number is too large";
	case EXPRESSION_MEMORY:
		return "memory ran out";
	case EXPRESSION_NEGATIVE:
		return "the result is negative";
	case EXPRESSION_DIVISION:
		return "a division or remainder by zero";
	case EXPRESSION_OVERFLOW:
		return "a value on the way to the result does not fit 64 bits";
	}
	return "the expression is wrong";
}

static bool is_digit(char byte)
{
	return byte >= '0' && byte <= '9';
}

static bool is_letter(char byte)
{
	return (byte >= 'a' && byte <= 'z') || (byte >= 'A' && byte <= 'Z') || byte == '_';
}

static char next_byte(struct compiler *compiler)
{
	while (compiler->text[compiler->offset] != '\0' && strchr(" \t\n", compiler->text[compiler->offset]) != NULL)
		compiler->offset++;
	return compiler->text[compiler->offset];
}

static enum expression_status count_term(struct compiler *compiler)
{
	if (compiler->terms == TERM_LIMIT)
		return EXPRESSION_TOO_LONG;
	compiler->terms++;
	return EXPRESSION_OK;
}

static void emit(struct compiler *compiler, enum operation operation, enum operand operand, int64_t constant)
{
	compiler->code[compiler->count++] = (struct instruction){operation, operand, constant};
}

// An operator whose right side was loaded just before takes it directly, without the stack.
static void emit_operator(struct compiler *compiler, enum operation operation)
{
	struct instruction *const last = &compiler->code[compiler->count - 1];

	if (last->operation == OPERATION_LOAD)
		last->operation = operation;
	else
		emit(compiler, operation, OPERAND_STACK, 0);
}

static unsigned precedence(enum operation operation)
{
	switch (operation) {
	case OPERATION_MULTIPLY:
	case OPERATION_DIVIDE:
	case OPERATION_REMAINDER:
		return 2;
	case OPERATION_ADD:
	case OPERATION_SUBTRACT:
		return 1;
	case OPERATION_LOAD:
	case OPERATION_PARENTHESIS:
		break;
	}
	return 0;
}

// Emits the waiting operators, newest first, down to the open parenthesis or to one that binds less than `binding`.
static void emit_waiting(struct compiler *compiler, unsigned binding)
{
	while (compiler->waiting_count > 0) {
		const enum operation operation = compiler->waiting[compiler->waiting_count - 1];
		if (operation == OPERATION_PARENTHESIS || precedence(operation) < binding)
			return;
		emit_operator(compiler, operation);
		compiler->waiting_count--;
	}
}

static int64_t digit_value(char byte)
{
	if (is_digit(byte))
		return byte - '0';
	if (byte >= 'a' && byte <= 'f')
		return byte - 'a' + 10;
	if (byte >= 'A' && byte <= 'F')
		return byte - 'A' + 10;
	return 16;
}

// Reads a number at the offset; moves the offset past it, or, when no digit is there, to where one was wanted.
static enum expression_status read_number(struct compiler *compiler, int64_t *result)
{
	const char *const text = compiler->text + compiler->offset;
	const bool hexadecimal = text[0] == '0' && text[1] == 'x';
	const int64_t base = hexadecimal ? 16 : 10;
	const size_t prefix = hexadecimal ? 2 : 0;
	size_t length = prefix;
	int64_t value = 0;

	for (; digit_value(text[length]) < base; length++) {
		if (__builtin_mul_overflow(value, base, &value) ||
		    __builtin_add_overflow(value, digit_value(text[length]), &value))
			return EXPRESSION_NUMBER;
	}
	compiler->offset += length;
	if (length == prefix || is_letter(text[length]))
		return EXPRESSION_SYNTAX;
	*result = value;
	return EXPRESSION_OK;
}

static enum expression_status compile_number(struct compiler *compiler)
{
	int64_t value = 0;
	enum expression_status status = count_term(compiler);

	if (status == EXPRESSION_OK)
		status = read_number(compiler, &value);
	if (status == EXPRESSION_OK)
		emit(compiler, OPERATION_LOAD, OPERAND_CONSTANT, value);
	return status;
}

static enum expression_status compile_variable(struct compiler *compiler)
{
	const char *const name = compiler->text + compiler->offset;
	const enum expression_status status = count_term(compiler);
	size_t length = 0;

	if (status != EXPRESSION_OK)
		return status;
	while (is_letter(name[length]) || is_digit(name[length]))
		length++;
	for (unsigned variable = 0; variable < VARIABLE_COUNT; variable++) {
		if (strlen(variable_names[variable]) == length && memcmp(variable_names[variable], name, length) == 0) {
			emit(compiler, OPERATION_LOAD, OPERAND_VARIABLE, variable);
			compiler->variables |= 1U << variable;
			compiler->offset += length;
			return EXPRESSION_OK;
		}
	}
	return EXPRESSION_UNKNOWN_VARIABLE;
}

// Any number of open parentheses, then a number or a variable.
static enum expression_status compile_operand(struct compiler *compiler)
{
	while (next_byte(compiler) == '(') {
		if (compiler->parentheses == PARENTHESIS_LIMIT)
			return EXPRESSION_TOO_LONG;
		compiler->parentheses++;
		compiler->waiting[compiler->waiting_count++] = OPERATION_PARENTHESIS;
		compiler->offset++;
	}
	if (is_digit(compiler->text[compiler->offset]))
		return compile_number(compiler);
	if (is_letter(compiler->text[compiler->offset]))
		return compile_variable(compiler);
	return EXPRESSION_SYNTAX;
}

static void close_parentheses(struct compiler *compiler)
{
	while (next_byte(compiler) == ')' && compiler->parentheses > 0) {
		emit_waiting(compiler, 0);
		compiler->waiting_count--;
		compiler->parentheses--;
		compiler->offset++;
	}
}

// OPERATION_LOAD stands for a byte that is no operator.
static enum operation operator_of(char byte)
{
	switch (byte) {
	case '+':
		return OPERATION_ADD;
	case '-':
		return OPERATION_SUBTRACT;
	case '*':
		return OPERATION_MULTIPLY;
	case '/':
		return OPERATION_DIVIDE;
	case '%':
		return OPERATION_REMAINDER;
	default:
		return OPERATION_LOAD;
	}
}

static enum expression_status compile_operator(struct compiler *compiler)
{
	const enum operation operation = operator_of(next_byte(compiler));
	enum expression_status status;

	if (operation == OPERATION_LOAD)
		return EXPRESSION_SYNTAX;
	status = count_term(compiler);
	if (status != EXPRESSION_OK)
		return status;
	emit_waiting(compiler, precedence(operation));
	compiler->waiting[compiler->waiting_count++] = operation;
	compiler->offset++;
	return EXPRESSION_OK;
}

static enum expression_status compile(struct compiler *compiler)
{
	for (;;) {
		enum expression_status status = compile_operand(compiler);
		if (status != EXPRESSION_OK)
			return status;
		close_parentheses(compiler);
		if (next_byte(compiler) == '\0')
			break;
		status = compile_operator(compiler);
		if (status != EXPRESSION_OK)
			return status;
	}
	if (compiler->parentheses > 0)
		return EXPRESSION_SYNTAX;
	emit_waiting(compiler, 0);
	return EXPRESSION_OK;
}

enum expression_status expression_compile(struct arena *arena, const char *text, const struct expression **result,
                                          size_t *offset)
{
	struct compiler compiler = {.text = text};
	const enum expression_status status = compile(&compiler);
	struct expression *expression;

	if (status != EXPRESSION_OK) {
		*offset = compiler.offset;
		return status;
	}
	expression = arena_alloc(arena, sizeof *expression + compiler.count * sizeof compiler.code[0]);
	if (expression == NULL) {
		*offset = 0;
		return EXPRESSION_MEMORY;
	}
	expression->variables = compiler.variables;
	expression->count = compiler.count;
	memcpy(expression->code, compiler.code, compiler.count * sizeof compiler.code[0]);
	*result = expression;
	return EXPRESSION_OK;
}

bool expression_uses(const struct expression *expression, enum variable variable)
{
	return (expression->variables >> variable & 1U) != 0;
}

// Most processors divide 32 bits much faster than 64.
static bool are_small(int64_t left, int64_t right)
{
	return ((uint64_t)left | (uint64_t)right) <= UINT32_MAX;
}

// Floor division. The processor's division truncates, and traps where the quotient of INT64_MIN by -1 overflows.
static enum expression_status divide(int64_t left, int64_t right, int64_t *result)
{
	int64_t quotient;

	if (right == 0)
		return EXPRESSION_DIVISION;
	if (are_small(left, right)) {
		*result = (uint32_t)left / (uint32_t)right;
		return EXPRESSION_OK;
	}
	if (right == -1)
		return __builtin_sub_overflow(0, left, result) ? EXPRESSION_OVERFLOW : EXPRESSION_OK;
	quotient = left / right;
	if (quotient * right != left && (left < 0) != (right < 0))
		quotient--;
	*result = quotient;
	return EXPRESSION_OK;
}

static enum expression_status take_remainder(int64_t left, int64_t right, int64_t *result)
{
	int64_t remainder;

	if (right == 0)
		return EXPRESSION_DIVISION;
	if (are_small(left, right)) {
		*result = (uint32_t)left % (uint32_t)right;
		return EXPRESSION_OK;
	}
	if (right == -1) {
		*result = 0;
		return EXPRESSION_OK;
	}
	remainder = left % right;
	if (remainder != 0 && (remainder < 0) != (right < 0))
		remainder += right;
	*result = remainder;
	return EXPRESSION_OK;
}

static enum expression_status combine(enum operation operation, int64_t left, int64_t right, int64_t *result)
{
	switch (operation) {
	case OPERATION_ADD:
		return __builtin_add_overflow(left, right, result) ? EXPRESSION_OVERFLOW : EXPRESSION_OK;
	case OPERATION_SUBTRACT:
		return __builtin_sub_overflow(left, right, result) ? EXPRESSION_OVERFLOW : EXPRESSION_OK;
	case OPERATION_MULTIPLY:
		return __builtin_mul_overflow(left, right, result) ? EXPRESSION_OVERFLOW : EXPRESSION_OK;
	case OPERATION_DIVIDE:
		return divide(left, right, result);
	case OPERATION_REMAINDER:
		return take_remainder(left, right, result);
	case OPERATION_LOAD:
	case OPERATION_PARENTHESIS:
		break;
	}
	*result = right;
	return EXPRESSION_OK;
}

enum expression_status expression_value(const struct expression *expression, const int64_t variables[VARIABLE_COUNT],
                                        int64_t *result)
{
	int64_t stack[VALUE_LIMIT];
	size_t depth = 0;
	int64_t accumulator = 0;

	for (size_t index = 0; index < expression->count; index++) {
		const struct instruction *const instruction = &expression->code[index];
		int64_t left = accumulator;
		int64_t right = instruction->constant;
		enum expression_status status;

		if (instruction->operand == OPERAND_VARIABLE) {
			right = variables[instruction->constant];
		} else if (instruction->operand == OPERAND_STACK) {
			right = accumulator;
			left = stack[--depth];
		}
		if (instruction->operation == OPERATION_LOAD)
			stack[depth++] = accumulator;
		status = combine(instruction->operation, left, right, &accumulator);
		if (status != EXPRESSION_OK)
			return status;
	}
	if (accumulator < 0)
		return EXPRESSION_NEGATIVE;
	*result = accumulator;
	return EXPRESSION_OK;
}
