/* SPDX-License-Identifier: MIT
 * Measured mid-times of a target. Append-only: excluding one writes a new mark, never changes a time. */
#ifndef WANE_DB_MIDTIMES_H
#define WANE_DB_MIDTIMES_H

#include "db/store.h"
#include "ephem/geometry.h"
#include "ephem/standard.h"

#include <stdbool.h>
#include <stddef.h>

struct midtime_row {
	int64_t id;
	long epoch;
	enum event_kind kind;
	const char *mid_text;    /* as read */
	struct jd2 mid;          /* as given, offset not added */
	const char *time_scale;
	struct standard standard;
	double err_d;
	const char *source;
	bool used;
	const char *entered_utc, *who;
};
struct midtime_list {
	size_t n;
	struct midtime_row *row; /* by epoch, kind, time */
	char *block;
	size_t n_bad;            /* times left out because the checksum of their row is wrong */
	char bad[96];            /* one line that names the first of them; "" none */
};
MUST_USE enum status midtimes_load(struct store *s, int64_t target_id, struct midtime_list *out, struct err *e);
/* Of all targets in one query, for drift: the list is by target id, then as above; target_id[n] beside it. */
MUST_USE enum status midtimes_load_all(struct store *s, struct midtime_list *out, int64_t **target_id, struct err *e);
void midtime_list_free(struct midtime_list *list);

/* Inside a change set. Of row: epoch, kind, mid_text, mid, time_scale, err_d, source, used; the standard is read from time_scale.
 * The same (epoch, kind, time and standard, error) twice is stored once: *added false; one that was removed comes back. ST_ABSENT no
 * such target; ST_RANGE, ST_SYNTAX as for a table. */
MUST_USE enum status midtime_add(struct store *s, int64_t target_id, const struct midtime_row *row, bool *added, struct err *e);
/* Marks every time of an epoch (and kind) as used or not; *n how many changed. ST_ABSENT when there is none. */
MUST_USE enum status midtime_use(struct store *s, int64_t target_id, long epoch, enum event_kind kind, bool used, long *n, struct err *e);
/* Takes times of an epoch out of the lists (kept in history). */
MUST_USE enum status midtime_remove(struct store *s, int64_t target_id, long epoch, enum event_kind kind, long *n, struct err *e);

/* A mid-time table: `mid_jd, err_d` and where known `epoch, time_scale, kind, source, used`. Rows of texts, read and checked without the store; say as
 * in import.h. E + 0.5 is read as the occultation after transit E. Rows without an epoch have has_epoch false: the caller counts.
 * ST_SYNTAX when the file can't be read or a row was refused (out->refused > 0): out has no rows, each fault was said with its place, and
 * *e sums up. The same row twice in a file is said as a warning and kept: midtime_add stores it once. default_scale "": not said. */
struct midtime_text {
	struct midtime_row row;
	bool has_epoch;
	long line, column; /* of mid_jd */
};
struct midtime_table {
	size_t n;
	struct midtime_text *row;
	char *block;
	long read;    /* rows of the file, kept on a failure too */
	long refused; /* rows refused; any: the whole table is to be refused */
};
struct import_message;
MUST_USE enum status midtime_table_read(const char *data, size_t n, const char *default_scale, struct midtime_table *out,
					void (*say)(void *ctx, const struct import_message *m), void *ctx, struct err *e);
void midtime_table_free(struct midtime_table *t);

#endif
