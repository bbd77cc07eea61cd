/* SPDX-License-Identifier: MIT
 * The field of a target in sentences. */
#ifndef WANE_TUI_FIELD_WORDS_H
#define WANE_TUI_FIELD_WORDS_H

#include "tui/field_light.h"

enum { FIELD_SENTENCE_BYTES = 400 };
/* Whether comparison and guide stars fit the field of a telescope together with the target; has_telescope
 * false: none is chosen. "" where no star has to fit. */
void field_fit_words(const struct field_fit *fit, const struct telescope *telescope, bool has_telescope,
		     char out[FIELD_SENTENCE_BYTES]);
/* What neighbours put into the aperture; "" none. */
void field_light_words(const struct field_light *light, double aperture_arcsec,
		       char out[FIELD_SENTENCE_BYTES]);

#endif
