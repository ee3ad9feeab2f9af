// The search for the best placement against plain enumeration, on models of which only the numbers are random.
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/arena.h"
#include "catalogue/judge.h"
#include "layout/placement.h"
#include "measure/measure.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

#define MOST_SEGMENTS 6
#define MOST_GROUPS 8
#define MOST_TYPES 2
#define WAYS 10000

struct random_model {
	struct placement_model model;
	struct stretch_segment segments[MOST_SEGMENTS];
	struct placement_type types[MOST_TYPES];
	struct placement_group groups[MOST_GROUPS];
	int64_t weights[MOST_GROUPS][MOST_SEGMENTS];
	struct limit limits[3];
	struct standard standard;
	struct plan plan;
};

static uint64_t random_state = 20240229;

static int64_t random_below(int64_t limit)
{
	// xorshift64 (G. Marsaglia, "Xorshift RNGs", Journal of Statistical Software 8(14), 2003).
	random_state ^= random_state << 13;
	random_state ^= random_state >> 7;
	random_state ^= random_state << 17;
	return (int64_t)((random_state >> 16) % (uint64_t)limit);
}

static const enum limit_item random_items[] = {ITEM_SYNC_WIDTH, ITEM_BURST_LENGTH, ITEM_BURST_LENGTH_CYCLES};

static void put_limits(struct random_model *random)
{
	for (size_t index = 0; index < COUNT_OF(random->limits); index++) {
		const int64_t low = random_below(12), range = random_below(8), kind = random_below(5);
		struct limit *limit = &random->limits[index];
		*limit = (struct limit){.item = random_items[index], .grade = GRADE_MONITOR, .has_low = kind != 0, .has_high = kind != 1,
		                        .nominal = FRACTION_ZERO, .low = FRACTION_ZERO, .high = FRACTION_ZERO};
		const int64_t unit = limit->item == ITEM_BURST_LENGTH_CYCLES ? 4 : 1000000;
		assert_true(fraction_make(low * 3, unit, &limit->low) && fraction_make((low + range) * 3, unit, &limit->high));
		if (kind == 2)
			limit->high = limit->low;
	}
	random->standard = (struct standard){.name = "random", .limits = random->limits, .limit_count = COUNT_OF(random->limits)};
}

static void put_types(struct random_model *random)
{
	random->model.placed_count = 1 + (size_t)random_below(MOST_TYPES);
	for (size_t type = 0; type < random->model.placed_count; type++) {
		struct placement_type *placed = &random->types[type];
		placed->type = type;
		placed->first = random->model.segment_count;
		uint32_t capacity = 0;
		for (int64_t count = 1 + random_below(3); count > 0; count--) {
			struct stretch_segment *segment = &random->segments[random->model.segment_count++];
			*segment = (struct stretch_segment){type, NULL, 1 + (uint32_t)random_below(3)};
			capacity += segment->capacity;
		}
		placed->end = random->model.segment_count;
		placed->cells = 1 + (uint32_t)random_below(capacity < 4 ? capacity : 4);
	}
}

static void put_groups(struct random_model *random)
{
	for (size_t item = 0; item < COUNT_OF(random_items); item++)
		for (int64_t count = random_below(3); count > 0; count--) {
			const size_t index = random->model.group_count++;
			struct placement_group *group = &random->groups[index];
			*group = (struct placement_group){random_items[item], 6 * random_below(15) - 6, random->weights[index], false};
			const int64_t only = random_below(MOST_TYPES); // an item is of one line type, or of all
			for (size_t segment = 0; segment < random->model.segment_count; segment++)
				random->weights[index][segment] = 6 * (random_below(4) == 0 ? 2 : random_below(2)) *
				                                  (random_below(3) == 0 || (int64_t)random->segments[segment].type == only);
			for (size_t type = 0; type < random->model.placed_count; type++)
				for (size_t segment = random->types[type].first; segment < random->types[type].end; segment++)
					group->varies = group->varies || group->weights[segment] != group->weights[random->types[type].first];
		}
}

static void make_model(struct random_model *random, struct arena *arena)
{
	*random = (struct random_model){.model.arena = arena};
	for (size_t index = 0; index < COUNT_OF(random->limits); index++)
		random->limits[index].low = random->limits[index].high = random->limits[index].nominal = FRACTION_ZERO;
	put_limits(random);
	put_types(random);
	put_groups(random);
	random->plan.standard = &random->standard;
	random->plan.grade = GRADE_MONITOR;
	random->plan.clock = (struct clock){.master_hz = {1000000, 1}, .has_accuracy = random_below(2) == 0, .accuracy_ppm = {random_below(2) * 20000, 1},
	                                    .cell_ticks = 9, .stretch_ticks = 3, .has_subcarrier = true, .subcarrier_hz = {250000, 1}};
	random->model.plan = &random->plan;
	random->model.segments = random->segments;
	random->model.placed = random->types;
	random->model.groups = random->groups;
}

// What the limits make of one way, by the definition: an item is kept if it is in all lines; of what is kept and moves, the smallest share.
static struct placement judge_way(const struct random_model *random, const uint32_t *counts)
{
	struct placement found = {.counts = counts, .share = FRACTION_ZERO};
	for (size_t item = 0; item < COUNT_OF(random_items); item++) {
		bool seen = false, kept = true, has_share = false;
		struct fraction share = FRACTION_ZERO;
		for (size_t index = 0; index < random->model.group_count; index++) {
			const struct placement_group *group = &random->groups[index];
			int64_t raw = group->raw;
			struct interval values;
			if (group->item != random_items[item])
				continue;
			for (size_t segment = 0; segment < random->model.segment_count; segment++)
				raw += counts[segment] * group->weights[segment];
			assert_true(measured_value(&random->plan.clock, group->item, raw, &values.low));
			values.high = values.low;
			if (random->plan.clock.has_accuracy)
				assert_true(interval_widen(&values, limit_item_facts(group->item)->dimension, random->plan.clock.accuracy_ppm));
			const struct judgement judgement = limit_judge(&random->limits[item], values);
			seen = true;
			kept = kept && judgement.kept;
			if (!judgement.has_share || !group->varies)
				continue;
			if (!has_share || fraction_compare(judgement.share, share) < 0)
				share = judgement.share;
			has_share = true;
		}
		found.kept += seen && kept;
		if (seen && kept && has_share && (!found.has_share || fraction_compare(share, found.share) < 0)) {
			found.share = share;
			found.has_share = true;
		}
	}
	return found;
}

static bool fits(const struct random_model *random, const uint32_t *counts)
{
	for (size_t type = 0; type < random->model.placed_count; type++) {
		uint32_t cells = 0;
		for (size_t segment = random->types[type].first; segment < random->types[type].end; segment++)
			cells += counts[segment];
		if (cells != random->types[type].cells)
			return false;
	}
	return true;
}

// The next way of all, from the left and fullest first. False after the last.
static bool next_way(const struct random_model *random, uint32_t *counts)
{
	for (size_t segment = random->model.segment_count; segment-- > 0;) {
		if (counts[segment] > 0) {
			counts[segment]--;
			return true;
		}
		counts[segment] = random->segments[segment].capacity;
	}
	return false;
}

static bool better(const struct placement *left, const struct placement *right)
{
	if (left->kept != right->kept)
		return left->kept > right->kept;
	if (left->has_share != right->has_share)
		return left->has_share;
	return left->has_share && fraction_compare(left->share, right->share) > 0;
}

static void assert_same(const struct random_model *random, const struct placement *found, const struct placement *wanted)
{
	for (size_t segment = 0; segment < random->model.segment_count; segment++)
		assert_int_equal(found->counts[segment], wanted->counts[segment]);
	assert_int_equal(found->kept, wanted->kept);
	assert_int_equal(found->has_share, wanted->has_share);
	if (wanted->has_share)
		assert_int_equal(fraction_compare(found->share, wanted->share), 0);
}

static void the_search_is_exact(void **state)
{
	(void)state;
	unsigned not_leftmost = 0, with_second = 0, judged = 0;
	for (unsigned way = 0; way < WAYS; way++) {
		struct arena *arena = arena_create();
		struct random_model random;
		make_model(&random, arena);
		uint32_t counts[MOST_SEGMENTS], best_counts[MOST_SEGMENTS], second_counts[MOST_SEGMENTS], first_counts[MOST_SEGMENTS];
		struct placement best = {.share = FRACTION_ZERO}, second = {.share = FRACTION_ZERO};
		size_t ways = 0;
		for (size_t segment = 0; segment < random.model.segment_count; segment++)
			counts[segment] = random.segments[segment].capacity;
		do {
			if (!fits(&random, counts))
				continue;
			struct placement found = judge_way(&random, counts);
			if (ways++ == 0)
				memcpy(first_counts, counts, sizeof counts);
			if (ways == 1 || better(&found, &best)) {
				memcpy(second_counts, best_counts, sizeof counts);
				second = best;
				memcpy(best_counts, counts, sizeof counts);
				best = found;
			} else if (ways == 2 || better(&found, &second)) {
				memcpy(second_counts, counts, sizeof counts);
				second = found;
			}
		} while (next_way(&random, counts));
		struct placements placements = {.judged = false, .best.share = FRACTION_ZERO, .second.share = FRACTION_ZERO};
		best.counts = best_counts;
		second.counts = second_counts;
		assert_true(placement_search(&random.model, &placements));
		assert_int_equal(placements.judged, random.model.group_count > 0);
		if (placements.judged) {
			judged++;
			assert_true(placements.exhausted);
			assert_same(&random, &placements.best, &best);
			assert_int_equal(placements.has_second, ways > 1);
			if (ways > 1)
				assert_same(&random, &placements.second, &second);
			with_second += ways > 1;
			not_leftmost += memcmp(best_counts, first_counts, random.model.segment_count * sizeof *counts) != 0;
		}
		arena_destroy(arena);
	}
	assert_true(judged > WAYS * 3 / 4);
	assert_true(with_second > judged / 2);
	if (not_leftmost <= with_second / 5)
		fail_msg("of %u ways only %u are not leftmost", with_second, not_leftmost);
}

// What would have to be judged for each of two million cells that are placed is not.
static void what_has_too_many_values(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	struct random_model random;
	make_model(&random, arena);
	random.segments[0] = random.segments[1] = (struct stretch_segment){0, NULL, 2000000};
	random.types[0] = (struct placement_type){0, 0, 2, 2000000};
	random.weights[0][0] = 6;
	random.weights[0][1] = 0;
	random.groups[0] = (struct placement_group){ITEM_SYNC_WIDTH, 0, random.weights[0], true};
	random.model.segment_count = 2;
	random.model.placed_count = random.model.group_count = 1;
	struct placements placements = {.judged = false, .best.share = FRACTION_ZERO, .second.share = FRACTION_ZERO};
	assert_true(placement_search(&random.model, &placements));
	assert_true(placements.unweighed);
	assert_false(placements.judged);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(the_search_is_exact),
		cmocka_unit_test(what_has_too_many_values),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
