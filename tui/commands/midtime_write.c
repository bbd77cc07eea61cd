/* SPDX-License-Identifier: MIT */
#include "tui/commands/midtime.h"

#include "ephem/drift.h"
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <math.h>

static const char *kind_word(enum event_kind kind)
{
	return kinds_text(kind == KIND_TRANSIT ? KINDS_TRANSIT : KINDS_OCCULTATION);
}

static bool write_csv(FILE *to, const struct midtime_list *list)
{
	struct csv_out c = {.file = to};
	char text[NUMBER_TEXT_MAX];
	fputs("mid_jd,err_d,epoch,time_scale,kind,source,used\n", to);
	for (size_t i = 0; i < list->n; i++) {
		const struct midtime_row *m = &list->row[i];
		csv_number(&c, m->mid_text);
		number_text(m->err_d, text);
		csv_number(&c, text);
		snprintf(text, sizeof text, "%ld", m->epoch);
		csv_number(&c, text);
		csv_text(&c, m->time_scale);
		csv_text(&c, kind_word(m->kind));
		csv_text(&c, m->source);
		csv_number(&c, m->used ? "1" : "0");
		csv_end_line(&c);
	}
	return !c.failed;
}

static void write_json(FILE *to, const struct midtime_list *list)
{
	struct json j = json_begin(to);
	json_open(&j, NULL, '[', false);
	for (size_t i = 0; i < list->n; i++) {
		const struct midtime_row *m = &list->row[i];
		json_open(&j, NULL, '{', true);
		if (json_is_number(m->mid_text))
			json_digits(&j, "mid_jd", m->mid_text);
		else
			json_text(&j, "mid_jd", m->mid_text);
		json_exact(&j, "err_d", m->err_d);
		json_whole(&j, "epoch", m->epoch);
		json_text(&j, "time_scale", m->time_scale);
		json_text(&j, "kind", kind_word(m->kind));
		json_text(&j, "source", m->source);
		json_whole(&j, "used", m->used ? 1 : 0);
		json_text(&j, "entered_utc", m->entered_utc);
		json_text(&j, "who", m->who);
		json_close(&j, '}');
	}
	json_close(&j, ']');
	json_end(&j);
}

/* Observed less predicted by the current ephemeris [min] and in units of its error. */
static void misfit(struct run *r, const struct midtime_row *m, char oc[NUMBER_TEXT_MAX],
		   char z[NUMBER_TEXT_MAX])
{
	const struct prepared *p = &r->prepared[0];
	struct mid_time t;
	oc[0] = z[0] = '\0';
	if (!p->has_ephemeris || midtime_on_bjd(r, p, m, &t, NULL) != ST_OK)
		return;
	const double off_d = jd2_diff_d(t.mid.jd, ephemeris_mid(&p->eph, t.epoch).jd) - t.delay_d;
	const double sigma_d = hypot(drift_sigma_min(&p->eph, t.epoch) * MIN_D, t.err_d);
	number_text_fixed(off_d * DAY_MIN, 2, oc);
	number_text_fixed(off_d / sigma_d, 1, z);
}

static void write_text(FILE *to, struct run *r, const struct midtime_list *list)
{
	char err[NUMBER_TEXT_MAX], oc[NUMBER_TEXT_MAX], z[NUMBER_TEXT_MAX];
	text_cell(to, r->prepared[0].target->name, NAME_CHARS_MAX, false);
	fprintf(to, ": %zu mid-time%s", list->n, list->n == 1 ? "" : "s");
	if (list->n == 0) {
		fputs(" (wane midtime add TARGET MID ERR)\n", to);
		return;
	}
	fprintf(to, "; O-C against the current ephemeris\n%9s %-11s %18s %-14s %8s %9s %6s  source\n",
		"epoch", "kind", "mid-time", "standard", "error/s", "O-C/min", "z");
	for (size_t i = 0; i < list->n; i++) {
		const struct midtime_row *m = &list->row[i];
		number_text_fixed(m->err_d * DAY_S, 1, err);
		misfit(r, m, oc, z);
		fprintf(to, "%9ld %-11s ", m->epoch, kind_word(m->kind));
		fprintf(to, "%18.30s ", m->mid_text);
		text_cell(to, m->time_scale[0] ? m->time_scale : "not said", 14, true);
		fprintf(to, " %8s %9s %6s  ", err, oc[0] ? oc : "-", z[0] ? z : "-");
		text_cell(to, m->source[0] ? m->source : "no source", 60, false);
		fputs(m->used ? "\n" : "; EXCLUDED\n", to);
	}
}

int midtimes_write(struct run *r)
{
	const struct options *o = r->options;
	struct midtime_list list = {.n = 0};
	struct out out;
	struct err e;
	enum format format;
	bool whole = true;
	if (format_of(o, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (midtimes_load(r->store, r->prepared[0].target->id, &list, &e) != ST_OK)
		return diagnose_err("midtime", &e, EXIT_UNMET);
	if (list.n_bad > 0)
		diagnose("store", "%s", list.bad);
	if (run_out_open(r, &out, &e) != ST_OK) {
		midtime_list_free(&list);
		return diagnose_whole(&e, EXIT_UNMET);
	}
	if (format == FORMAT_TEXT)
		write_text(out.file, r, &list);
	else if (format == FORMAT_CSV)
		whole = write_csv(out.file, &list);
	else
		write_json(out.file, &list);
	midtime_list_free(&list);
	return result_commit(&out, whole);
}
