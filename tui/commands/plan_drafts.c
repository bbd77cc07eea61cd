/* SPDX-License-Identifier: MIT
 * The drafts of a night: listed, laid side by side, taken out of the lists. */
#include "db/plans.h"
#include "ephem/number_text.h"
#include "tui/commands/plan.h"
#include "tui/diagnose.h"
#include "tui/pages/night_head.h"
#include "tui/sheets/json.h"
#include "tui/sheets/order_text.h"
#include "tui/sheets/plan_sheet.h"
#include "tui/sheets/text.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* --- kept for others --- */

static const char *telescope_name(const struct telescope_list *list, int64_t id)
{
	for (size_t i = 0; i < list->n; i++)
		if (list->telescope[i].id == id)
			return list->telescope[i].name;
	return NULL;
}

/* `for Cassegrain (--telescope Cassegrain)` */
static void put_kept_for(const struct run *r, const struct telescope_list *removed, int64_t id, char *out,
			 size_t n)
{
	const char *name = id == 0 ? "none" : telescope_name(&r->telescopes, id);
	const size_t used = strlen(out);
	if (!name)
		name = telescope_name(removed, id);
	if (!name || used >= n)
		return;
	snprintf(out + used, n - used, "%s%s%.120s (--telescope '%.120s')", used ? ", " : "",
		 id == 0 ? "" : "for ", id == 0 ? "without a telescope" : name, name);
}

void plan_kept_elsewhere_note(struct run *r, int32_t evening_mjd, const char *command)
{
	struct plan_list list = {.n = 0};
	struct telescope_list removed = {.n = 0};
	struct err e;
	char kept[600] = "";
	bool here = false;
	if (!r->store || r->site.id == 0 ||
	    plans_list(r->store, r->site.id, evening_mjd, evening_mjd, &list, &e) != ST_OK)
		return;
	if (telescopes_load_removed(r->store, &removed, &e) != ST_OK)
		removed = (struct telescope_list){.n = 0};
	for (size_t i = 0; i < list.n; i++) {
		const struct plan_row *p = &list.plan[i];
		if (p->kept && p->telescope_id == r->telescope.id)
			here = true;
		else if (p->kept)
			put_kept_for(r, &removed, p->telescope_id, kept, sizeof kept);
	}
	if (!here && kept[0] && r->has_telescope)
		diagnose(command, "no plan of this night is kept for %.120s; one is kept %s",
			 r->telescope.name, kept);
	else if (!here && kept[0])
		diagnose(command, "no plan of this night is kept without a telescope; one is kept %s", kept);
	telescope_list_free(&removed);
	plan_list_free(&list);
}

/* --- list --- */

static void list_text(FILE *to, const struct run *r, int32_t mjd, const struct plan_list *list)
{
	char name[64], worth[NUMBER_TEXT_MAX];
	long shown = 0;
	night_name(mjd, name, sizeof name);
	fprintf(to, "Drafts of night %s\n", name);
	for (size_t i = 0; i < list->n; i++) {
		const struct plan_row *p = &list->plan[i];
		if (p->telescope_id != r->telescope.id)
			continue;
		shown++;
		number_text_fixed(p->worth, 2, worth);
		text_cell(to, p->draft, 40, false);
		fprintf(to, "%s: edition %d, worth %s, stored %s by ", p->kept ? ", kept" : "", p->edition,
			worth, p->stored_utc);
		text_cell(to, p->who, NAME_CHARS_MAX, false);
		fputc('\n', to);
	}
	if (shown == 0)
		fputs("None is stored (wane plan DATE --keep).\n", to);
}

static void list_json(FILE *to, const struct run *r, const struct plan_list *list)
{
	struct json j = json_begin(to);
	json_open(&j, NULL, '[', false);
	for (size_t i = 0; i < list->n; i++) {
		const struct plan_row *p = &list->plan[i];
		if (p->telescope_id != r->telescope.id)
			continue;
		json_open(&j, NULL, '{', true);
		json_text(&j, "draft", p->draft);
		json_bool(&j, "kept", p->kept);
		json_whole(&j, "edition", p->edition);
		json_number(&j, "worth_total", p->worth, 6);
		json_number(&j, "worth_bound", p->bound, 6);
		json_text(&j, "stored_utc", p->stored_utc);
		json_text(&j, "who", p->who);
		json_close(&j, '}');
	}
	json_close(&j, ']');
	json_end(&j);
}

int plan_list_write(struct run *r, int32_t evening_mjd, enum format format, struct out *out)
{
	struct plan_list list = {.n = 0};
	struct err e;
	if (r->store && r->site.id != 0 &&
	    plans_list(r->store, r->site.id, evening_mjd, evening_mjd, &list, &e) != ST_OK) {
		out_abandon(out);
		return plan_fault(&e);
	}
	if (list.n_bad > 0)
		diagnose("store", "%s", list.bad);
	if (format == FORMAT_TEXT)
		list_text(out->file, r, evening_mjd, &list);
	else
		list_json(out->file, r, &list);
	plan_list_free(&list);
	return out_commit(out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}

/* --- compare --- */

struct side {
	struct night_view night;
	struct plan_view view;
	bool open;
};

static enum status side_open(struct side *side, struct run *r, int32_t mjd, const char *draft, struct err *e)
{
	const struct plan_wish wish = {.draft = draft, .moved_min = r->options->moved_min};
	char got[ERR_QUOTE_MAX];
	enum status s = plan_get(r, mjd, &wish, &side->night, &side->view, NULL, e);
	side->open = s == ST_OK;
	if (s != ST_OK || !draft || side->view.stored)
		return s;
	err_quote(draft, strlen(draft), got);
	return err_set(e, ST_ABSENT, "no such draft this night (got \"%s\"; see wane plan DATE --list)", got);
}

static void side_close(struct side *side)
{
	if (side->open)
		plan_view_free(&side->view);
	night_view_free(&side->night);
}

static void total_line(FILE *to, const struct plan_view *v)
{
	char worth[ORDER_WORTH_BYTES];
	order_worth_words(v, worth);
	text_cell(to, v->draft[0] ? v->draft : "the proposal", 40, false);
	fprintf(to, "%s: %zu item%s, worth %s\n", v->kept ? ", kept" : "", v->n_items,
		v->n_items == 1 ? "" : "s", worth);
}

static bool compare_out(FILE *to, const struct side *a, const struct side *b, const char *const *since,
			char **line, size_t n, enum format format)
{
	const struct sheet_changes changes = {.since = *since, .line = line, .n = n};
	if (format != FORMAT_TEXT)
		return plan_json(to, &b->view, &changes);
	total_line(to, &a->view);
	total_line(to, &b->view);
	for (size_t i = 0; i < n; i++) {
		fputs("  ", to);
		text_cell(to, line[i], 800, false);
		fputc('\n', to);
	}
	if (n == 0)
		fputs("The two are the same.\n", to);
	return true;
}

int plan_compare_write(struct run *r, int32_t evening_mjd, enum format format, struct out *out)
{
	const struct options *o = r->options;
	struct side a = {.open = false}, b = {.open = false};
	struct err e;
	char **line = NULL;
	const char *since;
	size_t n = 0;
	int code = EXIT_DONE;
	enum status s = side_open(&a, r, evening_mjd, o->draft, &e);
	if (s == ST_OK)
		s = side_open(&b, r, evening_mjd, o->compare, &e);
	if (s == ST_OK)
		s = plan_changes(&a.view, &b.view, &line, &n, &e);
	if (s == ST_OK) {
		since = a.view.draft[0] ? a.view.draft : "the proposal";
		if (!compare_out(out->file, &a, &b, &since, line, n, format))
			s = err_set(&e, ST_MEMORY, "memory: none for a plan");
	}
	if (s != ST_OK) {
		out_abandon(out);
		code = plan_fault(&e);
	} else if (out_commit(out, &e) != ST_OK)
		code = diagnose_whole(&e, EXIT_UNMET);
	for (size_t i = 0; i < n; i++)
		free(line[i]);
	free(line);
	side_close(&a);
	side_close(&b);
	return code;
}

/* --- remove --- */

int plan_remove_draft(struct run *r, int32_t evening_mjd, const char *draft)
{
	struct plan_row row;
	struct err e = {.text = ""};
	char utc[UTC_TEXT_MAX], got[ERR_QUOTE_MAX];
	const struct change change = change_of(r, "plan remove", utc);
	enum status s = plan_find(r->store, r->site.id, r->telescope.id, evening_mjd, draft, &row, &e);
	err_quote(draft, strlen(draft), got);
	if (s == ST_ABSENT)
		(void)err_set(&e, ST_ABSENT,
			      "no such draft this night (got \"%s\"; see wane plan DATE --list)", got);
	if (s != ST_OK)
		return plan_fault(&e);
	const int64_t id = row.id;
	plan_row_free(&row);
	s = store_begin(r->store, &change, &e);
	if (s == ST_OK) {
		s = plan_remove(r->store, id, &e);
		s = store_end(r->store, s, &e);
	}
	return s == ST_OK ? EXIT_DONE : plan_fault(&e);
}
