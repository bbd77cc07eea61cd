/* SPDX-License-Identifier: MIT
 * Telescopes in the store. One table of fields: columns, ranges, commands and help read it. */
#ifndef WANE_DB_TELESCOPES_H
#define WANE_DB_TELESCOPES_H

#include "db/store.h"
#include "ephem/model.h"

#include <stdbool.h>
#include <stddef.h>

enum telescope_field_type { TELESCOPE_NUMBER, TELESCOPE_TEXT, TELESCOPE_MOUNT };
struct telescope_field {
	const char *name;     /* `slew_deg_s` */
	const char *unit;     /* "deg/s", "" */
	enum telescope_field_type type;
	size_t offset;        /* in struct telescope */
	double min, max;      /* of a number */
	const char *sentence; /* what it means, one sentence */
};
extern const struct telescope_field telescope_fields[]; /* all but id, site_id and name, in the order of the struct */
extern const size_t telescope_field_count;
long telescope_field_find(const char *name); /* -1 none */
extern const char *const mount_words[4];     /* by enum mount_kind: "", german, fork, altaz */
/* Reads a text into a field; "" clears. Texts are borrowed. ST_RANGE, ST_SYNTAX: the message says field, got and expected. */
MUST_USE enum status telescope_field_put(struct telescope *t, size_t field, const char *text, struct err *e);
/* Machine text of a field, "" not given. */
void telescope_field_text(const struct telescope *t, size_t field, char *out, size_t n);

struct telescope_list {
	size_t n;
	struct telescope *telescope; /* by site, then name key */
	char *block;
	size_t n_bad; /* left out because the checksum of their row is wrong */
	char bad[192];
};
MUST_USE enum status telescopes_load(struct store *s, struct telescope_list *out, struct err *e);
/* Those that were removed: what was planned for them stays. */
MUST_USE enum status telescopes_load_removed(struct store *s, struct telescope_list *out, struct err *e);
void telescope_list_free(struct telescope_list *list);
/* Index by name (folded) at a site; -1 none. */
long telescope_list_find(const struct telescope_list *list, int64_t site_id, const char *name);
/* Inside a change set. A telescope belongs to t->site_id; its name is unique there. ST_CONFLICT when `add` and it exists; ST_ABSENT no such site. */
MUST_USE enum status telescope_put(struct store *s, const struct telescope *t, bool add, struct err *e);
MUST_USE enum status telescope_remove(struct store *s, int64_t site_id, const char *name, struct err *e);

#endif
