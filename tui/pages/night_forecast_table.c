/* SPDX-License-Identifier: MIT
 * The reserve of a window minute by minute; goals and stars of its target. */
#include "tui/pages/night_forecast.h"

#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/field_words.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum { INDENT = 7, STARS_INDENT = 9, MOMENTS_MAX = 76, MARK_BYTES = 160, COLUMNS_FOR_UTC = 48 };
#define LONG_FOR_5_MIN_D (6.0 / 24.0)
#define LONG_FOR_10_MIN_D (12.0 / 24.0)

/* --- goals and stars --- */

static void goal_line(struct text_view *v, const struct run *r, const struct goal_row *g)
{
	char until[64] = "", note[1100], band[80] = "", limb[80] = "", whole[80] = "";
	int got_whole, got_limb;
	goal_count(g, r->got.got, r->got.n, &got_whole, &got_limb);
	if (g->whole > 0)
		snprintf(whole, sizeof whole, "%d whole, got %d", g->whole, got_whole);
	if (g->limb > 0)
		snprintf(limb, sizeof limb, "%s%d with one limb, got %d", g->whole > 0 ? "; " : "", g->limb,
			 got_limb);
	if (g->band[0])
		snprintf(band, sizeof band, ", in %.40s", g->band);
	if (g->until_mjd) {
		char name[48];
		night_name(g->until_mjd, name, sizeof name);
		snprintf(until, sizeof until, ", until night %s", name);
	}
	text_clean(g->note, note, sizeof note);
	text_view_addf(v, ROLE_TEXT, INDENT, "Goal   wanted %s%s%s%s%s%s", whole, limb, band, until,
		       *note ? ": " : "", note);
}

static void goal_lines(struct text_view *v, const struct run *r, const struct target *t)
{
	size_t n;
	const struct goal_row *g = goals_of(&r->goals, t->id, &n);
	for (size_t i = 0; i < n; i++)
		goal_line(v, r, &g[i]);
	if (n == 0)
		text_view_add(v, ROLE_FAINT, INDENT, "Goal   none is set: any event of it counts");
}

static void star_line(struct text_view *v, const struct target *t, const struct field_star *s)
{
	const double sep = field_star_sep_arcsec(t, s);
	char name[NAME_BYTES_MAX], note[1100], mag[NUMBER_TEXT_MAX], band[40];
	text_clean(s->name, name, sizeof name);
	text_clean(s->note, note, sizeof note);
	text_clean(s->band, band, sizeof band);
	number_text(s->mag, mag);
	text_view_addf(v, ROLE_TEXT, STARS_INDENT, "Star   %s%s%s, %s %s, %.*f %s away%s%s",
		       field_star_words[s->role], *name ? " " : "", name, *band ? band : "mag", mag,
		       sep < 120.0 ? 1 : 2, sep < 120.0 ? sep : sep / 60.0, sep < 120.0 ? "arcsec" : "arcmin",
		       *note ? "; " : "", note);
}

/* What neighbours in the aperture do to the depth. */
static void neighbour_line(struct text_view *v, const struct run *r, const struct target *t,
			   const struct field_star *star, size_t n, const struct forecast_shown *f)
{
	const struct field_light light = field_light_of(t, star, n, &r->observing.optics);
	char words[FIELD_SENTENCE_BYTES], own[NUMBER_TEXT_MAX], seen[NUMBER_TEXT_MAX];
	field_light_words(&light, field_aperture_arcsec(&r->observing.optics), words);
	if (!words[0])
		return;
	number_text_fixed(f->x.star_depth_ppt, 2, own);
	number_text_fixed(f->x.depth_ppt, 2, seen);
	if (own[0] && seen[0] && light.neighbour > 0.0)
		text_view_addf(v, ROLE_TEXT, INDENT, "Light  %s A depth of %s ppt looks like %s ppt.", words,
			       own, seen);
	else
		text_view_addf(v, ROLE_TEXT, INDENT, "Light  %s", words);
}

void wish_lines(struct text_view *v, const struct run *r, const struct night_row *row,
		const struct forecast_shown *f)
{
	const struct target *t = row->window->event.prepared->target;
	char words[FIELD_SENTENCE_BYTES], clean[FIELD_SENTENCE_BYTES];
	size_t n;
	goal_lines(v, r, t);
	const struct field_star *star = field_stars_of(&r->stars, t->id, &n);
	for (size_t i = 0; i < n; i++)
		star_line(v, t, &star[i]);
	const struct field_fit fit = field_fit_of(t, star, n, r->telescope.field_arcmin);
	field_fit_words(&fit, &r->telescope, r->has_telescope, words);
	text_clean(words, clean, sizeof clean);
	if (clean[0])
		text_view_addf(v, fit.known && !fit.fits ? ROLE_WARN : ROLE_TEXT, INDENT, "Field  %s", clean);
	if (f->there && n > 0)
		neighbour_line(v, r, t, star, n, f);
}

/* --- minutes --- */

static void cell(double value, int decimals, char out[NUMBER_TEXT_MAX])
{
	number_text_fixed(value, decimals, out);
	if (!out[0])
		snprintf(out, NUMBER_TEXT_MAX, "-");
}

/* What happens between a row and the next: `T1 21:50, flip 00:18`. */
static void marks_of(const struct run *r, const struct night *night, const struct window *w, double from_d,
		     double to_d, char out[MARK_BYTES])
{
	const struct window_event *ev = &w->event;
	const struct {
		const char *word;
		double at_d;
	} mark[] = {{"T1", ev->t1_d}, {"T2", ev->t2_d}, {"mid", ev->mid_d},
		    {"T3", ev->t3_d}, {"T4", ev->t4_d}, {"flip", w->forecast.flip_d}};
	size_t used = 0;
	out[0] = '\0';
	for (size_t i = 0; i < sizeof mark / sizeof mark[0] && used < MARK_BYTES; i++) {
		char at[16];
		if (!(mark[i].at_d >= from_d) || !(mark[i].at_d < to_d))
			continue;
		local_text(night, r->zone, mark[i].at_d, false, at, sizeof at);
		used += (size_t)snprintf(out + used, MARK_BYTES - used, "%s%s %s", used ? ", " : "",
					 mark[i].word, at);
	}
	if (!intervals_contain(&w->cover.usable, from_d) && used < MARK_BYTES)
		snprintf(out + used, MARK_BYTES - used, "%snot usable", used ? ", " : "");
}

static void minute_line(struct text_view *v, const struct run *r, const struct night *night,
			const struct forecast_shown *f, const struct forecast_moment *m, double step_d)
{
	char local[16], utc[24] = "", alt[NUMBER_TEXT_MAX], air[NUMBER_TEXT_MAX], sky[NUMBER_TEXT_MAX],
			noise[NUMBER_TEXT_MAX], marks[MARK_BYTES];
	local_text(night, r->zone, m->t_d, false, local, sizeof local);
	if (r->zone && v->width >= COLUMNS_FOR_UTC) {
		local_text(night, NULL, m->t_d, false, alt, sizeof alt);
		snprintf(utc, sizeof utc, " %-6.10s", alt);
	}
	cell(m->alt_deg, 0, alt);
	cell(m->airmass, 2, air);
	cell(m->sky.mag_arcsec2, 2, sky);
	cell(m->noise.minute_ppt, 2, noise);
	marks_of(r, night, &f->window, m->t_d, m->t_d + step_d, marks);
	text_view_addf(v, intervals_contain(&f->window.cover.usable, m->t_d) ? ROLE_TEXT : ROLE_FAINT, INDENT,
		       "%-6s%s %3s %5s %6s %6s  %s", local, utc, alt, air, sky, noise, marks);
}

void minute_lines(struct text_view *v, const struct run *r, const struct night_view *view,
		  const struct night_head *head, const struct forecast_shown *f)
{
	const struct night *night = &view->night;
	const struct window_event *ev = &f->window.event;
	if (!f->there)
		return;
	const double from_d = fmax(ev->reserve_start_d, 0.0), to_d = fmin(ev->reserve_end_d, night->length_d);
	const double long_d = to_d - from_d;
	const double step_min = long_d <= LONG_FOR_5_MIN_D ? 5.0 : long_d <= LONG_FOR_10_MIN_D ? 10.0 : 30.0;
	/* from the first whole step of the clock on */
	const double step_s = 60.0 * step_min, past_s = fmod(night_utc(night, from_d).sod_s + 0.5, step_s),
		     wait_s = past_s < 1.0 ? 0.0 : step_s - past_s;
	struct forecast_moment moment[MOMENTS_MAX];
	const int n =
	    forecast_table(&f->on, &f->x, from_d + wait_s / DAY_S, to_d, step_min, moment, MOMENTS_MAX);
	const bool two = r->zone && v->width >= COLUMNS_FOR_UTC;
	text_view_addf(v, ROLE_STRONG, 0, "Every %.0f min of the reserve (noise of a minute)", step_min);
	text_view_addf(v, ROLE_STRONG, 0, "%-6s%s %3s %5s %6s %6s", head->zone, two ? " UTC   " : "", "alt",
		       "airm", "sky", "noise");
	text_view_addf(v, ROLE_FAINT, 0, "%-6s%s %3s %5s %6s %6s", "", two ? "       " : "", "deg", "", "mag",
		       "ppt");
	for (int i = 0; i < n; i++)
		minute_line(v, r, night, f, &moment[i], step_min / DAY_MIN);
}
