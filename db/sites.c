/* SPDX-License-Identifier: MIT */
#include "db/sites.h"

#include "db/read_mask.h"
#include "db/site_rows.h"
#include "db/target_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { ZONE_BYTES_MAX = 63 };

const struct table site_table = {
    .name = "site",
    .cells = SITE_CELLS,
    .rev_at = SITE_REV,
    .change_at = SITE_CHANGE,
    .next = SQL_SITE_NEXT,
    .add = SQL_SITE_ADD,
    .update = SQL_SITE_UPDATE,
    .keep_old = SQL_SITE_KEEP_OLD,
};

static char *append(char **next, const char *text)
{
	char *start = *next;
	size_t n = strlen(text) + 1;
	memcpy(start, text, n);
	*next += n;
	return start;
}

/* Sites are few: the block has room for the longest texts of each, and grows one site at a time. */
static enum status keep_site(struct site_list *out, const struct cell *cell, struct err *e)
{
	const size_t room = NAME_BYTES_MAX + ZONE_BYTES_MAX + 1;
	struct site *list = realloc(out->site, (out->n + 1) * sizeof *list);
	if (list)
		out->site = list;
	char *block = realloc(out->block, (out->n + 1) * room);
	if (block)
		out->block = block;
	struct mask *mask = realloc(out->mask, (out->n + 1) * sizeof *mask);
	if (mask)
		out->mask = mask;
	if (!list || !block || !mask)
		return err_set(e, ST_MEMORY, "database: no memory");
	if (mask_of_text(cell[SITE_MASK].u.text, &mask[out->n], NULL) != ST_OK)
		return err_set(e, ST_STORE, "database: damaged: the horizon mask of site %s can't be read",
			       cell[SITE_NAME].u.text);
	char *next = block + out->n * room;
	(void)append(&next, cell[SITE_NAME].u.text);
	(void)append(&next, cell[SITE_ZONE].u.text);
	list[out->n++] = (struct site){
	    .id = cell[0].u.i,
	    .lat_deg = cell_number(&cell[SITE_LAT]),
	    .lon_east_deg = cell_number(&cell[SITE_LON]),
	    .height_m = cell_number(&cell[SITE_HEIGHT]),
	};
	for (size_t i = 0; i < out->n; i++) {
		list[i].name = block + i * room;
		list[i].zone = list[i].name + strlen(list[i].name) + 1;
		list[i].mask = mask[i].n > 0 ? &mask[i] : NULL;
	}
	return ST_OK;
}

/* A place that may be wrong would give wrong times: it is named and left out. */
static void note_bad(struct site_list *out, const struct cell *name)
{
	char clean[96];
	if (out->n_bad++ > 0)
		return;
	(void)text_clean(name->type == CELL_TEXT ? name->u.text : "", clean, sizeof clean);
	snprintf(out->bad, sizeof out->bad, "the checksum of site %s is wrong: left out; see `wane check`",
		 clean);
}

static enum status load(struct store *s, bool removed, struct site_list *out, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	bool row = false;
	*out = (struct site_list){0};
	enum status st = ST_OK;
	while (st == ST_OK && (st = sql_step(s, SQL_SITE_LOAD, &row, e)) == ST_OK && row) {
		if (!row_read(s, SQL_SITE_LOAD, 0, &site_table, cell)) {
			note_bad(out, &cell[SITE_NAME]);
		} else if ((cell[SITE_REMOVED].u.i != 0) == removed) {
			st = keep_site(out, cell, e);
		}
	}
	sql_reset(s, SQL_SITE_LOAD);
	if (st != ST_OK)
		site_list_free(out);
	return st;
}

enum status sites_load(struct store *s, struct site_list *out, struct err *e)
{
	return load(s, false, out, e);
}

enum status sites_load_removed(struct store *s, struct site_list *out, struct err *e)
{
	return load(s, true, out, e);
}

void site_list_free(struct site_list *list)
{
	free(list->site);
	free(list->block);
	free(list->mask);
	*list = (struct site_list){0};
}

long site_list_find(const struct site_list *list, const char *name)
{
	char key[NAME_KEY_MAX], other[NAME_KEY_MAX];
	name_key(name, key);
	for (size_t i = 0; i < list->n; i++) {
		name_key(list->site[i].name, other);
		if (strcmp(key, other) == 0)
			return (long)i;
	}
	return -1;
}

static enum status check_site(const struct site *site, struct err *e)
{
	/* written so that NAN is refused too */
	if (!(site->lat_deg >= -90.0 && site->lat_deg <= 90.0))
		return err_set(e, ST_RANGE,
			       "latitude: outside -90..90 deg (got \"%g\", expected degrees north)",
			       site->lat_deg);
	if (!(site->lon_east_deg >= -180.0 && site->lon_east_deg <= 180.0))
		return err_set(e, ST_RANGE,
			       "longitude: outside -180..180 deg (got \"%g\", expected degrees east)",
			       site->lon_east_deg);
	if (!(site->height_m >= -450.0 && site->height_m <= 9000.0))
		return err_set(e, ST_RANGE, "height: outside -450..9000 m (got \"%g\", expected metres)",
			       site->height_m);
	if (strlen(site->zone) > ZONE_BYTES_MAX)
		return err_set(e, ST_SYNTAX, "zone: longer than %d bytes", (int)ZONE_BYTES_MAX);
	for (const char *c = site->zone; *c; c++)
		if (*c <= ' ' || *c > '~')
			return err_set(e, ST_SYNTAX,
				       "zone: not a time zone name (expected one like America/Denver)");
	return ST_OK;
}

static enum status find_site(struct store *s, const char *name, struct row *out, struct err *e)
{
	char key[NAME_KEY_MAX];
	name_key(name, key);
	return row_find(s, SQL_SITE_BY_KEY, cell_text(key), &site_table, out, e);
}

enum status site_put(struct store *s, const struct site *site, bool add, struct err *e)
{
	struct row old;
	char key[NAME_KEY_MAX], name[NAME_BYTES_MAX], mask[MASK_TEXT_MAX] = "";
	const char *start = site->name;
	size_t n = strlen(site->name);
	enum status st = name_check(site->name, n, NULL, e);
	if (st == ST_OK)
		st = check_site(site, e);
	if (st != ST_OK)
		return st;
	text_trim(&start, &n);
	snprintf(name, sizeof name, "%.*s", (int)n, start);
	name_key(name, key);
	if (site->mask)
		mask_text(site->mask, mask);
	st = find_site(s, name, &old, e);
	bool there = st == ST_OK && !old.cell[SITE_REMOVED].u.i;
	if (there && add)
		st = err_set(e, ST_CONFLICT, "a site is called \"%s\" already", old.cell[SITE_NAME].u.text);
	struct cell cell[ROW_CELLS_MAX] = {
	    [SITE_NAME] = cell_text(name),
	    [SITE_KEY] = cell_text(key),
	    [SITE_LAT] = cell_real(site->lat_deg),
	    [SITE_LON] = cell_real(site->lon_east_deg),
	    [SITE_HEIGHT] = cell_real(site->height_m),
	    [SITE_ZONE] = cell_text(site->zone),
	    [SITE_MASK] = cell_text(mask),
	    [SITE_REMOVED] = cell_int(0),
	};
	return row_put(s, &site_table, SITE_REMOVED, st, &old, cell, e);
}

enum status site_remove(struct store *s, const char *name, struct err *e)
{
	struct row old;
	enum status st = find_site(s, name, &old, e);
	st = row_remove(s, &site_table, SITE_REMOVED, st, &old, e);
	if (st == ST_ABSENT) {
		char clean[128];
		(void)text_clean(name, clean, sizeof clean);
		st = err_set(e, ST_ABSENT, "no site is called \"%s\"", clean);
	}
	return st;
}
