/* SPDX-License-Identifier: MIT
 * A target table of any bytes into an empty store in memory: rows are counted once, a second import of the
 * same bytes changes nothing, and the store is sound afterwards. */
#include "db/import.h"
#include "db/targets.h"

#include "tests/fuzz/property.h"

#include <string.h>

static void said(void *ctx, const struct import_message *m)
{
	long *count = ctx;
	property(m->line >= 1 && m->text[0] != '\0' && !strpbrk(m->text, "\n\x1b") &&
		 !strpbrk(m->got, "\n\x1b"));
	++*count;
}

static void finding(void *ctx, const char *line)
{
	(void)ctx;
	(void)line;
}

/* The same bytes into a real store, twice. */
static void stored(const char *bytes, size_t size)
{
	struct store *s;
	struct err e = {.status = ST_OK};
	property(store_open("", STORE_MEMORY, &s, &e) == ST_OK);
	struct import_options o = {
	    .change = {.utc = "2026-04-22T00:00:00Z", .who = "fuzz", .verb = "import"}};
	struct import_report first, second;
	long messages = 0;
	if (import_targets(s, bytes, size, &o, &first, said, &messages, &e) == ST_OK) {
		property(first.read == first.added + first.changed + first.same + first.refused);
		property(messages >= first.refused);
		property(import_targets(s, bytes, size, &o, &second, said, &messages, &e) == ST_OK);
		property(second.read == first.read && second.refused == first.refused && second.added == 0);
		struct target_list list;
		property(targets_load(s, &list, &e) == ST_OK);
		property(list.n == (size_t)first.added);
		target_list_free(&list);
		int faults = 0;
		property(store_check(s, finding, NULL, &faults, &e) == ST_OK && faults == 0);
	} else {
		property(e.text[0] != '\0');
	}
	store_close(s);
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
	if (size > 16384)
		return 0;
	char *bytes = exact_copy(data, size);
	struct import_options o = {
	    .dry_run = true, .change = {.utc = "2026-04-22T00:00:00Z", .who = "fuzz", .verb = "import"}};
	struct import_report report;
	struct err e = {.status = ST_OK};
	long messages = 0;
	if (import_targets(NULL, bytes, size, &o, &report, said, &messages, &e) == ST_OK) {
		property(report.read == report.added + report.changed + report.same + report.refused);
		property(messages >= report.refused);
	} else {
		property(e.text[0] != '\0');
	}
	unsigned sum = 0;
	for (size_t i = 0; i < size; i++)
		sum = 31 * sum + data[i];
	if (sum % 32 == 0) /* making a store takes a hundred times as long as reading a table */
		stored(bytes, size);
	free(bytes);
	return 0;
}
