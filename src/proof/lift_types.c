// Line types: contents with holds. Lines of one content whose holds are written alike are of one type, found by a hash.
#include <string.h>

#include "base/arena.h"
#include "base/diagnostics.h"
#include "plan/document.h"
#include "proof/lift_work.h"

// YAML nodes of a line type, of a region of it and of a block of the frame, with their keys; what they assert and hold comes on top.
#define TYPE_NODES 6
#define REGION_NODES 7
#define BLOCK_NODES 5

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

static bool report_size(struct lifting *lifting, size_t types, size_t regions, size_t blocks)
{
	diagnose(lifting->diagnostics, RULE_LIFT_SIZE, lifting->place,
	         "these images take %zu line types of %zu regions and %zu blocks of lines, or more: a plan has room for %d nodes of YAML",
	         types, regions, blocks, DOCUMENT_LIMIT_NODES);
	return false;
}

bool lift_check_size(struct lifting *lifting)
{
	size_t blocks = 1, regions = 0;
	for (uint32_t line = 1; line < lifting->lift->line_count; line++)
		blocks += lifting->lines[line].content != lifting->lines[line - 1].content;
	for (size_t content = 0; content < lifting->content_count; content++)
		regions += lifting->contents[content].region_count;
	if (lifting->content_count * TYPE_NODES + regions * REGION_NODES + blocks * BLOCK_NODES <= DOCUMENT_LIMIT_NODES)
		return true;
	return report_size(lifting, lifting->content_count, regions, blocks);
}

static size_t nodes_of(const struct lift_region *regions, size_t count)
{
	size_t nodes = TYPE_NODES;
	for (size_t index = 0; index < count; index++) {
		nodes += REGION_NODES + 2 * regions[index].hold_count;
		for (uint64_t signals = regions[index].asserted; signals != 0; signals &= signals - 1)
			nodes++;
	}
	return nodes;
}

// A table twice as large as there are types, with those that are there.
static bool spread_types(struct lifting *lifting)
{
	struct type_table *table = &lifting->types;
	const struct lift *lift = lifting->lift;
	if (table->slots != NULL && 2 * lift->type_count <= table->mask)
		return true;
	table->mask = table->slots == NULL ? 63 : 2 * table->mask + 1;
	table->slots = arena_array(lifting->arena, (size_t)table->mask + 1, sizeof *table->slots);
	for (uint32_t type = 0; table->slots != NULL && type < lift->type_count; type++) {
		uint32_t slot = (uint32_t)(lift->types[type].hash & table->mask);
		while (table->slots[slot] != 0)
			slot = (slot + 1) & table->mask;
		table->slots[slot] = type + 1;
	}
	return table->slots != NULL;
}

// The slot of a type that is written alike, or the free one where it belongs.
static uint32_t *find_slot(const struct lifting *lifting, uint32_t content, const struct lift_region *regions, size_t count, uint64_t hash)
{
	const struct type_table *table = &lifting->types;
	uint32_t slot = (uint32_t)(hash & table->mask);
	for (; table->slots[slot] != 0; slot = (slot + 1) & table->mask) {
		const struct lift_type *type = &lifting->lift->types[table->slots[slot] - 1];
		if (type->hash == hash && type->content == content && same_regions(type, regions, count))
			break;
	}
	return &table->slots[slot];
}

static bool add_type(struct lifting *lifting, uint32_t content, struct lift_region *regions, size_t count, uint64_t hash)
{
	struct lift *lift = lifting->lift;
	void *types = lift->types;
	if (!grow(lift->arena, &types, lift->type_count, sizeof *lift->types))
		return false;
	lift->types = types;
	struct lift_type *type = &lift->types[lift->type_count];
	*type = (struct lift_type){.cells = lifting->contents[content].cells, .ticks = lifting->contents[content].ticks, .content = content,
	                           .hash = hash, .regions = regions, .region_count = count};
	lifting->node_count += nodes_of(regions, count);
	lifting->region_count += count;
	lift->type_count++;
	return true;
}

bool lift_add_block(struct lifting *lifting, uint32_t content, uint32_t lines, struct lift_region *regions, size_t count)
{
	struct lift *lift = lifting->lift;
	const uint64_t hash = hash_type(content, regions, count);
	void *blocks = lift->blocks;
	if (!spread_types(lifting))
		return lift_memory(lifting);
	uint32_t *slot = find_slot(lifting, content, regions, count, hash);
	if ((*slot == 0 && !add_type(lifting, content, regions, count, hash)) ||
	    !grow(lift->arena, &blocks, lift->block_count, sizeof *lift->blocks))
		return lift_memory(lifting);
	if (*slot == 0)
		*slot = (uint32_t)lift->type_count;
	lift->blocks = blocks;
	lift->blocks[lift->block_count++] = (struct lift_block){lines, *slot - 1};
	lift->types[*slot - 1].lines += lines;
	lifting->node_count += BLOCK_NODES;
	if (lifting->node_count <= DOCUMENT_LIMIT_NODES)
		return true;
	report_size(lifting, lift->type_count, lifting->region_count, lift->block_count);
	if (lift->options.near)
		diagnose_hint(lifting->diagnostics, "without --near the plan is shorter");
	return false;
}

static const char *name_of(const struct lifting *lifting, const struct lift_type *type)
{
	return lifting->contents[type->content].name;
}

// The type of a name that most lines are of is called just that, the others are numbered from 2 on.
static bool number_types(struct lifting *lifting, const char *name)
{
	struct lift *lift = lifting->lift;
	const struct lift_type *commonest = NULL;
	size_t number = 1;
	for (size_t type = 0; type < lift->type_count; type++)
		if (strcmp(name_of(lifting, &lift->types[type]), name) == 0 && (commonest == NULL || lift->types[type].lines > commonest->lines))
			commonest = &lift->types[type];
	for (size_t index = 0; index < lift->type_count; index++) {
		struct lift_type *type = &lift->types[index];
		if (strcmp(name_of(lifting, type), name) != 0)
			continue;
		type->name = numbered(lift->arena, name, type == commonest ? 1 : ++number);
		if (type->name == NULL)
			return lift_memory(lifting);
	}
	return true;
}

bool lift_name_types(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	for (size_t type = 0; type < lift->type_count; type++) // each name at its first type
		if (lift->types[type].name == NULL && !number_types(lifting, name_of(lifting, &lift->types[type])))
			return false;
	for (size_t type = 0; type < lift->type_count; type++)
		if (!name_regions(lifting, &lift->types[type]))
			return false;
	return true;
}
