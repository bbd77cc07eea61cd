/* SPDX-License-Identifier: MIT
 * A stored plan as a view: what was planned, as it was shown. */
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char main_draft[] = "main";

enum status stored_find(struct run *r, int32_t evening_mjd, const char *draft, struct plan_row *out,
			struct err *e)
{
	*out = (struct plan_row){.id = 0};
	if (!r->store || r->site.id == 0)
		return ST_OK;
	err_clear(e);
	enum status s = plan_find(r->store, r->site.id, r->telescope.id, evening_mjd, draft, out, e);
	if (s == ST_ABSENT && !draft) {
		s = plan_find(r->store, r->site.id, r->telescope.id, evening_mjd, main_draft, out, e);
		/* nobody asked for it, and it is not kept: it is in nobody's way but in that of its name */
		if (s == ST_STORE) {
			*out = (struct plan_row){.n_bad = 1};
			snprintf(out->bad, sizeof out->bad,
				 "draft %s can't be read: left out; see `wane check`", main_draft);
			err_clear(e);
			return ST_OK;
		}
	}
	if (s != ST_ABSENT)
		return s;
	*out = (struct plan_row){.id = 0};
	return ST_OK;
}

/* --- limits and rules --- */

/* The rules by name; factor: what is stored is the rule times it. */
static const struct rule_name {
	const char *name;
	size_t offset;
	double factor;
} rule_names[] = {
    {"settle_min", offsetof(struct plan_rules, settle_d), DAY_MIN},
    {"slew_deg_s", offsetof(struct plan_rules, slew_deg_d), 1.0 / DAY_S},
    {"filter_min", offsetof(struct plan_rules, filter_d), DAY_MIN},
    {"first_slew_deg", offsetof(struct plan_rules, first_slew_deg), 1.0},
    {"field_deg", offsetof(struct plan_rules, field_deg), 1.0},
    {"limb_share", offsetof(struct plan_rules, limb_share), 1.0},
    {"limb_trust", offsetof(struct plan_rules, limb_trust), 1.0},
    {"short_share", offsetof(struct plan_rules, short_share), 1.0},
    {"unknown_share", offsetof(struct plan_rules, unknown_share), 1.0},
};
enum { RULE_NAMES = sizeof rule_names / sizeof rule_names[0] };

const char *plan_limits_text(struct plan_view *v)
{
	const enum stored_key keys[] = {KEY_NEED_MIN, KEY_WORTH_BY, KEY_FALLBACK_BITS};
	char text[1400], number[NUMBER_TEXT_MAX], value_text[STORED_TEXT_BYTES];
	const struct run *r = v->run;
	size_t used = 0;
	for (int id = 0; id < LIM_COUNT; id++) {
		const bool automatic =
		    (id == LIM_BASELINE_BEFORE || id == LIM_BASELINE_AFTER) && !(r->limits.value[id] >= 0.0);
		number_text(id == LIM_SUN_BASELINE && isnan(r->limits.value[id]) ? r->limits.value[LIM_SUN]
										 : r->limits.value[id],
			    number);
		used += (size_t)snprintf(text + used, sizeof text - used, "%s=%s\t", limit_rules[id].key,
					 automatic ? "auto" : number);
	}
	used += (size_t)snprintf(text + used, sizeof text - used, "kind=%s\t", kinds_text(r->kinds));
	number_text(MIN_CHANCE_MACHINE, number);
	used += (size_t)snprintf(text + used, sizeof text - used, "min_chance=%s\t", number);
	number_text(r->clock.ut1_utc_s, number);
	used += (size_t)snprintf(text + used, sizeof text - used, "ut1_utc_s=%s", number);
	for (int i = 0; i < RULE_NAMES; i++) {
		double value;
		memcpy(&value, (const char *)&v->rules + rule_names[i].offset, sizeof value);
		/* times were minutes and seconds before they were days: 12 digits take off what that cost */
		snprintf(number, sizeof number, "%.12g", value * rule_names[i].factor);
		used +=
		    (size_t)snprintf(text + used, sizeof text - used, "\t%s=%s", rule_names[i].name, number);
	}
	for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++) {
		stored_key_text(keys[i], stored_value(&r->stored, keys[i]), value_text);
		used += (size_t)snprintf(text + used, sizeof text - used, "\t%s=%s",
					 stored_key_rules[keys[i]].name, value_text);
	}
	return plan_copy(v, text);
}

/* The value of a name in a limits text, and its length; NULL it has none. */
static const char *limit_value(const char *text, const char *name, size_t n, size_t *length)
{
	for (const char *at = text; *at;) {
		const size_t cell = strcspn(at, "\t");
		if (cell > n && at[n] == '=' && strncmp(at, name, n) == 0) {
			*length = cell - n - 1;
			return at + n + 1;
		}
		at += cell + (at[cell] == '\t');
	}
	return NULL;
}

static void put_limit(char *out, size_t n, const char *name, int name_n, const char *value, size_t value_n)
{
	const size_t used = strlen(out);
	snprintf(out + used, n - used, "%s%.*s=%.*s", out[0] ? ", " : "", name_n, name,
		 value_n ? (int)value_n : 4, value_n ? value : "none");
}

void limits_echo(struct echo *echo, const char *stored, const char *now)
{
	char new[400] = "", old[400] = "", line[900];
	for (const char *at = now; *at;) {
		const size_t cell = strcspn(at, "\t"), name = strcspn(at, "=");
		size_t n = 0;
		const char *was = name < cell ? limit_value(stored, at, name, &n) : NULL;
		if (was && (n != cell - name - 1 || strncmp(was, at + name + 1, n) != 0)) {
			put_limit(new, sizeof new, at, (int)name, at + name + 1, cell - name - 1);
			put_limit(old, sizeof old, at, (int)name, was, n);
		}
		at += cell + (at[cell] == '\t');
	}
	if (!new[0])
		return;
	snprintf(line, sizeof line, "worked out with %s; the stored plan was made with %s", new, old);
	echo_line(echo, line);
}

static void read_rules(struct plan_rules *rules, const char *text)
{
	for (const char *at = text; *at;) {
		const size_t n = strcspn(at, "\t"), word = strcspn(at, "=");
		for (int i = 0; word < n && i < RULE_NAMES; i++) {
			double value;
			if (strlen(rule_names[i].name) != word || memcmp(rule_names[i].name, at, word) != 0 ||
			    number_parse(at + word + 1, n - word - 1, &value, NULL, NULL) != ST_OK)
				continue;
			value /= rule_names[i].factor;
			memcpy((char *)rules + rule_names[i].offset, &value, sizeof value);
		}
		at += n + (at[n] == '\t');
	}
}

/* --- items --- */

static enum plan_state state_of(const char *word)
{
	for (int i = 0; i < PLAN_STATE_COUNT; i++)
		if (strcmp(plan_state_words[i], word) == 0)
			return (enum plan_state)i;
	return PLAN_PLANNED;
}

static enum status instant(const struct plan_view *v, const char *text, struct utc *out, struct err *e)
{
	return utc_parse(&v->run->leap, text, out, e);
}

static const char *variant_word(const char *stored)
{
	for (int i = 0; i < VARIANT_COUNT; i++)
		if (strcmp(variant_words[i], stored) == 0)
			return variant_words[i];
	return variant_words[VARIANT_WHOLE];
}

static enum status member_of_row(struct plan_view *v, struct plan_member_view *m,
				 const struct plan_window_row *row, struct err *e)
{
	member_from_text(v, m, row->figures);
	m->target = plan_copy(v, row->target);
	m->variant = variant_word(row->variant);
	m->kind = row->kind;
	m->epoch = row->epoch;
	m->target_id = row->target_id;
	m->ephemeris_id = row->ephemeris_id;
	m->worth = row->worth;
	return member_target(v, m, e);
}

enum status stored_item(struct plan_view *v, struct plan_item_view *item, const struct plan_item_row *row,
			struct err *e)
{
	*item = (struct plan_item_view){
	    .key = plan_copy(v, row->key),
	    .state = state_of(row->state),
	    .cause = plan_copy(v, row->cause),
	    .note = plan_copy(v, row->note),
	    .marked_utc = plan_copy(v, row->marked_utc),
	    .worth = row->worth,
	    .has_latest = row->latest_start_utc[0] != '\0',
	    .n = row->n,
	    .member = plan_alloc(v, row->n, sizeof *item->member),
	};
	enum status s = item->member ? ST_OK : plan_memory(v, e);
	if (s == ST_OK)
		s = instant(v, row->slew_by_utc, &item->slew_by, e);
	if (s == ST_OK)
		s = instant(v, row->start_utc, &item->start, e);
	if (s == ST_OK && item->has_latest)
		s = instant(v, row->latest_start_utc, &item->latest_start, e);
	if (s == ST_OK)
		s = instant(v, row->end_utc, &item->end, e);
	for (size_t i = 0; s == ST_OK && i < row->n; i++)
		s = member_of_row(v, &item->member[i], &row->window[i], e);
	return s;
}

static bool is_pinned(const struct plan_view *v, const struct plan_choices *c,
		      const struct plan_item_view *item)
{
	for (size_t i = 0; i < c->n; i++) {
		struct event_name name;
		if (c->choice[i].kind != CHOICE_PIN ||
		    event_name_find(v->run, c->choice[i].text, &name, NULL) != ST_OK)
			continue;
		for (size_t k = 0; k < item->n; k++)
			if (name.target->id == item->member[k].target_id &&
			    (!name.one || name.epoch == item->member[k].epoch))
				return true;
	}
	return false;
}

static bool was_missed(const struct plan_choices *c, const char *key)
{
	for (size_t i = 0; i < c->n_missed; i++)
		if (strcmp(c->missed[i], key) == 0)
			return true;
	return false;
}

/* What was lost since the edition was stored, or never begun, counts no more: as in a plan worked out anew.
 */
static void worth_of_marked(struct plan_view *v, const struct plan_choices *c)
{
	double worth = 0.0;
	for (size_t i = 0; i < v->n_items; i++) {
		const struct plan_item_view *item = &v->item[i];
		if (item->state != PLAN_LOST && (item->state > PLAN_PINNED || !was_missed(c, item->key)))
			worth += item->worth;
	}
	/* the total as it was stored has been summed in another order */
	if (fabs(worth - v->worth) < 1e-9)
		return;
	v->bound += worth - v->worth;
	v->worth = worth;
}

/* --- what was left out --- */

const char *left_text(struct plan_view *v)
{
	char cost[NUMBER_TEXT_MAX];
	size_t room = 1, used = 0;
	for (size_t i = 0; i < v->n_left; i++)
		room += strlen(v->left[i].target) + strlen(v->left[i].reason) + 80;
	char *text = plan_alloc(v, room, 1);
	for (size_t i = 0; text && i < v->n_left; i++) {
		const struct plan_left_view *l = &v->left[i];
		number_text(l->cost, cost);
		used += (size_t)snprintf(text + used, room - used, "%s\t%s\t%ld\t%s\t%s\n", l->target,
					 l->kind == KIND_TRANSIT ? "transit" : "occultation", l->epoch,
					 l->reason, cost);
	}
	return text;
}

static void left_of_line(struct plan_view *v, const char *line, size_t n)
{
	const char *part[5] = {line, "", "", "", ""}, *end = line + n;
	size_t length[5] = {n, 0, 0, 0, 0};
	int k = 0;
	for (const char *at = line; k < 5; k++) {
		const char *tab = memchr(at, '\t', (size_t)(end - at));
		part[k] = at;
		length[k] = (size_t)((tab ? tab : end) - at);
		if (!tab)
			break;
		at = tab + 1;
	}
	if (k < 3)
		return;
	double cost = NAN;
	if (length[4] > 0 && number_parse(part[4], length[4], &cost, NULL, NULL) != ST_OK)
		cost = NAN;
	v->left[v->n_left++] = (struct plan_left_view){
	    .target = plan_copy_n(v, part[0], length[0]),
	    .kind = length[1] == strlen("transit") ? KIND_TRANSIT : KIND_OCCULTATION,
	    .epoch = strtol(part[2], NULL, 10),
	    .reason = plan_copy_n(v, part[3], length[3]),
	    .cost = cost,
	};
}

static void left_of_text(struct plan_view *v, const char *text)
{
	size_t lines = 1;
	for (const char *at = text; *at; at++)
		lines += *at == '\n';
	v->n_left = 0;
	v->left = plan_alloc(v, lines, sizeof *v->left);
	for (const char *at = text; v->left && *at;) {
		const size_t n = strcspn(at, "\n");
		left_of_line(v, at, n);
		at += n + (at[n] == '\n');
	}
}

/* --- all of it --- */

enum status stored_view(struct plan_view *v, const struct plan_row *row, struct plan_choices *c,
			struct err *e)
{
	enum status s = ST_OK;
	v->draft = plan_copy(v, row->draft);
	v->stored = true;
	v->kept = row->kept;
	v->plan_id = row->id;
	v->damage = plan_copy(v, row->bad);
	v->edition = row->edition;
	v->stored_utc = plan_copy(v, row->stored_utc);
	v->who = plan_copy(v, row->who);
	v->limits = plan_copy(v, row->limits);
	v->leap_date = plan_copy(v, row->leap_date);
	v->worth = row->worth;
	v->bound = row->bound;
	v->optimal = row->optimal;
	read_rules(&v->rules, row->limits);
	v->n_blocks = 0;
	choices_read(v, c, row->choices);
	left_of_text(v, row->left_out);
	v->item = plan_alloc(v, row->n, sizeof *v->item);
	if (!v->item)
		return plan_memory(v, e);
	for (size_t i = 0; s == ST_OK && i < row->n; i++) {
		struct plan_item_view *item = &v->item[v->n_items++];
		s = stored_item(v, item, &row->item[i], e);
		if (item->state == PLAN_PLANNED && is_pinned(v, c, item))
			item->state = PLAN_PINNED;
		if (item->state <= PLAN_PINNED && !item->note[0] && was_missed(c, item->key))
			item->note = "not begun";
		cut_note(v, cut_of(c->cut, c->n_cut, item->key), item);
	}
	worth_of_marked(v, c);
	return s == ST_OK ? plan_memory(v, e) : s;
}
