// A plain walk through an array whose every step depends on the one before: what a proof over as many states is measured
// against. For the programs of this folder.
#ifndef SCANLATCH_BENCH_WALK_H
#define SCANLATCH_BENCH_WALK_H

#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

// A fixed sequence: Marsaglia's xorshift64 (2003), shifts 13, 7, 17.
static inline uint64_t random_next(uint64_t *seed)
{
	*seed ^= *seed << 13;
	*seed ^= *seed >> 7;
	*seed ^= *seed << 17;
	return *seed;
}

static inline uint32_t random_below(uint64_t *seed, uint32_t bound)
{
	return (uint32_t)((random_next(seed) >> 32) * bound >> 32);
}

// Processor time of this program: other load on the machine counts less.
static inline double now(void)
{
	struct timespec time;
	clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &time);
	return (double)time.tv_sec + (double)time.tv_nsec * 1e-9;
}

static inline void *need(void *memory)
{
	if (memory == NULL) {
		fprintf(stderr, "bench: error: memory is out\n");
		exit(3);
	}
	return memory;
}

// All states in random order (Fisher and Yates' shuffle), to be freed.
static inline uint32_t *random_order(uint64_t *seed, uint32_t states)
{
	uint32_t *order = need(malloc(states * sizeof *order));
	for (uint32_t index = 0; index < states; index++)
		order[index] = index;
	for (uint32_t index = states - 1; index > 0; index--) {
		uint32_t other = random_below(seed, index + 1), kept = order[index];
		order[index] = order[other];
		order[other] = kept;
	}
	return order;
}

// Seconds for one way around a random cycle of all states, in an array of its own.
static inline double plain_walk(const uint32_t *order, uint32_t states)
{
	uint32_t *next = need(malloc(states * sizeof *next));
	for (uint32_t index = 0; index < states; index++)
		next[order[index]] = order[(index + 1) % states];
	const double start = now();
	uint32_t state = 0;
	for (uint32_t step = 0; step < states; step++)
		state = next[state];
	const double seconds = now() - start;
	free(next);
	if (state != 0)
		exit(1);
	return seconds;
}

// The better of two.
static inline double best_walk(const uint32_t *order, uint32_t states)
{
	const double first = plain_walk(order, states), second = plain_walk(order, states);
	return first < second ? first : second;
}

#endif
