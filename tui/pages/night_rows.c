/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_rows.h"

#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/pages/night_forecast.h"
#include "tui/parts/clock_mark.h"
#include "tui/parts/columns.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const struct row_column row_columns[ROW_CELLS] = {
    [ROW_STATE] =
	{"state", "", 7, 0, false, NULL,
	 "Number of its item in the plan and a sign of what stands of that (see the pictures below); "
	 "then now: its time on the telescope runs; next: the first to come, of the plan if there is "
	 "one, else that is likely to be done; past: over. Narrow screens: N, n, p."},
    [ROW_NAME] = {"target", "", 12, 0, false, NULL, "The target; (occ) marks an occultation."},
    [ROW_ON] = {"be on", NULL, 5, 0, true, "usable_start_utc", NULL},
    [ROW_T1] = {"T1", NULL, 5, 0, true, "t1_utc", NULL},
    [ROW_MID] = {"mid", NULL, 5, 132, true, "mid_utc", NULL},
    [ROW_T4] = {"T4", NULL, 5, 0, true, "t4_utc", NULL},
    [ROW_LEAVE] = {"leave", NULL, 5, 0, true, "usable_end_utc", NULL},
    [ROW_ERROR] = {"sigma", "min", 5, 0, true, "sigma_min", NULL},
    [ROW_COVER] = {"cover", "BIFEA", 5, 64, false, NULL,
		   "Usable share of five parts: Before, Ingress, Flat, Egress, After."},
    [ROW_INGRESS] = {"in", "%", 4, 152, true, "chance_ingress", NULL},
    [ROW_EGRESS] = {"eg", "%", 4, 152, true, "chance_egress", NULL},
    [ROW_DONE] = {"done", "%", 4, 0, true, "chance_done", NULL},
    [ROW_WORTH] =
	{"worth", "", 5, 80, true, NULL,
	 "What it counts for in a plan: priority x open goals x expected bits; without a forecast x the "
	 "chance of done. In the plan, of what is planned of it (one limb alone is worth less)."},
    [ROW_SNR] = {"S/N", "", 4, 120, true, "depth_snr", NULL},
    [ROW_TIMING] = {"tim", "min", 4, 128, true, "timing_s", NULL},
    [ROW_NOISE] = {"noise", "ppt", 5, 208, true, "noise_ppt_min", NULL},
    [ROW_ALT] = {"alt", "deg", 4, 116, true, "alt_mid_deg", NULL},
    [ROW_AIRMASS] = {"airm", "", 5, 144, true, "airmass_mid", NULL},
    [ROW_MOON] = {"Moon", "deg", 4, 144, true, "moon_sep_deg", NULL},
    [ROW_DEPTH] = {"depth", "ppt", 5, 180, true, "depth_ppt", NULL},
    [ROW_MAG] = {"mag", "", 5, 180, true, NULL, "Magnitude of the star, in the band that its source gives."},
    [ROW_LOST] = {"lost by", "", 11, 74, false, "lost_by", NULL},
    [ROW_STRIP] = {"strip", "", 20, 100, false, NULL,
		   "The event drawn as a light curve over the night; see the pictures below."},
    [ROW_FLAGS] =
	{"doubts", "", 20, 200, false, NULL,
	 "What is doubtful, as words; +N counts further doubts that most windows share. The details say "
	 "them all."},
};

bool row_cell_of_forecast(enum row_cell cell)
{
	return cell == ROW_SNR || cell == ROW_TIMING || cell == ROW_NOISE;
}

const char *const cause_phrases[CAUSE_COUNT] = {
    [CAUSE_SUN] = "the Sun",
    [CAUSE_ALTITUDE] = "low altitude",
    [CAUSE_MASK] = "the horizon mask",
    [CAUSE_MOON] = "the Moon",
    [CAUSE_AIRMASS] = "airmass",
    [CAUSE_MOUNT] = "the mount",
    [CAUSE_FLIP] = "the meridian flip",
    [CAUSE_ALLOTMENT] = "the allotted time",
    [CAUSE_CLOUD] = "lost time",
    [CAUSE_BLOCK] = "a block",
    [CAUSE_NOON] = "the neighbouring night",
};
static const char *const cause_short[CAUSE_COUNT] = {
    [CAUSE_SUN] = "Sun",     [CAUSE_ALTITUDE] = "low", [CAUSE_MASK] = "mask", [CAUSE_MOON] = "Moon",
    [CAUSE_AIRMASS] = "air", [CAUSE_MOUNT] = "mount",  [CAUSE_FLIP] = "flip", [CAUSE_ALLOTMENT] = "time",
    [CAUSE_CLOUD] = "cloud", [CAUSE_BLOCK] = "block",  [CAUSE_NOON] = "noon",
};
static const char part_letters[] = "BIFEA";

#define SHARE_ALL 0.995
#define SHARE_NOTHING 0.005
#define CHANCE_GOOD 0.8 /* only the colour of a figure hangs on it */
#define CHANCE_EVEN 0.5
#define FLIP_SHORT_MIN 10.0 /* of our own choosing: no news as long as no limb is harmed */

void chance_text(double chance, char *out, size_t n)
{
	if (isnan(chance))
		snprintf(out, n, "?");
	else if (chance > 0.0 && chance < 0.005)
		snprintf(out, n, "<1");
	else if (chance >= 0.995 && chance < 0.99995)
		snprintf(out, n, ">99");
	else
		snprintf(out, n, "%.0f", 100.0 * chance);
}

static enum glyph share_glyph(double share)
{
	if (isnan(share))
		return GLYPH_SHARE_NO_PART;
	if (share >= SHARE_ALL)
		return GLYPH_SHARE_ALL;
	if (share >= 0.5)
		return GLYPH_SHARE_MOST;
	return share > SHARE_NOTHING ? GLYPH_SHARE_SOME : GLYPH_SHARE_NONE;
}

static enum role chance_role(double done)
{
	if (isnan(done))
		return ROLE_TEXT;
	return done >= CHANCE_GOOD ? ROLE_GOOD : done >= CHANCE_EVEN ? ROLE_WARN : ROLE_BAD;
}

/* Appends to a text of a fixed room; what does not fit is left out. */
static void append(char *out, size_t n, const char *text)
{
	size_t used = strlen(out);
	snprintf(out + used, n - used, "%s", text);
}

/* Neighbouring parts that one cause takes stand together: `BI Sun, A low`, or in words. */
static void lost_parts(const struct window_cover *c, bool words, char *out, size_t n)
{
	for (int i = 0; i < PART_COUNT;) {
		enum cause cause = c->lost_to[i];
		if (cause == CAUSE_NONE) {
			i++;
			continue;
		}
		if (*out)
			append(out, n, ", ");
		for (int first = i; i < PART_COUNT && c->lost_to[i] == cause; i++) {
			char letter[2] = {part_letters[i], '\0'};
			if (words && i > first)
				append(out, n, "+");
			append(out, n, words ? part_words[i] : letter);
		}
		append(out, n, " ");
		append(out, n, cause_short[cause]);
	}
}

static const char *without_chance(const struct window_event *ev)
{
	if (ev->flags & FLAG_BIT(FLAG_PHASE_LOST))
		return "phase lost";
	if (ev->flags & FLAG_BIT(FLAG_SIGMA_UNKNOWN))
		return "no sigma";
	if (ev->flags & FLAG_BIT(FLAG_CIRCULAR_ASSUMED))
		return "orbit assumed";
	return "no chance known";
}

/* Minutes that a flip takes where it harms no limb: neither the limb nor its least baseline; NAN where
 * something else is lost, or nothing. */
static double flip_loss_min(const struct window *w)
{
	const struct window_event *ev = &w->event;
	const struct window_cover *c = &w->cover;
	const bool grazing = isnan(ev->t2_d) || isnan(ev->t3_d);
	const double part_d[PART_COUNT] = {[PART_BEFORE] = ev->before_d,
					   [PART_FLAT] = grazing ? 0.0 : ev->t3_d - ev->t2_d,
					   [PART_AFTER] = ev->after_d},
		     least_min = ev->prepared->limits.value[LIM_MIN_BASELINE];
	double lost_d = 0.0;
	bool flips = false;
	for (int i = 0; i < PART_COUNT; i++) {
		if (c->lost_to[i] == CAUSE_NONE)
			continue;
		if (c->lost_to[i] != CAUSE_FLIP || i == PART_INGRESS || i == PART_EGRESS ||
		    (i == PART_BEFORE && c->base_before_min < least_min) ||
		    (i == PART_AFTER && c->base_after_min < least_min))
			return NAN;
		flips = true;
		lost_d += (1.0 - c->share[i]) * part_d[i];
	}
	return flips ? lost_d * DAY_MIN : NAN;
}

static void lost_text(const struct night_row *row, bool words, char *out, size_t n)
{
	const struct window *w = row->window;
	char parts[ROW_LOST_BYTES] = "";
	out[0] = '\0';
	if (w->event.flags & FLAG_BIT(FLAG_SUN_UP))
		append(out, n, "SUN UP");
	if (!row->has_chance && (words || !*out)) { /* the column of sigma tells it, too */
		append(out, n, *out ? ", " : "");
		append(out, n, without_chance(&w->event));
	}
	if (row->flip_only)
		snprintf(parts, sizeof parts, "flip");
	else
		lost_parts(&w->cover, words, parts, sizeof parts);
	if (*parts && *out)
		append(out, n, ", ");
	append(out, n, *parts || *out ? parts : "nothing");
	const uint32_t worse = FLAG_BIT(FLAG_PHASE_LOST) | FLAG_BIT(FLAG_SIGMA_UNKNOWN);
	if ((w->event.flags & FLAG_BIT(FLAG_STALE)) && !(w->event.flags & worse) && (words || !*parts))
		append(out, n, ", stale");
}

/* A figure as the column table prints it for people. */
static void figure(const char *name, const struct night_row *row, const struct night_view *view,
		   const struct leap_table *leap, const struct zone *zone, char out[ROW_CELL_BYTES])
{
	int at = column_find(name);
	out[0] = '\0';
	if (at < 0)
		return;
	struct value v = column_value(&columns[at], row->window, &view->night);
	value_people_text(&columns[at], &v, leap, zone, out, ROW_CELL_BYTES);
	if (v.type == VALUE_UTC)
		append(out, ROW_CELL_BYTES, clock_mark(&view->night, zone, utc_add_s(leap, v.utc, 30.0)));
}

static void fill_figures(struct night_row *row, const struct night_view *view, const struct leap_table *leap,
			 const struct zone *zone)
{
	static const struct {
		enum row_cell cell;
		const char *column;
	} plain[] = {
	    {ROW_ON, "usable_start_utc"},  {ROW_T1, "t1_utc"},
	    {ROW_MID, "mid_utc"},	   {ROW_T4, "t4_utc"},
	    {ROW_LEAVE, "usable_end_utc"}, {ROW_ERROR, "sigma_min"},
	    {ROW_ALT, "alt_mid_deg"},	   {ROW_AIRMASS, "airmass_mid"},
	    {ROW_MOON, "moon_sep_deg"},	   {ROW_DEPTH, "depth_ppt"},
	    {ROW_SNR, "depth_snr"},	   {ROW_NOISE, "noise_ppt_min"},
	};
	const struct window *w = row->window;
	const struct target *t = w->event.prepared->target;
	for (size_t i = 0; i < sizeof plain / sizeof plain[0]; i++)
		figure(plain[i].column, row, view, leap, zone, row->text[plain[i].cell]);
	if (!row->usable) {
		snprintf(row->text[ROW_ON], ROW_CELL_BYTES, "never");
		row->text[ROW_LEAVE][0] = '\0';
	}
	if (isnan(w->event.sigma_min))
		snprintf(row->text[ROW_ERROR], ROW_CELL_BYTES, "?");
	if (w->event.flags & FLAG_BIT(FLAG_PHASE_LOST))
		snprintf(row->text[ROW_ERROR], ROW_CELL_BYTES, "lost");
	timing_text(w->forecast.timing_s, row->text[ROW_TIMING]);
	chance_text(w->chance.ingress, row->text[ROW_INGRESS], ROW_CELL_BYTES);
	chance_text(w->chance.egress, row->text[ROW_EGRESS], ROW_CELL_BYTES);
	chance_text(w->chance.done, row->text[ROW_DONE], ROW_CELL_BYTES);
	if (isfinite(t->mag)) {
		char mag[NUMBER_TEXT_MAX];
		number_text_fixed(t->mag, 1, mag);
		snprintf(row->text[ROW_MAG], ROW_CELL_BYTES, "%.11s", mag);
	}
}

/* What nearly every published ephemeris has, or the run lacks, is only counted; that the Sun is up stands
 * with the losses. */
static void doubts_text(uint32_t flags, char *out, size_t n)
{
	const uint32_t common = FLAG_BIT(FLAG_COVARIANCE_ASSUMED_0) | FLAG_BIT(FLAG_DURATION_ERROR_UNKNOWN) |
				FLAG_BIT(FLAG_INGRESS_ESTIMATED) | FLAG_BIT(FLAG_MAGNITUDE_ASSUMED) |
				FLAG_BIT(FLAG_SKY_ASSUMED) | FLAG_BIT(FLAG_OPTICS_ASSUMED);
	char count[16];
	int further = 0;
	for (uint32_t rest = flags & common; rest; rest &= rest - 1)
		further++;
	flags_text(flags & ~common & ~FLAG_BIT(FLAG_SUN_UP), out, n);
	snprintf(count, sizeof count, "%s+%d", *out ? " " : "", further);
	append(out, n, further ? count : "");
}

static void fill_row(struct night_row *row, const struct window *w, const struct plan_rules *rules,
		     const struct night_view *view, const struct leap_table *leap, const struct zone *zone)
{
	const struct target *t = w->event.prepared->target;
	*row = (struct night_row){.window = w};
	row->star = night_star(&view->night, t);
	text_clean(t->name, row->name, NAME_BYTES_MAX);
	if (w->event.kind == KIND_OCCULTATION)
		append(row->name, sizeof row->name, " (occ)");
	row->usable = isfinite(w->cover.usable_start_d) && isfinite(w->cover.usable_end_d);
	row->on_d = row->usable ? w->cover.usable_start_d : w->event.reserve_start_d;
	row->leave_d = row->usable ? w->cover.usable_end_d : w->event.reserve_end_d;
	row->has_chance = !isnan(w->chance.done);
	row->long_shot = window_long_shot(w);
	row->chance_role = chance_role(w->chance.done);
	row->worth = plan_worth(w, rules);
	for (int i = 0; i < PART_COUNT; i++)
		row->cover[i] = share_glyph(w->cover.share[i]);
	row->flip_only = flip_loss_min(w) < FLIP_SHORT_MIN;
	fill_figures(row, view, leap, zone);
	lost_text(row, false, row->lost, sizeof row->lost);
	lost_text(row, true, row->lost_long, sizeof row->lost_long);
	doubts_text(w->event.flags, row->flags, sizeof row->flags);
}

enum status night_rows_make(struct night_rows *rows, const struct night_view *view,
			    const struct leap_table *leap, const struct zone *zone, struct err *e)
{
	struct night_row *row = calloc(view->list.n + 1, sizeof *row);
	const struct plan_rules rules = plan_rules_built_in();
	if (!row)
		return err_set(e, ST_MEMORY, "no memory for %zu windows", view->list.n);
	night_rows_free(rows);
	rows->row = row;
	for (size_t i = 0; i < view->list.n; i++) {
		fill_row(&rows->row[i], &view->list.w[i], &rules, view, leap, zone);
		rows->long_shots += rows->row[i].long_shot;
	}
	rows->n = rows->total = view->list.n;
	night_rows_tick(rows, -1.0, false);
	return ST_OK;
}

void night_rows_free(struct night_rows *rows)
{
	free(rows->row);
	*rows = (struct night_rows){0};
}

/* Whether a row ahead should be the next one: what is likely to be done goes first, then what comes first. */
static bool comes_before(const struct night_row *row, const struct night_row *other)
{
	if (!other)
		return true;
	bool likely = row->window->chance.done >= CHANCE_EVEN,
	     other_likely = other->window->chance.done >= CHANCE_EVEN;
	return likely != other_likely ? likely : row->on_d < other->on_d;
}

/* Whether a planned row is the next to be moved to. */
static bool planned_before(const struct night_row *row, const struct night_row *other, double now_d)
{
	return row->plan.state < PLAN_STARTED && row->plan.from_d > now_d &&
	       (!other || row->plan.order < other->plan.order);
}

static bool any_planned(const struct night_rows *rows)
{
	for (size_t i = 0; i < rows->total; i++)
		if (rows->row[i].plan.order > 0)
			return true;
	return false;
}

void night_rows_tick(struct night_rows *rows, double now_d, bool tonight)
{
	const bool by_plan = any_planned(rows);
	static const char *const words[] = {
	    [STATE_AHEAD] = "", [STATE_NEXT] = "next", [STATE_NOW] = "now", [STATE_PAST] = "past"};
	struct night_row *next = NULL;
	for (size_t i = 0; i < rows->total; i++) {
		struct night_row *row = &rows->row[i];
		bool begun = now_d >= row->on_d && row->usable;
		row->state = now_d > row->leave_d ? STATE_PAST : begun ? STATE_NOW : STATE_AHEAD;
		if (!tonight || i >= rows->n)
			continue;
		if (by_plan && row->plan.order > 0 && planned_before(row, next, now_d))
			next = row;
		if (!by_plan && row->state == STATE_AHEAD && row->usable && row->has_chance &&
		    !row->long_shot && comes_before(row, next))
			next = row;
	}
	if (next)
		next->state = STATE_NEXT;
	for (size_t i = 0; i < rows->total; i++)
		snprintf(rows->row[i].text[ROW_STATE], ROW_CELL_BYTES, "%s", words[rows->row[i].state]);
}

const struct night_row *night_rows_next(const struct night_rows *rows)
{
	for (size_t i = 0; i < rows->n; i++)
		if (rows->row[i].state == STATE_NEXT)
			return &rows->row[i];
	return NULL;
}

const struct night_row *night_rows_running(const struct night_rows *rows, double now_d)
{
	for (size_t i = 0; i < rows->n; i++) {
		const struct row_plan *plan = &rows->row[i].plan;
		if (plan->order > 0 && plan->state <= PLAN_STARTED && now_d >= plan->from_d &&
		    now_d < plan->to_d)
			return &rows->row[i];
	}
	return NULL;
}

const struct night_row *night_rows_best(const struct night_rows *rows, enum row_state state, size_t *count)
{
	const struct night_row *best = NULL;
	*count = 0;
	for (size_t i = 0; i < rows->n; i++) {
		const struct night_row *row = &rows->row[i];
		if (row->state != state || !row->usable || row->long_shot)
			continue;
		++*count;
		if (!best || row->window->chance.done > best->window->chance.done)
			best = row;
	}
	return best;
}
