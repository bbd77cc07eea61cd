/* SPDX-License-Identifier: MIT
 * Sentences about a plan's items: times, names, what to do when the first limb is missed. */
#include "ephem/number_text.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

/* A limb less likely than this is not worth waiting for. */
#define HARDLY 0.05

void plan_clock_words(const struct plan_view *v, struct utc t, char out[PLAN_CLOCK_BYTES])
{
	static const char *const months[] = {"Jan", "Feb", "Mar", "Apr", "May", "Jun",
					     "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
	const struct utc rounded = utc_add_s(&v->run->leap, t, 30.0);
	const struct local_time l = zone_local(v->run->zone, rounded);
	const int32_t evening = v->night->night.mjd;
	const struct date d = date_from_mjd(l.mjd);
	int minute = (int)(l.sod_s / 60.0);
	minute = minute > 1439 ? 1439 : minute;
	int n = snprintf(out, PLAN_CLOCK_BYTES, "%02d:%02d %s", minute / 60, minute % 60, l.abbreviation);
	/* evening and morning are clear without a date */
	if ((l.mjd < evening || l.mjd > evening + 1) && n > 0 && n < PLAN_CLOCK_BYTES)
		snprintf(out + n, (size_t)(PLAN_CLOCK_BYTES - n), " on %d %s", d.day, months[d.month - 1]);
}

/* Cuts a text that was too long between characters. */
void plan_put_words(char *out, size_t room, const char *format, ...)
{
	va_list args;
	va_start(args, format);
	const int n = vsnprintf(out, room, format, args);
	va_end(args);
	if (n < 0 || (size_t)n < room)
		return;
	size_t end = room - 1;
	while (end > 0 && ((unsigned char)out[end - 1] & 0xC0) == 0x80)
		end--;
	if (end > 0 && (unsigned char)out[end - 1] >= 0xC0)
		end--;
	out[end] = '\0';
}

void plan_item_name(const struct plan_item_view *item, char out[PLAN_NAME_BYTES])
{
	char before[PLAN_NAME_BYTES] = "";
	out[0] = '\0';
	for (size_t i = 0; i < item->n; i++) {
		plan_put_words(out, PLAN_NAME_BYTES, "%s%s%s", before, i ? " + " : "",
			       item->member[i].target);
		snprintf(before, sizeof before, "%s", out);
	}
}

/* --- what to do when the first limb is missed --- */

/* What the telescope is free for then: the next event of the pointing, else the next item; "" nothing. */
static void next_name(const struct plan_view *v, size_t at, char out[PLAN_NAME_BYTES])
{
	const struct plan_item_view *item = &v->item[at];
	out[0] = '\0';
	if (item->n > 1) {
		plan_put_words(out, PLAN_NAME_BYTES, "%s", item->member[1].target);
		return;
	}
	for (size_t i = at + 1; i < v->n_items; i++)
		if (v->item[i].state <= PLAN_STARTED) {
			plan_item_name(&v->item[i], out);
			return;
		}
}

/* From when the egress alone can be caught: its reserve before T3. */
static struct utc egress_by(const struct plan_view *v, const struct plan_item_view *item,
			    const struct plan_member_view *m)
{
	const struct leap_table *leap = &v->run->leap;
	const char *pad = member_pad(m);
	double pad_min = 0.0;
	if (pad[0] && number_parse(pad, strlen(pad), &pad_min, NULL, NULL) != ST_OK)
		pad_min = 0.0;
	const struct utc by = utc_add_s(leap, m->has_flat ? m->t3 : m->mid, -60.0 * pad_min);
	return utc_diff_s(leap, item->start, by) >= 0.0 ? by : item->start;
}

static double egress_chance(const struct plan_member_view *m)
{
	const char *text = member_figure(m, "chance_egress");
	double chance;
	return text[0] && number_parse(text, strlen(text), &chance, NULL, NULL) == ST_OK ? chance : NAN;
}

static void item_missed(const struct plan_view *v, size_t at)
{
	struct plan_item_view *item = &v->item[at];
	const struct plan_member_view *m = &item->member[0];
	char next[PLAN_NAME_BYTES], by[PLAN_CLOCK_BYTES], chance[48], leave[PLAN_NAME_BYTES + 16],
	    of[PLAN_NAME_BYTES] = "";
	const double c = egress_chance(m);
	next_name(v, at, next);
	plan_clock_words(v, egress_by(v, item, m), by);
	if (isnan(c))
		snprintf(chance, sizeof chance, "not known");
	else
		snprintf(chance, sizeof chance, "%.0f %%", 100.0 * c);
	if (next[0])
		plan_put_words(leave, sizeof leave, "leave it for %s", next);
	else
		snprintf(leave, sizeof leave, "nothing is left of it");
	if (item->n > 1)
		plan_put_words(of, sizeof of, " of %s", m->target);
	if (strcmp(m->variant, variant_words[VARIANT_INGRESS]) == 0)
		plan_put_words(item->if_missed, sizeof item->if_missed,
			       "Only the ingress%s is planned: once it is missed, %s.", of, leave);
	else if (strcmp(m->variant, variant_words[VARIANT_EGRESS]) == 0)
		plan_put_words(item->if_missed, sizeof item->if_missed,
			       "Only the egress%s is planned: on target by %s; later than that, %s.", of, by,
			       leave);
	else if (c < HARDLY)
		plan_put_words(item->if_missed, sizeof item->if_missed,
			       "If the ingress%s is missed, %s: the egress alone has a chance of %s.", of,
			       leave, chance);
	else
		plan_put_words(
		    item->if_missed, sizeof item->if_missed,
		    "If the ingress%s is missed: the egress alone can still be caught (chance %s), on "
		    "target by %s; later than that, %s.",
		    of, chance, by, leave);
}

void plan_if_missed(struct plan_view *v)
{
	for (size_t i = 0; i < v->n_items; i++) {
		v->item[i].if_missed[0] = '\0';
		if (v->item[i].n > 0 && v->item[i].state <= PLAN_STARTED)
			item_missed(v, i);
	}
}
