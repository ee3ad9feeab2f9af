// Which edge of a signal is which: worked out by hand.
#include "../layout/laid.h"

#include "base/arena.h"
#include "compare/edges.h"

#define LENGTH 1000
#define COUNT(list) (sizeof(list) / sizeof *(list))

static const struct signal_edge pulse[] = {{true, 100}, {false, 150}};

static const size_t *match(struct arena *arena, const struct signal_edge *old, size_t old_count, const struct signal_edge *now, size_t now_count)
{
	const size_t *now_of = NULL;
	assert_true(edges_match(arena, old, old_count, now, now_count, LENGTH, &now_of));
	return now_of;
}

static void a_pulse_that_moves_is_the_same(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	const struct signal_edge now[] = {{true, 130}, {false, 180}};
	const size_t *now_of = match(arena, pulse, 2, now, 2);
	assert_int_equal(now_of[0], 0);
	assert_int_equal(now_of[1], 1);
	arena_destroy(arena);
}

// Nearer means more: the pulse at 100 is the second of the new ones.
static void a_pulse_before_another_is_new(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	const struct signal_edge now[] = {{true, 10}, {false, 30}, {true, 104}, {false, 154}};
	const size_t *now_of = match(arena, pulse, 2, now, 4);
	assert_int_equal(now_of[0], 2);
	assert_int_equal(now_of[1], 3);
	const size_t *back = match(arena, now, 4, pulse, 2);
	assert_int_equal(back[0], SIZE_MAX);
	assert_int_equal(back[1], SIZE_MAX);
	assert_int_equal(back[2], 0);
	assert_int_equal(back[3], 1);
	arena_destroy(arena);
}

static void beyond_a_quarter_of_the_line_it_is_another(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	const struct signal_edge near[] = {{true, 350}, {false, 400}}, far[] = {{true, 351}, {false, 401}};
	assert_int_equal(match(arena, pulse, 2, near, 2)[0], 0);
	assert_int_equal(match(arena, pulse, 2, far, 2)[0], SIZE_MAX);
	assert_int_equal(match(arena, pulse, 2, far, 2)[1], SIZE_MAX);
	arena_destroy(arena);
}

static void directions_do_not_mix(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	const struct signal_edge now[] = {{false, 100}, {true, 150}};
	const size_t *now_of = match(arena, pulse, 2, now, 2);
	// One of the two can be 50 away, and not both.
	assert_true((now_of[0] == 1) != (now_of[1] == 0));
	arena_destroy(arena);
}

static void nothing_is_paired_with_nothing(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	assert_int_equal(match(arena, pulse, 2, NULL, 0)[0], SIZE_MAX);
	assert_non_null(match(arena, NULL, 0, pulse, 2));
	arena_destroy(arena);
}

// More pairs than are looked at: what is alike at both ends is paired all the same.
static void long_lists_are_paired_at_their_ends(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	static struct signal_edge old[4000], now[4002];
	for (int64_t edge = 0; edge < 4000; edge++)
		old[edge] = (struct signal_edge){edge % 2 == 0, edge * 10};
	for (int64_t edge = 0; edge < 4002; edge++)
		now[edge] = (struct signal_edge){edge % 2 == 0, edge < 10 ? edge * 10 : edge < 3992 ? edge * 10 - 5 : edge * 10 - 20};
	const size_t *now_of = match(arena, old, COUNT(old), now, COUNT(now));
	assert_int_equal(now_of[9], 9);
	assert_int_equal(now_of[2000], SIZE_MAX);
	assert_int_equal(now_of[3999], 4001);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_pulse_that_moves_is_the_same),
		cmocka_unit_test(a_pulse_before_another_is_new),
		cmocka_unit_test(beyond_a_quarter_of_the_line_it_is_another),
		cmocka_unit_test(directions_do_not_mix),
		cmocka_unit_test(nothing_is_paired_with_nothing),
		cmocka_unit_test(long_lists_are_paired_at_their_ends),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
