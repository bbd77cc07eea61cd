/* SPDX-License-Identifier: MIT */
#include "tui/pages/drift_page.h"

#include "tui/pages/night_filter.h"
#include "tui/parts/drift_columns.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum {
	HEAD_ROWS = 3,
	HEADING_ROWS = 2,
	LIST_ROWS_MIN = 5,
	PANE_ROWS_MOST = 22,
	SIDE_BY_SIDE = 110, /* columns from which text and plot stand side by side */
	TEXT_ROWS = 4	    /* above a plot that has the width of the screen */
};

const struct drift_row *drift_page_selected(const struct drift_page *p)
{
	return p->loaded && p->n > 0 ? &p->table.row[p->order[p->selected]] : NULL;
}

void drift_page_say(struct drift_page *p, enum role role, const char *text)
{
	snprintf(p->message, sizeof p->message, "%s", text);
	p->message_role = role;
}

/* --- the screen --- */

int drift_view_rows(const struct drift_page *p)
{
	return p->grid_rows > 3 ? p->grid_rows - 2 : 1;
}

static void share(struct drift_page *p)
{
	bool full = p->grid_rows >= DRIFT_ROWS_FULL && p->grid_cols >= DRIFT_COLS_FULL;
	p->head = (full ? HEAD_ROWS : 1) + (p->grid_cols >= DRIFT_COLS_FULL ? HEADING_ROWS : 0);
	int left = p->grid_rows - p->head - 2;
	p->pane = 0;
	if (full && p->n > 0 && left > LIST_ROWS_MIN) {
		/* where the plot stands under the text the pane needs more of the height */
		size_t most = (size_t)(p->grid_cols >= SIDE_BY_SIDE ? left / 2 : left * 2 / 5);
		int list = (int)(p->n < most ? p->n : most);
		list = list < LIST_ROWS_MIN ? LIST_ROWS_MIN : list;
		p->pane = left - list < PANE_ROWS_MOST ? left - list : PANE_ROWS_MOST;
	}
	p->list = left - p->pane > 1 ? left - p->pane : 1;
	bool beside = p->grid_cols >= SIDE_BY_SIDE;
	p->text_width = beside ? p->grid_cols * 2 / 5 : p->grid_cols - 2;
	p->text_rows = beside || p->pane < TEXT_ROWS + PLOT_ROWS_MIN + PLOT_FOOT_ROWS ? p->pane : TEXT_ROWS;
	p->plot_row = beside ? 0 : p->text_rows;
	p->plot_col = (beside ? p->text_width + 1 : 0) + PLOT_LABEL_COLUMNS + 2;
}

static void scroll_to_selected(struct drift_page *p)
{
	size_t rows = (size_t)p->list;
	if (p->selected < p->top)
		p->top = p->selected;
	if (p->selected >= p->top + rows)
		p->top = p->selected + 1 - rows;
	if (p->top + rows > p->n)
		p->top = p->n > rows ? p->n - rows : 0;
}

static void make_lines(struct drift_page *p)
{
	for (int i = 0; i < p->list && i < GRID_ROWS_MAX; i++) {
		size_t at = p->top + (size_t)i;
		p->line_of[i].row = SIZE_MAX;
		if (at < p->n)
			drift_line_make(&p->line_of[i], &p->table, p->order[at],
					(enum drift_plan)p->plan[p->order[at]], &p->run->leap);
	}
}

static void make_count(struct drift_page *p)
{
	char where[DRIFT_ASKED_BYTES + 32] = "";
	if (p->filter_text[0])
		snprintf(where, sizeof where, " of %zu with `%s`", p->table.n, p->filter_text);
	if (p->n > 0)
		snprintf(p->count, sizeof p->count, "%zu/%zu target%s%s by %s%s", p->selected + 1, p->n,
			 p->n == 1 ? "" : "s", where, drift_cells[p->sort].heading,
			 p->sort_turned ? ", turned" : "");
	else
		snprintf(p->count, sizeof p->count, "no target%s", where);
}

void drift_page_settle(struct drift_page *p)
{
	const struct drift_row *row = drift_page_selected(p);
	p->layout = drift_lay_out(p->grid_cols);
	share(p);
	scroll_to_selected(p);
	if (p->loaded)
		make_lines(p);
	text_view_start(&p->details, p->text_width);
	plot_start(&p->plot, 0, 0, 0.0, 0.0, 0.0, 0.0);
	if (row) {
		text_clean(row->prepared->target->name, p->kept, sizeof p->kept);
		drift_detail_lines(p);
		drift_plot_make(&p->plot, p->pane - p->plot_row - PLOT_FOOT_ROWS,
				p->grid_cols - p->plot_col - 1, &p->table, row);
	}
	make_count(p);
	drift_head_texts(p);
	if (p->mode == DRIFT_MODE_RESIDUALS)
		residual_view_size(&p->residuals, p->grid_rows, p->grid_cols);
}

/* --- order and filter --- */

static bool keeps(const struct drift_page *p, const struct drift_row *row)
{
	const char *text = p->filter_text;
	char words[DRIFT_WORDS_BYTES];
	bool wanted = *text != '!';
	if (!*text)
		return true;
	text += wanted ? 0 : 1;
	drift_words(row, words, sizeof words);
	return (text_holds(row->prepared->target->name, text) ||
		text_holds(row->prepared->target->tags, text) || text_holds(words, text)) == wanted;
}

static bool select_kept(struct drift_page *p)
{
	char name[NAME_BYTES_MAX];
	for (size_t i = 0; i < p->n; i++) {
		text_clean(p->table.row[p->order[i]].prepared->target->name, name, sizeof name);
		if (strcmp(name, p->kept) == 0) {
			p->selected = i;
			return true;
		}
	}
	p->selected = 0;
	return false;
}

void drift_page_arrange(struct drift_page *p)
{
	struct err e;
	int column = drift_column_find(drift_cells[p->sort].column);
	if (!p->loaded)
		return;
	for (size_t i = 0; i < p->table.n; i++)
		p->order[i] = i;
	if (column >= 0 && drift_order(&p->table, column, p->sort_turned, p->order, &e) != ST_OK)
		drift_page_say(p, ROLE_BAD, e.text);
	p->n = 0;
	for (size_t i = 0; i < p->table.n; i++)
		if (keeps(p, &p->table.row[p->order[i]]))
			p->order[p->n++] = p->order[i];
	select_kept(p);
	p->top = 0;
	drift_page_settle(p);
}

void drift_page_select(struct drift_page *p, long to)
{
	long last = (long)p->n - 1;
	p->selected = to < 0 || last < 0 ? 0 : to > last ? (size_t)last : (size_t)to;
	drift_page_settle(p);
}

/* --- opening, loading, size, clock --- */

void drift_page_open(struct drift_page *p, const struct run *run)
{
	memset(p, 0, sizeof *p);
	p->run = run;
	p->sort = DRIFT_STALE;
	p->grid_rows = p->grid_cols = p->list = 1;
	text_view_start(&p->details, 1);
	text_view_start(&p->text, 1);
}

void drift_page_drop(struct drift_page *p)
{
	p->residuals_wanted = p->residuals_wanted || p->mode == DRIFT_MODE_RESIDUALS;
	residual_view_close(&p->residuals);
	drift_table_free(&p->table);
	free(p->plan);
	free(p->order);
	p->plan = NULL;
	p->order = NULL;
	p->n = p->selected = p->top = 0;
	p->loaded = false;
	if (p->mode == DRIFT_MODE_RESIDUALS)
		p->mode = DRIFT_MODE_LIST;
}

void drift_page_close(struct drift_page *p)
{
	drift_page_drop(p);
}

enum status drift_page_take(struct drift_page *p, struct drift_table *table, struct err *e)
{
	uint8_t *plan = calloc(table->n + 1, sizeof *plan);
	size_t *order = calloc(table->n + 1, sizeof *order);
	if (!plan || !order) {
		free(plan);
		free(order);
		drift_table_free(table);
		return err_set(e, ST_MEMORY, "no memory for %zu targets", table->n);
	}
	drift_page_drop(p);
	p->table = *table;
	*table = (struct drift_table){.n = 0};
	p->plan = plan;
	p->order = order;
	for (size_t i = 0; i < p->table.n; i++) {
		struct drift_row *row = &p->table.row[i];
		p->plan[i] = (uint8_t)(row->search == REFRESH_SEARCHED
					   ? SEARCH_DONE
					   : drift_plan_of(row, &p->table, p->wants_refresh));
		if (p->plan[i] == SEARCH_NONE && p->wants_refresh && p->table.n_sites > 0)
			row->search = REFRESH_NO_CHANCE;
	}
	p->loaded = true;
	p->warm = false;
	p->warm_day = 0;
	p->warm_site = 0;
	drift_page_arrange(p);
	return ST_OK;
}

static enum status open_residuals(struct drift_page *p, struct run *run, struct err *e)
{
	const struct drift_row *row = drift_page_selected(p);
	p->residuals_wanted = false;
	if (!row)
		return ST_OK;
	enum status s = residual_view_load(&p->residuals, run, row->prepared, e);
	if (s == ST_OK)
		p->mode = DRIFT_MODE_RESIDUALS;
	drift_page_settle(p);
	return s;
}

enum status drift_page_load(struct drift_page *p, struct run *run, struct err *e)
{
	struct drift_choice choice;
	struct drift_table table = {.n = 0};
	if (p->loaded && p->residuals_wanted)
		return open_residuals(p, run, e);
	enum status s = drift_choice_of(run, &choice, e);
	if (s != ST_OK)
		return s;
	if (p->at_chosen)
		choice.at = p->chosen_at;
	p->wants_refresh = choice.refresh;
	choice.refresh = false; /* it is searched between keys */
	s = drift_table_make(&table, run, &choice, e);
	if (s == ST_OK)
		s = drift_page_take(p, &table, e);
	return s == ST_OK && p->residuals_wanted ? open_residuals(p, run, e) : s;
}

bool drift_page_change(struct drift_page *p, struct run *run)
{
	struct err e;
	char said[MARKED_BYTES] = "";
	enum status s = ST_OK;
	if (p->wanted_change == CHANGE_COUNT)
		s = residual_view_count(&p->residuals, run, said, &e);
	else if (p->wanted_change == CHANGE_UNDO)
		s = residual_view_undo(&p->residuals, run, said, &e);
	p->wanted_change = CHANGE_NONE;
	drift_page_say(p, s == ST_OK ? ROLE_GOOD : ROLE_BAD, s == ST_OK ? said : e.text);
	return s == ST_OK;
}

void drift_page_size(struct drift_page *p, int rows, int cols, enum tier tier)
{
	p->grid_rows = rows;
	p->grid_cols = cols;
	p->tier = tier;
	p->top = 0;
	if (p->mode == DRIFT_MODE_HELP)
		drift_help_lines(p);
	drift_page_settle(p);
	text_view_scroll(&p->text, 0, drift_view_rows(p));
}

void drift_page_tick(struct drift_page *p, struct utc now)
{
	p->now = now;
	drift_head_texts(p);
}

/* --- the search between keys --- */

/* The next row that waits: the selected one, then those in sight. SIZE_MAX: none. */
static size_t next_waiting(const struct drift_page *p)
{
	if (!p->loaded || p->n == 0)
		return SIZE_MAX;
	size_t row = p->order[p->selected];
	if (p->plan[row] == SEARCH_WANTED || p->plan[row] == SEARCH_IF_SELECTED)
		return row;
	for (size_t i = p->top; i < p->n && i < p->top + (size_t)p->list; i++)
		if (p->plan[p->order[i]] == SEARCH_WANTED)
			return p->order[i];
	return SIZE_MAX;
}

bool drift_page_work_waits(const struct drift_page *p)
{
	return next_waiting(p) != SIZE_MAX;
}

/* The first search of a site makes tables of the Sun for a year of nights: they are made beforehand, some at
 * a time. */
static enum status warm_up(struct drift_page *p, struct run *run, struct err *e)
{
	struct night *night = calloc(1, sizeof *night);
	enum status s = night ? ST_OK : err_set(e, ST_MEMORY, "no memory for a night");
	for (int i = 0; s == ST_OK && i < DRIFT_WARM_NIGHTS && !p->warm; i++) {
		const struct site *site = &p->table.site[p->warm_site];
		int32_t mjd = night_date_of(site->lon_east_deg, p->table.now) + p->warm_day;
		s = night_build(night, site, &run->clock, mjd, run->memo, e);
		if (++p->warm_day > REFRESH_FIRST_DAYS) {
			p->warm_day = 0;
			p->warm = ++p->warm_site >= p->table.n_sites;
		}
	}
	free(night);
	return s;
}

void drift_page_work(struct drift_page *p, struct run *run)
{
	struct err e;
	size_t at = next_waiting(p);
	enum status s;
	if (at == SIZE_MAX)
		return;
	if (!p->warm && p->warm_site < p->table.n_sites) {
		s = warm_up(p, run, &e);
	} else {
		struct drift_table one = p->table;
		one.row = &p->table.row[at];
		one.n = 1;
		one.row->search = REFRESH_SEARCHED;
		s = drift_search(&one, run, &e);
		p->plan[at] = SEARCH_DONE;
	}
	if (s != ST_OK) {
		p->plan[at] = SEARCH_NONE;
		drift_page_say(p, ROLE_BAD, e.text);
	}
	drift_page_settle(p);
}

/* --- the table, over states of no type --- */

static void open_state(void *state, const struct run *run)
{
	drift_page_open(state, run);
}
static void close_state(void *state)
{
	drift_page_close(state);
}
static void go_to(void *state, int32_t evening_mjd)
{
	(void)state; /* it shows no night */
	(void)evening_mjd;
}
static void drop(void *state)
{
	drift_page_drop(state);
}
static enum status load(void *state, struct run *run, struct err *e)
{
	return drift_page_load(state, run, e);
}
static void size(void *state, int rows, int cols, enum tier tier)
{
	drift_page_size(state, rows, cols, tier);
}
static void tick(void *state, struct utc now)
{
	drift_page_tick(state, now);
}
static enum want key(void *state, uint32_t code)
{
	return drift_page_key(state, code);
}
static void say(void *state, enum role role, const char *text)
{
	drift_page_say(state, role, text);
}
static void draw(const void *state, struct grid *g)
{
	drift_page_draw(state, g);
}
static bool change(void *state, struct run *run)
{
	return drift_page_change(state, run);
}
static bool work_waits(const void *state)
{
	return drift_page_work_waits(state);
}
static void work(void *state, struct run *run)
{
	drift_page_work(state, run);
}

const struct page page_drift = {.word = "drift",
				.bytes = sizeof(struct drift_page),
				.open = open_state,
				.close = close_state,
				.go_to = go_to,
				.drop = drop,
				.load = load,
				.size = size,
				.tick = tick,
				.key = key,
				.say = say,
				.draw = draw,
				.change = change,
				.work_waits = work_waits,
				.work = work,
				.quiet_s = 0.06};
