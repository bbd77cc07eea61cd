/* SPDX-License-Identifier: MIT
 * Stars of a target's field: those that it is compared with, one to guide by, neighbours whose light falls
 * into its aperture. */
#ifndef WANE_DB_FIELD_STARS_H
#define WANE_DB_FIELD_STARS_H

#include "db/store.h"

#include <stddef.h>

enum field_star_role { STAR_COMPARISON, STAR_GUIDE, STAR_NEIGHBOUR, STAR_ROLE_COUNT };
extern const char *const field_star_words[STAR_ROLE_COUNT]; /* comparison, guide, neighbour */
/* How many of each a target may have. */
enum { COMPARISON_STARS_MAX = 5, GUIDE_STARS_MAX = 1, NEIGHBOUR_STARS_MAX = 10, FIELD_STARS_MAX = 16 };
#define STAR_SEP_MAX_ARCSEC 600.0

struct field_star {
	int64_t id, target_id;
	enum field_star_role role;
	const char *name;	/* "" none, at most 80 characters */
	double ra_deg, dec_deg; /* ICRS; NAN: a neighbour with a distance */
	double sep_arcsec;	/* from the target, 0..STAR_SEP_MAX_ARCSEC; NAN: a position is given */
	double mag;		/* -5..40 */
	const char *band;	/* of the magnitude, a name of bands.h; "" not known */
	const char *note;	/* at most 255 characters */
};
struct field_star_list {
	size_t n;
	struct field_star *star; /* by target id, role, id */
	char *block;
	size_t n_bad;
	char bad[96];
};
MUST_USE enum status field_stars_load(struct store *s, struct field_star_list *out, struct err *e);
void field_star_list_free(struct field_star_list *list);
/* The stars of a target, which stand together; *n 0 and NULL when it has none. */
const struct field_star *field_stars_of(const struct field_star_list *list, int64_t target_id, size_t *n);

/* Inside a change set. *id of the new one. ST_CONFLICT: the same star in the same role and band is there, or
 * the target has as many of that role as it may; ST_ABSENT: no such target. */
MUST_USE enum status field_star_add(struct store *s, const struct field_star *f, int64_t *id, struct err *e);
MUST_USE enum status field_star_remove(struct store *s, int64_t id, struct err *e);

#endif
