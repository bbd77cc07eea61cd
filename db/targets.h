/* SPDX-License-Identifier: MIT
 * Targets and their ephemeris versions in the store. */
#ifndef WANE_DB_TARGETS_H
#define WANE_DB_TARGETS_H

#include "db/fields.h"
#include "db/store.h"

/* Another name of a target. */
struct target_alias {
	const char *key; /* as name_key makes it */
	long index;      /* of the target in its list */
};
struct target_list {
	size_t n;
	struct target *t;   /* by name key; each with its current ephemeris, or none (t0.day NAN) */
	uint64_t *doubts;   /* [n]: bit (1 << field) for a stored value that can't be true */
	size_t n_alias;
	struct target_alias *alias; /* by key */
	size_t n_bad;       /* targets or ephemerides left out because the checksum of their row is wrong */
	const char *bad;    /* one line that names the first of them; "" none */
	char *block;        /* owns the texts */
};
MUST_USE enum status targets_load(struct store *s, struct target_list *out, struct err *e);
void target_list_free(struct target_list *list);
/* Index by name (folded) or alias, -1 none. */
long target_list_find(const struct target_list *list, const char *name);

/* Inside a change set. What became of a row: */
enum put_result { PUT_NEW, PUT_CHANGED, PUT_SAME };
/* Stores a row of texts: a new target with its ephemeris adopted at once; a known one (by key or alias) gets its target fields updated
 * where the row gives them and, when the ephemeris differs from every stored version, a new version beside the old one, adopted only with `adopt`. */
MUST_USE enum status target_put(struct store *s, const struct field_texts *texts, bool adopt, enum put_result *result, struct err *e);
/* Sets single fields of one target ("" clears); ephemeris fields make a new adopted version. ST_ABSENT no such target. */
MUST_USE enum status target_set(struct store *s, const char *name, const int field[], const char *const text[], size_t n, struct err *e);
/* Gives a target another name. ST_ABSENT no such target; ST_CONFLICT when another target has that name or alias. */
MUST_USE enum status target_alias_add(struct store *s, const char *name, const char *alias, struct err *e);
/* Takes a target out of the lists (kept in history). ST_ABSENT no such target. */
MUST_USE enum status target_remove(struct store *s, const char *name, struct err *e);
/* The texts as they were read, of one listed target, for CSV out: written into texts->text, owned by *block (free). */
MUST_USE enum status target_texts(struct store *s, int64_t id, struct field_texts *texts, char **block, struct err *e);

/* One ephemeris version, for `target show` and later history. */
struct ephemeris_row {
	int64_t id;
	int version;
	bool current;
	char source[256], entered_utc[24], who[64], t0_text[64], scale[64], period_text[64];
	double t0_err_d, period_err_d;
	double t0_period_cov_d2, dpde_d, dpde_err_d, ttv_amp_min, t0_dpde_cov_d2, period_dpde_cov_d2; /* NAN: not given */
};
MUST_USE enum status ephemeris_versions(struct store *s, int64_t target_id, struct ephemeris_row **out, size_t *n, struct err *e);

#endif
