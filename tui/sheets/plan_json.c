/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_words.h"
#include "tui/sheets/windows.h"

#include <math.h>
#include <string.h>

enum { PIECE_BYTES = 512 };

static void utc_json(struct json *j, const char *key, const struct plan_view *v, struct utc t)
{
	char text[UTC_TEXT_MAX];
	utc_text(&v->run->leap, t, 0, text);
	json_text(j, key, text);
}

static void text_or_null(struct json *j, const char *key, const char *text)
{
	if (text[0])
		json_text(j, key, text);
	else
		json_null(j, key);
}

/* --- a window from its stored figures: the object of `wane night` --- */

/* Lists of words: empty is no unknown. */
static bool is_list(const char *column)
{
	return strcmp(column, "lost_by") == 0 || strcmp(column, "siblings") == 0 ||
	       strcmp(column, "flags") == 0;
}

/* FROM/TO,FROM/TO as [[FROM, TO], ...]. A piece that is not of that form is passed over. */
static void usable_json(struct json *j, const char *usable)
{
	char from[UTC_TEXT_MAX], to[UTC_TEXT_MAX];
	json_open(j, "usable", '[', true);
	for (const char *at = usable; *at;) {
		size_t n = strcspn(at, ","), slash = strcspn(at, "/");
		if (slash < n && slash < sizeof from && n - slash - 1 < sizeof to) {
			snprintf(from, sizeof from, "%.*s", (int)slash, at);
			snprintf(to, sizeof to, "%.*s", (int)(n - slash - 1), at + slash + 1);
			json_open(j, NULL, '[', true);
			json_text(j, NULL, from);
			json_text(j, NULL, to);
			json_close(j, ']');
		}
		at += n + (at[n] == ',');
	}
	json_close(j, ']');
}

static void member_json(struct json *j, const struct plan_member_view *m)
{
	json_open(j, NULL, '{', false);
	for (size_t i = 0; i < column_count; i++) {
		const struct column *c = &columns[i];
		const char *text = m->figure ? m->figure[i] : "";
		if (c->type == VALUE_TEXT || c->type == VALUE_UTC) {
			if (is_list(c->name))
				json_text(j, c->name, text);
			else
				text_or_null(j, c->name, text);
		} else {
			json_digits(j, c->name, json_is_number(text) ? text : "");
		}
	}
	usable_json(j, m->usable);
	json_close(j, '}');
}

/* --- items --- */

static void parts_json(struct json *j, const struct plan_item_view *item)
{
	json_open(j, "parts", '[', false);
	for (size_t i = 0; i < item->n; i++) {
		const struct plan_member_view *m = &item->member[i];
		json_open(j, NULL, '{', true);
		json_text(j, "target", m->target);
		json_text(j, "kind", plan_kind_word(m->kind));
		json_whole(j, "epoch", m->epoch);
		json_text(j, "variant", m->variant);
		json_number(j, "worth", m->worth, 6);
		json_number(j, "moved_min", m->moved_min, 3);
		json_bool(j, "moved", m->moved);
		text_or_null(j, "moved_why", m->moved_why);
		json_exact(j, "ra_deg", m->ra_deg);
		json_exact(j, "dec_deg", m->dec_deg);
		if (m->ephemeris_version > 0)
			json_whole(j, "ephemeris_version", m->ephemeris_version);
		else
			json_null(j, "ephemeris_version");
		text_or_null(j, "ephemeris_source", m->ephemeris_source);
		text_or_null(j, "ephemeris_entered_utc", m->ephemeris_entered_utc);
		text_or_null(j, "ephemeris_scale", m->ephemeris_scale);
		json_close(j, '}');
	}
	json_close(j, ']');
}

static void item_json(struct json *j, const struct plan_view *v, const struct plan_item_view *item)
{
	json_open(j, NULL, '{', false);
	json_whole(j, "order", item->order);
	json_open(j, "windows", '[', false);
	for (size_t i = 0; i < item->n; i++)
		member_json(j, &item->member[i]);
	json_close(j, ']');
	utc_json(j, "slew_by_utc", v, item->slew_by);
	utc_json(j, "start_utc", v, item->start);
	if (item->has_latest)
		utc_json(j, "latest_start_utc", v, item->latest_start);
	else
		json_null(j, "latest_start_utc");
	utc_json(j, "end_utc", v, item->end);
	json_text(j, "state", plan_state_words[item->state]);
	json_text(j, "note", item->note);
	json_text(j, "key", item->key);
	json_number(j, "worth", item->worth, 6);
	parts_json(j, item);
	text_or_null(j, "cause", item->cause);
	text_or_null(j, "marked_utc", item->marked_utc);
	text_or_null(j, "if_missed", item->if_missed);
	json_close(j, '}');
}

void plan_items_json(struct json *j, const char *key, const struct plan_view *v)
{
	json_open(j, key, '[', false);
	for (size_t i = 0; i < v->n_items; i++)
		if (!v->item[i].in_day) /* a program that slews to what it reads here must not be given one */
			item_json(j, v, &v->item[i]);
	json_close(j, ']');
}

/* --- the rest --- */

/* Stored limits, `name=value` with a tab between. */
static void stored_limits_json(struct json *j, const char *limits)
{
	char name[PIECE_BYTES], value[PIECE_BYTES];
	json_open(j, "limits", '{', false);
	for (const char *at = limits; *at;) {
		size_t n = strcspn(at, "\t"), word = strcspn(at, "=");
		if (word > 0 && word < n && n < PIECE_BYTES) {
			snprintf(name, sizeof name, "%.*s", (int)word, at);
			snprintf(value, sizeof value, "%.*s", (int)(n - word - 1), at + word + 1);
			if (json_is_number(value))
				json_digits(j, name, value);
			else
				text_or_null(j, name, value);
		}
		at += n + (at[n] == '\t');
	}
	json_close(j, '}');
}

static void blocks_json(struct json *j, const struct plan_view *v)
{
	json_open(j, "blocks", '[', false);
	for (size_t i = 0; i < v->n_blocks; i++) {
		const struct plan_block_view *b = &v->block[i];
		json_open(j, NULL, '{', true);
		json_text(j, "text", b->text);
		json_text(j, "kind", plan_block_words[b->kind]);
		utc_json(j, "from_utc", v, b->from);
		utc_json(j, "to_utc", v, b->to);
		json_bool(j, "near_sun", b->near_sun);
		json_exact(j, "noise", b->kind == BLOCK_POOR ? b->noise : (double)NAN);
		json_close(j, '}');
	}
	json_close(j, ']');
}

static void left_json(struct json *j, const char *target, enum event_kind kind, long epoch,
		      const char *reason, double cost)
{
	json_open(j, NULL, '{', true);
	json_text(j, "target", target);
	json_text(j, "kind", plan_kind_word(kind));
	json_whole(j, "epoch", epoch);
	json_text(j, "reason", reason);
	json_number(j, "cost", cost, 6);
	json_close(j, '}');
}

static void left_out_json(struct json *j, const struct plan_view *v)
{
	json_open(j, "left_out", '[', false);
	for (size_t i = 0; i < v->n_left; i++) {
		const struct plan_left_view *l = &v->left[i];
		left_json(j, l->target, l->kind, l->epoch, l->reason, l->cost);
	}
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; v->item[i].in_day && k < v->item[i].n; k++) {
			const struct plan_member_view *m = &v->item[i].member[k];
			left_json(j, m->target, m->kind, m->epoch, plan_sun_up_reason, (double)NAN);
		}
	json_close(j, ']');
}

static void texts_json(struct json *j, const char *key, const char *const *text, size_t n)
{
	json_open(j, key, '[', true);
	for (size_t i = 0; i < n; i++)
		json_text(j, NULL, text[i]);
	json_close(j, ']');
}

static void provenance_json(struct json *j, const struct plan_view *v)
{
	text_or_null(j, "draft", v->draft);
	json_bool(j, "stored", v->stored);
	json_bool(j, "kept", v->kept);
	if (v->edition > 0)
		json_whole(j, "edition", v->edition);
	else
		json_null(j, "edition");
	text_or_null(j, "stored_utc", v->stored_utc);
	text_or_null(j, "who", v->who);
	text_or_null(j, "leap_table_until", v->leap_date);
	json_whole(j, "moved", v->moved);
	texts_json(j, "pins", v->pin, v->n_pins);
	texts_json(j, "drops", v->drop, v->n_drops);
	json_text(j, "bound_note",
		  v->optimal ? "no order of what fits is worth more"
			     : "the search was cut short: no order is worth more than worth_bound");
}

bool plan_json(FILE *to, const struct plan_view *v, const struct sheet_changes *changes)
{
	const struct run *r = v->run;
	struct json j = json_begin(to);
	json_open(&j, NULL, '{', false);
	site_json(&j, "site", &r->site);
	night_json(&j, v->night, r->limits.value[LIM_SUN]);
	text_or_null(&j, "telescope", v->telescope);
	if (v->limits[0]) /* stored or not, the same keys */
		stored_limits_json(&j, v->limits);
	else
		limits_json(&j, r, &r->site);
	json_number(&j, "gap_min", v->gap_min, 3);
	json_number(&j, "worth_total", v->worth, 6);
	json_number(&j, "worth_bound", v->bound, 6);
	json_bool(&j, "optimal", v->optimal);
	plan_items_json(&j, "items", v);
	blocks_json(&j, v);
	left_out_json(&j, v);
	provenance_json(&j, v);
	if (changes && changes->since) {
		json_text(&j, "since", changes->since);
		texts_json(&j, "changes", (const char *const *)changes->line, changes->n);
	}
	json_close(&j, '}');
	json_end(&j);
	return true; /* it needs no memory; a fault of the file is told when the result is committed */
}
