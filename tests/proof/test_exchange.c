// Images that are not where they belong.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

static const struct counterexample *failed(const struct proofs *proofs)
{
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_FAIL);
	return &proofs->proof[PROOF_CLOSURE].counterexample;
}

// The small board's word over three chips of one part: next 0 and 1 on U7, next 2 and sync on U8, blank on U9.
static struct by_hand *three_chips(void)
{
	struct by_hand *hand = small_board();
	struct chip *first = add_chip(hand, "U7"), *second = add_chip(hand, "U8"), *third = add_chip(hand, "U9");
	first->data[0] = (struct data_wire){DATA_NEXT, 0};
	first->data[5] = (struct data_wire){DATA_NEXT, 1};
	second->data[0] = (struct data_wire){DATA_NEXT, 2};
	second->data[5] = (struct data_wire){DATA_SIGNAL, 0};
	third->data[0] = (struct data_wire){DATA_SIGNAL, 1};
	burn_small(hand, (uint32_t[]){1, 0, 2, 3, 4});
	return hand;
}

static void exchange(struct by_hand *hand, size_t left, size_t right)
{
	const struct image image = hand->images[left];
	hand->images[left] = hand->images[right];
	hand->images[right] = image;
}

static void exchanged_images(void **test)
{
	(void)test;
	struct by_hand *hand = three_chips();
	exchange(hand, 0, 1);
	struct proofs *proofs = prove(hand, 1);
	assert_string_equal(failed(proofs)->hint, "with U7 and U8 exchanged the frame closes as planned");
	proofs_destroy(proofs);
	// The start is found with the images exchanged back.
	proofs = proofs_run(&hand->timeline, hand->images, false, 0);
	assert_non_null(proofs);
	assert_string_equal(failed(proofs)->hint, "with U7 and U8 exchanged the frame closes as planned");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Of another part, a chip does not go into the socket, or the images differ in size.
static void chips_of_two_parts(void **test)
{
	(void)test;
	struct by_hand *hand = three_chips();
	const struct part other = hand->part;
	hand->chips[1].part = &other;
	exchange(hand, 0, 1);
	struct proofs *proofs = prove(hand, 1);
	assert_null(failed(proofs)->hint);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Two chips exchanged, and a wrong bit besides: no exchange mends that. Five cells are too few to doubt the plan.
static void exchanged_and_wrong(void **test)
{
	(void)test;
	struct by_hand *hand = three_chips();
	burn(hand, 3, 4, 0);
	exchange(hand, 0, 1);
	struct proofs *proofs = prove(hand, 1);
	assert_null(failed(proofs)->hint);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Codes are read out of the images: the gate is asserted in cells 1 and 2 of four, states 0, 2, 6, 4, and hangs on the
// upper two bits.
static void exchanged_codes(void **test)
{
	(void)test;
	static const uint32_t states[] = {0, 2, 6, 4};
	struct by_hand *hand = by_hand_create(3);
	uint64_t gate = add_decoded(hand, "gate", add_field(hand, "top", 2, 1), NULL, 0);
	size_t line = add_line(hand, "line", 4, (uint64_t[]){0, gate, gate, 0});
	set_frame(hand, 1, &line);
	struct chip *first = add_chip(hand, "U7"), *second = add_chip(hand, "U8");
	first->data[0] = (struct data_wire){DATA_NEXT, 0};
	first->data[1] = (struct data_wire){DATA_NEXT, 1};
	second->data[0] = (struct data_wire){DATA_NEXT, 2};
	for (uint32_t state = 0; state < 8; state++)
		burn(hand, state, states[0], 0);
	for (uint32_t cell = 0; cell < 4; cell++)
		burn(hand, states[cell], states[(cell + 1) % 4], 0);
	exchange(hand, 0, 1);
	struct proofs *proofs = prove(hand, 0);
	assert_string_equal(failed(proofs)->hint, "with U7 and U8 exchanged the frame closes as planned");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Twelve cells with sync in every other one. In the images it is in the others, and they have eleven cells: nine and
// more are wrong.
static void images_of_another_plan(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(4);
	const uint64_t sync = add_signal(hand, "sync", false);
	uint64_t asserted[12] = {0};
	for (uint32_t cell = 0; cell < 12; cell += 2)
		asserted[cell] = sync;
	size_t line = add_line(hand, "line", 12, asserted);
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t cell = 0; cell < 11; cell++)
		burn(hand, cell, (cell + 1) % 11, cell % 2 == 0 ? sync : 0);
	struct proofs *proofs = prove(hand, 0);
	assert_string_equal(failed(proofs)->hint, "are these images of this plan? compare the CRC-32 in its manifest");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(exchanged_images),
		cmocka_unit_test(chips_of_two_parts),
		cmocka_unit_test(exchanged_and_wrong),
		cmocka_unit_test(exchanged_codes),
		cmocka_unit_test(images_of_another_plan),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
