/* SPDX-License-Identifier: MIT */
#include "tui/pages/drift_list.h"

#include "ephem/number_text.h"
#include "tui/parts/drift_columns.h"

#include <math.h>
#include <stdio.h>

const struct drift_cell_column drift_cells[DRIFT_CELLS] = {
    [DRIFT_NAME] = {"target", "", 13, 0, false, 'm', "target"},
    [DRIFT_NOW] = {"now", "min", 6, 0, true, 'o', "sigma_now_min"},
    [DRIFT_AT] = {"date", "min", 6, 0, true, 'a', "sigma_at_min"},
    [DRIFT_LIMIT] = {"limit", "min", 6, 70, true, 'l', "limit_min"},
    [DRIFT_STALE] = {"stale on", "UTC", 10, 0, false, 's', "stale_on"},
    [DRIFT_LOST] = {"lost on", "UTC", 10, 102, false, 'p', "phase_lost_on"},
    [DRIFT_FIRST] = {"first", "evening", 10, 114, false, 'f', "first_refresh_utc"},
    [DRIFT_BEST] = {"best", "evening", 10, 66, false, 'b', "best_refresh_utc"},
    [DRIFT_AFTER] = {"then", "min", 6, 90, true, 't', "sigma_after_min"},
    [DRIFT_COUNTED] = {"times", "", 5, 126, true, 'c', "midtimes"},
    [DRIFT_LAST] = {"last", "UTC", 10, 138, false, 'i', "last_midtime_utc"},
    [DRIFT_NEXT] = {"next mid", "UTC", 16, 158, false, 'x', "next_mid_utc"},
    [DRIFT_WORDS] = {"remarks", "", 12, 0, false, 0, NULL},
};

enum { MARK_COLUMNS = 2, NAME_MOST = 24, WORDS_USUAL = 40 };

void drift_minutes_text(double minutes, char *out, size_t n)
{
	char number[NUMBER_TEXT_MAX];
	number_text_fixed(minutes, fabs(minutes) < 99.95 ? 1 : 0, number);
	snprintf(out, n, "%s", number[0] ? number : "?");
}

void drift_date_text(const struct drift_date *d, char *out, size_t n)
{
	static const char *const words[] = {
	    [WHEN_UNKNOWN] = "?", [WHEN_NEVER] = "never", [WHEN_ALREADY] = "already"};
	if (d->when != WHEN_ON) {
		snprintf(out, n, "%s", words[d->when]);
		return;
	}
	struct date date = date_from_mjd(d->utc.mjd);
	snprintf(out, n, "%04d-%02d-%02d", date.year, date.month, date.day);
}

static void refresh_text(const struct refresh *f, enum drift_plan plan, const struct drift_row *row,
			 char *out, size_t n)
{
	struct date d = date_from_mjd(f->evening_mjd);
	if (plan == SEARCH_DONE && f->found)
		snprintf(out, n, "%04d-%02d-%02d", d.year, d.month, d.day);
	else
		snprintf(out, n, "%s",
			 plan == SEARCH_DONE		    ? "none"
			 : plan == SEARCH_WANTED	    ? "searching"
			 : plan == SEARCH_IF_SELECTED	    ? "not needed"
			 : row->search == REFRESH_NO_CHANCE ? "no chance"
							    : "-");
}

enum drift_plan drift_plan_of(const struct drift_row *row, const struct drift_table *t, bool wanted)
{
	if (!wanted || t->n_sites == 0 || !row->counted || isnan(row->sigma_now_min) ||
	    row->lost.when == WHEN_ALREADY)
		return SEARCH_NONE;
	return row->sigma_at_min > row->limit_min || row->stale.when == WHEN_ALREADY ? SEARCH_WANTED
										     : SEARCH_IF_SELECTED;
}

static void copy_figure(const struct drift_line *line, enum drift_cell cell, const struct drift_table *t,
			const struct leap_table *leap, char *out)
{
	int at = drift_column_find(drift_cells[cell].column);
	if (at < 0)
		return;
	struct value v = drift_column_value(&drift_columns[at], &t->row[line->row], t);
	char text[sizeof v.text];
	drift_people_text(&drift_columns[at], &v, leap, text, sizeof text);
	snprintf(out, DRIFT_CELL_BYTES, "%.*s", cell == DRIFT_LAST ? 10 : DRIFT_CELL_BYTES - 1, text);
}

void drift_line_make(struct drift_line *line, const struct drift_table *t, size_t row, enum drift_plan plan,
		     const struct leap_table *leap)
{
	const struct drift_row *r = &t->row[row];
	line->row = row;
	text_clean(r->prepared->target->name, line->name, sizeof line->name);
	drift_words(r, line->words, sizeof line->words);
	for (int c = 0; c < DRIFT_CELLS; c++)
		line->text[c][0] = '\0';
	drift_minutes_text(r->sigma_now_min, line->text[DRIFT_NOW], DRIFT_CELL_BYTES);
	drift_minutes_text(r->sigma_at_min, line->text[DRIFT_AT], DRIFT_CELL_BYTES);
	drift_minutes_text(r->limit_min, line->text[DRIFT_LIMIT], DRIFT_CELL_BYTES);
	drift_date_text(&r->stale, line->text[DRIFT_STALE], DRIFT_CELL_BYTES);
	drift_date_text(&r->lost, line->text[DRIFT_LOST], DRIFT_CELL_BYTES);
	refresh_text(&r->first, plan, r, line->text[DRIFT_FIRST], DRIFT_CELL_BYTES);
	refresh_text(&r->best, plan, r, line->text[DRIFT_BEST], DRIFT_CELL_BYTES);
	if (plan == SEARCH_DONE && r->best.found)
		drift_minutes_text(r->best.sigma_after_min, line->text[DRIFT_AFTER], DRIFT_CELL_BYTES);
	copy_figure(line, DRIFT_COUNTED, t, leap, line->text[DRIFT_COUNTED]);
	copy_figure(line, DRIFT_LAST, t, leap, line->text[DRIFT_LAST]);
	copy_figure(line, DRIFT_NEXT, t, leap, line->text[DRIFT_NEXT]);
	line->role = r->counted ? ROLE_TEXT : ROLE_FAINT;
	line->stale_role = r->stale.when == WHEN_ALREADY    ? ROLE_BAD
			   : r->sigma_at_min > r->limit_min ? ROLE_WARN
							    : line->role;
}

struct drift_layout drift_lay_out(int cols)
{
	struct drift_layout l = {.at = {0}};
	int used = MARK_COLUMNS, at = MARK_COLUMNS;
	for (int c = 0; c < DRIFT_CELLS; c++)
		if (cols >= drift_cells[c].from_columns) {
			l.width[c] = drift_cells[c].width;
			used += l.width[c] + 1;
		}
	int spare = cols > used ? cols - used : 0;
	int words = spare < WORDS_USUAL - l.width[DRIFT_WORDS] ? spare : WORDS_USUAL - l.width[DRIFT_WORDS];
	int name =
	    spare - words < NAME_MOST - l.width[DRIFT_NAME] ? spare - words : NAME_MOST - l.width[DRIFT_NAME];
	l.width[DRIFT_NAME] += name;
	l.width[DRIFT_WORDS] += spare - name;
	for (int c = 0; c < DRIFT_CELLS; c++) {
		l.at[c] = at;
		at += l.width[c] > 0 ? l.width[c] + 1 : 0;
	}
	return l;
}
