/* SPDX-License-Identifier: MIT
 * wane night --explain: the windows of one target, however small their chance, with the derivation of their
 * forecast. */
#include "tui/commands/table.h"

#include "tui/diagnose.h"
#include "tui/sheets/explain.h"
#include "tui/sheets/out.h"
#include "tui/sheets/text.h"

#include <stdlib.h>
#include <string.h>

enum { MOMENTS_MAX = 200 };
#define STEP_MIN 15.0 /* of the table of moments */

struct explaining {
	struct run *run;
	struct night_view view;
	struct window window;
	struct forecast_explain x;
	struct forecast_moment moment[MOMENTS_MAX];
	int shown;
};

static void explain_event(struct explaining *x, const struct target_night *tn, enum event_kind kind,
			  long epoch, FILE *to)
{
	struct window *w = &x->window;
	const struct explained e = {.window = w,
				    .night = tn->night,
				    .zone = x->run->zone,
				    .x = &x->x,
				    .moment = x->moment,
				    .plain = x->run->options->plain};
	struct explained shown = e;
	window_make(w, tn, kind, epoch, STAGE_CHANCE);
	if (!window_hidden(w) && !x->run->options->all)
		return;
	if (!forecast_explain(w, tn, &x->x))
		return;
	shown.n_moments = forecast_table(tn, &x->x, w->event.reserve_start_d, w->event.reserve_end_d,
					 STEP_MIN, x->moment, MOMENTS_MAX);
	if (x->shown++ > 0)
		fputs("\n\n", to);
	explain_text(to, &shown);
}

static void explain_target(struct explaining *x, const struct prepared *p, FILE *to)
{
	const struct night *n = &x->view.night;
	const struct star star = night_star(n, p->target);
	struct sun_sets suns = {.n = 0};
	const struct target_night tn = target_on_night(n, p, &star, &suns, &x->view.free);
	for (int kind = KIND_TRANSIT; kind <= KIND_OCCULTATION; kind++) {
		long first, last;
		if (!(x->run->kinds & (kind == KIND_TRANSIT ? KINDS_TRANSIT : KINDS_OCCULTATION)) ||
		    !window_epochs(n, &star, p, (enum event_kind)kind, &first, &last))
			continue;
		for (long epoch = first; epoch <= last; epoch++)
			explain_event(x, &tn, (enum event_kind)kind, epoch, to);
	}
}

/* The target that is asked for; NULL, and said, when it is not there or can't be counted. */
static const struct prepared *asked_for(const struct run *r)
{
	char got[ERR_QUOTE_MAX];
	const char *name = r->options->explain;
	const long i = target_list_find(&r->targets, name);
	err_quote(name, strlen(name), got);
	for (size_t k = 0; i >= 0 && k < r->n_prepared; k++)
		if (r->prepared[k].target == &r->targets.t[i] && r->prepared[k].has_ephemeris)
			return &r->prepared[k];
	diagnose("--explain",
		 i < 0 ? "no such target is stored (got \"%s\"; see wane target list)"
		       : "\"%s\" has no ephemeris that can be counted, or is not among --target",
		 got);
	return NULL;
}

static int explain_to(struct explaining *x, const struct prepared *p)
{
	struct out out;
	struct err e;
	enum format format;
	if (format_of(x->run->options, FORMAT_TEXT, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (run_out_open(x->run, &out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	explain_target(x, p, out.file);
	if (x->shown == 0) {
		out_abandon(&out);
		diagnose("--explain", "none of its events can be seen in that night (--all: the others too)");
		return EXIT_UNMET;
	}
	fputc('\n', out.file);
	text_cautions(out.file);
	return out_commit(&out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}

int night_explain(struct run *r, int32_t evening_mjd)
{
	struct err e;
	struct explaining *x = calloc(1, sizeof *x);
	const struct prepared *p = asked_for(r);
	int code = EXIT_UNMET;
	if (!x)
		diagnose("memory", "none for a night");
	if (x && p) {
		x->run = r;
		if (run_night_free(r, &r->site, evening_mjd, &x->view, &e) != ST_OK)
			code = diagnose_err("night", &e, EXIT_UNMET);
		else if (!x->view.night.observing)
			diagnose("--explain",
				 "nothing is forecast without a telescope that has aperture_m and band "
				 "(wane telescope set NAME aperture_m=... band=...)");
		else
			code = explain_to(x, p);
		night_view_free(&x->view);
	}
	free(x);
	return code;
}
