// Names for regions and line types, by what the roles of their signals say. They are for people: nothing depends on them.
#include <string.h>

#include "base/arena.h"
#include "proof/lift_work.h"

// Signals by role, as masks; 0 where the board has none.
struct roles {
	uint64_t sync, vertical, blanking, burst;
};

// The widths of pulses of sync, in ticks, that tell them apart.
struct pulses {
	int64_t broad;                 // at least: half of half a normal line
	int64_t equalising;            // less than: three quarters of the commonest normal pulse
};

static uint64_t role_mask(const struct lifting *lifting, enum role role)
{
	const int signal = lifting->plan->role_signal[role];
	return signal < 0 ? 0 : (uint64_t)1 << signal;
}

static struct roles roles_of(const struct lifting *lifting)
{
	const uint64_t composite = role_mask(lifting, ROLE_COMPOSITE_SYNC);
	return (struct roles){
		.sync = composite != 0 ? composite : role_mask(lifting, ROLE_HORIZONTAL_SYNC),
		.vertical = role_mask(lifting, ROLE_VERTICAL_SYNC),
		.blanking = role_mask(lifting, ROLE_BLANKING),
		.burst = role_mask(lifting, ROLE_BURST_GATE),
	};
}

static int64_t region_ticks(const struct lifting *lifting, const struct lift_region *region)
{
	const struct clock *clock = &lifting->plan->clock;
	return region->cells * clock->cell_ticks + region->stretched * clock->stretch_ticks;
}

// The longest region of a content that is neither sync nor burst; without blanking, that is its picture.
static const struct lift_region *longest_rest(const struct content *content)
{
	const struct lift_region *longest = NULL;
	for (size_t index = 0; index < content->region_count; index++) {
		const struct lift_region *region = &content->regions[index];
		if (region->class == CLASS_BLANK && (longest == NULL || region->cells > longest->cells))
			longest = region;
	}
	return longest;
}

static void classify(struct content *content, const struct roles *roles)
{
	for (size_t index = 0; index < content->region_count; index++) {
		struct lift_region *region = &content->regions[index];
		if ((region->asserted & roles->sync) != 0)
			region->class = CLASS_SYNC;
		else if ((region->asserted & roles->burst) != 0)
			region->class = CLASS_BURST;
		else if (roles->blanking != 0 && (region->asserted & roles->blanking) == 0)
			region->class = CLASS_PICTURE;
	}
	const struct lift_region *picture = roles->blanking == 0 ? longest_rest(content) : NULL;
	if (picture != NULL && 2 * picture->cells >= content->cells)
		content->regions[picture - content->regions].class = CLASS_PICTURE;
}

// The ticks of the pulse of sync around a region: regions next to each other may differ in other signals.
static int64_t pulse_ticks(const struct lifting *lifting, const struct content *content, size_t region)
{
	size_t first = region, end = region;
	int64_t ticks = 0;
	while (first > 0 && content->regions[first - 1].class == CLASS_SYNC)
		first--;
	for (end = first; end < content->region_count && content->regions[end].class == CLASS_SYNC; end++)
		ticks += region_ticks(lifting, &content->regions[end]);
	return ticks;
}

// Judged by the commonest content whose first pulse is narrow.
static struct pulses find_pulses(const struct lifting *lifting)
{
	struct pulses pulses = {.broad = lifting->normal_ticks / 4 > 0 ? lifting->normal_ticks / 4 : 1};
	uint32_t most = 0;
	for (size_t index = 0; index < lifting->content_count; index++) {
		const struct content *content = &lifting->contents[index];
		size_t region = 0;
		while (region < content->region_count && content->regions[region].class != CLASS_SYNC)
			region++;
		const int64_t ticks = region < content->region_count ? pulse_ticks(lifting, content, region) : 0;
		if (ticks == 0 || ticks >= pulses.broad || content->cells != lifting->normal_cells || content->lines <= most)
			continue;
		most = content->lines;
		pulses.equalising = ticks * 3 / 4;
	}
	return pulses;
}

static bool is_broad(const struct lifting *lifting, const struct content *content, const struct pulses *pulses, size_t region)
{
	return content->regions[region].class == CLASS_SYNC && pulse_ticks(lifting, content, region) >= pulses->broad;
}

static const char *pulse_name(const struct lifting *lifting, const struct content *content, const struct pulses *pulses, size_t region)
{
	const int64_t ticks = pulse_ticks(lifting, content, region);
	if (ticks >= pulses->broad)
		return "broad sync";
	return ticks <= pulses->equalising ? "equalising pulse" : "sync";
}

// The nearest region, going around the line, that is not blank; the region itself where all are.
static size_t neighbour(const struct content *content, size_t region, bool forward)
{
	const size_t count = content->region_count;
	size_t index = region;
	do
		index = forward ? (index + 1) % count : (index + count - 1) % count;
	while (index != region && content->regions[index].class == CLASS_BLANK);
	return index;
}

static const char *blank_name(const struct lifting *lifting, const struct content *content, const struct pulses *pulses, size_t region)
{
	const size_t before = neighbour(content, region, false), after = neighbour(content, region, true);
	const enum lift_class last = content->regions[before].class, next = content->regions[after].class;
	if (last == CLASS_BLANK)
		return "blank";
	if (next == CLASS_SYNC && last == CLASS_PICTURE)
		return "front porch";
	if (next == CLASS_SYNC && is_broad(lifting, content, pulses, before) && before < region)
		return "serration";
	if (next == CLASS_SYNC && after > region)
		return before < region || 4 * content->regions[region].cells > content->cells ? "blank" : "front porch";
	if (next == CLASS_BURST && last == CLASS_SYNC)
		return "breezeway";
	if (next == CLASS_PICTURE && (last == CLASS_SYNC || last == CLASS_BURST))
		return "back porch";
	return "blank";
}

static const char *region_name(const struct lifting *lifting, const struct content *content, const struct pulses *pulses, size_t region)
{
	switch (content->regions[region].class) {
	case CLASS_SYNC:
		return pulse_name(lifting, content, pulses, region);
	case CLASS_BURST:
		return "burst";
	case CLASS_PICTURE:
		return "picture";
	case CLASS_BLANK:
		break;
	}
	return blank_name(lifting, content, pulses, region);
}

static bool has_region(const struct content *content, const char *name)
{
	for (size_t index = 0; index < content->region_count; index++)
		if (strcmp(content->regions[index].name, name) == 0)
			return true;
	return false;
}

static bool is_vertical(const struct content *content, const struct roles *roles)
{
	uint32_t cells = 0;
	for (size_t index = 0; index < content->region_count; index++)
		cells += (content->regions[index].asserted & roles->vertical) != 0 ? content->regions[index].cells : 0;
	return cells > content->cells / 2;
}

static const char *content_name(const struct lifting *lifting, const struct content *content, const struct roles *roles)
{
	const bool half = 2 * (uint64_t)content->cells == lifting->normal_cells;
	if (has_region(content, "broad sync") || is_vertical(content, roles))
		return "vertical sync";
	if (has_region(content, "equalising pulse"))
		return "equalising";
	if (has_region(content, "picture"))
		return half ? "half picture" : "picture";
	return half ? "half border" : "border";
}

bool lift_name(struct lifting *lifting)
{
	const struct roles roles = roles_of(lifting);
	for (size_t index = 0; index < lifting->content_count; index++)
		classify(&lifting->contents[index], &roles);
	const struct pulses pulses = find_pulses(lifting);
	for (size_t index = 0; index < lifting->content_count; index++) {
		struct content *content = &lifting->contents[index];
		for (size_t region = 0; region < content->region_count; region++)
			content->regions[region].name = region_name(lifting, content, &pulses, region);
		content->name = content_name(lifting, content, &roles);
	}
	return true;
}
