/* SPDX-License-Identifier: MIT
 * Sites in the store. */
#ifndef WANE_DB_SITES_H
#define WANE_DB_SITES_H

#include "db/store.h"
#include "ephem/mask.h"
#include "ephem/model.h"

struct site_list {
	size_t n;
	struct site *site; /* by name key */
	char *block;
	struct mask *mask; /* [n]; the sites borrow theirs */
	size_t n_bad;	   /* sites left out because the checksum of their row is wrong */
	char bad[192];	   /* one line that names the first of them; "" none */
};
MUST_USE enum status sites_load(struct store *s, struct site_list *out, struct err *e);
/* Those that were removed: what was planned for them stays. */
MUST_USE enum status sites_load_removed(struct store *s, struct site_list *out, struct err *e);
void site_list_free(struct site_list *list);
long site_list_find(const struct site_list *list, const char *name);
/* Inside a change set. Ranges: latitude -90..90, longitude -180..180, height -450..9000; name by name_check.
 * The mask is stored with it, none takes a stored one away. ST_CONFLICT when `add` and it exists. */
MUST_USE enum status site_put(struct store *s, const struct site *site, bool add, struct err *e);
MUST_USE enum status site_remove(struct store *s, const char *name, struct err *e);

#endif
