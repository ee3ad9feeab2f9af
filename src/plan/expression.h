// Expressions of `hold`: non-negative integers, + - * / %, parentheses, variables.
#ifndef SCANLATCH_PLAN_EXPRESSION_H
#define SCANLATCH_PLAN_EXPRESSION_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct arena;
struct expression;

enum variable { VARIABLE_LINE, VARIABLE_CELL, VARIABLE_COL, VARIABLE_ROW, VARIABLE_COUNT };

// The name of a variable as plans write it. Cannot fail.
const char *variable_name(enum variable variable);

enum expression_status {
	EXPRESSION_OK,
	EXPRESSION_SYNTAX,           // *offset: where the text stops making sense
	EXPRESSION_UNKNOWN_VARIABLE, // *offset: of the name
	EXPRESSION_TOO_LONG,         // more than 1,000 operators or operands, or deeper than 100 parentheses
	EXPRESSION_NUMBER,           // a number too large
	EXPRESSION_MEMORY,
	EXPRESSION_NEGATIVE,         // evaluation: the result is below zero
	EXPRESSION_DIVISION,         // evaluation: division or remainder by zero
	EXPRESSION_OVERFLOW,         // evaluation: an intermediate exceeds 64 bits
};

// The form of an expression as a regular expression; whether its parentheses close is left out.
#define OPERAND_PATTERN(variables) "(0x[0-9a-fA-F]+|[0-9]+|" variables ")"
#define EXPRESSION_OF(operand) "[ (]*" operand "[ )]*([-+*/%][ (]*" operand "[ )]*)*"
#define EXPRESSION_PATTERN EXPRESSION_OF(OPERAND_PATTERN("line|cell|col|row"))
#define LINE_FRAME_EXPRESSION_PATTERN EXPRESSION_OF(OPERAND_PATTERN("cell|col"))

const char *expression_status_words(enum expression_status status);

// Compiles `text` (no recursion) into the arena. Precedence: * / % before + -, left to right; a unary minus is not
// part of the language. On failure *offset is the byte offset of the fault and *result is untouched.
enum expression_status expression_compile(struct arena *arena, const char *text, const struct expression **result,
                                          size_t *offset);

// True if the expression uses the variable. Cannot fail.
bool expression_uses(const struct expression *expression, enum variable variable);

// Evaluates with the given variables (each 0 … 2^31). Intermediates may be negative; / is floor division and % its
// remainder (a - b * floor(a/b)). The result must not be negative. Fast: called once for each held cell.
enum expression_status expression_value(const struct expression *expression, const int64_t variables[VARIABLE_COUNT],
                                        int64_t *result);

#endif
