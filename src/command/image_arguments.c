#include <string.h>
#include <sys/stat.h>

#include "command/command.h"

bool is_folder(const char *path)
{
	struct stat status;
	return stat(path, &status) == 0 && S_ISDIR(status.st_mode);
}

bool exists(const char *path)
{
	struct stat status;
	return stat(path, &status) == 0;
}

// How many of a plan and its images, given as LABEL=FILE, are to be standard input.
static int count_standard_input(char **arguments, int count)
{
	int found = strcmp(arguments[0], "-") == 0;
	for (int index = 1; index < count; index++) {
		const char *equals = strchr(arguments[index], '=');
		found += equals != NULL && strcmp(equals, "=-") == 0;
	}
	return found;
}

int check_image_arguments(const char *command, const char *what, char **arguments, int count)
{
	if (count < 2)
		return usage_error(command, "wanted a %s and images, found %s", what, count == 0 ? "nothing" : "no images");
	const bool folder = is_folder(arguments[1]) || strchr(arguments[1], '=') == NULL;
	if (folder && count > 2)
		return usage_error(command, "wanted one folder, or LABEL=FILE for each chip, found \"%s\" and more", arguments[1]);
	// What cannot be found is the system's to say, when it is read.
	if (folder && exists(arguments[1]) && !is_folder(arguments[1]))
		return usage_error(command, "\"%s\" is not a folder; a single image is given as LABEL=FILE", arguments[1]);
	for (int index = 1; !folder && index < count; index++)
		if (strchr(arguments[index], '=') == NULL)
			return usage_error(command, "wanted LABEL=FILE, found \"%s\"", arguments[index]);
	if (count_standard_input(arguments, count) > 1)
		return usage_error(command, "only one of the %s and its images can be standard input", what);
	return EXIT_GOOD;
}

static bool read_files(scanlatch_images *images, char **arguments, int count, scanlatch_messages *messages)
{
	bool good = true;
	for (int index = 0; index < count; index++) {
		char *equals = strchr(arguments[index], '=');
		*equals = '\0';
		good = scanlatch_images_read_file(images, arguments[index], equals + 1, messages) && good;
		*equals = '=';
	}
	return good && scanlatch_images_complete(images, messages);
}

bool read_images(scanlatch_images *images, char **arguments, int count, scanlatch_messages *messages)
{
	if (is_folder(arguments[0]) || strchr(arguments[0], '=') == NULL)
		return scanlatch_images_read_folder(images, arguments[0], messages);
	return read_files(images, arguments, count, messages);
}
