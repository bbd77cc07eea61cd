/* SPDX-License-Identifier: MIT */
#include "ephem/bands.h"

#include <math.h>
#include <string.h>
#include <strings.h>

#define PLANCK_J_S 6.62607015e-34 /* SI 2019, exact */
#define JANSKY 1e-26		  /* W/m2/Hz */
#define AB_JY 3631.0

const struct band bands[BAND_COUNT] = {
    [BAND_U] = {"U", 366.0, 66.0, 1790.0, 0.45, BAND_U},
    [BAND_B] = {"B", 438.0, 95.0, 4063.0, 0.25, BAND_B},
    [BAND_V] = {"V", 545.0, 88.0, 3636.0, 0.15, BAND_V},
    [BAND_R] = {"R", 641.0, 138.0, 3064.0, 0.10, BAND_R},
    [BAND_I] = {"I", 798.0, 149.0, 2416.0, 0.06, BAND_I},
    [BAND_SDSS_G] = {"g", 468.6, 138.0, AB_JY, 0.16, BAND_B},
    [BAND_SDSS_R] = {"r", 616.5, 138.0, AB_JY, 0.105, BAND_R},
    [BAND_SDSS_I] = {"i", 748.1, 153.0, AB_JY, 0.09, BAND_I},
    [BAND_SDSS_Z] = {"z", 893.1, 95.0, AB_JY, 0.05, BAND_I},
    [BAND_CLEAR] = {"clear", 622.0, 405.0, 3229.0, 0.12, BAND_R},
};

enum band_id band_parse(const char *text)
{
	static const struct {
		const char *word;
		enum band_id id;
	} exact[] =
	    {
		{"Rc", BAND_R},	     {"Ic", BAND_I},	  {"g'", BAND_SDSS_G}, {"r'", BAND_SDSS_R},
		{"i'", BAND_SDSS_I}, {"z'", BAND_SDSS_Z}, {"gp", BAND_SDSS_G}, {"rp", BAND_SDSS_R},
		{"ip", BAND_SDSS_I}, {"zp", BAND_SDSS_Z}, {"zs", BAND_SDSS_Z}, {"G", BAND_CLEAR},
		{"C", BAND_CLEAR},   {"L", BAND_CLEAR},
	    },
	  words[] = {{"clear", BAND_CLEAR}, {"white", BAND_CLEAR}, {"lum", BAND_CLEAR}};
	if (!text)
		return BAND_NONE;
	for (int i = 0; i < BAND_COUNT; i++)
		if (strcmp(text, bands[i].name) == 0)
			return (enum band_id)i;
	for (size_t i = 0; i < sizeof exact / sizeof *exact; i++)
		if (strcmp(text, exact[i].word) == 0)
			return exact[i].id;
	for (size_t i = 0; i < sizeof words / sizeof *words; i++)
		if (strcasecmp(text, words[i].word) == 0)
			return words[i].id;
	return BAND_NONE;
}

double band_photons(enum band_id id)
{
	if (id < 0 || id >= BAND_COUNT)
		return NAN;
	return bands[id].zero_jy * JANSKY / (PLANCK_J_S * bands[id].wavelength_nm);
}
