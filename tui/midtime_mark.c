/* SPDX-License-Identifier: MIT */
#include "tui/midtime_mark.h"

#include "db/history.h"
#include "tui/run_write.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Verbs of the change sets. */
static const char *const marks[] = {"midtime exclude", "midtime include"};

static struct change change_of(const struct run *run, const char *verb, char utc[static UTC_TEXT_MAX])
{
	utc_text(&run->leap, wall_now(&run->wall), 0, utc);
	return (struct change){.utc = utc, .who = run->env->user, .verb = verb};
}

enum status midtime_mark(struct run *run, int64_t target_id, long epoch, enum event_kind kind, bool use,
			 char said[static MARKED_BYTES], struct err *e)
{
	struct store *store;
	char utc[UTC_TEXT_MAX];
	long n = 0;
	const struct change change = change_of(run, marks[use], utc);
	enum status s = run_write_open(run, &store, e);
	if (s != ST_OK)
		return s;
	s = store_begin(store, &change, e);
	if (s == ST_OK) {
		s = midtime_use(store, target_id, epoch, kind, use, &n, e);
		s = store_end(store, s, e);
	}
	run_write_close(run, store);
	if (s == ST_OK)
		snprintf(said, MARKED_BYTES, "%ld mid-time%s of epoch %ld %s; u takes it back.", n,
			 n == 1 ? "" : "s", epoch, use ? "included" : "excluded");
	return s;
}

/* The newest mark of the target that holds; NULL none. */
static const struct change_row *newest_mark(const struct change_row *row, size_t n)
{
	for (size_t i = 0; i < n; i++)
		if (!row[i].undone &&
		    (strcmp(row[i].verb, marks[0]) == 0 || strcmp(row[i].verb, marks[1]) == 0))
			return &row[i];
	return NULL;
}

enum status midtime_mark_undo(struct run *run, int64_t target_id, char said[static MARKED_BYTES],
			      struct err *e)
{
	struct store *store;
	struct change_row *row = NULL;
	char utc[UTC_TEXT_MAX];
	size_t n = 0;
	int64_t undone;
	const struct change change = change_of(run, "undo", utc);
	enum status s = run_write_open(run, &store, e);
	if (s != ST_OK)
		return s;
	s = history_list(store, target_id, &row, &n, e);
	const struct change_row *newest = s == ST_OK ? newest_mark(row, n) : NULL;
	if (s == ST_OK)
		s = newest
			? history_undo(store, newest->id, &change, &undone, e)
			: err_set(
			      e, ST_ABSENT,
			      "no mid-time of this target was excluded or included that could be taken back");
	if (s == ST_OK)
		snprintf(said, MARKED_BYTES, "Taken back: change %lld, %.40s (%.60s).", (long long)undone,
			 newest->verb, newest->what);
	free(row);
	run_write_close(run, store);
	return s;
}
