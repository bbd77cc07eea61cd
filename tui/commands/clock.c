/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "ephem/barycentre.h"
#include "ephem/frame.h"
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/commands/direction.h"
#include "tui/diagnose.h"
#include "tui/sheets/out.h"

#include <stdlib.h>
#include <string.h>

struct conversion {
	struct standard from, to;
	const char *value;
	struct jd2 given; /* of numbers; of text its JD_UTC */
};

static enum status scale_of(const char *option, const char *text, struct standard *s, struct err *e)
{
	if (!text)
		return err_set(e, ST_SYNTAX, "%s: a scale is missing (expected one of wane clock --help)",
			       option);
	struct err why;
	if (standard_parse(text, s, &why) != ST_OK)
		return err_set(e, ST_SYNTAX, "%s: %.440s", option, why.text);
	if (s->claim != SCALE_STATED) {
		char got[ERR_QUOTE_MAX];
		err_quote(text, strlen(text), got);
		return err_set(e, ST_SYNTAX,
			       "%s: not a whole scale (got \"%s\", expected origin and clock as in BJD_TDB)",
			       option, got);
	}
	return ST_OK;
}

static enum status read_value(struct conversion *c, const struct leap_table *leap, struct err *e)
{
	struct err why;
	struct utc utc;
	enum status s;
	if (c->from.text_utc) {
		s = utc_parse(leap, c->value, &utc, &why);
		if (s == ST_OK)
			c->given = utc_to_jd(leap, utc);
	} else {
		s = number_parse_jd2(c->value, strlen(c->value), &c->given, NULL, &why);
	}
	return s == ST_OK ? ST_OK : err_set(e, s, "VALUE: %.460s", why.text);
}

/* UTC text enters and leaves as an instant; its leap second has no unambiguous JD_UTC neighbour, so the text
 * does not go through it. */
static enum status to_tt(const struct conversion *c, struct run *r, const struct observer *at, struct vec3 n,
			 struct tt *t, struct err *e)
{
	struct utc utc;
	if (!c->from.text_utc)
		return standard_to_tt(r->memo, at, &c->from, c->given, n, t, e);
	enum status s = utc_parse(&r->leap, c->value, &utc, e);
	if (s == ST_OK)
		*t = utc_to_tt(&r->leap, utc);
	return s;
}

static enum status from_tt(const struct conversion *c, struct run *r, const struct observer *at,
			   struct vec3 n, struct tt t, char out[UTC_TEXT_MAX], struct err *e)
{
	struct jd2 value;
	_Static_assert((int)UTC_TEXT_MAX >= (int)NUMBER_TEXT_MAX, "one buffer for both");
	if (c->to.text_utc) {
		utc_text(&r->leap, tt_to_utc(&r->leap, t), 3, out);
		return ST_OK;
	}
	enum status s = standard_from_tt(r->memo, at, &c->to, t, n, &value, e);
	if (s == ST_OK)
		number_text_jd2(value, 11, out);
	return s;
}

/* The catalogue place carried to the date: 1e-3 yr of error in the date moves no star by what could be
 * noticed. */
static struct vec3 towards(const struct target *t, const struct conversion *c)
{
	double jd = jd2_value(c->given) + c->from.offset_d;
	return frame_catalogue_direction(t, 2000.0 + (jd - J2000_JD) / YEAR_D);
}

static int convert(struct conversion *c, struct run *r, const struct observer *at)
{
	const struct options *o = r->options;
	const struct target *target;
	size_t index;
	struct err e;
	struct tt t;
	struct out out;
	char text[UTC_TEXT_MAX];
	struct vec3 n = {1.0, 0.0, 0.0}; /* not used where no light time enters */
	enum status s = direction_of(r, o->n_words > 2 ? o->word[2] : NULL, &target, &index, &e);
	if (s != ST_OK)
		return diagnose_err("target", &e, s == ST_SYNTAX ? EXIT_USAGE : EXIT_UNMET);
	bool light = c->from.origin != ORIGIN_OBSERVER || c->to.origin != ORIGIN_OBSERVER;
	if (light && !target) {
		diagnose("direction", "light time needs one: name a TARGET, or give --radec RA,DEC");
		return EXIT_UNMET;
	}
	if (!at->site)
		diagnose("place", "none is given (--site or --place): the Earth's centre is used, up to 21 "
				  "ms from a place on it");
	if (target)
		n = towards(target, c);
	if (to_tt(c, r, at, n, &t, &e) != ST_OK || from_tt(c, r, at, n, t, text, &e) != ST_OK)
		return diagnose_err("VALUE", &e,
				    e.status == ST_RANGE || e.status == ST_SYNTAX ? EXIT_USAGE : EXIT_UNMET);
	if (c->from.clock == CLOCK_UTC || c->to.clock == CLOCK_UTC)
		leap_note(r, tt_to_utc(&r->leap, t).mjd);
	if (run_out_open(r, &out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	fprintf(out.file, "%s\n", text);
	return out_commit(&out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}

int command_clock(const struct env *env, const struct options *o)
{
	struct conversion c = {.value = o->n_words > 1 ? o->word[1] : NULL};
	struct run run;
	struct err e;
	int code, needs = 0;
	if (!c.value) {
		diagnose("VALUE", "is missing (expected wane clock VALUE --from SCALE --to SCALE)");
		return EXIT_USAGE;
	}
	if (!one_site(o, "clock"))
		return EXIT_USAGE;
	if (scale_of("--from", o->from, &c.from, &e) != ST_OK || scale_of("--to", o->to, &c.to, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	if (o->n_words > 2 || o->n_targets > 0)
		needs |= NEED_STORE | NEED_TARGETS;
	if (o->n_sites > 0)
		needs |= NEED_STORE | NEED_SITE;
	if (run_open(&run, env, o, needs, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	if (!run.memo)
		run.memo = calloc(1, sizeof *run.memo);
	struct observer at = {.site = run.site.name[0] ? &run.site : NULL, .clock = &run.clock};
	if (!run.memo) {
		diagnose("memory", "none for the Sun's places");
		code = EXIT_UNMET;
	} else if (read_value(&c, &run.leap, &e) != ST_OK) {
		code = diagnose_whole(&e, EXIT_USAGE);
	} else {
		code = convert(&c, &run, &at);
	}
	run_close(&run);
	return code;
}
