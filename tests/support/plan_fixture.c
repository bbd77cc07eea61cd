/* SPDX-License-Identifier: MIT */
#include "tests/support/plan_fixture.h"

#include "tests/support/check.h"
#include "tui/parts/columns.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const char plan_fixture_hostile[] =
    "=Tern <b>\"27\"</b> & 'x'; a,b\\n \x1b[31m\r\nDTSTART:19700101T000000Z\xE2\x80\xAE \xFF"
    "\xF0\x9F\x94\xAD b";

enum { HOSTILE_TARGET = 12 };

/* Which event a member is: target of the night fixture, kind. Numbers are invented. */
static const struct invented {
	int target;
	enum event_kind kind;
	const char *variant;
	double worth, moved_min;
	const char *moved_why;
} invented[PLAN_FIXTURE_MEMBERS] = {
    {1, KIND_TRANSIT, "ingress", 0.31, 0.0, ""},
    {10, KIND_TRANSIT, "whole", 0.92, -0.4, ""},
    {11, KIND_TRANSIT, "whole", 0.74, 0.1, ""},
    {HOSTILE_TARGET, KIND_TRANSIT, "short", 0.55, 3.4, "version 3 (Tern group <2026>) adopted 2026-04-20"},
    {10, KIND_OCCULTATION, "whole", 0.2, NAN, ""},
    {6, KIND_TRANSIT, "whole", 0.8, NAN, ""},
};
/* Minutes after 0 h UTC of the night's second date. */
static const struct invented_item {
	size_t first, n;
	const char *key;
	enum plan_state state;
	const char *cause, *note, *marked_utc;
	double slew_min, start_min, latest_min, end_min;
	const char *if_missed;
} invented_items[PLAN_FIXTURE_ITEMS + 1] = {
    {0, 1, "2:transit:1203", PLAN_PLANNED, "", "", "", 81.0, 87.0, 102.0, 160.0,
     "If the first limb is missed after 19:42 MDT, leave it."},
    {1, 2, "11:transit:4020+12:transit:96", PLAN_STARTED, "",
     "guiding poor at first; \"fine\" now, <see log>", "2026-04-23T03:52:10Z", 224.0, 230.0, 246.5, 435.0,
     "If the ingress of Tern 18 b is missed, stay: its egress and both limbs of Tern 18 c are worth 0.9."},
    {3, 1, "13:transit:1500", PLAN_PINNED, "", "", "", 464.0, 470.0, 480.0, 551.0,
     "If the ingress is missed, the egress alone is worth 0.22: start by 08:30 UTC."},
    {4, 1, "11:occultation:4020", PLAN_PLANNED, "", "", "", 553.0, 556.0, 571.0, 670.25, ""},
    {5, 1, "7:transit:745", PLAN_PLANNED, "", "", "", 330.0, 336.0, 351.0, 580.0, ""},
};

static struct utc at_min(const struct plan_fixture *f, double min)
{
	return (struct utc){.mjd = f->night.night.mjd + 1, .sod_s = 60.0 * min};
}

static char *keep(struct plan_fixture *f, const char *text)
{
	if (f->n_texts == sizeof f->text / sizeof f->text[0])
		check_fail("too many texts");
	char *copy = strdup(text);
	if (!copy)
		check_fail("no memory");
	f->text[f->n_texts++] = copy;
	return copy;
}

static const struct window *find_window(const struct plan_fixture *f, const struct target *t,
					enum event_kind kind)
{
	/* of several the one nearest to 7 h UTC */
	const struct window *best = NULL;
	double wanted_d = night_of_utc(&f->night.night, at_min(f, kind == KIND_TRANSIT ? 420.0 : 613.0));
	for (size_t i = 0; i < f->night.list.n; i++) {
		const struct window *w = &f->night.list.w[i];
		if (w->event.prepared->target == t && w->event.kind == kind &&
		    (!best || fabs(w->event.mid_d - wanted_d) < fabs(best->event.mid_d - wanted_d)))
			best = w;
	}
	if (!best)
		check_fail("no window of %s", t->name);
	return best;
}

static void put_figures(struct plan_fixture *f, struct plan_member_view *m, const struct window *w)
{
	char text[512], usable[256] = "";
	const struct night *n = &f->night.night;
	m->figure = calloc(column_count, sizeof *m->figure);
	if (!m->figure)
		check_fail("no memory");
	for (size_t i = 0; i < column_count; i++) {
		struct value v = column_value(&columns[i], w, n);
		value_machine_text(&columns[i], &v, n->clock.leap, text, sizeof text);
		if (strcmp(columns[i].name, "telescope") == 0)
			snprintf(text, sizeof text, "%s", f->view.telescope);
		m->figure[i] = text[0] ? keep(f, text) : "";
	}
	for (int i = 0; i < w->cover.usable.n && i < 4; i++) {
		char from[UTC_TEXT_MAX], to[UTC_TEXT_MAX];
		utc_text(n->clock.leap, night_utc(n, w->cover.usable.s[i].from_d), 0, from);
		utc_text(n->clock.leap, night_utc(n, w->cover.usable.s[i].to_d), 0, to);
		size_t used = strlen(usable);
		snprintf(usable + used, sizeof usable - used, "%s%s/%s", used ? "," : "", from, to);
	}
	m->usable = keep(f, usable);
}

static void put_member(struct plan_fixture *f, size_t i, bool compared)
{
	const struct invented *in = &invented[i];
	struct plan_member_view *m = &f->member[i];
	const struct target *t = &f->base->target[in->target];
	const struct window *w = find_window(f, t, in->kind);
	const struct night *n = &f->night.night;
	*m = (struct plan_member_view){.target = t->name,
				       .variant = in->variant,
				       .kind = in->kind,
				       .epoch = w->event.epoch,
				       .branch = "",
				       .target_id = in->target + 1,
				       .ephemeris_id = 100 + in->target,
				       .worth = in->worth,
				       .ra_deg = t->ra_deg,
				       .dec_deg = t->dec_deg,
				       .mag = t->mag,
				       .mag_band = t->band,
				       .ephemeris_version = 2,
				       .ephemeris_source = "invented, \"Tern group\" <2025>",
				       .ephemeris_entered_utc = "2026-03-02T10:11:12Z",
				       .ephemeris_scale = "BJD_TDB",
				       .t1 = night_utc(n, w->event.t1_d),
				       .t4 = night_utc(n, w->event.t4_d),
				       .mid = night_utc(n, w->event.mid_d),
				       .has_flat = isfinite(w->event.t2_d),
				       .moved_min = compared ? in->moved_min : (double)NAN,
				       .moved_why = compared ? in->moved_why : ""};
	if (m->has_flat) {
		m->t2 = night_utc(n, w->event.t2_d);
		m->t3 = night_utc(n, w->event.t3_d);
	}
	m->moved = fabs(m->moved_min) >= 2.0;
	put_figures(f, m, w);
}

static void put_item(struct plan_fixture *f, size_t i, bool marked, struct plan_item_view *item)
{
	const struct invented_item *in = &invented_items[i];
	*item = (struct plan_item_view){.order = (int)i + 1,
					.key = in->key,
					.state = marked ? in->state : PLAN_PLANNED,
					.cause = marked ? in->cause : "",
					.note = marked ? in->note : "",
					.marked_utc = marked ? in->marked_utc : "",
					.slew_by = at_min(f, in->slew_min),
					.start = at_min(f, in->start_min),
					.latest_start = at_min(f, in->latest_min),
					.end = at_min(f, in->end_min),
					.has_latest = !(marked && in->state == PLAN_STARTED),
					.in_day = i == PLAN_FIXTURE_IN_DAY,
					.n = in->n,
					.member = &f->member[in->first]};
	for (size_t k = 0; k < in->n; k++)
		item->worth += f->member[in->first + k].worth;
	snprintf(item->if_missed, sizeof item->if_missed, "%s", in->if_missed);
}

static void put_blocks(struct plan_fixture *f)
{
	struct plan_view *v = &f->view;
	f->block[0] = (struct plan_block_view){.kind = BLOCK_STANDING,
					       .text = "evening flats",
					       .from = at_min(f, 55.0),
					       .to = at_min(f, 80.0),
					       .near_sun = true};
	f->block[1] = (struct plan_block_view){
	    .kind = BLOCK_LOST, .text = "cloud", .from = at_min(f, 170.0), .to = at_min(f, 200.0)};
	f->block[2] = (struct plan_block_view){.kind = BLOCK_SET,
					       .text = "=engineering, \"hour\" <b>;\x1b[2J",
					       .from = at_min(f, 440.0),
					       .to = at_min(f, 462.0)};
	f->block[3] = (struct plan_block_view){.kind = BLOCK_POOR,
					       .text = "thin cloud",
					       .from = at_min(f, 560.0),
					       .to = at_min(f, 620.0),
					       .noise = 1.5};
	v->n_blocks = 4;
	v->block = f->block;
}

static void put_left(struct plan_fixture *f)
{
	struct plan_view *v = &f->view;
	f->left[0] =
	    (struct plan_left_view){.target = "Tern 14 b",
				    .kind = KIND_TRANSIT,
				    .epoch = 410,
				    .reason = "clashes with 2 (Tern 18 b, Tern 18 c): those are worth more",
				    .cost = 0.68};
	f->left[1] = (struct plan_left_view){
	    .target = "Tern 7 b", .kind = KIND_TRANSIT, .epoch = 512, .reason = "dropped", .cost = 1.2};
	f->left[2] = (struct plan_left_view){.target = plan_fixture_hostile,
					     .kind = KIND_OCCULTATION,
					     .epoch = 1499,
					     .reason = "neither limb can be caught: before:sun;flat:altitude",
					     .cost = NAN};
	v->n_left = 3;
	v->left = f->left;
}

static void put_targets(struct plan_fixture *f, int32_t evening_mjd)
{
	struct run *r = &f->base->run;
	int days = (int)(evening_mjd - FIXTURE_EVENING_MJD);
	struct target *hostile = &f->base->target[HOSTILE_TARGET];
	hostile->name = plan_fixture_hostile;
	hostile->ra_deg = 236.0;
	hostile->dec_deg = 28.8;
	hostile->duration_h = 1.0;
	hostile->k = 0.2;
	hostile->a_rs = 8.0;
	hostile->inc_deg = 82.0; /* b 1.11: grazing */
	hostile->t0 = jd2_normal(2461153.8513, -1500.0 * hostile->period_d);
	r->kinds = KINDS_BOTH;
	for (int i = 0; i < FIXTURE_TARGETS; i++) {
		struct target *t = &f->base->target[i];
		t->t0 = jd2_add_d(t->t0, days);
		t->ra_deg = fmod(t->ra_deg + days * 360.0 / 365.2422, 360.0);
		r->prepared[i] = prepare_target(t, &r->limits, &r->clock, r->memo, false, false);
	}
}

static void put_night(struct plan_fixture *f, int32_t evening_mjd)
{
	struct run *r = &f->base->run;
	struct err e;
	const struct window_choice choice = {.kinds = KINDS_BOTH, .all = true, .min_chance = 0.0};
	if (night_build(&f->night.night, &r->site, &r->clock, evening_mjd, r->memo, &e) != ST_OK)
		check_fail("%s", e.text);
	f->night.dark = night_dark(&f->night.night, r->limits.value[LIM_SUN]);
	if (night_windows(&f->night.night, r->prepared, r->n_prepared, &choice, &f->night.list,
			  &f->night.hidden, &e) != ST_OK)
		check_fail("%s", e.text);
	f->night.hidden = 0;
	f->night.free = free_time_whole();
}

static void put_order(struct plan_fixture *f, enum plan_fixture_kind kind)
{
	static const char *pins[] = {"Tern 27 b"}, *drops[] = {"Tern 7 b"};
	struct plan_view *v = &f->view;
	bool kept = kind == PLAN_FIXTURE_KEPT;
	for (size_t i = 0; i < PLAN_FIXTURE_MEMBERS; i++)
		put_member(f, i, kept);
	for (size_t i = 0; i < PLAN_FIXTURE_ITEMS; i++)
		put_item(f, i, kept, &f->item[i]);
	put_item(f, PLAN_FIXTURE_ITEMS, false, &f->gone[0]);
	v->n_items = PLAN_FIXTURE_ITEMS;
	v->item = f->item;
	v->worth = 2.72;
	v->bound = 2.9;
	put_blocks(f);
	put_left(f);
	v->n_pins = 1;
	v->pin = pins;
	v->n_drops = 1;
	v->drop = drops;
	if (kept) {
		v->revisions = 3;
		v->n_gone = 1;
		v->gone = f->gone;
		v->moved = 1;
	}
}

struct plan_fixture *plan_fixture_open(enum plan_fixture_kind kind, int32_t evening_mjd, bool zoneinfo)
{
	struct plan_fixture *f = calloc(1, sizeof *f);
	if (!f)
		check_fail("no memory");
	f->base = fixture_open(zoneinfo);
	put_targets(f, evening_mjd);
	put_night(f, evening_mjd);
	f->view = (struct plan_view){
	    .run = &f->base->run,
	    .night = &f->night,
	    .telescope = "North, 0.4 m",
	    .draft = "",
	    .stored_utc = "2026-04-20T18:05:00Z",
	    .who = "ann <a@tern>",
	    .limits = "sun_limit_deg=-12\talt_limit_deg=30\tmoon_limit_deg=30\tpad=2\tkind=both",
	    .leap_date = "2026-12-28",
	    .revised_utc = "",
	    .rules = {.settle_d = 4.0 / 1440.0,
		      .slew_deg_d = 86400.0,
		      .filter_d = 0.5 / 1440.0,
		      .first_slew_deg = 90.0,
		      .limb_share = 0.4,
		      .short_share = 0.95,
		      .unknown_share = 0.1},
	    .gap_min = 5.2,
	    .optimal = kind == PLAN_FIXTURE_EMPTY};
	if (kind == PLAN_FIXTURE_KEPT || kind == PLAN_FIXTURE_DRAFT) {
		f->view.stored = true;
		f->view.kept = kind == PLAN_FIXTURE_KEPT;
		f->view.draft = f->view.kept ? "main" : "windy";
		f->view.plan_id = 7;
		f->view.edition = f->view.kept ? 3 : 1;
	}
	if (kind == PLAN_FIXTURE_EMPTY) {
		f->view.stored_utc = f->view.who = "";
		f->view.limits = "";
	} else {
		put_order(f, kind);
	}
	return f;
}

void plan_fixture_close(struct plan_fixture *f)
{
	for (size_t i = 0; i < f->n_texts; i++)
		free(f->text[i]);
	for (size_t i = 0; i < PLAN_FIXTURE_MEMBERS; i++)
		free(f->member[i].figure);
	window_list_free(&f->night.list);
	fixture_close(f->base);
	free(f);
}
