/* SPDX-License-Identifier: MIT
 * Settings: a fault has its place; what was taken has keys, none twice, and reads back equal when written in
 * quotes. */
#include "db/read_ini.h"

#include "tests/fuzz/property.h"

#include <string.h>

static void check_entries(const struct ini *ini)
{
	for (size_t i = 0; i < ini->n; i++) {
		const struct ini_entry *a = &ini->entry[i];
		property(a->key[0] != '\0');
		property(a->line >= 1 && a->key_column >= 1 && a->value_column > a->key_column);
		for (size_t k = 0; k < i; k++)
			property(strcmp(a->section, ini->entry[k].section) != 0 ||
				 strcmp(a->key, ini->entry[k].key) != 0);
	}
}

/* A quoted value may be anything but its own two special signs, which get a backslash. */
static char *written(const struct ini *ini, size_t *n)
{
	size_t room = 1;
	for (size_t i = 0; i < ini->n; i++)
		room += strlen(ini->entry[i].section) + strlen(ini->entry[i].key) +
			2 * strlen(ini->entry[i].value) + 16;
	room += sizeof "# written";
	char *text = malloc(room), *p = text;
	property(text != NULL);
	/* a comment first: a key may begin like a packed file does */
	p += snprintf(p, room, "# written\n");
	const char *section = "";
	for (size_t i = 0; i < ini->n; i++) {
		if (strcmp(section, ini->entry[i].section) != 0)
			p += snprintf(p, (size_t)(text + room - p), "[%s]\n", ini->entry[i].section);
		section = ini->entry[i].section;
		p += snprintf(p, (size_t)(text + room - p), "%s = \"", ini->entry[i].key);
		for (const char *v = ini->entry[i].value; *v; v++) {
			if (*v == '"' || *v == '\\')
				*p++ = '\\';
			*p++ = *v;
		}
		p += snprintf(p, (size_t)(text + room - p), "\"\n");
	}
	*n = (size_t)(p - text);
	return text;
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
	if (size > 65536) /* the reader compares every key with every other: no settings file is that large */
		return 0;
	char *bytes = exact_copy(data, size);
	struct ini ini;
	struct err e = {.status = ST_OK};
	long line = 0, column = 0;
	if (ini_parse(bytes, size, &ini, &line, &column, &e) != ST_OK) {
		property(e.text[0] != '\0' && !strchr(e.text, '\n'));
		property(line >= 1 && column >= 1);
		free(bytes);
		return 0;
	}
	check_entries(&ini);
	size_t n;
	char *text = written(&ini, &n);
	struct ini again;
	property(ini_parse(text, n, &again, &line, &column, &e) == ST_OK);
	property(again.n == ini.n);
	for (size_t i = 0; i < ini.n; i++)
		property(strcmp(again.entry[i].key, ini.entry[i].key) == 0 &&
			 strcmp(again.entry[i].section, ini.entry[i].section) == 0 &&
			 strcmp(again.entry[i].value, ini.entry[i].value) == 0);
	ini_free(&again);
	free(text);
	ini_free(&ini);
	free(bytes);
	return 0;
}
