/* SPDX-License-Identifier: MIT
 * Time that the team really has: a telescope, nights, from and to. Kept as it was typed; tui/plan_time.h makes times of it. */
#ifndef WANE_DB_ALLOTMENTS_H
#define WANE_DB_ALLOTMENTS_H

#include "db/store.h"

struct allotment {
	int64_t id;
	int64_t site_id, telescope_id;	    /* telescope_id 0: any telescope of the site */
	int32_t first_mjd, last_mjd;	    /* nights, both included */
	const char *span;		    /* `first-half`, `evening-12..middle`, `21:00L..01:30L`; 1..120 characters */
	const char *note;
};
struct allotment_list {
	size_t n;
	struct allotment *allotment; /* by first night, id */
	char *block;
	size_t n_bad;
	char bad[96];
};
MUST_USE enum status allotments_load(struct store *s, struct allotment_list *out, struct err *e);
void allotment_list_free(struct allotment_list *list);
/* Inside a change set. *id of the new one. The same (site, telescope, nights, span) twice: ST_CONFLICT. */
MUST_USE enum status allotment_add(struct store *s, const struct allotment *a, int64_t *id, struct err *e);
MUST_USE enum status allotment_remove(struct store *s, int64_t id, struct err *e);

#endif
