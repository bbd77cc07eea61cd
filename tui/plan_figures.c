/* SPDX-License-Identifier: MIT
 * A window's figures as the texts that a plan shows and stores, and back. */
#include "ephem/number_text.h"
#include "tui/parts/columns.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { FIGURE_BYTES = 512, USABLE_BYTES = SPANS_MAX * 2 * 24 };

static const char usable_name[] = "usable", pad_name[] = "pad_min";

/* --- window to texts --- */

static const char *usable_text(struct plan_view *v, const struct window *w, const struct night *n)
{
	char text[USABLE_BYTES] = "", from[UTC_TEXT_MAX], to[UTC_TEXT_MAX];
	size_t used = 0;
	for (int i = 0; i < w->cover.usable.n && used + 48 < sizeof text; i++) {
		utc_text(n->clock.leap, night_utc(n, w->cover.usable.s[i].from_d), 0, from);
		utc_text(n->clock.leap, night_utc(n, w->cover.usable.s[i].to_d), 0, to);
		used += (size_t)snprintf(text + used, sizeof text - used, "%s%s/%s", i ? "," : "", from, to);
	}
	return plan_copy(v, text);
}

static const char **figures_empty(struct plan_view *v)
{
	const char **figure = plan_alloc(v, column_count + 1, sizeof *figure);
	for (size_t i = 0; figure && i <= column_count; i++)
		figure[i] = "";
	return figure;
}

static bool instant(const struct plan_view *v, const struct plan_member_view *m, const char *column,
		    struct utc *out)
{
	const char *text = member_figure(m, column);
	return text[0] && utc_parse(&v->run->leap, text, out, NULL) == ST_OK;
}

static void instants(const struct plan_view *v, struct plan_member_view *m)
{
	(void)instant(v, m, "t1_utc", &m->t1);
	(void)instant(v, m, "t4_utc", &m->t4);
	(void)instant(v, m, "mid_utc", &m->mid);
	m->has_flat = instant(v, m, "t2_utc", &m->t2);
	m->has_flat = instant(v, m, "t3_utc", &m->t3) && m->has_flat;
}

const char *member_pad(const struct plan_member_view *m)
{
	return m->figure ? m->figure[column_count] : "";
}

void member_from_window(struct plan_view *v, struct plan_member_view *m, const struct window *w,
			const struct night *n)
{
	char text[FIGURE_BYTES];
	const struct target *t = w->event.prepared->target;
	m->target = plan_copy(v, t->name);
	m->kind = w->event.kind;
	m->epoch = w->event.epoch;
	m->branch = "";
	m->target_id = t->id;
	m->ephemeris_id = t->ephemeris_id;
	m->usable = usable_text(v, w, n);
	m->moved_min = NAN;
	m->moved_why = "";
	m->figure = figures_empty(v);
	if (!m->figure)
		return;
	for (size_t i = 0; i < column_count; i++) {
		struct value value = column_value(&columns[i], w, n);
		value_machine_text(&columns[i], &value, n->clock.leap, text, sizeof text);
		m->figure[i] = plan_copy(v, text);
	}
	number_text_fixed(w->event.pad_d * 1440.0, 3, text);
	m->figure[column_count] = plan_copy(v, text);
	instants(v, m);
}

/* --- stored text --- */

void member_from_text(struct plan_view *v, struct plan_member_view *m, const char *text)
{
	char name[64];
	m->figure = figures_empty(v);
	m->usable = m->branch = m->moved_why = "";
	m->moved_min = NAN;
	if (!m->figure)
		return;
	for (const char *at = text; *at;) {
		const size_t n = strcspn(at, "\t"), word = strcspn(at, "=");
		if (word < n && word < sizeof name) {
			snprintf(name, sizeof name, "%.*s", (int)word, at);
			const char *value = plan_copy_n(v, at + word + 1, n - word - 1);
			const int column = column_find(name);
			if (column >= 0)
				m->figure[column] = value;
			else if (strcmp(name, usable_name) == 0)
				m->usable = value;
			else if (strcmp(name, pad_name) == 0)
				m->figure[column_count] = value;
		}
		at += n + (at[n] == '\t');
	}
	m->branch = member_figure(m, "branch");
	instants(v, m);
}

const char *member_text(struct plan_view *v, const struct plan_member_view *m)
{
	size_t room = sizeof usable_name + sizeof pad_name + strlen(m->usable) + strlen(member_pad(m)) + 4;
	size_t used = 0;
	for (size_t i = 0; i < column_count; i++)
		room += strlen(columns[i].name) + strlen(m->figure[i]) + 2;
	char *text = plan_alloc(v, room, 1);
	if (!text)
		return NULL;
	for (size_t i = 0; i < column_count; i++) {
		char *value = text + used + strlen(columns[i].name) + 1;
		if (!m->figure[i][0])
			continue;
		used += (size_t)snprintf(text + used, room - used, "%s=%s\t", columns[i].name, m->figure[i]);
		for (; *value && value < text + used - 1; value++) /* the separators are ours */
			if (*value == '\t' || *value == '\n')
				*value = ' ';
	}
	snprintf(text + used, room - used, "%s=%s\t%s=%s", usable_name, m->usable, pad_name, member_pad(m));
	return text;
}

/* --- the target now --- */

const struct prepared *run_prepared(const struct run *r, int64_t id, const char *name)
{
	for (size_t i = 0; r->prepared && i < r->targets.n; i++) {
		const struct target *t = r->prepared[i].target;
		if (t && (id != 0 ? t->id == id : strcmp(t->name, name) == 0))
			return &r->prepared[i];
	}
	return NULL;
}

enum status member_target(struct plan_view *v, struct plan_member_view *m, struct err *e)
{
	const struct prepared *p = run_prepared(v->run, m->target_id, m->target);
	struct ephemeris_row *row = NULL;
	size_t n = 0;
	m->ra_deg = m->dec_deg = m->mag = NAN;
	m->mag_band = m->ephemeris_source = m->ephemeris_entered_utc = m->ephemeris_scale = "";
	if (p) {
		double lon_rad, lat_rad;
		const struct star star = night_star(&v->night->night, p->target);
		vec3_to_angles(star.icrs, &lon_rad, &lat_rad);
		m->ra_deg = lon_rad * 180.0 / M_PI;
		m->dec_deg = lat_rad * 180.0 / M_PI;
		m->mag = p->target->mag;
		m->mag_band = plan_copy(v, p->target->band);
		m->ephemeris_source = plan_copy(v, p->target->source);
		m->ephemeris_scale = plan_copy(v, p->target->time_scale);
	}
	if (!v->run->store || m->target_id == 0)
		return ST_OK;
	enum status s = ephemeris_versions(v->run->store, m->target_id, &row, &n, e);
	for (size_t i = 0; s == ST_OK && i < n; i++) {
		if (row[i].id != m->ephemeris_id)
			continue;
		m->ephemeris_version = row[i].version;
		m->ephemeris_source = plan_copy(v, row[i].source);
		m->ephemeris_entered_utc = plan_copy(v, row[i].entered_utc);
		m->ephemeris_scale = plan_copy(v, row[i].scale);
	}
	free(row);
	return s;
}

/* --- keys --- */

static int by_text(const void *a, const void *b)
{
	const char *const *left = a, *const *right = b;
	return strcmp(*left, *right);
}

/* What is not stored goes by its name, folded. */
static void id_text(int64_t id, const char *name, char *out, size_t n)
{
	char key[NAME_KEY_MAX];
	name_key(name, key);
	if (id != 0)
		snprintf(out, n, "%lld", (long long)id);
	else
		snprintf(out, n, "(%s)", key);
}

const char *item_key(struct plan_view *v, const struct plan_item_view *item)
{
	enum { MEMBERS = 64, EVENT_BYTES = NAME_KEY_MAX + 80 };
	const char *event[MEMBERS] = {NULL};
	char text[EVENT_BYTES], id[NAME_KEY_MAX + 4], head[2 * NAME_KEY_MAX + 32];
	const struct run *r = v->run;
	size_t n = item->n < MEMBERS ? item->n : MEMBERS, room, used;
	id_text(r->site.id, r->site.name, id, sizeof id);
	used = (size_t)snprintf(head, sizeof head, "S%s/O", id);
	if (v->telescope[0])
		id_text(plan_telescope_id(r), v->telescope, id, sizeof id);
	used += (size_t)snprintf(head + used, sizeof head - used, "%s/", v->telescope[0] ? id : "0");
	room = used + 1;
	for (size_t i = 0; i < n; i++) {
		const struct plan_member_view *m = &item->member[i];
		id_text(m->target_id, m->target, id, sizeof id);
		snprintf(text, sizeof text, "T%s:%s:%ld:%s", id,
			 m->kind == KIND_TRANSIT ? "transit" : "occultation", m->epoch, m->branch);
		event[i] = plan_copy(v, text);
		room += strlen(text) + 1;
	}
	qsort(event, n, sizeof *event, by_text);
	char *key = plan_alloc(v, room, 1);
	if (!key)
		return "";
	used = (size_t)snprintf(key, room, "%s", head);
	for (size_t i = 0; i < n; i++)
		used += (size_t)snprintf(key + used, room - used, "%s%s", i ? "+" : "", event[i]);
	return key;
}
