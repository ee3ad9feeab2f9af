// Line types: contents with holds. Lines of one content whose holds are written alike are of one type.
#include <string.h>

#include "base/arena.h"
#include "proof/lift_work.h"

static uint64_t hash_word(uint64_t hash, uint64_t word)
{
	return (hash ^ word) * 0x100000001B3u; // FNV-1a (Fowler, Noll, Vo), a word at a time
}

static uint64_t hash_string(uint64_t hash, const char *string)
{
	for (; *string != '\0'; string++)
		hash = hash_word(hash, (unsigned char)*string);
	return hash_word(hash, 0);
}

static uint64_t hash_type(uint32_t content, const struct lift_region *regions, size_t count)
{
	uint64_t hash = hash_word(0xCBF29CE484222325u, content);
	for (size_t index = 0; index < count; index++) {
		hash = hash_word(hash, regions[index].cells);
		for (size_t hold = 0; hold < regions[index].hold_count; hold++)
			hash = hash_string(hash_string(hash, regions[index].holds[hold].field), regions[index].holds[hold].expression);
	}
	return hash;
}

static bool same_holds(const struct lift_region *left, const struct lift_region *right)
{
	if (left->hold_count != right->hold_count)
		return false;
	for (size_t hold = 0; hold < left->hold_count; hold++)
		if (strcmp(left->holds[hold].field, right->holds[hold].field) != 0 ||
		    strcmp(left->holds[hold].expression, right->holds[hold].expression) != 0)
			return false;
	return true;
}

static bool same_regions(const struct lift_type *type, const struct lift_region *regions, size_t count)
{
	if (type->region_count != count)
		return false;
	for (size_t index = 0; index < count; index++)
		if (type->regions[index].cells != regions[index].cells || !same_holds(&type->regions[index], &regions[index]))
			return false;
	return true;
}

// "name", "name 2", …; NULL when memory is out.
static const char *numbered(struct arena *arena, const char *name, size_t number)
{
	return number == 1 ? name : arena_format(arena, "%s %zu", name, number);
}

// The type's number among those of the same name, over all contents.
static size_t next_number(struct lifting *lifting, uint32_t content)
{
	struct content *contents = lifting->contents;
	size_t first = 0;
	while (strcmp(contents[first].name, contents[content].name) != 0)
		first++;
	return ++contents[first].types;
}

// Regions of one name in a line are numbered.
static bool name_regions(struct lifting *lifting, struct lift_type *type)
{
	for (size_t index = 0; index < type->region_count; index++)
		type->regions[index].name = NULL;
	const struct content *content = &lifting->contents[type->content];
	for (size_t index = 0, from = 0; index < type->region_count; index++) {
		while (content->regions[from].first_cell + content->regions[from].cells <= type->regions[index].first_cell)
			from++;
		type->regions[index].class = content->regions[from].class;
		type->regions[index].name = content->regions[from].name;
	}
	static const char *const names[] = {"sync", "broad sync", "equalising pulse", "burst", "picture", "blank", "front porch",
	                                    "serration", "breezeway", "back porch"};
	for (size_t name = 0; name < sizeof names / sizeof *names; name++) {
		size_t number = 0;
		for (size_t index = 0; index < type->region_count; index++) {
			if (type->regions[index].name == NULL || strcmp(type->regions[index].name, names[name]) != 0)
				continue;
			type->regions[index].name = numbered(lifting->lift->arena, names[name], ++number);
			if (type->regions[index].name == NULL)
				return lift_memory(lifting);
		}
	}
	return true;
}

// Room for another element, of so many that are there; doubles.
static bool grow(struct arena *arena, void **list, size_t count, size_t size)
{
	if ((count & (count - 1)) != 0)
		return true;
	void *more = arena_array(arena, count == 0 ? 1 : 2 * count, size);
	if (more == NULL)
		return false;
	if (count > 0)
		memcpy(more, *list, count * size);
	*list = more;
	return true;
}

static struct lift_type *add_type(struct lifting *lifting, uint32_t content, struct lift_region *regions, size_t count, uint64_t hash)
{
	struct lift *lift = lifting->lift;
	void *types = lift->types;
	if (!grow(lift->arena, &types, lift->type_count, sizeof *lift->types))
		return NULL;
	lift->types = types;
	struct lift_type *type = &lift->types[lift->type_count];
	*type = (struct lift_type){.cells = lifting->contents[content].cells, .ticks = lifting->contents[content].ticks, .content = content,
	                           .hash = hash, .regions = regions, .region_count = count};
	type->name = numbered(lift->arena, lifting->contents[content].name, next_number(lifting, content));
	if (type->name == NULL || !name_regions(lifting, type))
		return NULL;
	lift->type_count++;
	return type;
}

bool lift_add_block(struct lifting *lifting, uint32_t content, uint32_t lines, struct lift_region *regions, size_t count)
{
	struct lift *lift = lifting->lift;
	const uint64_t hash = hash_type(content, regions, count);
	struct lift_type *type = NULL;
	for (size_t index = 0; index < lift->type_count && type == NULL; index++)
		if (lift->types[index].hash == hash && lift->types[index].content == content && same_regions(&lift->types[index], regions, count))
			type = &lift->types[index];
	if (type == NULL)
		type = add_type(lifting, content, regions, count, hash);
	void *blocks = lift->blocks;
	if (type == NULL || !grow(lift->arena, &blocks, lift->block_count, sizeof *lift->blocks))
		return lift_memory(lifting);
	lift->blocks = blocks;
	lift->blocks[lift->block_count++] = (struct lift_block){lines, (uint32_t)(type - lift->types)};
	type->lines += lines;
	return true;
}
