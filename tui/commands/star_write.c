/* SPDX-License-Identifier: MIT */
#include "tui/commands/star.h"

#include "ephem/number_text.h"
#include "tui/commands/result.h"
#include "tui/commands/table.h"
#include "tui/diagnose.h"
#include "tui/field_words.h"
#include "tui/sheets/csv.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <math.h>

enum { NOTE_COLUMNS = 60 };

/* What is told of a target's field. */
struct told {
	const struct target *target;
	const struct field_star *star;
	size_t n;
	struct field_light light;
	struct field_fit fit;
	double aperture_arcsec;
};

static struct told told_of(const struct run *r, const struct target *t)
{
	struct told f = {.target = t};
	f.star = field_stars_of(&r->stars, t->id, &f.n);
	f.light = field_light_of(t, f.star, f.n, &r->observing.optics);
	f.fit = field_fit_of(t, f.star, f.n, r->telescope.field_arcmin);
	f.aperture_arcsec = field_aperture_arcsec(&r->observing.optics);
	return f;
}

/* --- forms --- */

static void star_text(FILE *to, const struct target *t, const struct field_star *s)
{
	const double sep = field_star_sep_arcsec(t, s);
	char mag[NUMBER_TEXT_MAX];
	fprintf(to, "  %lld: %s", (long long)s->id, field_star_words[s->role]);
	if (s->name[0]) {
		fputc(' ', to);
		text_cell(to, s->name, NAME_CHARS_MAX, false);
	}
	if (!isnan(s->ra_deg))
		fprintf(to, " at %.5f, %+.5f", s->ra_deg, s->dec_deg);
	if (sep < 120.0)
		fprintf(to, ", %.1f arcsec away", sep);
	else
		fprintf(to, ", %.2f arcmin away", sep / 60.0);
	number_text(s->mag, mag);
	fprintf(to, ", %s %s", s->band[0] ? s->band : "mag", mag);
	if (s->note[0]) {
		fputs("; ", to);
		text_cell(to, s->note, NOTE_COLUMNS, false);
	}
	fputc('\n', to);
}

static void told_text(FILE *to, const struct run *r, const struct told *f)
{
	char words[FIELD_SENTENCE_BYTES];
	text_cell(to, f->target->name, NAME_CHARS_MAX, false);
	if (f->n == 0) {
		fputs(": no stars of its field are stored (wane star add TARGET ROLE RA,DEC MAG)\n", to);
		return;
	}
	fputc('\n', to);
	for (size_t i = 0; i < f->n; i++)
		star_text(to, f->target, &f->star[i]);
	field_light_words(&f->light, f->aperture_arcsec, words);
	if (words[0])
		fprintf(to, "%s\n", words);
	field_fit_words(&f->fit, &r->telescope, r->has_telescope, words);
	if (words[0]) {
		text_cell(to, words, FIELD_SENTENCE_BYTES, false);
		fputc('\n', to);
	}
}

static void number_cell(struct csv_out *c, double value)
{
	char number[NUMBER_TEXT_MAX];
	number_text(value, number);
	csv_number(c, number);
}

static bool told_csv(FILE *to, const struct run *r, const struct told *f)
{
	struct csv_out c = {.file = to};
	char text[FIELD_SENTENCE_BYTES];
	fputs("target,number,role,name,ra_deg,dec_deg,sep_arcsec,mag,band,note\n", to);
	for (size_t i = 0; i < f->n; i++) {
		const struct field_star *s = &f->star[i];
		csv_text(&c, f->target->name);
		snprintf(text, sizeof text, "%lld", (long long)s->id);
		csv_number(&c, text);
		csv_text(&c, field_star_words[s->role]);
		csv_text(&c, s->name);
		number_cell(&c, s->ra_deg);
		number_cell(&c, s->dec_deg);
		number_cell(&c, s->sep_arcsec);
		number_cell(&c, s->mag);
		csv_text(&c, s->band);
		csv_text(&c, s->note);
		csv_end_line(&c);
	}
	/* a table has no room for them */
	field_light_words(&f->light, f->aperture_arcsec, text);
	if (text[0])
		diagnose("star", "%s", text);
	field_fit_words(&f->fit, &r->telescope, r->has_telescope, text);
	if (text[0])
		diagnose("star", "%s", text);
	return !c.failed;
}

static void fit_json(struct json *j, const struct run *r, const struct told *f)
{
	const struct field_fit *fit = &f->fit;
	json_open(j, "field", '{', true);
	if (r->has_telescope)
		json_text(j, "telescope", r->telescope.name);
	else
		json_null(j, "telescope");
	json_exact(j, "field_arcmin", r->telescope.field_arcmin);
	json_number(j, "needs_arcmin", fit->needs_arcmin, 4);
	if (fit->known)
		json_bool(j, "fits", fit->fits);
	else
		json_null(j, "fits");
	json_number(j, "ra_deg", fit->ra_deg, 6);
	json_number(j, "dec_deg", fit->dec_deg, 6);
	json_close(j, '}');
}

static void told_json(FILE *to, const struct run *r, const struct told *f)
{
	struct json j = json_begin(to);
	json_open(&j, NULL, '{', false);
	json_text(&j, "target", f->target->name);
	json_open(&j, "stars", '[', false);
	for (size_t i = 0; i < f->n; i++) {
		const struct field_star *s = &f->star[i];
		json_open(&j, NULL, '{', true);
		json_whole(&j, "number", (long)s->id);
		json_text(&j, "role", field_star_words[s->role]);
		json_text(&j, "name", s->name);
		json_exact(&j, "ra_deg", s->ra_deg);
		json_exact(&j, "dec_deg", s->dec_deg);
		json_exact(&j, "sep_arcsec", s->sep_arcsec);
		json_exact(&j, "mag", s->mag);
		json_text(&j, "band", s->band);
		json_text(&j, "note", s->note);
		json_close(&j, '}');
	}
	json_close(&j, ']');
	json_number(&j, "aperture_arcsec", f->aperture_arcsec, 3);
	json_whole(&j, "neighbours", f->light.neighbours);
	json_number(&j, "neighbour_light", f->light.neighbour, 6);
	json_number(&j, "comparison_stars", f->light.comparison_stars, 4);
	json_bool(&j, "assumed", f->light.assumed);
	fit_json(&j, r, f);
	json_close(&j, '}');
	json_end(&j);
}

int stars_write(const struct run *r, const struct target *t)
{
	const struct told f = told_of(r, t);
	struct out out;
	enum format format;
	bool whole = true;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_CSV | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	if (format == FORMAT_CSV)
		whole = told_csv(out.file, r, &f);
	else if (format == FORMAT_JSON)
		told_json(out.file, r, &f);
	else
		told_text(out.file, r, &f);
	return result_commit(&out, whole);
}
