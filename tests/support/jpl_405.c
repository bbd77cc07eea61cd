/* SPDX-License-Identifier: MIT */
#include "tests/support/jpl_405.h"

#include "tests/support/check.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* The file is a casacore table whose cells of 1018 little-endian doubles follow each other in blocks of 8160
 * bytes, data 28 bytes behind the start of the first; each covers 32 d from MJD 36912 on. Found by looking at
 * the bytes, proved by JPL's own test table. */
enum { BLOCK = 8160, FIRST = 28, VALUES = 1018, SPAN_D = 32 };
#define FIRST_JD 2436912.5
#define AU_KM 149597870.691 /* of DE405 */
#define MASS_RATIO 81.30056 /* Earth over Moon, of DE405 */

struct jpl_405 {
	size_t size;
	unsigned char *bytes;
};

struct jpl_405 *jpl_405_open(void)
{
	FILE *f = fopen("/usr/share/casacore/data/ephemerides/DE405/table.f0i", "rb");
	if (!f)
		return NULL;
	struct jpl_405 *j = calloc(1, sizeof *j);
	const size_t most = 16u << 20;
	if (!j)
		abort();
	j->bytes = malloc(most);
	if (!j->bytes)
		abort();
	j->size = fread(j->bytes, 1, most, f);
	fclose(f);
	return j;
}

void jpl_405_close(struct jpl_405 *j)
{
	if (!j)
		return;
	free(j->bytes);
	free(j);
}

static double value_at(const struct jpl_405 *j, size_t block, size_t i)
{
	size_t at = FIRST + block * BLOCK + i * sizeof(double);
	if (at + sizeof(double) > j->size || i >= VALUES)
		check_fail("date outside DE405");
	uint64_t bits = 0;
	for (size_t k = 8; k-- > 0;)
		bits = bits << 8 | j->bytes[at + k];
	double v;
	memcpy(&v, &bits, sizeof v);
	return v;
}

/* Place of one body of the table [km, km/d]; start, terms and parts per 32 d are those of DE405's pointer
 * table (header group 1050), less the two dates that this copy leaves out. */
static struct vec3 series(const struct jpl_405 *j, size_t start, size_t terms, size_t parts, double day,
			  double frac, struct vec3 *rate)
{
	double since = (day - FIRST_JD) + frac;
	if (!(since >= 0.0))
		check_fail("date before DE405");
	size_t block = (size_t)(since / SPAN_D);
	double length = SPAN_D / (double)parts;
	double inside = (day - FIRST_JD - (double)block * SPAN_D) + frac;
	size_t part = (size_t)(inside / length);
	if (part >= parts)
		part = parts - 1;
	double u = 2.0 * (inside - (double)part * length) / length - 1.0;
	double place[3], speed[3];
	for (size_t axis = 0; axis < 3; axis++) {
		double t0 = 1.0, t1 = u, d0 = 0.0, d1 = 1.0;
		size_t at = start + part * terms * 3 + axis * terms;
		double p = value_at(j, block, at) + value_at(j, block, at + 1) * u,
		       v = value_at(j, block, at + 1);
		for (size_t k = 2; k < terms; k++) {
			double t2 = 2.0 * u * t1 - t0, d2 = 2.0 * t1 + 2.0 * u * d1 - d0,
			       c = value_at(j, block, at + k);
			p += c * t2;
			v += c * d2;
			t0 = t1;
			t1 = t2;
			d0 = d1;
			d1 = d2;
		}
		place[axis] = p;
		speed[axis] = v * 2.0 / length;
	}
	*rate = (struct vec3){speed[0], speed[1], speed[2]};
	return (struct vec3){place[0], place[1], place[2]};
}

struct vec3 jpl_405_bary_au(const struct jpl_405 *j, enum jpl_body body, double jd_tdb_day,
			    double jd_tdb_frac, struct vec3 *rate)
{
	struct vec3 v, place;
	if (body == JPL_SUN) {
		place = series(j, 750, 11, 2, jd_tdb_day, jd_tdb_frac, &v);
	} else {
		struct vec3 moon_v, both = series(j, 228, 13, 2, jd_tdb_day, jd_tdb_frac, &v);
		struct vec3 moon = series(j, 438, 13, 8, jd_tdb_day, jd_tdb_frac, &moon_v);
		double share = (body == JPL_EARTH ? 0.0 : 1.0) - 1.0 / (1.0 + MASS_RATIO);
		place = vec3_add(both, vec3_scale(moon, share));
		v = vec3_add(v, vec3_scale(moon_v, share));
	}
	if (rate)
		*rate = vec3_scale(v, 1.0 / AU_KM);
	return vec3_scale(place, 1.0 / AU_KM);
}
