// The build turns catalogue files into arrays: they must hold the file's bytes, all of them and nothing else.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <stdlib.h>

#include "catalogue/data.h"

struct built_in {
	const char *path;
	const unsigned char *bytes;
	const size_t *length;
};

static const struct built_in files[] = {
	{"src/catalogue/parts.yaml", catalogue_parts, &catalogue_parts_length},
	{"src/catalogue/standards.yaml", catalogue_standards, &catalogue_standards_length},
	{"src/catalogue/crystals.yaml", catalogue_crystals, &catalogue_crystals_length},
};

static void arrays_are_the_bytes_of_their_files(void **state)
{
	(void)state;
	for (size_t index = 0; index < sizeof files / sizeof *files; index++) {
		const size_t wanted = *files[index].length;
		FILE *file = fopen(files[index].path, "rb");
		assert_non_null(file);
		unsigned char *bytes = malloc(wanted + 1);
		assert_non_null(bytes);
		// One byte more is asked for than there may be.
		const size_t length = fread(bytes, 1, wanted + 1, file);
		fclose(file);
		assert_int_equal(length, wanted);
		assert_memory_equal(bytes, files[index].bytes, length);
		free(bytes);
	}
}

static void a_nul_follows_the_bytes(void **state)
{
	(void)state;
	for (size_t index = 0; index < sizeof files / sizeof *files; index++) {
		assert_true(*files[index].length > 0);
		assert_int_equal(files[index].bytes[*files[index].length], 0);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(arrays_are_the_bytes_of_their_files),
		cmocka_unit_test(a_nul_follows_the_bytes),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
