#include "view/reports.h"

#include <string.h>

#include "view/figures.h"

#define POINTER "#/$defs/"

static const struct report_file *file_of(size_t report)
{
	const struct report_file *file = report_files;
	for (; file->shared || report > 0; file++)
		report -= !file->shared;
	return file;
}

size_t report_count(void)
{
	size_t count = 0;
	for (const struct report_file *file = report_files; file->name != NULL; file++)
		count += !file->shared;
	return count;
}

const char *report_name(size_t report)
{
	return file_of(report)->name;
}

static json_t *load(const struct report_file *file)
{
	return json_loadb((const char *)file->bytes, file->length, JSON_REJECT_DUPLICATES, NULL);
}

// Adds the keys of an object that is read only. Like json_put, gives *object up when memory is out.
static void put_all(json_t **object, json_t *from)
{
	if (*object != NULL && from != NULL && json_object_update(*object, from) == 0)
		return;
	json_decref(*object);
	*object = NULL;
}

// All definitions that reports share. A new reference; NULL when memory is out.
static json_t *shared_definitions(void)
{
	json_t *all = json_object();
	for (const struct report_file *file = report_files; file->name != NULL; file++) {
		json_t *definitions = file->shared ? load(file) : json_object();
		put_all(&all, definitions);
		json_decref(definitions);
	}
	return all;
}

// Adds the definitions that a part of a schema refers to, and those that they refer to. The files' nesting bounds the depth.
static void add_used(json_t **used, const json_t *all, json_t *part)
{
	const char *key;
	json_t *value;
	size_t index;
	json_array_foreach(part, index, value)
		add_used(used, all, value);
	json_object_foreach(part, key, value) {
		const char *pointer = strcmp(key, "$ref") == 0 ? json_string_value(value) : NULL;
		json_t *definition = pointer != NULL ? json_object_get(all, pointer + strlen(POINTER)) : NULL;
		if (definition != NULL && *used != NULL && json_object_get(*used, pointer + strlen(POINTER)) == NULL) {
			json_put(used, pointer + strlen(POINTER), json_incref(definition));
			add_used(used, all, definition);
		}
		add_used(used, all, value);
	}
}

json_t *view_report_schema(size_t report)
{
	json_t *schema = json_pack("{s:s}", "$schema", "https://json-schema.org/draft/2020-12/schema");
	json_t *own = load(file_of(report)), *all = shared_definitions(), *used = json_object();
	json_t *definitions = json_object_get(own, "$defs");
	if (definitions != NULL)
		put_all(&used, definitions);
	if (all != NULL)
		add_used(&used, all, own);
	put_all(&schema, own);
	json_put(&schema, "$defs", all != NULL ? used : NULL);
	if (all == NULL)
		json_decref(used);
	json_decref(all);
	json_decref(own);
	return schema;
}
