/* SPDX-License-Identifier: MIT
 * Writing targets into the store. */
#include "db/history.h"
#include "db/target_rows.h"
#include "db/text_clean.h"

#include <math.h>
#include <string.h>

/* The target called so, or that has the alias. ST_ABSENT without a message when there is none; a removed one
 * is found too, but a listed one before it. */
static enum status find_target(struct store *s, const char *name, struct row *out, struct err *e)
{
	char key[NAME_KEY_MAX];
	name_key(name, key);
	enum status st = row_find(s, SQL_TARGET_BY_KEY, cell_text(key), &target_table, out, e);
	bool removed = st == ST_OK && out->cell[TARGET_REMOVED].u.i;
	if (st != ST_ABSENT && !removed)
		return st;
	struct row alias, other = {0};
	enum status found = row_find(s, SQL_ALIAS_BY_KEY, cell_text(key), &alias_table, &alias, e);
	if (found == ST_OK && alias.cell[ALIAS_REMOVED].u.i)
		found = ST_ABSENT;
	if (found == ST_OK)
		found = row_find(s, SQL_TARGET_BY_ID, alias.cell[ALIAS_TARGET], &target_table, &other, e);
	row_free(&alias);
	if (found == ST_OK && removed && other.cell[TARGET_REMOVED].u.i)
		found = ST_ABSENT; /* both are removed: the name goes before the alias */
	if (found == ST_OK) {
		row_free(out);
		*out = other;
		return ST_OK;
	}
	row_free(&other);
	return found == ST_ABSENT ? st : found;
}

static enum status find_listed(struct store *s, const char *name, struct row *out, struct err *e)
{
	enum status st = find_target(s, name, out, e);
	if (st == ST_OK && out->cell[TARGET_REMOVED].u.i)
		st = ST_ABSENT;
	if (st == ST_ABSENT) {
		char clean[128];
		(void)text_clean(name, clean, sizeof clean);
		err_set(e, st, "no target is called \"%s\"", clean);
	}
	return st;
}

/* Everything of a target row but its id, rev and change. The texts live as long as r, key and as_read. */
static void fill_target(struct cell *cell, const struct reading *r, const char *key,
			char as_read[AS_READ_MAX], struct cell ephemeris_id)
{
	uint64_t doubts = r->doubts;
	for (int i = 0; i < FIELD_COUNT; i++)
		if (fields[i].home != HOME_TARGET)
			doubts &= ~(UINT64_C(1) << i);
	as_read_make(&r->own.texts, &r->t, r->doubts, HOME_TARGET, as_read);
	cell[TARGET_KEY] = cell_text(key);
	cells_from_fields(&r->t, HOME_TARGET, cell + TARGET_FIELDS);
	cell[TARGET_EPHEMERIS] = ephemeris_id;
	cell[TARGET_AS_READ] = cell_text(as_read);
	cell[TARGET_DOUBTS] = cell_int((int64_t)doubts);
	cell[TARGET_REMOVED] = cell_int(0);
}

static enum status add_target(struct store *s, const struct reading *r, const char *key, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	char as_read[AS_READ_MAX];
	int64_t id = 0, ephemeris_id = 0;
	bool has = texts_have(&r->own.texts, HOME_EPHEMERIS);
	enum status st = row_next_id(s, &target_table, &id, e);
	if (st == ST_OK && has)
		st = row_next_id(s, &ephemeris_table, &ephemeris_id, e);
	if (st != ST_OK)
		return st;
	cell[0] = cell_int(id);
	fill_target(cell, r, key, as_read, has ? cell_int(ephemeris_id) : (struct cell){.type = CELL_NULL});
	st = row_add(s, &target_table, cell, e);
	if (st == ST_OK && has)
		st = ephemeris_add(s, ephemeris_id, id, 1, r, e);
	return st;
}

/* Puts the texts of the ephemeris version that a target row points to, nothing when it points to none. */
static enum status put_current(struct store *s, struct row_texts *own, const struct cell *pointer,
			       struct err *e)
{
	struct row ephemeris;
	if (pointer->type != CELL_INT)
		return ST_OK;
	enum status st = row_find(s, SQL_EPHEMERIS_BY_ID, *pointer, &ephemeris_table, &ephemeris, e);
	if (st == ST_ABSENT)
		return err_set(e, ST_STORE,
			       "database: damaged: an ephemeris that a target points to is missing");
	if (st == ST_OK)
		row_texts_of_cells(own, ephemeris.cell, HOME_EPHEMERIS);
	row_free(&ephemeris);
	return st;
}

/* Writes the merged reading over the stored row when it says something else. */
static enum status replace_target(struct store *s, const struct row *old, const struct reading *merged,
				  struct cell ephemeris_id, bool *changed, struct err *e)
{
	struct cell cell[ROW_CELLS_MAX];
	char as_read[AS_READ_MAX], key[NAME_KEY_MAX];
	name_key(merged->t.name, key);
	fill_target(cell, merged, key, as_read, ephemeris_id);
	*changed = !cells_same(cell + TARGET_KEY, old->cell + TARGET_KEY, TARGET_AS_READ - TARGET_KEY) ||
		   !cells_same(cell + TARGET_DOUBTS, old->cell + TARGET_DOUBTS, 2) ||
		   !doubts_same((uint64_t)cell[TARGET_DOUBTS].u.i, as_read, old->cell[TARGET_AS_READ].u.text);
	return *changed ? row_replace(s, &target_table, old, cell, e) : ST_OK;
}

static void put_over(struct row_texts *own, const struct field_texts *texts, enum field_home home)
{
	for (int i = 0; i < FIELD_COUNT; i++)
		if (fields[i].home == home && *texts->text[i] && i != FIELD_AT_NAME)
			(void)row_texts_put(own, i, texts->text[i], strlen(texts->text[i]));
}

static bool complete(const struct target *t)
{
	return isfinite(t->t0.day) && isfinite(t->period_d);
}

/* A known target: what the row gives goes over what is stored; an ephemeris that no version equals becomes
 * one. */
static enum status update_target(struct store *s, const struct row *old, const struct reading *r, bool adopt,
				 enum put_result *result, struct err *e)
{
	struct row_texts own;
	struct reading merged, was;
	struct cell pointer = old->cell[TARGET_EPHEMERIS];
	bool made = false, changed = false;
	int bad_field;
	row_texts_clear(&own);
	row_texts_of_cells(&own, old->cell, HOME_TARGET);
	enum status st = put_current(s, &own, &pointer, e);
	if (st == ST_OK)
		st = reading_make(&own.texts, &was, &bad_field, e);
	if (st == ST_OK && texts_have(&r->own.texts, HOME_EPHEMERIS)) {
		int64_t id = 0;
		st = ephemeris_take(s, old->cell[0].u.i, r, &id, &made, e);
		/* where none can be computed with there is none to stand beside */
		if (st == ST_OK &&
		    (adopt || (!complete(&was.t) && complete(&r->t)) || pointer.type != CELL_INT)) {
			pointer = cell_int(id);
			for (int i = 0; i < FIELD_COUNT; i++)
				if (fields[i].home == HOME_EPHEMERIS)
					own.texts.text[i] = r->own.texts.text[i];
		}
	}
	put_over(&own, &r->own.texts, HOME_TARGET);
	if (st == ST_OK)
		st = reading_make(&own.texts, &merged, &bad_field, e);
	if (st == ST_OK)
		st = replace_target(s, old, &merged, pointer, &changed, e);
	*result = made || changed ? PUT_CHANGED : PUT_SAME;
	return st;
}

/* A target that was removed comes back as the row has it; its history stays. */
static enum status revive_target(struct store *s, const struct row *old, const struct reading *r,
				 struct err *e)
{
	struct cell pointer = {.type = CELL_NULL};
	bool made, changed;
	enum status st = ST_OK;
	if (texts_have(&r->own.texts, HOME_EPHEMERIS)) {
		int64_t id = 0;
		st = ephemeris_take(s, old->cell[0].u.i, r, &id, &made, e);
		pointer = cell_int(id);
	}
	return st == ST_OK ? replace_target(s, old, r, pointer, &changed, e) : st;
}

enum status reading_put(struct store *s, const struct reading *r, bool adopt, enum put_result *result,
			struct err *e)
{
	struct row old;
	char key[NAME_KEY_MAX];
	name_key(r->t.name, key);
	enum status st = find_target(s, r->t.name, &old, e);
	if (st == ST_ABSENT) {
		*result = PUT_NEW;
		st = add_target(s, r, key, e);
	} else if (st == ST_OK && old.cell[TARGET_REMOVED].u.i) {
		*result = PUT_NEW;
		st = revive_target(s, &old, r, e);
	} else if (st == ST_OK) {
		st = update_target(s, &old, r, adopt, result, e);
	}
	row_free(&old);
	return st;
}

enum status target_put(struct store *s, const struct field_texts *texts, bool adopt, enum put_result *result,
		       struct err *e)
{
	struct reading r;
	int bad_field;
	struct err why;
	enum status st = reading_make(texts, &r, &bad_field, &why);
	if (st != ST_OK)
		return err_set(e, st, "%s: %s", bad_field >= 0 ? fields[bad_field].name : "row", why.text);
	return reading_put(s, &r, adopt, result, e);
}

enum status target_set(struct store *s, const char *name, const int field[], const char *const text[],
		       size_t n, struct err *e)
{
	struct row old;
	struct row_texts own;
	struct reading r;
	struct err why;
	int bad_field = -1;
	bool ephemeris_set = false, made, changed;
	enum status st = find_listed(s, name, &old, e);
	row_texts_clear(&own);
	if (st == ST_OK) {
		row_texts_of_cells(&own, old.cell, HOME_TARGET);
		st = put_current(s, &own, &old.cell[TARGET_EPHEMERIS], e);
	}
	for (size_t i = 0; st == ST_OK && i < n; i++) {
		own.texts.text[field[i]] = text[i];
		ephemeris_set = ephemeris_set || fields[field[i]].home == HOME_EPHEMERIS;
	}
	if (st == ST_OK && (st = reading_make(&own.texts, &r, &bad_field, &why)) != ST_OK)
		err_set(e, st, "%s: %s", bad_field >= 0 ? fields[bad_field].name : "target", why.text);
	struct cell pointer = st == ST_OK ? old.cell[TARGET_EPHEMERIS] : (struct cell){.type = CELL_NULL};
	if (st == ST_OK && ephemeris_set) {
		int64_t id = 0;
		pointer = (struct cell){.type = CELL_NULL};
		if (texts_have(&r.own.texts, HOME_EPHEMERIS)) {
			st = ephemeris_take(s, old.cell[0].u.i, &r, &id, &made, e);
			pointer = cell_int(id);
		}
	}
	if (st == ST_OK) {
		struct row other;
		char key[NAME_KEY_MAX];
		name_key(r.t.name, key);
		enum status found = find_target(s, r.t.name, &other, NULL);
		if (found == ST_OK && other.cell[0].u.i != old.cell[0].u.i && !other.cell[TARGET_REMOVED].u.i)
			st = err_set(e, ST_CONFLICT, "another target has the name \"%s\" already", r.t.name);
		row_free(&other);
	}
	if (st == ST_OK)
		st = replace_target(s, &old, &r, pointer, &changed, e);
	row_free(&old);
	return st;
}

enum status target_remove(struct store *s, const char *name, struct err *e)
{
	struct row old;
	struct cell cell[ROW_CELLS_MAX];
	enum status st = find_listed(s, name, &old, e);
	if (st == ST_OK) {
		memcpy(cell, old.cell, sizeof cell);
		cell[TARGET_REMOVED] = cell_int(1);
		st = row_replace(s, &target_table, &old, cell, e);
	}
	row_free(&old);
	return st;
}

/* A new row, or the one that the name had when it was taken away. */
static enum status put_alias(struct store *s, const char *alias, struct cell target_id, struct err *e)
{
	struct row had;
	char key[NAME_KEY_MAX];
	name_key(alias, key);
	enum status st = row_find(s, SQL_ALIAS_BY_KEY, cell_text(key), &alias_table, &had, e);
	struct cell cell[ROW_CELLS_MAX] = {
	    [ALIAS_NAME] = cell_text(alias),
	    [ALIAS_KEY] = cell_text(key),
	    [ALIAS_TARGET] = target_id,
	    [ALIAS_REMOVED] = cell_int(0),
	};
	if (st == ST_OK) {
		st = row_replace(s, &alias_table, &had, cell, e);
	} else if (st == ST_ABSENT) {
		int64_t id = 0;
		st = row_next_id(s, &alias_table, &id, e);
		cell[0] = cell_int(id);
		if (st == ST_OK)
			st = row_add(s, &alias_table, cell, e);
	}
	row_free(&had);
	return st;
}

enum status target_alias_add(struct store *s, const char *name, const char *alias, struct err *e)
{
	struct row old, other;
	char trimmed[NAME_BYTES_MAX];
	const char *start = alias;
	size_t n = strlen(alias);
	enum status st = name_check(alias, n, NULL, e);
	if (st != ST_OK)
		return st;
	text_trim(&start, &n);
	memcpy(trimmed, start, n);
	trimmed[n] = '\0';
	st = find_listed(s, name, &old, e);
	if (st != ST_OK) {
		row_free(&old);
		return st;
	}
	st = find_target(s, trimmed, &other, e);
	bool same = st == ST_OK && other.cell[0].u.i == old.cell[0].u.i;
	bool given_up = st == ST_OK && other.cell[TARGET_REMOVED].u.i;
	if (st == ST_OK && !same && !given_up)
		st = err_set(e, ST_CONFLICT, "another target has the name \"%s\" already", trimmed);
	row_free(&other);
	if (st == ST_ABSENT || (st == ST_OK && given_up))
		st = put_alias(s, trimmed, old.cell[0], e);
	row_free(&old);
	return st;
}

enum status ephemeris_adopt(struct store *s, int64_t target_id, int version, struct err *e)
{
	struct row old, ephemeris = {0};
	struct row_texts own;
	struct reading r;
	int bad_field;
	bool changed;
	const struct cell key[] = {cell_int(target_id), cell_int(version)};
	enum status st = row_find(s, SQL_TARGET_BY_ID, key[0], &target_table, &old, e);
	if (st == ST_ABSENT || (st == ST_OK && old.cell[TARGET_REMOVED].u.i))
		st = err_set(e, ST_ABSENT, "no such target");
	if (st == ST_OK) {
		st = row_find_by(s, SQL_EPHEMERIS_OF_VERSION, key, 2, &ephemeris_table, &ephemeris, e);
		if (st == ST_ABSENT)
			err_set(e, st, "%s has no ephemeris version %d", old.cell[TARGET_FIELDS].u.text,
				version);
	}
	if (st == ST_OK) {
		/* whether other values of the target can be true may hang on the period */
		row_texts_clear(&own);
		row_texts_of_cells(&own, old.cell, HOME_TARGET);
		row_texts_of_cells(&own, ephemeris.cell, HOME_EPHEMERIS);
		st = reading_make(&own.texts, &r, &bad_field, e);
	}
	if (st == ST_OK)
		st = replace_target(s, &old, &r, ephemeris.cell[0], &changed, e);
	row_free(&old);
	row_free(&ephemeris);
	return st;
}
