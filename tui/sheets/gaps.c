/* SPDX-License-Identifier: MIT */
#include "tui/sheets/gaps.h"

#include "ephem/number_text.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

static void date_of(struct utc t, char out[40])
{
	const struct date d = date_from_mjd(t.mjd);
	snprintf(out, 40, "%04d-%02d-%02d", d.year, d.month, d.day);
}

void gap_text(FILE *to, const struct prepared *p, const struct gap_table *g)
{
	char when[40], gap[NUMBER_TEXT_MAX], error[NUMBER_TEXT_MAX], limit[NUMBER_TEXT_MAX];
	text_cell(to, p->target->name, NAME_CHARS_MAX, false);
	fprintf(to, ": version %d less version %d (current), in minutes\n%-12s %12s %10s\n", g->other,
		g->current, "date", "difference", "error");
	for (int i = 0; i <= GAP_YEARS; i++) {
		date_of(g->row[i].at, when);
		number_text_fixed(g->row[i].gap.gap_min, 2, gap);
		number_text_fixed(g->row[i].gap.error_min, 2, error);
		fprintf(to, "%-12s %12s %10s\n", when, gap[0] ? gap : "-", error[0] ? error : "unknown");
	}
	number_text_fixed(g->limit_min, 1, limit);
	date_of(g->parted.utc, when);
	if (g->parted.when == WHEN_ALREADY)
		fprintf(to, "They are apart by more than %s min already.\n", limit);
	else if (g->parted.when == WHEN_ON)
		fprintf(to, "They are apart by more than %s min from %s on.\n", limit, when);
	else if (g->parted.when == WHEN_NEVER)
		fprintf(to, "They stay within %s min of each other for 50 years.\n", limit);
}

void gap_csv(FILE *to, const struct run *r, const struct gap_table *g)
{
	char at[UTC_TEXT_MAX], gap[NUMBER_TEXT_MAX], error[NUMBER_TEXT_MAX];
	fputs("at_utc,gap_min,error_min\n", to);
	for (int i = 0; i <= GAP_YEARS; i++) {
		utc_text(&r->leap, g->row[i].at, 0, at);
		number_text_fixed(g->row[i].gap.gap_min, 3, gap);
		number_text_fixed(g->row[i].gap.error_min, 3, error);
		fprintf(to, "%s,%s,%s\n", at, gap, error);
	}
}

void gap_json(FILE *to, const struct run *r, const struct prepared *p, const struct gap_table *g)
{
	struct json j = json_begin(to);
	char at[UTC_TEXT_MAX];
	json_open(&j, NULL, '{', false);
	json_text(&j, "target", p->target->name);
	json_whole(&j, "current", g->current);
	json_whole(&j, "against", g->other);
	json_number(&j, "limit_min", g->limit_min, 3);
	date_of(g->parted.utc, at);
	if (g->parted.when == WHEN_ON || g->parted.when == WHEN_ALREADY)
		json_text(&j, "parted_on", g->parted.when == WHEN_ON ? at : "already");
	else
		json_null(&j, "parted_on");
	json_open(&j, "gaps", '[', false);
	for (int i = 0; i <= GAP_YEARS; i++) {
		json_open(&j, NULL, '{', true);
		utc_text(&r->leap, g->row[i].at, 0, at);
		json_text(&j, "at_utc", at);
		json_number(&j, "gap_min", g->row[i].gap.gap_min, 3);
		json_number(&j, "error_min", g->row[i].gap.error_min, 3);
		json_close(&j, '}');
	}
	json_close(&j, ']');
	json_close(&j, '}');
	json_end(&j);
}
