#include <string.h>

#include "catalogue/catalogue.h"
#include "image/image.h"

// The first byte in the lower halves of a pin's blocks that differs from its twin in the upper half; SIZE_MAX if none does.
static size_t find_difference(const struct image *image, size_t half)
{
	for (size_t base = 0; base + 2 * half <= image->length; base += 2 * half) {
		if (memcmp(image->bytes + base, image->bytes + base + half, half) == 0)
			continue;
		size_t offset = 0;
		while (image->bytes[base + offset] == image->bytes[base + half + offset])
			offset++;
		return base + offset;
	}
	return SIZE_MAX;
}

// How many bytes differ so.
static size_t count_differences(const struct image *image, size_t half)
{
	size_t count = 0;
	for (size_t base = 0; base + 2 * half <= image->length; base += 2 * half)
		for (size_t offset = base; offset < base + half; offset++)
			count += image->bytes[offset] != image->bytes[offset + half];
	return count;
}

bool image_reads_open_pin(const struct chip *chip, const struct image *image, unsigned *pin, size_t *offset, size_t *count)
{
	for (unsigned index = 0; index < chip->part->address_pins; index++) {
		if (chip->address[index].kind != ADDRESS_OPEN)
			continue;
		const size_t half = ((size_t)1 << index) * (chip->part->data_pins / 8), found = find_difference(image, half);
		if (found == SIZE_MAX)
			continue;
		*pin = index;
		*offset = found;
		*count = count_differences(image, half);
		return true;
	}
	return false;
}
