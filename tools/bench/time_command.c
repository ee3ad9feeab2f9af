// Runs a command several times and prints the median of its times from start to exit, the median of the processor's
// time in it (a machine with other work to do lets the first grow, not the second), and the most memory that a run
// took.
//
//     time_command RUNS COMMAND [ARGUMENT …]     prints "SECONDS PROCESSOR_SECONDS KIBIBYTES"
//
// The command's standard output is thrown away. Fails if the command does.
#include <fcntl.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

#define RUNS_MOST 1000

static double now(void)
{
	struct timespec time;
	clock_gettime(CLOCK_MONOTONIC, &time);
	return (double)time.tv_sec + (double)time.tv_nsec * 1e-9;
}

static void run_child(char **command)
{
	const int nowhere = open("/dev/null", O_WRONLY);
	if (nowhere < 0 || dup2(nowhere, STDOUT_FILENO) < 0)
		_exit(126);
	execvp(command[0], command);
	perror(command[0]);
	_exit(127);
}

static double seconds_of(struct timeval time)
{
	return (double)time.tv_sec + (double)time.tv_usec * 1e-6;
}

// The processor's seconds in all children so far.
static double processor_now(void)
{
	struct rusage usage;
	getrusage(RUSAGE_CHILDREN, &usage);
	return seconds_of(usage.ru_utime) + seconds_of(usage.ru_stime);
}

// False if the command failed.
static bool run(char **command, double *seconds, double *processor)
{
	int status;
	const double start = now(), processor_start = processor_now();
	const pid_t child = fork();
	if (child == 0)
		run_child(command);
	if (child < 0 || waitpid(child, &status, 0) != child || status != 0)
		return false;
	*seconds = now() - start;
	*processor = processor_now() - processor_start;
	return true;
}

static int compare(const void *one, const void *other)
{
	const double first = *(const double *)one, second = *(const double *)other;
	return (first > second) - (first < second);
}

static double median(double *values, long count)
{
	qsort(values, (size_t)count, sizeof *values, compare);
	return values[count / 2];
}

int main(int count, char **arguments)
{
	double seconds[RUNS_MOST], processor[RUNS_MOST];
	const long runs = count > 2 ? strtol(arguments[1], NULL, 10) : 0;
	struct rusage usage;
	if (runs < 1 || runs > RUNS_MOST) {
		fprintf(stderr, "time_command: error: usage: time_command RUNS COMMAND [ARGUMENT ...]\n");
		return 2;
	}
	for (long index = 0; index < runs; index++) {
		if (run(arguments + 2, &seconds[index], &processor[index]))
			continue;
		fprintf(stderr, "time_command: error: %s failed\n", arguments[2]);
		return 1;
	}
	getrusage(RUSAGE_CHILDREN, &usage);
	printf("%.4f %.4f %ld\n", median(seconds, runs), median(processor, runs), usage.ru_maxrss);
	return 0;
}
