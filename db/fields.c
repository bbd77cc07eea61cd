/* SPDX-License-Identifier: MIT */
#include "db/fields.h"

#include "ephem/number_text.h"

#include <stdio.h>
#include <string.h>

#define AT(member) offsetof(struct target, member)
#define ERROR_MAX 1e9 /* an error larger than the value is a doubt, not a fault: catalogues hold such */
#define T HOME_TARGET
#define E HOME_EPHEMERIS

/* Ranges of what is not essential say what can be true at all; a value outside is kept as text and has no
 * effect. Proper motion: the largest known is 10.4 arcsec/yr (ESA 1997, The Hipparcos Catalogue); parallax:
 * the nearest star has 768 mas (same source); limits: those of the command line. */
const struct field fields[FIELD_COUNT] = {
    {"name", "", FIELD_NAME, T, AT(name), 0, 0, false, true,
     "Name of the planet, 1 to 80 printable characters."},
    {"ra_deg", "deg", FIELD_RA, T, AT(ra_deg), 0, 360, false, true,
     "Right ascension, ICRS; hh:mm:ss is read as hours."},
    {"dec_deg", "deg", FIELD_DEC, T, AT(dec_deg), -90, 90, false, true,
     "Declination, ICRS; dd:mm:ss is accepted."},
    {"pm_ra_masyr", "mas/yr", FIELD_NUMBER, T, AT(pm_ra_masyr), -12000, 12000, false, false,
     "Proper motion in right ascension times cos(declination)."},
    {"pm_dec_masyr", "mas/yr", FIELD_NUMBER, T, AT(pm_dec_masyr), -12000, 12000, false, false,
     "Proper motion in declination."},
    {"t0_jd", "d", FIELD_DATE, E, AT(t0), 2433282.5, 2488434.5, false, true,
     "Mid-transit time of epoch 0 in the scale of time_scale."},
    {"t0_err_d", "d", FIELD_NUMBER, E, AT(t0_err_d), 0, ERROR_MAX, false, true,
     "Error of t0_jd; empty or 0: unknown."},
    {"time_scale", "", FIELD_SCALE, E, AT(time_scale), 0, 0, false, true,
     "Scale of t0_jd, such as BJD_TDB; empty: the source doesn't say."},
    {"period_d", "d", FIELD_NUMBER, E, AT(period_d), 0, 1e7, true, true,
     "Orbital period; one below 0.01 d is kept and not counted."},
    {"period_err_d", "d", FIELD_NUMBER, E, AT(period_err_d), 0, ERROR_MAX, false, true,
     "Error of the period; empty or 0: unknown."},
    {"duration_h", "h", FIELD_NUMBER, T, AT(duration_h), 0, 10000, true, false,
     "Duration from first to fourth contact."},
    {"depth_ppt", "ppt", FIELD_NUMBER, T, AT(depth_ppt), 0, 1000, true, false,
     "Depth of the transit in parts per thousand."},
    {"k", "", FIELD_NUMBER, T, AT(k), 0, 100, true, false, "Radius of the planet over radius of the star."},
    {"a_rs", "", FIELD_NUMBER, T, AT(a_rs), 1, 1e6, true, false, "Semi-major axis over radius of the star."},
    {"inc_deg", "deg", FIELD_NUMBER, T, AT(inc_deg), 0, 180, false, false, "Inclination of the orbit."},
    {"ecc", "", FIELD_NUMBER, T, AT(ecc), 0, 0.9999, false, false, "Eccentricity of the orbit."},
    {"omega_deg", "deg", FIELD_NUMBER, T, AT(omega_deg), -360, 360, false, false,
     "Argument of periastron of the star's orbit."},
    {"mag", "mag", FIELD_NUMBER, T, AT(mag), -5, 40, false, false,
     "Brightness of the star in the band of the column band."},
    {"band", "", FIELD_TEXT, T, AT(band), 0, 0, false, false, "Band of mag."},
    {"teff_k", "K", FIELD_NUMBER, T, AT(teff_k), 300, 500000, false, false,
     "Effective temperature of the star."},
    {"rstar_rsun", "Rsun", FIELD_NUMBER, T, AT(rstar_rsun), 0, 3000, true, false, "Radius of the star."},
    {"mstar_msun", "Msun", FIELD_NUMBER, T, AT(mstar_msun), 0, 500, true, false, "Mass of the star."},
    {"source", "", FIELD_TEXT, E, AT(source), 0, 0, false, false, "Where the ephemeris was published."},
    {"t0_period_cov_d2", "d2", FIELD_NUMBER, E, AT(t0_period_cov_d2), -1e6, 1e6, false, false,
     "Covariance of t0_jd and period_d; empty: not published."},
    {"dpde_d", "d", FIELD_NUMBER, E, AT(dpde_d), -1, 1, false, false,
     "Change of the period from one epoch to the next."},
    {"dpde_err_d", "d", FIELD_NUMBER, E, AT(dpde_err_d), 0, 1, false, false, "Error of dpde_d."},
    {"duration_err_h", "h", FIELD_NUMBER, T, AT(duration_err_h), 0, 10000, false, false,
     "Error of the duration."},
    {"ttv_amp_min", "min", FIELD_NUMBER, E, AT(ttv_amp_min), 0, 1e5, false, false,
     "Bound of transit-timing variations."},
    {"plx_mas", "mas", FIELD_NUMBER, T, AT(plx_mas), 0, 800, false, false, "Parallax of the star."},
    {"pos_epoch_yr", "yr", FIELD_NUMBER, T, AT(pos_epoch_yr), 1850, 2150, false, false,
     "Julian year of the position; empty: 2000."},
    {"priority", "", FIELD_NUMBER, T, AT(priority), 0, 1e6, true, false, "Weight of the target, default 1."},
    {"tags", "", FIELD_TEXT, T, AT(tags), 0, 0, false, false, "Words to find the target by."},
    {"note", "", FIELD_TEXT, T, AT(note), 0, 0, false, false, "Free text."},
    {"sun_limit_deg", "deg", FIELD_NUMBER, T, AT(sun_limit_deg), -30, 0, false, false,
     "The target's own limit of the Sun's altitude, for the limbs."},
    {"sun_limit_baseline_deg", "deg", FIELD_NUMBER, T, AT(sun_limit_baseline_deg), -30, 0, false, false,
     "The same for the baselines."},
    {"alt_limit_deg", "deg", FIELD_NUMBER, T, AT(alt_limit_deg), 0, 90, false, false,
     "The target's own least altitude."},
    {"airmass_limit", "", FIELD_NUMBER, T, AT(airmass_limit), 1, 40, false, false,
     "The target's own greatest airmass."},
    {"moon_limit_deg", "deg", FIELD_NUMBER, T, AT(moon_limit_deg), 0, 180, false, false,
     "The target's own least distance from a bright Moon."},
    {"baseline_before_min", "min", FIELD_NUMBER, T, AT(baseline_before_min), 0, 720, false, false,
     "Wanted time before the first contact."},
    {"baseline_after_min", "min", FIELD_NUMBER, T, AT(baseline_after_min), 0, 720, false, false,
     "Wanted time after the fourth contact."},
    {"ecosw_err", "", FIELD_NUMBER, T, AT(ecosw_err), 0, 1, false, false,
     "Error of ecc times cos(omega), for the time of an occultation; empty: not published."},
    {"t0_dpde_cov_d2", "d2", FIELD_NUMBER, E, AT(t0_dpde_cov_d2), -1e6, 1e6, false, false,
     "Covariance of t0_jd and dpde_d; empty: not published, taken as 0."},
    {"period_dpde_cov_d2", "d2", FIELD_NUMBER, E, AT(period_dpde_cov_d2), -1e6, 1e6, false, false,
     "Covariance of period_d and dpde_d; empty: not published, taken as 0."},
};

int field_find(const char *name)
{
	for (int i = 0; i < FIELD_COUNT; i++)
		if (strcmp(fields[i].name, name) == 0)
			return i;
	return -1;
}

size_t field_text_max(int field)
{
	return strcmp(fields[field].name, "note") == 0 ? FIELD_NOTE_MAX
	       : fields[field].kind == FIELD_SCALE     ? 63
						       : FIELD_TEXT_MAX;
}

void field_expected(int field, char *out, size_t n)
{
	const struct field *f = &fields[field];
	char lo[NUMBER_TEXT_MAX], hi[NUMBER_TEXT_MAX];
	number_text(f->min, lo);
	number_text(f->max, hi);
	const char *gap = *f->unit ? " " : "";
	switch (f->kind) {
	case FIELD_NAME:
		snprintf(out, n, "1 to 80 printable characters");
		break;
	case FIELD_TEXT:
		snprintf(out, n, "a text of at most %zu bytes", field_text_max(field));
		break;
	case FIELD_NUMBER:
		snprintf(out, n, "a number %s%s%s%s%s", f->open_min ? "above " : "", lo,
			 f->open_min ? " up to " : "..", hi, gap);
		snprintf(out + strlen(out), n - strlen(out), "%s", f->unit);
		break;
	case FIELD_RA:
		snprintf(out, n, "degrees 0..360, or hours as hh:mm:ss");
		break;
	case FIELD_DEC:
		snprintf(out, n, "degrees -90..90, or dd:mm:ss");
		break;
	case FIELD_DATE:
		snprintf(out, n, "a Julian date of the years 1950 to 2100");
		break;
	case FIELD_SCALE:
		snprintf(out, n,
			 "BJD_TDB, HJD_UTC, JD_UTC and the like, an offset behind it as in BJD_TDB-2457000, "
			 "or BJD, HJD, JD, unknown");
		break;
	}
}

/* The fewest decimals that give the same two parts; 12 when none does. */
static void date_text(struct jd2 date, char out[NUMBER_TEXT_MAX])
{
	for (int decimals = 0; decimals <= 12; decimals++) {
		struct jd2 back;
		number_text_jd2(date, decimals, out);
		if (number_parse_jd2(out, strlen(out), &back, NULL, NULL) == ST_OK && back.day == date.day &&
		    back.frac == date.frac)
			return;
	}
}

void field_text(const struct target *t, int field, char *out, size_t n)
{
	const struct field *f = &fields[field];
	const char *at = (const char *)t + f->offset;
	char number[NUMBER_TEXT_MAX] = "";
	const char *text = number;
	switch (f->kind) {
	case FIELD_NAME:
	case FIELD_TEXT:
	case FIELD_SCALE:
		memcpy(&text, at, sizeof text);
		break;
	case FIELD_DATE:
		date_text(t->t0, number);
		break;
	case FIELD_NUMBER:
	case FIELD_RA:
	case FIELD_DEC: {
		double value;
		memcpy(&value, at, sizeof value);
		number_text(value + 0.0, number); /* no -0: the store keeps 0 */
		break;
	}
	}
	snprintf(out, n, "%s", text);
}
