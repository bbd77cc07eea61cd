/* SPDX-License-Identifier: MIT */
#include "tests/support/observing_store.h"

#include "db/history.h"
#include "db/sites.h"
#include "db/store_parts.h"
#include "db/targets.h"
#include "tests/support/check.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

void must_at(const char *file, int line, enum status st, const struct err *e)
{
	if (st != ST_OK)
		check_fail_at(file, line, "status %d: %s", (int)st, e->text);
}

void change_begin(struct store *s, const char *verb)
{
	const struct change c = {"2026-04-22T03:00:00Z", "Ada", verb};
	struct err e = {0};
	must(store_begin(s, &c, &e), &e);
}

void change_commit(struct store *s)
{
	struct err e = {0};
	must(store_commit(s, &e), &e);
}

void observing_fill(struct store *s, int targets)
{
	struct err e = {0};
	struct site site = {
	    .name = "Tern Hill", .lat_deg = 38.62, .lon_east_deg = -109.36, .height_m = 2100, .zone = ""};
	change_begin(s, "import");
	must(site_put(s, &site, false, &e), &e);
	site.name = "Tern Cliff";
	must(site_put(s, &site, false, &e), &e);
	for (int i = 1; i <= targets; i++) {
		struct field_texts texts;
		enum put_result result;
		char name[24];
		for (int f = 0; f < FIELD_COUNT; f++)
			texts.text[f] = "";
		snprintf(name, sizeof name, "Tern %d b", i);
		texts.text[FIELD_AT_NAME] = name;
		texts.text[FIELD_AT_RA] = "187.5";
		texts.text[FIELD_AT_DEC] = "12.25";
		texts.text[FIELD_AT_T0] = "2459000.125";
		texts.text[FIELD_AT_SCALE] = "BJD_TDB";
		texts.text[FIELD_AT_PERIOD] = "3.5";
		must(target_put(s, &texts, false, &result, &e), &e);
	}
	change_commit(s);
}

struct store *observing_store(int targets)
{
	struct store *s;
	struct err e = {0};
	must(store_open(NULL, STORE_MEMORY, &s, &e), &e);
	observing_fill(s, targets);
	return s;
}

void change_behind(struct store *s, const char *sql)
{
	if (sqlite3_exec(s->db, sql, NULL, NULL, NULL) != SQLITE_OK)
		check_fail("%s: %s", sql, sqlite3_errmsg(s->db));
}

static void note_fault(void *ctx, const char *line)
{
	char *out = ctx;
	size_t used = strlen(out);
	snprintf(out + used, 4096 - used, "%s\n", line);
}

int check_faults(struct store *s, char says[4096])
{
	struct err e = {0};
	int faults = -1;
	says[0] = '\0';
	must(store_check(s, note_fault, says, &faults, &e), &e);
	return faults;
}

void newest_words(struct store *s, char out[200])
{
	struct change_row *rows;
	struct err e = {0};
	size_t n;
	must(history_list(s, 0, &rows, &n, &e), &e);
	assert_true(n > 0);
	memcpy(out, rows[0].what, 200);
	free(rows);
}

struct digest_text digest_now(struct store *s)
{
	struct digest_text d;
	struct err e = {0};
	must(store_digest(s, d.text, &e), &e);
	return d;
}

void small_plan_make(struct small_plan *p, const char *key, const char *utc)
{
	p->window = (struct plan_window_row){.target_id = 1,
					     .ephemeris_id = 1,
					     .target = "Tern 1 b",
					     .kind = KIND_TRANSIT,
					     .variant = "whole",
					     .figures = ""};
	p->item = (struct plan_item_row){.key = key,
					 .slew_by_utc = utc,
					 .start_utc = utc,
					 .latest_start_utc = "",
					 .end_utc = utc,
					 .n = 1,
					 .window = &p->window};
	p->plan = (struct plan_row){.site_id = 1,
				    .night_mjd = 61152,
				    .draft = "main",
				    .limits = "",
				    .leap_date = "",
				    .choices = "",
				    .left_out = "",
				    .n = 1,
				    .item = &p->item};
}
