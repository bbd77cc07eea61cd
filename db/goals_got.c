/* SPDX-License-Identifier: MIT
 * What was got of goals, from the marks of stored plans. */
#include "db/goals.h"

#include "db/goal_rows.h"
#include "db/plan_rows.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Where the rows of a line begin: mark, window, item, plan, each with its checksum, then the telescope's
 * band. */
enum {
	MARK_FROM = 0,
	WINDOW_FROM = MARK_FROM + PLAN_MARK_CELLS + 1,
	ITEM_FROM = WINDOW_FROM + WINDOW_CELLS + 1,
	PLAN_FROM = ITEM_FROM + ITEM_CELLS + 1,
	BAND_FROM = PLAN_FROM + PLAN_CELLS + 1
};

/* Which event of which telescope a line is about; lines come in its order. */
struct event_key {
	int64_t target_id, epoch, site_id, telescope_id;
	bool occultation;
};

static bool same_event(const struct event_key *a, const struct event_key *b)
{
	return a->target_id == b->target_id && a->epoch == b->epoch && a->site_id == b->site_id &&
	       a->telescope_id == b->telescope_id && a->occultation == b->occultation;
}

struct line {
	struct event_key key;
	struct goal_got got;
};

/* False: a checksum is wrong. */
static bool read_line(struct store *s, struct line *out)
{
	struct cell mark[ROW_CELLS_MAX], window[ROW_CELLS_MAX], item[ROW_CELLS_MAX], plan[ROW_CELLS_MAX];
	const enum sql_id id = SQL_GOAL_GOT;
	if (!row_read(s, id, MARK_FROM, &plan_mark_rows, mark) ||
	    !row_read(s, id, WINDOW_FROM, &window_rows, window) ||
	    !row_read(s, id, ITEM_FROM, &item_rows, item) || !row_read(s, id, PLAN_FROM, &plan_rows, plan))
		return false;
	const char *variant = window[WINDOW_VARIANT].u.text;
	const char *band = (const char *)sqlite3_column_text(s->stmt[id], BAND_FROM);
	const bool both = strcmp(variant, "whole") == 0 || strcmp(variant, "short") == 0;
	out->key = (struct event_key){
	    .target_id = window[WINDOW_TARGET_ID].u.i,
	    .epoch = window[WINDOW_EPOCH].u.i,
	    .site_id = plan[PLAN_SITE].u.i,
	    .telescope_id = plan[PLAN_TELESCOPE].type == CELL_INT ? plan[PLAN_TELESCOPE].u.i : 0,
	    .occultation = strcmp(window[WINDOW_KIND].u.text, "occultation") == 0,
	};
	out->got = (struct goal_got){
	    .target_id = out->key.target_id,
	    .whole = both && strcmp(mark[PLAN_MARK_STATE].u.text, "done") == 0,
	    .band = band_parse(band),
	    .night_mjd = (int32_t)plan[PLAN_NIGHT].u.i,
	};
	snprintf(out->got.end_utc, sizeof out->got.end_utc, "%s", item[ITEM_END].u.text);
	return true;
}

static bool keep(struct goal_got_list *out, size_t *room, const struct goal_got *got)
{
	if (out->n == *room) {
		size_t more = *room ? 2 * *room : 64;
		struct goal_got *larger = realloc(out->got, more * sizeof *larger);
		if (!larger)
			return false;
		out->got = larger;
		*room = more;
	}
	out->got[out->n++] = *got;
	return true;
}

enum status goals_got_load(struct store *s, struct goal_got_list *out, struct err *e)
{
	struct line line, before = {0};
	size_t room = 0;
	bool row = false;
	enum status st = ST_OK;
	*out = (struct goal_got_list){0};
	while (st == ST_OK && (st = sql_step(s, SQL_GOAL_GOT, &row, e)) == ST_OK && row) {
		if (!read_line(s, &line)) {
			if (out->n_bad++ == 0)
				snprintf(
				    out->bad, sizeof out->bad,
				    "the checksum of a plan's item or its mark %lld is wrong: it counts for "
				    "no goal; see `wane check`",
				    (long long)sqlite3_column_int64(s->stmt[SQL_GOAL_GOT], 0));
		} else if (out->n > 0 && same_event(&line.key, &before.key)) {
			/* another draft's word for it: the better one holds */
			if (line.got.whole && !out->got[out->n - 1].whole)
				out->got[out->n - 1] = line.got;
		} else if (!keep(out, &room, &line.got)) {
			st = err_set(e, ST_MEMORY, "database: no memory");
		} else {
			before = line;
		}
	}
	sql_reset(s, SQL_GOAL_GOT);
	if (st != ST_OK)
		goal_got_list_free(out);
	return st;
}

void goal_got_list_free(struct goal_got_list *list)
{
	free(list->got);
	*list = (struct goal_got_list){0};
}

/* First of got[n] whose target's id is not below. */
static size_t first_of(const struct goal_got got[], size_t n, int64_t target_id)
{
	size_t from = 0, to = n;
	while (from < to) {
		size_t middle = from + (to - from) / 2;
		if (got[middle].target_id < target_id)
			from = middle + 1;
		else
			to = middle;
	}
	return from;
}

void goal_count(const struct goal_row *g, const struct goal_got got[], size_t n, int *whole, int *limb)
{
	const enum band_id band = band_parse(g->band);
	*whole = *limb = 0;
	for (size_t i = first_of(got, n, g->target_id); i < n && got[i].target_id == g->target_id; i++) {
		/* texts of the same form compare as their times do */
		if (strcmp(got[i].end_utc, g->since_utc) <= 0)
			continue;
		if (g->until_mjd != 0 && got[i].night_mjd > g->until_mjd)
			continue;
		if (band != BAND_NONE && got[i].band != BAND_NONE && got[i].band != band)
			continue;
		if (got[i].whole)
			(*whole)++;
		else
			(*limb)++;
	}
}

void goal_left(const struct goal_row *g, int got_whole, int got_limb, int *whole, int *limb)
{
	const int surplus = got_whole > g->whole ? got_whole - g->whole : 0;
	*whole = got_whole < g->whole ? g->whole - got_whole : 0;
	*limb = g->limb - got_limb - surplus;
	if (*limb < 0)
		*limb = 0;
}
