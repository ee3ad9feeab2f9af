#include "view/schema.h"

#include <stdio.h>
#include <string.h>

#include "view/figures.h"

#define TITLE_BYTES 64

struct writer {
	const struct schema_names *names;
	json_t *definitions;
};

// Shapes stand in each other, to a depth that the tables fix.
static json_t *schema_of(struct writer *writer, const struct shape *shape);

static void put_about(json_t **object, const char *about)
{
	if (about != NULL)
		json_put(object, "description", json_string(about));
}

static void put_count(json_t **object, const char *key, int64_t count, int64_t usual)
{
	if (count != usual)
		json_put(object, key, json_integer(count));
}

// A list one of whose mappings has a key, with a word for its value if one is given.
static json_t *contains_schema(const char *key, const char *word)
{
	json_t *item = json_pack("{s:s,s:[s]}", "type", "object", "required", key);
	if (word != NULL)
		json_put(&item, "properties", json_pack("{s:{s:s}}", key, "const", word));
	return json_pack("{s:o}", "contains", item);
}

// As a condition, so that editors that know no maxContains pass over it.
static void put_once(json_t **object, const char *key)
{
	json_t *then = contains_schema(key, NULL);
	json_put(&then, "maxContains", json_integer(1));
	json_put(object, "if", contains_schema(key, NULL));
	json_put(object, "then", then);
}

static json_t *each_schema(const struct key *key)
{
	json_t *all = json_array();
	for (size_t word = 0; word < key->shape->word_count; word++)
		json_append(&all, contains_schema(key->name, key->shape->words[word]));
	return all;
}

static json_t *list_schema(struct writer *writer, const struct shape *shape)
{
	json_t *object = json_pack("{s:s}", "type", "array");
	json_put(&object, "items", schema_of(writer, shape->item));
	put_count(&object, "minItems", shape->least, 0);
	put_count(&object, "maxItems", shape->most, INT64_MAX);
	if (shape->distinct)
		json_put(&object, "uniqueItems", json_true());
	if (shape->once != NULL)
		put_once(&object, shape->once);
	if (shape->each != NULL)
		json_put(&object, "allOf", each_schema(shape->each));
	return object;
}

static json_t *named_schema(struct writer *writer, const struct shape *shape)
{
	json_t *object = json_pack("{s:s}", "type", "object");
	if (shape->name != NULL)
		json_put(&object, "propertyNames", schema_of(writer, shape->name));
	if (shape->item != NULL)
		json_put(&object, "additionalProperties", schema_of(writer, shape->item));
	put_count(&object, "minProperties", shape->least, 0);
	put_count(&object, "maxProperties", shape->most, INT64_MAX);
	if (shape->needs_name != NULL) // not all names are others
		json_put(&object, "not", json_pack("{s:{s:{s:s++}}}", "propertyNames", "not", "pattern", "^(", shape->needs_name, ")$"));
	return object;
}

static bool is_key(const struct key *key)
{
	return key->need == KEY_OPTIONAL || key->need == KEY_REQUIRED;
}

static json_t *required_keys(const struct shape *shape)
{
	json_t *required = json_array();
	const struct key_group *group = &shape->group;
	for (size_t index = 0; index < shape->key_count; index++)
		if (shape->keys[index].need == KEY_REQUIRED)
			json_append(&required, json_string(shape->keys[index].name));
	if (group->count == 1 && group->one)
		json_append(&required, json_string(shape->keys[group->first].name));
	return required;
}

// One of the keys of a group, or none where none need be.
static json_t *group_schema(const struct shape *shape)
{
	const struct key_group *group = &shape->group;
	json_t *ways = json_array(), *any = json_array();
	for (size_t index = group->first; index < group->first + group->count; index++) {
		json_append(&ways, json_pack("{s:[s]}", "required", shape->keys[index].name));
		json_append(&any, json_pack("{s:[s]}", "required", shape->keys[index].name));
	}
	if (group->one)
		json_decref(any);
	else
		json_append(&ways, json_pack("{s:{s:o}}", "not", "anyOf", any));
	return ways;
}

// Where a bond is one.
static json_t *bond_condition(const struct key_bond *bond)
{
	json_t *condition = json_pack("{s:[s]}", "required", bond->key), *value = NULL;
	if (bond->absent)
		return json_pack("{s:o}", "not", condition);
	if (bond->holding != NULL)
		value = contains_schema(bond->holding, NULL);
	else if (bond->with != NULL)
		value = json_pack("{s:s}", "const", bond->with);
	else if (bond->but != NULL)
		value = json_pack("{s:{s:s}}", "not", "const", bond->but);
	else
		return condition;
	json_put(&condition, "properties", json_pack("{s:o}", bond->key, value));
	return condition;
}

static json_t *bond_schema(struct writer *writer, const struct key_bond *bond)
{
	json_t *then = json_object(), *condition = bond_condition(bond);
	if (!bond->optional)
		json_put(&then, "required", json_pack("[s]", bond->needs));
	if (bond->shape != NULL)
		json_put(&then, "properties", json_pack("{s:o}", bond->needs, schema_of(writer, bond->shape)));
	return json_pack("{s:o,s:o}", "if", condition, "then", then);
}

static void put_bonds(struct writer *writer, json_t **object, const struct shape *shape)
{
	json_t *all = json_array();
	for (size_t index = 0; index < shape->bond_count; index++)
		json_append(&all, bond_schema(writer, &shape->bonds[index]));
	if (all == NULL || json_array_size(all) > 0)
		json_put(object, "allOf", all);
	else
		json_decref(all);
}

static json_t *mapping_schema(struct writer *writer, const struct shape *shape)
{
	json_t *object = json_pack("{s:s}", "type", "object"), *properties = json_object(), *required = required_keys(shape);
	for (size_t index = 0; index < shape->key_count; index++) {
		const struct key *key = &shape->keys[index];
		json_t *value = is_key(key) ? schema_of(writer, key->shape) : NULL;
		if (!is_key(key))
			continue;
		put_about(&value, key->about);
		json_put(&properties, key->name, value);
	}
	json_put(&object, "properties", properties);
	if (required == NULL || json_array_size(required) > 0)
		json_put(&object, "required", required);
	else
		json_decref(required);
	json_put(&object, "additionalProperties", json_false());
	if (shape->group.count > 1)
		json_put(&object, "oneOf", group_schema(shape));
	put_bonds(writer, &object, shape);
	return object;
}

static json_t *either_schema(struct writer *writer, const struct shape *shape)
{
	json_t *object = json_object(), *ways = json_array();
	for (size_t index = 0; index < shape->shape_count; index++)
		json_append(&ways, schema_of(writer, shape->shapes[index]));
	json_put(&object, "oneOf", ways);
	return object;
}

static json_t *plain_schema(struct writer *writer, const struct shape *shape)
{
	switch (shape->kind) {
	case SHAPE_LIST: return list_schema(writer, shape);
	case SHAPE_MAPPING: return mapping_schema(writer, shape);
	case SHAPE_NAMED: return named_schema(writer, shape);
	case SHAPE_LIMITS: return view_limits_schema();
	case SHAPE_EITHER: return either_schema(writer, shape);
	case SHAPE_TEXT: case SHAPE_NOTE: case SHAPE_WHOLE: case SHAPE_TRUE: case SHAPE_CHOICE: case SHAPE_LISTED:
	case SHAPE_QUANTITY: case SHAPE_BIT_COUNT: break;
	}
	return view_value_schema(shape, writer->names);
}

// Puts the name of a shape's definition, which a pointer in a URI can have as it stands (RFC 6901, section 6).
static void put_definition_name(char name[TITLE_BYTES], const char *title)
{
	snprintf(name, TITLE_BYTES, "%s", title);
	for (char *space = strchr(name, ' '); space != NULL; space = strchr(space, ' '))
		*space = '-';
}

static json_t *schema_of(struct writer *writer, const struct shape *shape)
{
	char name[TITLE_BYTES];
	if (shape->title == NULL) {
		json_t *schema = plain_schema(writer, shape);
		put_about(&schema, shape->about);
		return schema;
	}
	put_definition_name(name, shape->title);
	if (json_object_get(writer->definitions, name) == NULL) {
		json_t *schema = plain_schema(writer, shape);
		put_about(&schema, shape->about);
		json_put(&writer->definitions, name, schema);
	}
	return json_pack("{s:s+}", "$ref", "#/$defs/", name);
}

// What keys have to be beside a machine of a form; NULL where none differs.
static json_t *keys_beside(struct writer *writer, const struct shape *root, bool loop)
{
	json_t *properties = json_object();
	for (size_t index = 0; index < root->key_count; index++) {
		const struct shape *shape = root->keys[index].shape;
		const struct shape *other = !is_key(&root->keys[index]) ? NULL : loop ? shape->in_loop : shape->in_line_frame;
		if (other != NULL)
			json_put(&properties, root->keys[index].name, schema_of(writer, other));
	}
	return properties;
}

static json_t *condition_schema(struct writer *writer, const struct shape *root, bool loop)
{
	return json_pack("{s:{s:[s],s:{s:{s:s,s:[s],s:{s:{s:s}}}}},s:{s:o}}", "if", "required", "machine", "properties", "machine", "type",
	                 "object", "required", "form", "properties", "form", "const", loop ? "loop" : "line-frame", "then", "properties",
	                 keys_beside(writer, root, loop));
}

static bool has_conditions(const struct shape *root)
{
	bool found = false;
	for (size_t index = 0; index < root->key_count; index++)
		found = found || (is_key(&root->keys[index]) && root->keys[index].shape->in_loop != NULL);
	return found;
}

json_t *view_schema(const char *title, const struct shape *root, const struct schema_names *names)
{
	struct writer writer = {names, json_object()};
	json_t *schema = json_pack("{s:s,s:s}", "$schema", "https://json-schema.org/draft/2020-12/schema", "title", title);
	json_t *mapping = mapping_schema(&writer, root);
	put_about(&schema, root->about);
	if (schema == NULL || mapping == NULL || json_object_update(schema, mapping) != 0) {
		json_decref(schema);
		schema = NULL;
	}
	json_decref(mapping);
	if (has_conditions(root)) {
		json_t *bonds = json_object_get(schema, "allOf"), *conditions = bonds != NULL ? json_incref(bonds) : json_array();
		json_append(&conditions, condition_schema(&writer, root, true));
		json_append(&conditions, condition_schema(&writer, root, false));
		json_put(&schema, "allOf", conditions);
	}
	json_put(&schema, "$defs", writer.definitions);
	return schema;
}
