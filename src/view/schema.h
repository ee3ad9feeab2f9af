// JSON Schema (draft 2020-12) of the plan language, for editors and validators, made from the tables that the reader reads by
// (plan/grammar.h). It judges what a YAML parser makes of a file, so a whole number may also be a text, and a name a number.
#ifndef SCANLATCH_VIEW_SCHEMA_H
#define SCANLATCH_VIEW_SCHEMA_H

#include <jansson.h>

#include "catalogue/standards.h"
#include "plan/grammar.h"

struct catalogue;

// The catalogues whose names a plan can use.
struct schema_names {
	const struct catalogue *parts;
	const struct standards *standards;
};

// The schema of a language, whose root is a mapping. A new reference, owned by the caller; NULL when memory is out.
json_t *view_schema(const char *title, const struct shape *root, const struct schema_names *names);

// The schema of a single value, none of SHAPE_LIST and what follows it in enum shape_kind. The same.
json_t *view_value_schema(const struct shape *shape, const struct schema_names *names);

// The schema of the limits of what is measured, by name. The same.
json_t *view_limits_schema(void);

#endif
