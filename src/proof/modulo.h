// Sums and products of rests, exact. Internal to proof/.
#ifndef SCANLATCH_PROOF_MODULO_H
#define SCANLATCH_PROOF_MODULO_H

#include <stdint.h>

// Both take rests from 0 to modulus - 1, of a modulus above 0, and give one. They cannot fail.

// `right` may be the modulus itself.
static inline int64_t add_modulo(int64_t left, int64_t right, int64_t modulus)
{
	return left >= modulus - right ? left - (modulus - right) : left + right;
}

static inline int64_t multiply_modulo(int64_t left, int64_t right, int64_t modulus)
{
	__extension__ typedef unsigned __int128 wide;
	return (int64_t)((wide)left * (wide)right % (wide)modulus);
}

#endif
