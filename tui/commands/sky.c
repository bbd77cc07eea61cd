/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "ephem/angle_text.h"
#include "ephem/barycentre.h"
#include "ephem/forecast.h"
#include "ephem/mask.h"
#include "ephem/number_text.h"
#include "ephem/units.h"
#include "tui/commands/direction.h"
#include "tui/commands/result.h"
#include "tui/diagnose.h"
#include "tui/given.h"
#include "tui/sheets/json.h"
#include "tui/sheets/text.h"

#include <math.h>
#include <string.h>

#define AIR_TEMPERATURE_C 10.0 /* of the refraction; 10 degrees change it by 4 % */

/* Everything that is shown, angles in degrees; NAN where there is no star. */
struct sky {
	struct utc utc;
	double t_d, lst_deg;
	bool has_star, has_ephemeris,
	    has_next; /* has_next: the next mid-time lies within the dates of the program */
	struct jd2 bjd_tdb, hjd_utc;
	double ra_deg, dec_deg, ha_deg, parallactic, airmass, alt_apparent_deg, mask_deg;
	struct altaz star, sun, moon;
	double moon_ra_deg, moon_dec_deg, moon_sep_deg, moon_lit, sun_sep_deg;
	enum band_id band; /* of the next */
	struct skyglow glow;
	long epoch;
	double phase, sigma_min;
	struct tdb next_mid;
	struct utc next_mid_utc;
};

static void angles_deg(struct vec3 v, double *lon_deg, double *lat_deg)
{
	vec3_to_angles(v, lon_deg, lat_deg);
	*lon_deg /= DEG_RAD;
	*lat_deg /= DEG_RAD;
}

static void fill_star(struct sky *s, const struct run *r, const struct night *n, const struct target *t)
{
	struct star star = night_star(n, t);
	double ra, dec, lst = night_lst_rad(n, s->t_d);
	s->has_star = true;
	s->star = night_star_altaz(n, &star, s->t_d);
	angles_deg(star.icrs, &s->ra_deg, &s->dec_deg);
	vec3_to_angles(star.apparent, &ra, &dec);
	double ha = remainder(lst - ra, TWO_PI);
	s->ha_deg = ha / DEG_RAD;
	s->parallactic = parallactic_deg(n->lat_rad, ha, dec);
	s->airmass = airmass_young(s->star.alt_deg);
	s->alt_apparent_deg =
	    s->star.alt_deg +
	    refraction_deg(s->star.alt_deg, pressure_hpa(n->site->height_m), AIR_TEMPERATURE_C);
	if (n->site->mask)
		s->mask_deg = mask_at(n->site->mask, s->star.az_north_deg);
	s->bjd_tdb = night_bjd_tdb(n, &star, s->t_d).jd;
	s->hjd_utc = jd2_add_d(utc_to_jd(n->clock.leap, s->utc),
			       night_light_time_s(n, &star, s->t_d, ORIGIN_SUN) / DAY_S);
	s->moon_sep_deg = night_moon_sep_deg(n, &star, s->t_d);
	s->sun_sep_deg = night_sun_sep_deg(n, &star, s->t_d);
	s->band = run_observing(r, &r->site) ? r->observing.optics.band : BAND_V;
	s->glow = forecast_sky(n, &star, &r->observing, s->band, s->t_d);
}

/* The next mid-time lies on any later night: its UTC from single light times, not from this night's tables.
 */
static enum status fill_ephemeris(struct sky *s, struct run *r, const struct night *n,
				  const struct prepared *p, struct err *e)
{
	static const struct standard utc_at_site = {
	    .claim = SCALE_STATED, .origin = ORIGIN_BARYCENTRE, .clock = CLOCK_TDB};
	const struct observer at = {.site = &r->site, .clock = &r->clock};
	const struct tdb now = {.jd = s->bjd_tdb};
	struct tt tt;
	long next;
	if (!p->has_ephemeris || !ephemeris_first_after(&p->eph, now, &next))
		return ST_OK;
	s->has_ephemeris = true;
	s->phase = ephemeris_phase(&p->eph, now);
	s->next_mid = ephemeris_mid(&p->eph, next);
	s->epoch = next - 1;
	double published = ephemeris_published_d(&p->eph, next);
	s->sigma_min = hypot(hypot(published * DAY_MIN, p->eph.systematic_min), p->eph.ttv_min / sqrt(2.0));
	enum status st =
	    standard_to_tt(r->memo, &at, &utc_at_site, s->next_mid.jd, night_star(n, p->target).icrs, &tt, e);
	s->has_next = st == ST_OK;
	if (st == ST_OK)
		s->next_mid_utc = tt_to_utc(&r->leap, tt);
	return st == ST_RANGE ? ST_OK : st;
}

static struct sky sky_at(const struct night *n, struct utc utc)
{
	struct sky s = {.utc = utc, .t_d = night_of_utc(n, utc)};
	s.lst_deg = fmod(night_lst_rad(n, s.t_d) / DEG_RAD + 360.0, 360.0);
	s.sun = night_sun_altaz(n, s.t_d);
	s.moon = night_moon_altaz(n, s.t_d);
	angles_deg(night_moon_topo_km(n, s.t_d), &s.moon_ra_deg, &s.moon_dec_deg);
	s.moon_lit = night_moon_lit(n, s.t_d);
	s.bjd_tdb = s.hjd_utc = (struct jd2){NAN, NAN};
	s.star = (struct altaz){NAN, NAN};
	s.ra_deg = s.dec_deg = s.ha_deg = s.parallactic = s.airmass = s.alt_apparent_deg = s.mask_deg = NAN;
	s.moon_sep_deg = s.sun_sep_deg = s.phase = s.sigma_min = s.glow.mag_arcsec2 = NAN;
	return s;
}

/* --- writing --- */

static void jd_json(struct json *j, const char *key, struct jd2 jd, int decimals)
{
	char digits[NUMBER_TEXT_MAX];
	number_text_jd2(jd, decimals, digits);
	json_digits(j, key, digits);
}

static void write_json(FILE *to, const struct sky *s, const struct leap_table *leap, bool with_target)
{
	struct json j = json_begin(to);
	char text[UTC_TEXT_MAX];
	json_open(&j, NULL, '{', false);
	utc_text(leap, s->utc, 0, text);
	json_text(&j, "utc", text);
	jd_json(&j, "jd_utc", utc_to_jd(leap, s->utc), 8);
	jd_json(&j, "bjd_tdb", s->bjd_tdb, 8);
	jd_json(&j, "hjd_utc", s->hjd_utc, 8);
	const struct {
		const char *key;
		double value;
		int decimals;
	} rows[] = {{"lst_deg", s->lst_deg, 5},
		    {"ra_deg", s->ra_deg, 5},
		    {"dec_deg", s->dec_deg, 5},
		    {"ha_deg", s->ha_deg, 5},
		    {"alt_deg", s->star.alt_deg, 5},
		    {"alt_apparent_deg", s->alt_apparent_deg, 5},
		    {"az_deg", s->star.az_north_deg, 5},
		    {"parallactic_deg", s->parallactic, 5},
		    {"airmass", s->airmass, 5},
		    {"sun_alt_deg", s->sun.alt_deg, 5},
		    {"sun_az_deg", s->sun.az_north_deg, 5},
		    {"moon_ra_deg", s->moon_ra_deg, 5},
		    {"moon_dec_deg", s->moon_dec_deg, 5},
		    {"moon_alt_deg", s->moon.alt_deg, 5},
		    {"moon_az_deg", s->moon.az_north_deg, 5},
		    {"moon_sep_deg", s->moon_sep_deg, 5},
		    {"moon_lit", s->moon_lit, 5},
		    {"sky_mag_arcsec2", s->glow.mag_arcsec2, 3},
		    {"sun_sep_deg", s->sun_sep_deg, 5}};
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)
		json_number(&j, rows[i].key, rows[i].value, rows[i].decimals);
	if (with_target && s->has_ephemeris) {
		json_whole(&j, "epoch", s->epoch);
		json_number(&j, "phase", s->phase, 6);
		utc_text(leap, s->next_mid_utc, 0, text);
		if (s->has_next) {
			jd_json(&j, "next_mid_bjd_tdb", s->next_mid.jd, 6);
			json_text(&j, "next_mid_utc", text);
		} else {
			json_null(&j, "next_mid_bjd_tdb");
			json_null(&j, "next_mid_utc");
		}
		json_number(&j, "sigma_min", s->has_next ? s->sigma_min : NAN, 3);
	} else if (with_target) {
		static const char *const keys[] = {"epoch", "phase", "next_mid_bjd_tdb", "next_mid_utc",
						   "sigma_min"};
		for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++)
			json_null(&j, keys[i]);
	}
	json_close(&j, '}');
	json_end(&j);
}

static void direction_words(FILE *to, const char *word, const struct altaz *a)
{
	static const char *const points[] = {"N", "NE", "E", "SE", "S", "SW", "W", "NW"};
	fprintf(to, "%s %.1f deg %s the horizon, azimuth %.1f (%s)", word, fabs(a->alt_deg),
		a->alt_deg >= 0.0 ? "above" : "below", a->az_north_deg,
		points[(int)floor(a->az_north_deg / 45.0 + 0.5) % 8]);
}

static void star_text(FILE *to, const struct sky *s, const struct target *t)
{
	char ra[ANGLE_TEXT_MAX], dec[ANGLE_TEXT_MAX], bjd[NUMBER_TEXT_MAX], hjd[NUMBER_TEXT_MAX];
	ra_text(s->ra_deg, 2, ra);
	dec_text(s->dec_deg, 1, dec);
	number_text_jd2(s->bjd_tdb, 6, bjd);
	number_text_jd2(s->hjd_utc, 6, hjd);
	text_cell(to, t->name, NAME_CHARS_MAX, false);
	fprintf(to, " at %s %s (ICRS of the date)\n", ra, dec);
	direction_words(to, "  stands", &s->star);
	if (isfinite(s->airmass))
		fprintf(to, ", airmass %.2f", s->airmass);
	fprintf(to, "\n  hour angle %.2f h, parallactic angle %.1f deg, with refraction %.2f deg high\n",
		s->ha_deg / 15.0, s->parallactic, s->alt_apparent_deg);
	if (isfinite(s->mask_deg))
		fprintf(to,
			s->alt_apparent_deg > s->mask_deg
			    ? "  above the horizon mask, which is %.1f deg high there\n"
			    : "  behind the horizon mask, which is %.1f deg high there\n",
			s->mask_deg);
	fprintf(to, "  %.1f deg from the Moon, %.1f from the Sun\n", s->moon_sep_deg, s->sun_sep_deg);
	if (isfinite(s->glow.mag_arcsec2))
		fprintf(to, "  sky behind it %.2f mag/arcsec2 in %s%s\n", s->glow.mag_arcsec2,
			bands[s->band].name,
			s->glow.limits & SKY_DARK_ASSUMED
			    ? ", with the dark sky of a very dark site: this one's is not stored"
			    : "");
	fprintf(to, "  BJD_TDB %s, HJD_UTC %s\n", bjd, hjd);
}

static void write_text(FILE *to, const struct sky *s, const struct run *r, const struct target *t)
{
	char utc[UTC_TEXT_MAX], jd[NUMBER_TEXT_MAX], next[UTC_TEXT_MAX], bjd[NUMBER_TEXT_MAX];
	struct text_sheet sheet;
	utc_text(&r->leap, s->utc, 0, utc);
	number_text_jd2(utc_to_jd(&r->leap, s->utc), 6, jd);
	text_begin(&sheet, to, r, false);
	text_site(&sheet, &r->site, r->zone);
	struct local_time l = zone_local(r->zone, utc_rounded(&r->leap, s->utc, 0));
	long sec = (long)l.sod_s;
	fprintf(to, "Time: %s, %02ld:%02ld:%02ld %s, JD_UTC %s, local sidereal time %.4f h\n", utc,
		sec / 3600, sec / 60 % 60, sec % 60 + (l.leap_second ? 1 : 0), l.abbreviation, jd,
		s->lst_deg / 15.0);
	if (t)
		star_text(to, s, t);
	if (t && s->has_ephemeris && !s->has_next) {
		fprintf(to, "  orbit %ld, phase %.4f; the next mid-time is later than this program counts\n",
			s->epoch, s->phase);
	} else if (t && s->has_ephemeris) {
		utc_text(&r->leap, s->next_mid_utc, 0, next);
		number_text_jd2(s->next_mid.jd, 6, bjd);
		fprintf(to, "  orbit %ld, phase %.4f; next mid-time %s (BJD_TDB %s)", s->epoch, s->phase,
			next, bjd);
		if (isfinite(s->sigma_min))
			fprintf(to, ", error %.1f min\n", s->sigma_min);
		else
			fputs(", error not known\n", to);
	} else if (t && !r->options->radec) {
		fputs(isfinite(t->t0.day) ? "  its ephemeris can't be counted: see wane target show\n"
					  : "  no ephemeris is stored\n",
		      to);
	}
	direction_words(to, "Sun", &s->sun);
	fputs(s->sun.alt_deg > -0.8333 ? ": it is up, never point near it\n" : "\n", to);
	direction_words(to, "Moon", &s->moon);
	fprintf(to, ", %.0f %% lit\n", 100.0 * s->moon_lit);
}

static int write_sky(struct run *r, const struct sky *s, const struct target *t)
{
	const struct options *o = r->options;
	struct out out;
	enum format format;
	const int opened = result_open(r, FORMAT_TEXT | FORMAT_JSON, &format, &out);
	if (opened != EXIT_DONE)
		return opened;
	if (format == FORMAT_JSON)
		write_json(out.file, s, &r->leap, t && !o->radec);
	else
		write_text(out.file, s, r, t);
	return result_commit(&out, true);
}

static const struct prepared *prepared_of(const struct run *r, const struct target *t)
{
	for (size_t i = 0; i < r->n_prepared; i++)
		if (r->prepared[i].target == t)
			return &r->prepared[i];
	return NULL;
}

static int show_sky(struct run *r, const char *at)
{
	const struct options *o = r->options;
	const struct target *t;
	struct utc utc = wall_now(&r->wall);
	struct night night;
	struct err e;
	size_t index;
	if (at && given_time(&r->leap, at, &utc, &e) != ST_OK)
		return usage_fault("--at", &e);
	enum status st = direction_of(r, o->n_words > 1 ? o->word[1] : NULL, &t, &index, &e);
	if (st != ST_OK)
		return diagnose_err("target", &e, st == ST_SYNTAX ? EXIT_USAGE : EXIT_UNMET);
	if (night_build(&night, &r->site, &r->clock, night_date_of(r->site.lon_east_deg, utc), r->memo, &e) !=
	    ST_OK)
		return diagnose_err("sky", &e, EXIT_UNMET);
	night_set_sidereal(&night, utc); /* UT1 - UTC is given for this instant, not for the evening's noon */
	struct sky s = sky_at(&night, utc);
	if (t)
		fill_star(&s, r, &night, t);
	const struct prepared *p = t ? prepared_of(r, t) : NULL;
	if (p && fill_ephemeris(&s, r, &night, p, &e) != ST_OK)
		return diagnose_err("sky", &e, EXIT_UNMET);
	leap_note(r, utc.mjd);
	return write_sky(r, &s, t);
}

int command_sky(const struct env *env, const struct options *o)
{
	struct run run;
	struct err e;
	struct utc utc;
	int code, needs = NEED_SITE | NEED_TARGETS;
	if (!one_site(o, "sky"))
		return EXIT_USAGE;
	if (o->at && given_time(&leap_builtin, o->at, &utc, &e) != ST_OK && !strstr(o->at, ":60"))
		return usage_fault("--at", &e);
	if (run_open(&run, env, o, needs, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	code = show_sky(&run, o->at);
	run_close(&run);
	return code;
}
