/* SPDX-License-Identifier: MIT */
#include "tui/zone.h"

#include "db/read_csv.h"
#include "tui/zone_rule.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum {
	HEADER_BYTES = 44,
	FILE_BYTES_MAX = 65536, /* the largest file of the 2025 database has 3.6 kB */
	TYPES_MAX = 256,
	DAY_S = 86400,
	UNIX_EPOCH_MJD = 40587,
	OFFSET_MIN_S = -89999, /* RFC 8536, 3.2: more than -25 h and less than 26 h */
	OFFSET_MAX_S = 93599
};

struct zone {
	size_t n_changes, n_types;
	int64_t *change;	/* [n_changes], rising */
	unsigned char *type_of; /* [n_changes]: what holds from that change on */
	struct zone_type type[TYPES_MAX];
	bool has_rule;
	struct zone_rule rule; /* after the last change */
};

/* --- reading --- */

/* One data block (RFC 8536, 3.1 and 3.2): its counts and where its parts lie. */
struct block {
	size_t n_isut, n_isstd, n_leap, n_changes, n_types, n_chars;
	size_t time_bytes; /* 4 in the first block, 8 in the second */
	const unsigned char *changes, *type_of, *types, *chars, *end;
};

static uint32_t big32(const unsigned char *p)
{
	return (uint32_t)p[0] << 24 | (uint32_t)p[1] << 16 | (uint32_t)p[2] << 8 | p[3];
}

static int64_t big_signed(const unsigned char *p, size_t bytes)
{
	if (bytes == 4)
		return (int32_t)big32(p);
	return (int64_t)((uint64_t)big32(p) << 32 | big32(p + 4));
}

static enum status block_open(const unsigned char *p, size_t left, size_t time_bytes, struct block *b,
			      struct err *e)
{
	if (left < HEADER_BYTES || memcmp(p, "TZif", 4) != 0)
		return err_set(e, ST_SYNTAX, "no zone file: TZif header expected");
	*b = (struct block){.time_bytes = time_bytes};
	size_t *const count[] = {&b->n_isut,	&b->n_isstd, &b->n_leap,
				 &b->n_changes, &b->n_types, &b->n_chars};
	for (size_t i = 0; i < sizeof count / sizeof count[0]; i++) {
		*count[i] = big32(p + 20 + 4 * i);
		if (*count[i] > FILE_BYTES_MAX)
			return err_set(e, ST_SYNTAX, "zone file damaged: count %zu is too large", *count[i]);
	}
	b->changes = p + HEADER_BYTES;
	size_t bytes = b->n_changes * time_bytes + b->n_changes + 6 * b->n_types + b->n_chars +
		       b->n_leap * (time_bytes + 4) + b->n_isstd + b->n_isut;
	if (bytes > left - HEADER_BYTES)
		return err_set(e, ST_SYNTAX, "zone file cut short: %zu bytes of data expected, %zu there",
			       bytes, left - HEADER_BYTES);
	b->type_of = b->changes + b->n_changes * time_bytes;
	b->types = b->type_of + b->n_changes;
	b->chars = b->types + 6 * b->n_types;
	b->end = b->changes + bytes;
	return ST_OK;
}

/* The abbreviation goes to the screen: only what RFC 8536 allows is taken. */
static bool abbreviation_read(const struct block *b, size_t from, char out[ABBREVIATION_MAX])
{
	for (size_t i = 0; i < ABBREVIATION_MAX && from + i < b->n_chars; i++) {
		char ch = (char)b->chars[from + i];
		bool allowed = (ch >= 'A' && ch <= 'Z') || (ch >= 'a' && ch <= 'z') ||
			       (ch >= '0' && ch <= '9') || ch == '+' || ch == '-' || ch == '\0';
		if (!allowed)
			return false;
		out[i] = ch;
		if (ch == '\0')
			return true;
	}
	return false;
}

static enum status types_read(struct zone *z, const struct block *b, struct err *e)
{
	if (b->n_types < 1 || b->n_types > TYPES_MAX)
		return err_set(e, ST_SYNTAX, "zone file damaged: %zu kinds of local time, 1 to 256 expected",
			       b->n_types);
	z->n_types = b->n_types;
	for (size_t i = 0; i < b->n_types; i++) {
		const unsigned char *p = b->types + 6 * i;
		int32_t offset_s = (int32_t)big32(p);
		if (offset_s < OFFSET_MIN_S || offset_s > OFFSET_MAX_S || p[4] > 1 ||
		    !abbreviation_read(b, p[5], z->type[i].abbreviation))
			return err_set(e, ST_SYNTAX,
				       "zone file damaged: kind %zu of local time is impossible", i);
		z->type[i].offset_s = offset_s;
	}
	return ST_OK;
}

static enum status changes_read(struct zone *z, const struct block *b, struct err *e)
{
	z->n_changes = b->n_changes;
	/* one more than needed: a table without changes is no failed allocation */
	z->change = malloc((b->n_changes + 1) * sizeof *z->change);
	z->type_of = malloc(b->n_changes + 1);
	if (!z->change || !z->type_of)
		return err_set(e, ST_MEMORY, "no memory for a zone");
	for (size_t i = 0; i < b->n_changes; i++) {
		z->change[i] = big_signed(b->changes + i * b->time_bytes, b->time_bytes);
		z->type_of[i] = b->type_of[i];
		if (z->type_of[i] >= z->n_types || (i > 0 && z->change[i] <= z->change[i - 1]))
			return err_set(e, ST_SYNTAX, "zone file damaged: clock change %zu is impossible", i);
	}
	return ST_OK;
}

static enum status footer_read(struct zone *z, const unsigned char *p, size_t left, struct err *e)
{
	const unsigned char *close = left > 1 && p[0] == '\n' ? memchr(p + 1, '\n', left - 1) : NULL;
	if (!close)
		return err_set(e, ST_SYNTAX, "zone file cut short: its footer is missing");
	size_t n = (size_t)(close - p) - 1;
	z->has_rule = n > 0;
	return n > 0 ? zone_rule_parse((const char *)p + 1, n, &z->rule, e) : ST_OK;
}

static enum status zone_parse(struct zone *z, const unsigned char *data, size_t n, struct err *e)
{
	struct block b;
	enum status s = block_open(data, n, 4, &b, e);
	if (s != ST_OK)
		return s;
	bool wide = data[4] >= '2';
	if (wide) { /* the first block repeats what fits into 32 bits; the second is the one that counts */
		s = block_open(b.end, n - (size_t)(b.end - data), 8, &b, e);
		if (s != ST_OK)
			return s;
	}
	if (b.n_leap > 0)
		return err_set(e, ST_SYNTAX,
			       "zone file counts leap seconds: one that counts POSIX seconds expected");
	s = types_read(z, &b, e);
	if (s == ST_OK)
		s = changes_read(z, &b, e);
	if (s == ST_OK && wide)
		s = footer_read(z, b.end, n - (size_t)(b.end - data), e);
	return s;
}

static bool name_allowed(const char *name)
{
	size_t n = strlen(name);
	if (n == 0 || n >= ZONE_NAME_MAX || name[n - 1] == '/')
		return false;
	/* zones begin with a capital; what does not is another file of that folder, or a copy of all zones
	 * (`posix/`) */
	if (name[0] < 'A' || name[0] > 'Z')
		return false;
	if (strspn(name, "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789_+-./") != n)
		return false;
	for (size_t i = 0; i < n; i++) {
		bool part_starts = i == 0 || name[i - 1] == '/';
		if (part_starts && (name[i] == '.' || name[i] == '/'))
			return false;
	}
	return true;
}

enum status zone_open(const char *zoneinfo_dir, const char *name, struct zone **out, struct err *e)
{
	*out = NULL;
	if (!name_allowed(name))
		return err_set(e, ST_SYNTAX,
			       "not a time zone's name (got \"%.64s\", expected one like America/Denver)",
			       name);
	char path[512];
	int length = snprintf(path, sizeof path, "%s/%s", zoneinfo_dir, name);
	if (length < 0 || (size_t)length >= sizeof path)
		return err_set(e, ST_RANGE, "the folder of time zones has too long a name");
	char *data;
	size_t n;
	enum status s = file_read(path, &data, &n, e);
	if (s != ST_OK)
		return s;
	struct zone *z = calloc(1, sizeof *z);
	if (!z)
		s = err_set(e, ST_MEMORY, "no memory for a zone");
	else if (n > FILE_BYTES_MAX)
		s = err_set(e, ST_SYNTAX, "%s is no zone file: %zu bytes", path, n);
	else
		s = zone_parse(z, (const unsigned char *)data, n, e);
	free(data);
	if (s != ST_OK) {
		zone_close(z);
		return s;
	}
	*out = z;
	return ST_OK;
}

void zone_close(struct zone *z)
{
	if (!z)
		return;
	free(z->change);
	free(z->type_of);
	free(z);
}

/* --- asking --- */

static const struct zone_type *type_at(const struct zone *z, int64_t t)
{
	size_t lo = 0,
	       hi = z->n_changes; /* the changes before lo are at or before t, those from hi on after it */
	while (lo < hi) {
		size_t middle = lo + (hi - lo) / 2;
		if (z->change[middle] <= t)
			lo = middle + 1;
		else
			hi = middle;
	}
	if (lo == z->n_changes && z->has_rule)
		return zone_rule_at(&z->rule, t);
	/* before the first change the first kind of local time holds (RFC 8536, 3.2) */
	return lo == 0 ? &z->type[0] : &z->type[z->type_of[lo - 1]];
}

/* Whole POSIX seconds, and the rest of a second. */
static int64_t posix_seconds(int32_t mjd, double sod_s, double *rest_s)
{
	double whole = floor(sod_s);
	*rest_s = sod_s - whole;
	return (int64_t)(mjd - UNIX_EPOCH_MJD) * DAY_S + (int64_t)whole;
}

static void date_and_second(int64_t t, double rest_s, int32_t *mjd, double *sod_s)
{
	int64_t day = t / DAY_S - (t % DAY_S < 0 ? 1 : 0);
	*mjd = (int32_t)(day + UNIX_EPOCH_MJD);
	*sod_s = (double)(t - day * DAY_S) + rest_s;
}

struct local_time zone_local(const struct zone *z, struct utc t)
{
	static const struct zone_type universal = {.abbreviation = "UTC"};
	struct local_time local = {.leap_second = t.sod_s >= DAY_S};
	double rest_s;
	int64_t seconds = posix_seconds(t.mjd, local.leap_second ? t.sod_s - 1.0 : t.sod_s, &rest_s);
	const struct zone_type *holds = z ? type_at(z, seconds) : &universal;
	local.offset_s = holds->offset_s;
	memcpy(local.abbreviation, holds->abbreviation, sizeof local.abbreviation);
	date_and_second(seconds + holds->offset_s, rest_s, &local.mjd, &local.sod_s);
	return local;
}

/* Notes the instant that an offset would give, if that offset holds then; kept in order of time, none twice.
 */
static int answer_add(const struct zone *z, int64_t local, int offset_s, int64_t answer[2], int n)
{
	int64_t t = local - offset_s;
	if (type_at(z, t)->offset_s != offset_s)
		return n;
	for (int i = 0; i < n; i++) {
		if (answer[i] == t)
			return n;
	}
	if (n == 2) /* a third would need two changes within a day, which no place has had */
		return n;
	answer[n] = t;
	if (n == 1 && answer[0] > t) {
		answer[1] = answer[0];
		answer[0] = t;
	}
	return n + 1;
}

int zone_utc(const struct zone *z, int32_t local_mjd, double local_sod_s, struct utc out[2])
{
	double rest_s;
	int64_t local = posix_seconds(local_mjd, local_sod_s, &rest_s);
	int64_t answer[2] = {local, local};
	int n = z ? 0 : 1;
	for (size_t i = 0; z && i < z->n_types; i++)
		n = answer_add(z, local, z->type[i].offset_s, answer, n);
	if (z && z->has_rule) {
		n = answer_add(z, local, z->rule.standard.offset_s, answer, n);
		if (z->rule.changes)
			n = answer_add(z, local, z->rule.daylight.offset_s, answer, n);
	}
	for (int i = 0; i < n; i++)
		date_and_second(answer[i], rest_s, &out[i].mjd, &out[i].sod_s);
	return n;
}
