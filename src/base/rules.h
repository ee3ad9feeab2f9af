// The rules that diagnostics speak of. The rows are in rules.def; each has a bad plan in tests/bad.
#ifndef SCANLATCH_BASE_RULES_H
#define SCANLATCH_BASE_RULES_H

enum severity { SEVERITY_ERROR, SEVERITY_NOTICE };

// What a rule guards: a plan's text or meaning, an image, the command line, or the system's consent.
enum rule_area { AREA_FILE, AREA_FORM, AREA_PLAN, AREA_STATES, AREA_WIRING, AREA_IMAGE, AREA_SYSTEM };

enum rule {
#define RULE(symbol, id, area, severity, meaning) RULE_##symbol,
#include "base/rules.def"
#undef RULE
	RULE_COUNT
};

struct rule_row {
	const char *id;      // stable, kebab-case
	enum rule_area area;
	enum severity severity;
	const char *meaning; // one line: what a plan must satisfy
};

// The row of a rule. Cannot fail.
const struct rule_row *rule_row(enum rule rule);

#endif
