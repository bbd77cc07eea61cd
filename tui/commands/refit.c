/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "ephem/number_text.h"
#include "tui/commands/one_target.h"
#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/sheets/fits.h"

#include <math.h>
#include <string.h>

enum model { MODEL_NONE, MODEL_LINEAR, MODEL_QUADRATIC, MODEL_PRIOR };

static enum status read_model(const struct options *o, enum model *model, struct err *e)
{
	static const char *const words[] = {"", "linear", "quadratic", "prior"};
	char got[ERR_QUOTE_MAX];
	*model = MODEL_NONE;
	if (!o->adopt_fit)
		return o->formal ? err_set(e, ST_SYNTAX, "--formal: belongs to --adopt") : ST_OK;
	err_quote(o->adopt_fit, strlen(o->adopt_fit), got);
	for (int i = MODEL_LINEAR; i <= MODEL_PRIOR; i++)
		if (strcmp(o->adopt_fit, words[i]) == 0)
			*model = (enum model)i;
	if (*model == MODEL_NONE)
		return err_set(e, ST_SYNTAX,
			       "--adopt: no such model (got \"%s\", expected linear, quadratic%s)", got,
			       o->with_prior ? " or prior" : "");
	if (*model == MODEL_PRIOR && !o->with_prior)
		return err_set(e, ST_SYNTAX, "--adopt: prior needs --prior");
	return ST_OK;
}

static enum status read_choice(const struct options *o, enum model model, struct fit_choice *c, struct err *e)
{
	double value;
	struct err why;
	*c = (struct fit_choice){.jitter_terms = model == MODEL_QUADRATIC ? 3 : 2,
				 .with_prior = o->with_prior};
	if (o->jitter && strcmp(o->jitter, "fit") == 0) {
		c->jitter_s = JITTER_FIT;
	} else if (o->jitter) {
		if (number_parse(o->jitter, strlen(o->jitter), &value, NULL, &why) != ST_OK)
			return err_set(e, why.status, "--jitter: %.440s, or fit", why.text);
		if (!(value >= 0.0 && value <= 1e6))
			return err_set(
			    e, ST_RANGE,
			    "--jitter: out of range (got \"%.40s\", expected 0 to 1000000 s, or fit)",
			    o->jitter);
		c->jitter_s = value;
	}
	if (o->ref_epoch && strcmp(o->ref_epoch, "best") == 0) {
		c->ref_epoch = REF_EPOCH_BEST;
	} else if (o->ref_epoch) {
		if (number_parse(o->ref_epoch, strlen(o->ref_epoch), &value, NULL, &why) != ST_OK)
			return err_set(e, why.status, "--ref-epoch: %.440s, or best", why.text);
		if (value != floor(value) || !(fabs(value) <= 1e9))
			return err_set(e, ST_RANGE,
				       "--ref-epoch: expected a whole number, or best (got \"%.40s\")",
				       o->ref_epoch);
		c->ref_epoch = (long)value;
	}
	return ST_OK;
}

/* What has to be known before anyone trusts or adopts the fit. */
static void say_doubts(const struct fit_view *v, bool with_prior)
{
	if (v->list.n_bad > 0)
		diagnose("store", "%s", v->list.bad);
	if (v->unstated > 0)
		diagnose("refit",
			 "%ld of %zu times do not say their time standard and were used as BJD_TDB: an "
			 "adopted fit is "
			 "marked scale_assumed",
			 v->unstated, v->used);
	if (v->outliers > 0)
		diagnose("refit",
			 "%ld outlier%s (robust z above %g) %s in the fit: look, then wane midtime exclude",
			 v->outliers, v->outliers == 1 ? "" : "s", OUTLIER_Z,
			 v->outliers == 1 ? "is" : "are");
	if (v->double_counting && with_prior)
		diagnose("refit",
			 "double counting: the current ephemeris rests on some of these mid-times already "
			 "(same source); do not adopt it with them added");
	else if (v->same_source)
		diagnose("refit",
			 "the current ephemeris rests on some of these mid-times (same source): it is no "
			 "independent check of this fit");
}

static enum status adopt_model(struct run *r, const struct fit_view *v, enum model model, struct err *e)
{
	char utc[UTC_TEXT_MAX];
	const struct change change = change_of(r, "refit adopt", utc);
	const struct prepared *p = &r->prepared[0];
	const struct fit *fit = model == MODEL_LINEAR	   ? &v->linear
				: model == MODEL_QUADRATIC ? &v->quadratic
							   : NULL;
	const double scale = r->options->formal || !fit ? 1.0 : fit_scale_factor(fit);
	int version = 0;
	enum status s = store_begin(r->store, &change, e);
	if (s != ST_OK)
		return s;
	s = fit_adopt(r, p, v, fit, scale, &version, e);
	s = store_end(r->store, s, e);
	if (s != ST_OK)
		return s;
	diagnose("refit", "version %d is the current ephemeris now: %s, errors %s (wane undo takes it back)",
		 version, r->options->adopt_fit, scale > 1.0 ? "scaled by the scatter" : "formal");
	return ST_OK;
}

static int write_fits(struct run *r, const struct fit_view *v)
{
	const struct options *o = r->options;
	struct out out;
	struct err e;
	enum format format;
	bool whole = true;
	if (format_of(o, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (run_out_open(r, &out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	const char *name = r->prepared[0].target->name;
	if (format == FORMAT_TEXT)
		fits_text(out.file, name, v);
	else if (format == FORMAT_CSV)
		whole = fits_csv(out.file, v);
	else
		fits_json(out.file, name, v);
	return result_commit(&out, whole);
}

static int refit_open(struct run *r, enum model model, const struct fit_choice *choice)
{
	struct fit_view v = {.time = NULL};
	struct err e;
	if (fit_view_make(&v, r, &r->prepared[0], choice, &e) != ST_OK)
		return diagnose_err("refit", &e, EXIT_UNMET);
	int code = EXIT_DONE;
	if ((model == MODEL_LINEAR && !v.has_linear) || (model == MODEL_QUADRATIC && !v.has_quadratic) ||
	    (model == MODEL_PRIOR && !v.has_prior)) {
		diagnose("--adopt", "there is no such fit: %s",
			 model == MODEL_PRIOR	 ? "the current ephemeris has no errors"
			 : model == MODEL_LINEAR ? "two mid-times of different epochs are needed"
						 : "three mid-times of different epochs are needed");
		code = EXIT_UNMET;
	}
	if (code == EXIT_DONE)
		say_doubts(&v, choice->with_prior);
	if (code == EXIT_DONE && model != MODEL_NONE && adopt_model(r, &v, model, &e) != ST_OK)
		code = diagnose_err("--adopt", &e, EXIT_UNMET);
	if (code == EXIT_DONE)
		code = write_fits(r, &v);
	fit_view_free(&v);
	return code;
}

int command_refit(const struct env *env, const struct options *o)
{
	struct fit_choice choice;
	struct options named;
	enum model model;
	struct run run;
	struct err e;
	int code;
	if (o->n_words < 2) {
		diagnose("TARGET", "is missing (expected wane refit TARGET)");
		return EXIT_USAGE;
	}
	if (read_model(o, &model, &e) != ST_OK || read_choice(o, model, &choice, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	/* what can't be fitted must not open anything for writing */
	if (one_target_open(&run, env, &named, o, o->word[1], 0, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	if (model == MODEL_NONE) {
		code = refit_open(&run, model, &choice);
		run_close(&run);
		return code;
	}
	struct fit_view trial = {.time = NULL};
	code = fit_view_make(&trial, &run, &run.prepared[0], &choice, &e) == ST_OK
		   ? EXIT_DONE
		   : diagnose_err("refit", &e, EXIT_UNMET);
	fit_view_free(&trial);
	run_close(&run);
	if (code != EXIT_DONE)
		return code;
	if (one_target_open(&run, env, &named, o, o->word[1], NEED_WRITE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = refit_open(&run, model, &choice);
	run_close(&run);
	return code;
}
