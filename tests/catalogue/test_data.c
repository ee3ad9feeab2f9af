// The build turns catalogue files into arrays: they must hold the file's bytes, all of them and nothing else.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <stdlib.h>

#include "catalogue/data.h"

static void parts_are_the_bytes_of_their_file(void **state)
{
	(void)state;
	FILE *file = fopen("src/catalogue/parts.yaml", "rb");
	assert_non_null(file);
	unsigned char *bytes = malloc(catalogue_parts_length + 1);
	assert_non_null(bytes);
	// One byte more is asked for than there may be.
	size_t length = fread(bytes, 1, catalogue_parts_length + 1, file);
	fclose(file);
	assert_int_equal(length, catalogue_parts_length);
	assert_memory_equal(bytes, catalogue_parts, length);
	free(bytes);
}

static void a_nul_follows_the_bytes(void **state)
{
	(void)state;
	assert_true(catalogue_parts_length > 0);
	assert_int_equal(catalogue_parts[catalogue_parts_length], 0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(parts_are_the_bytes_of_their_file),
		cmocka_unit_test(a_nul_follows_the_bytes),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
