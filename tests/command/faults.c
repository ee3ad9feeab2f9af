// Loaded before the C library by faults.sh: lets one allocation fail, or makes fsync wait, so that what follows can be watched.
#define _GNU_SOURCE
#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <unistd.h>

extern void *__libc_malloc(size_t size);
extern void *__libc_calloc(size_t count, size_t size);
extern void *__libc_realloc(void *memory, size_t size);

void *malloc(size_t size);
void *calloc(size_t count, size_t size);
void *realloc(void *memory, size_t size);
int fdatasync(int descriptor);
int fsync(int descriptor);

static long allocations;

// The number that an environment variable holds; 0 if it is not set.
static long wanted(const char *name)
{
	const char *value = getenv(name);
	return value != NULL ? atol(value) : 0;
}

static int fails(void)
{
	if (++allocations != wanted("FAULTS_ALLOCATION"))
		return 0;
	errno = ENOMEM;
	return 1;
}

void *malloc(size_t size)
{
	return fails() ? NULL : __libc_malloc(size);
}

void *calloc(size_t count, size_t size)
{
	return fails() ? NULL : __libc_calloc(count, size);
}

void *realloc(void *memory, size_t size)
{
	return fails() ? NULL : __libc_realloc(memory, size);
}

// Says that it waits by making a file, and waits until that is gone.
int fsync(int descriptor)
{
	const char *marker = getenv("FAULTS_WAIT");
	FILE *file = marker != NULL ? fopen(marker, "w") : NULL;
	if (file != NULL) {
		fclose(file);
		for (int tries = 0; tries < 1000 && access(marker, F_OK) == 0; tries++)
			usleep(10000);
	}
	return fdatasync(descriptor);
}

__attribute__((destructor)) static void report(void)
{
	const char *path = getenv("FAULTS_COUNT");
	FILE *file = path != NULL ? fopen(path, "w") : NULL;
	if (file == NULL)
		return;
	fprintf(file, "%ld\n", allocations);
	fclose(file);
}
