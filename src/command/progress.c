#include <stdio.h>
#include <time.h>
#include <unistd.h>

#include "command/command.h"

// A thread of its own shows progress, so that the work itself stays free of clocks and terminals.
static void *show(void *context)
{
	struct progress *progress = context;
	struct timespec wake;
	unsigned halves = 0;
	clock_gettime(CLOCK_REALTIME, &wake);
	pthread_mutex_lock(&progress->lock);
	while (!progress->over) {
		wake.tv_nsec += 500000000;
		wake.tv_sec += wake.tv_nsec / 1000000000;
		wake.tv_nsec %= 1000000000;
		while (!progress->over && pthread_cond_timedwait(&progress->ended, &progress->lock, &wake) == 0)
			;
		if (!progress->over) {
			halves++;
			fprintf(stderr, "\r%s ... %u.%u s\033[K", progress->work, halves / 2, halves % 2 * 5);
		}
	}
	pthread_mutex_unlock(&progress->lock);
	if (halves > 0)
		fputs("\r\033[K", stderr);
	return NULL;
}

void progress_begin(struct progress *progress, const char *work)
{
	if (isatty(STDERR_FILENO) != 1)
		return;
	pthread_mutex_lock(&progress->lock);
	progress->work = work;
	pthread_mutex_unlock(&progress->lock);
	if (progress->running)
		return;
	progress->over = false;
	progress->running = pthread_create(&progress->thread, NULL, show, progress) == 0;
}

void progress_end(struct progress *progress)
{
	if (!progress->running)
		return;
	pthread_mutex_lock(&progress->lock);
	progress->over = true;
	pthread_cond_signal(&progress->ended);
	pthread_mutex_unlock(&progress->lock);
	pthread_join(progress->thread, NULL);
	progress->running = false;
}
