/* SPDX-License-Identifier: MIT
 * The plan of a night: as it is stored, or worked out anew from what is stored and what is wished. */
#include "db/history.h"
#include "ephem/units.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* --- the night --- */

/* The windows that a plan chooses from: whatever lists show, down to the least chance that machines are told
 * of. */
static enum status windows(struct run *r, struct night_view *night, struct err *e)
{
	const struct window_choice choice = {
	    .kinds = r->kinds, .min_chance = MIN_CHANCE_MACHINE, .free = &night->free};
	return night_windows(&night->night, r->prepared, r->n_prepared, &choice, &night->list, &night->hidden,
			     e);
}

/* Blocks and lost time cut the night further; what they take is seen in its windows. */
static enum status cut_night(struct plan_view *v, struct run *r, struct night_view *night, struct err *e)
{
	blocks_free_time(v, &night->night, &night->free);
	for (size_t i = 0; i < v->n_blocks; i++)
		night->cut = night->cut || v->block[i].kind != BLOCK_POOR;
	blocks_near_sun(v);
	return windows(r, night, e);
}

/* --- head --- */

static enum status newest_change(struct plan_view *v, struct err *e)
{
	struct change_row *row = NULL;
	size_t n = 0;
	v->stored_utc = v->who = "";
	if (!v->run->store)
		return ST_OK;
	enum status s = history_list(v->run->store, 0, &row, &n, e);
	if (s == ST_OK && n > 0) {
		v->stored_utc = plan_copy(v, row[0].utc);
		v->who = plan_copy(v, row[0].who);
	}
	free(row);
	return s;
}

static void head(struct plan_view *v, struct run *r, const struct night_view *night)
{
	const struct plan_rules rules = run_plan_rules(r);
	*v = plan_empty(r, night, &rules);
	v->telescope = plan_copy(v, r->telescope.name);
}

/* What holds of a plan that is worked out now. */
static enum status head_of_made(struct plan_view *v, struct err *e)
{
	char text[32];
	const struct date d = date_from_mjd(v->run->leap.expires_mjd);
	snprintf(text, sizeof text, "%04d-%02d-%02d", d.year, d.month, d.day);
	v->leap_date = plan_copy(v, text);
	v->rules = run_plan_rules(v->run);
	v->limits = plan_limits_text(v);
	v->stored = v->kept = false;
	return newest_change(v, e);
}

static void pins_of(struct plan_view *v, const struct plan_choices *c)
{
	v->pin = plan_alloc(v, c->n, sizeof *v->pin);
	v->drop = plan_alloc(v, c->n, sizeof *v->drop);
	v->n_pins = v->n_drops = 0;
	for (size_t i = 0; v->pin && v->drop && i < c->n; i++) {
		if (c->choice[i].kind == CHOICE_PIN)
			v->pin[v->n_pins++] = c->choice[i].text;
		else if (c->choice[i].kind == CHOICE_DROP)
			v->drop[v->n_drops++] = c->choice[i].text;
	}
}

void plan_finish(struct plan_view *v)
{
	const struct night *night = &v->night->night;
	for (size_t i = 0; i < v->n_items; i++) {
		struct plan_item_view *item = &v->item[i];
		item->order = (int)i + 1;
		item->in_day = intervals_overlap(&night->sun_up, night_of_utc(night, item->slew_by),
						 night_of_utc(night, item->end)) > 1.0 / DAY_S;
	}
	v->gap_min = v->rules.settle_d * DAY_MIN;
	plan_if_missed(v);
}

/* --- as it is stored --- */

static enum status as_stored(struct plan_view *v, struct run *r, struct night_view *night, double moved_min,
			     struct err *e)
{
	enum status s = cut_night(v, r, night, e);
	return s == ST_OK ? stored_moves(v, moved_min, e) : s;
}

/* --- worked out anew --- */

/* What is pinned or dropped by this wish has a window that night. */
static enum status has_window(const struct plan_view *v, const char *word, const char *text, struct err *e)
{
	struct event_name name;
	char got[ERR_QUOTE_MAX];
	enum status s = event_name_find(v->run, text, &name, e);
	if (s != ST_OK)
		return s;
	for (size_t i = 0; i < v->night->list.n; i++) {
		const struct window_event *w = &v->night->list.w[i].event;
		if (w->prepared->target == name.target && (!name.one || name.epoch == w->epoch))
			return ST_OK;
	}
	err_quote(text, strlen(text), got);
	return err_set(e, ST_ABSENT,
		       "%s: no window this night: no event of it whose ingress or egress has a chance of %g "
		       "(got \"%s\")",
		       word, MIN_CHANCE_MACHINE, got);
}

static enum status wished_windows(const struct plan_view *v, const struct plan_wish *w, struct err *e)
{
	enum status s = ST_OK;
	for (int i = 0; s == ST_OK && i < w->n_pin; i++)
		s = has_window(v, "pin", w->pin[i], e);
	for (int i = 0; s == ST_OK && i < w->n_drop; i++)
		s = has_window(v, "drop", w->drop[i], e);
	return s;
}

static enum status make_anew(struct plan_view *v, struct run *r, const struct plan_wish *wish,
			     struct plan_choices *c, struct night_view *night, struct echo *echo,
			     struct err *e)
{
	const struct plan_clock clock = run_plan_clock(r, &night->night);
	struct plan_standing standing;
	if (wish->afresh)
		c->n = 0;
	enum status s = choices_wish(v, c, wish, e);
	if (s == ST_OK)
		s = blocks_resolve(v, c, &clock, wish, echo, e);
	if (s == ST_OK)
		s = cut_night(v, r, night, e);
	if (s == ST_OK)
		s = wished_windows(v, wish, e);
	if (s == ST_OK)
		s = plan_stand(v, wish, &clock, c, echo, &standing, e);
	const char *stored_limits = v->limits;
	if (s == ST_OK)
		s = head_of_made(v, e);
	if (s == ST_OK && v->limits)
		limits_echo(echo, stored_limits, v->limits);
	if (s == ST_OK)
		s = plan_propose(v, c, &standing, wish->costs, e);
	return s;
}

static enum status get(struct run *r, int32_t evening_mjd, const struct plan_wish *wish,
		       const struct plan_row *row, struct night_view *night, struct plan_view *v,
		       struct echo *echo, struct err *e)
{
	struct plan_choices *c = plan_alloc(v, 1, sizeof *c);
	if (!c)
		return plan_memory(v, e);
	enum status s = run_night_free(r, &r->site, evening_mjd, night, e);
	v->damage = plan_copy(v, row->bad);
	if (s == ST_OK && row->id != 0)
		s = stored_view(v, row, c, e);
	if (s != ST_OK)
		return s;
	if (row->id != 0 && !wish_any(wish))
		s = as_stored(v, r, night, wish->moved_min, e);
	else
		s = make_anew(v, r, wish, c, night, echo, e);
	if (s == ST_OK)
		s = stored_past(v, !wish_any(wish), e);
	if (s != ST_OK)
		return s;
	pins_of(v, c);
	plan_choices_set(v, c);
	plan_finish(v);
	return plan_memory(v, e);
}

enum status plan_get(struct run *r, int32_t evening_mjd, const struct plan_wish *wish,
		     struct night_view *night, struct plan_view *out, char **echo, struct err *e)
{
	struct plan_row row;
	struct echo lines = {.text = NULL};
	head(out, r, night);
	if (echo)
		*echo = NULL;
	enum status s = stored_find(r, evening_mjd, wish->draft, &row, e);
	if (s == ST_OK && r->past && (row.id == 0 || wish_any(wish))) {
		s = err_set(e, ST_ABSENT, "%.80s: nothing is planned for what is no longer stored%s",
			    r->has_telescope ? r->telescope.name : r->site.name,
			    row.id == 0 ? ", and no plan of this night is" : "");
		plan_row_free(&row);
	}
	if (s == ST_OK) {
		s = get(r, evening_mjd, wish, &row, night, out, &lines, e);
		plan_row_free(&row);
	}
	if (s == ST_OK && lines.failed)
		s = err_set(e, ST_MEMORY, "memory: none for a plan");
	if (s == ST_OK && echo)
		*echo = lines.text;
	else
		free(lines.text);
	if (s != ST_OK)
		plan_view_free(out);
	return s;
}
