#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "library/library.h"
#include "view/figures.h"

const char *scanlatch_version(void)
{
	return SCANLATCH_VERSION;
}

void scanlatch_free(char *string)
{
	free(string);
}

char *take_string(struct text *text)
{
	char *string = NULL;
	if (!text->failed)
		string = strdup(text_string(text));
	text_release(text);
	return string;
}

char *take_json(json_t *document)
{
	char *string = json_text(document);
	json_decref(document);
	return string;
}

scanlatch_messages *scanlatch_messages_create(void)
{
	scanlatch_messages *messages = malloc(sizeof *messages);
	if (messages == NULL)
		return NULL;
	messages->diagnostics = diagnostics_create();
	messages->names = arena_create();
	if (messages->diagnostics != NULL && messages->names != NULL)
		return messages;
	scanlatch_messages_destroy(messages);
	return NULL;
}

void scanlatch_messages_destroy(scanlatch_messages *messages)
{
	if (messages == NULL)
		return;
	diagnostics_destroy(messages->diagnostics);
	arena_destroy(messages->names);
	free(messages);
}

size_t scanlatch_messages_count(const scanlatch_messages *messages)
{
	return diagnostics_count(messages->diagnostics);
}

size_t scanlatch_messages_errors(const scanlatch_messages *messages)
{
	return diagnostics_error_count(messages->diagnostics);
}

bool scanlatch_messages_system(const scanlatch_messages *messages)
{
	return diagnostics_has_system_error(messages->diagnostics);
}

char *scanlatch_messages_text(const scanlatch_messages *messages, bool colour)
{
	struct text text = {0};
	diagnostics_print(messages->diagnostics, &text, colour);
	return take_string(&text);
}

const char *source_label(const char *file)
{
	return strcmp(file, "-") == 0 ? "standard input" : file[0] == '\0' ? "\"\"" : file;
}

const struct source *source_of_name(scanlatch_messages *messages, const char *file)
{
	const char *name = source_label(file);
	struct source *source = arena_alloc(messages->names, sizeof *source);
	if (source != NULL)
		source->name = arena_copy(messages->names, name, strlen(name));
	return source != NULL && source->name != NULL ? source : NULL;
}
