/* SPDX-License-Identifier: MIT
 * A running order as rows of commas: one an event, the plan's columns before the window's. */
#include "tui/parts/columns.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/plan_words.h"

#include <string.h>

/* In this order; `latest_start_utc` of the plan and of the window have names of their own. */
static const char *const plan_columns[] = {
    "order",	"state",	 "variant",	"slew_by_utc",	      "start_utc", "plan_latest_start_utc",
    "end_utc",	"slew_by_local", "start_local", "latest_start_local", "end_local", "note",
    "moved_min"};
enum { PLAN_COLUMNS = sizeof plan_columns / sizeof plan_columns[0] };

static void utc_cell(struct csv_out *c, const struct plan_view *v, const struct utc *t)
{
	char text[UTC_TEXT_MAX] = "";
	if (t)
		utc_text(&v->run->leap, *t, 0, text);
	csv_number(c, text);
}

/* Empty where the site's zone is not known. */
static void local_cell(struct csv_out *c, const struct plan_view *v, const struct utc *t)
{
	char text[SHEET_TIME_BYTES] = "";
	if (t && v->run->zone)
		sheet_stamp(v, *t, text);
	csv_number(c, text);
}

static void text_cell_clean(struct csv_out *c, const char *text)
{
	char clean[2048];
	plan_line(text, clean, sizeof clean);
	csv_text(c, clean);
}

static void window_cells(struct csv_out *c, const struct plan_view *v, const struct plan_member_view *m)
{
	for (size_t i = 0; i < column_count; i++) {
		const char *text = m->figure ? m->figure[i] : "";
		const bool place =
		    i == 0 &&
		    v->run->site.id == 0; /* a place as it was typed has to come out as it went in */
		double value;
		if (place)
			csv_checked(c, text);
		else if (columns[i].type == VALUE_TEXT || columns[i].type == VALUE_UTC)
			text_cell_clean(c, text);
		else if (number_parse(text, strlen(text), &value, NULL, NULL) == ST_OK)
			csv_number(c, text);
		else
			csv_number(c, "");
	}
}

bool plan_sheet_csv(FILE *to, const struct plan_view *v)
{
	struct csv_out c = {.file = to};
	for (size_t i = 0; i < PLAN_COLUMNS; i++)
		csv_text(&c, plan_columns[i]);
	for (size_t i = 0; i < column_count; i++)
		csv_text(&c, columns[i].name);
	csv_end_line(&c);
	for (size_t i = 0; i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		const struct utc *latest = item->has_latest ? &item->latest_start : NULL;
		for (size_t k = 0; k < item->n && !item->in_day;
		     k++) { /* a program must not be sent into daylight */
			char number[NUMBER_TEXT_MAX];
			snprintf(number, sizeof number, "%d", item->order);
			csv_number(&c, number);
			csv_text(&c, plan_state_words[item->state]);
			text_cell_clean(&c, item->member[k].variant);
			utc_cell(&c, v, &item->slew_by);
			utc_cell(&c, v, &item->start);
			utc_cell(&c, v, latest);
			utc_cell(&c, v, &item->end);
			local_cell(&c, v, &item->slew_by);
			local_cell(&c, v, &item->start);
			local_cell(&c, v, latest);
			local_cell(&c, v, &item->end);
			text_cell_clean(&c, item->note);
			number_text_fixed(item->member[k].moved_min, 3, number);
			csv_number(&c, number);
			window_cells(&c, v, &item->member[k]);
			csv_end_line(&c);
		}
	}
	return !c.failed;
}
