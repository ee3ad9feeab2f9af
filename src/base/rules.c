#include "base/rules.h"

static const struct rule_row rows[RULE_COUNT] = {
#define RULE(symbol, id, area, severity, meaning) [RULE_##symbol] = {id, AREA_##area, SEVERITY_##severity, meaning},
#include "base/rules.def"
#undef RULE
};

const struct rule_row *rule_row(enum rule rule)
{
	return &rows[rule];
}
