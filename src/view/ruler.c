#include "view/ruler.h"

int64_t ruler_step(int64_t length, int64_t most)
{
	int64_t step = 1;
	for (unsigned turn = 1; length / step > most; turn = (turn + 1) % 3)
		step = turn == 2 ? step / 2 * 5 : step * 2; // 1 2 5 10 20 50
	return step;
}
