/* SPDX-License-Identifier: MIT
 * What may be caught, what it tells, what it is worth; the table of moments. */
#include "tui/sheets/explain_parts.h"

#include "ephem/number_text.h"
#include "tui/sheets/text.h"

#include <math.h>

static void one_case(const struct explained *e, FILE *to, const char *name, const struct forecast_case *c,
		     const char *what)
{
	char chance[NUMBER_TEXT_MAX] = "-", bits[NUMBER_TEXT_MAX] = "-", timing[NUMBER_TEXT_MAX] = "-",
	     words[120];
	if (isfinite(c->chance))
		number_text_fixed(100.0 * c->chance, 1, chance);
	if (isfinite(c->bits))
		number_text_fixed(c->bits, 3, bits);
	if (isfinite(c->timing_s))
		number_text_fixed(c->timing_s, 0, timing);
	snprintf(words, sizeof words, "%s %%, %s bit, %s s", chance, bits, timing);
	explain_words(e, to, name, words, what);
}

void explain_cases(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	explain_step(e, to, "7. What may be caught",
		     "The mid-time is drawn from its error; where a limb and its least baseline fall into "
		     "usable time it is "
		     "caught. Chance, bits then, precision that is worth as much.");
	one_case(e, to, "both limbs", &x->whole, "");
	one_case(e, to, "ingress only", &x->ingress, "The egress is lost.");
	one_case(e, to, "egress only", &x->egress, "The ingress is lost.");
	one_case(e, to, "ingress alone", &x->ingress_alone, "If the telescope leaves after it: of plans.");
	one_case(e, to, "egress alone", &x->egress_alone, "If the telescope comes for it: of plans.");
}

void explain_information(const struct explained *e, FILE *to)
{
	const struct forecast_explain *x = e->x;
	explain_step(e, to, "8. Information",
		     "log2(1 + V / s^2) / 2 bits (Shannon 1948); s = hypot(timing, need, TTV, time standard, "
		     "floor); expected "
		     "over the cases.");
	explain_number(e, to, "error now", x->published_min, 3, "min",
		       "Of the predicted mid-time, published: sqrt V.");
	explain_number(e, to, "need", x->need_min, 2, "min", "Of the team: more precision is worth nothing.");
	explain_number(e, to, "TTV", x->ttv_min, 2, "min", "Bound of timing variations / sqrt 2.");
	explain_number(e, to, "time standard", x->systematic_min, 2, "min",
		       "Where the source does not say it.");
	explain_number(e, to, "floor", x->floor_min, 3, "min", "Systematic errors of the team's times.");
	explain_number(e, to, "s", x->precision_min, 3, "min", "With both limbs.");
	explain_number(e, to, "gain", x->gain_bits, 3, "bit", "Sum of chance x bits; column gain_bits.");
	if (isfinite(x->sigma_at_min)) {
		explain_number(e, to, "error at the date", x->sigma_at_min, 3, "min",
			       "That of the settings, as it is.");
		explain_number(e, to, "error after", x->sigma_after_min, 3, "min",
			       "If the likeliest case comes true; column sigma_after_min.");
	}
}

void explain_worth(const struct explained *e, FILE *to)
{
	static const char *const basis[] = {"chance", "a number per event", "expected bits"};
	const struct forecast_explain *x = e->x;
	explain_step(e, to, "9. Worth", "priority x open goals x what it brings. Of our own choosing.");
	explain_words(e, to, "by", basis[x->basis],
		      x->basis == BASIS_BITS
			  ? "The cases above, whole events alone for goals that want both limbs."
			  : "Times the chance of both limbs, a tenth of the coverage without one.");
	explain_number(e, to, "priority", x->priority, 2, "", "Of the target.");
	explain_number(e, to, "open goals", x->open.whole, 0, "", "That this event would serve.");
	explain_number(e, to, "  with one limb too", x->open.limb, 0, "", "Of them.");
	if (x->basis == BASIS_EVENT)
		explain_number(e, to, "an event counts", x->event_value, 2, "",
			       "Instead of bits: they can't be told, or the settings rank otherwise.");
	explain_number(e, to, "worth", x->worth, 3, "", "Column worth.");
}

static void cell(FILE *to, double value, int decimals, int width)
{
	char number[NUMBER_TEXT_MAX] = "-";
	if (isfinite(value))
		number_text_fixed(value, decimals, number);
	fprintf(to, " %*s", width, number);
}

void explain_moments(const struct explained *e, FILE *to)
{
	explain_step(
	    e, to, "10. Through the reserve",
	    e->plain
		? "Time; altitude [deg]; airmass; sky [mag/arcsec2]; noise of a minute [ppt]; whether usable."
		: "time   alt/deg airmass  sky/mag noise/ppt usable");
	for (int i = 0; i < e->n_moments; i++) {
		const struct forecast_moment *m = &e->moment[i];
		char at[CLOCK_BYTES];
		text_clock(e->night, e->zone, m->t_d, e->plain, at);
		fprintf(to, "  %s", at);
		cell(to, m->alt_deg, 1, 8);
		cell(to, m->airmass, 3, 7);
		cell(to, m->sky.mag_arcsec2, 2, 8);
		cell(to, m->noise.minute_ppt, 3, 9);
		fputs(intervals_contain(&e->window->cover.usable, m->t_d) ? " yes\n" : " no\n", to);
	}
}
