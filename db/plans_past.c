/* SPDX-License-Identifier: MIT
 * What the plans of a night have been through. */
#include "db/plans.h"

#include "db/store_parts.h"

#include <stdio.h>
#include <stdlib.h>

static enum status revisions(struct store *s, const struct cell keys[3], struct plan_past *out, struct err *e)
{
	const enum sql_id id = SQL_PLAN_REVISIONS;
	bool row = false;
	enum status st = cells_bind(s->stmt[id], 1, keys, 3, e);
	if (st == ST_OK)
		st = sql_step(s, id, &row, e);
	if (st == ST_OK && row) {
		const unsigned char *utc = sqlite3_column_text(s->stmt[id], 1);
		out->revisions = sqlite3_column_int64(s->stmt[id], 0);
		snprintf(out->revised_utc, sizeof out->revised_utc, "%s", utc ? (const char *)utc : "");
		out->kept = sqlite3_column_int(s->stmt[id], 2) != 0;
	}
	sql_reset(s, id);
	return st;
}

static enum status kept_editions(struct store *s, const struct cell keys[3], struct plan_past *out,
				 struct err *e)
{
	const enum sql_id id = SQL_PLAN_KEPT_EDITIONS;
	size_t room = 0;
	bool row = false;
	enum status st = cells_bind(s->stmt[id], 1, keys, 3, e);
	while (st == ST_OK && (st = sql_step(s, id, &row, e)) == ST_OK && row) {
		if (out->n == room) {
			const size_t more = 2 * room + 8;
			struct plan_edition_id *larger = realloc(out->was_kept, more * sizeof *larger);
			if (!larger) {
				st = err_set(e, ST_MEMORY, "database: no memory");
				break;
			}
			out->was_kept = larger;
			room = more;
		}
		out->was_kept[out->n++] =
		    (struct plan_edition_id){.plan_id = sqlite3_column_int64(s->stmt[id], 0),
					     .edition = sqlite3_column_int(s->stmt[id], 1)};
	}
	sql_reset(s, id);
	return st;
}

enum status plan_past_load(struct store *s, int64_t site_id, int64_t telescope_id, int32_t night_mjd,
			   struct plan_past *out, struct err *e)
{
	const struct cell keys[] = {cell_int(site_id), cell_int(night_mjd), cell_int(telescope_id)};
	*out = (struct plan_past){.n = 0};
	enum status st = revisions(s, keys, out, e);
	if (st == ST_OK)
		st = kept_editions(s, keys, out, e);
	if (st != ST_OK)
		plan_past_free(out);
	return st;
}

void plan_past_free(struct plan_past *past)
{
	free(past->was_kept);
	*past = (struct plan_past){.n = 0};
}
