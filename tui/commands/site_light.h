/* SPDX-License-Identifier: MIT
 * What is stored of a site beside its place, as settings under keys of its own: how dark its zenith is, what
 * its air takes, its usual telescope. */
#ifndef WANE_TUI_COMMANDS_SITE_LIGHT_H
#define WANE_TUI_COMMANDS_SITE_LIGHT_H

#include "tui/run.h"
#include "tui/sheets/json.h"

#include <stdbool.h>
#include <stdio.h>

/* What is wished: a value by band, NAN takes it away. */
struct site_light {
	bool sky_given[BAND_COUNT], extinction_given[BAND_COUNT];
	double sky[BAND_COUNT], extinction[BAND_COUNT];
	bool telescope_given;
	int64_t telescope_id; /* 0 none */
};
/* --sky and --extinction. Faults begin with the option. */
MUST_USE enum status site_light_read(const struct options *o, struct site_light *out, struct err *e);
/* --telescope NAME of the site's, or `none`. */
MUST_USE enum status site_telescope_read(const struct run *r, int64_t site_id, const char *name,
					 struct site_light *out, struct err *e);
bool site_light_any(const struct site_light *l);
/* Inside a change set. */
MUST_USE enum status site_light_put(struct store *s, int64_t site_id, const struct site_light *l,
				    struct err *e);
/* All of it taken away. */
MUST_USE enum status site_light_remove(struct store *s, int64_t site_id, struct err *e);

/* `, sky V 21.6, extinction V 0.14, usual telescope East dome`; nothing where nothing is stored. */
void site_light_text(FILE *to, const struct run *r, const struct site *site);
/* "sky": {"V": 21.6}, "extinction": {}, "telescope": null */
void site_light_json(struct json *j, const struct run *r, const struct site *site);

#endif
