// Prints the seconds that a plain dependent walk of 2^BITS steps takes.
//
//     plain_walk BITS
#include "walk.h"

int main(int count, char **arguments)
{
	const long bits = count == 2 ? strtol(arguments[1], NULL, 10) : 0;
	uint64_t seed = 20240229;
	if (bits < 1 || bits > 30) {
		fprintf(stderr, "plain_walk: error: usage: plain_walk BITS, from 1 to 30\n");
		return 2;
	}
	uint32_t *order = random_order(&seed, (uint32_t)1 << bits);
	printf("%.4f\n", best_walk(order, (uint32_t)1 << bits));
	free(order);
	return 0;
}
