/* SPDX-License-Identifier: MIT
 * Other planets of a window's star that transit while the window is observed. */
#ifndef WANE_EPHEM_SIBLINGS_H
#define WANE_EPHEM_SIBLINGS_H

#include "ephem/season.h"

#include <stddef.h>
#include <stdint.h>

/* Links the prepared targets of one star in a ring (prepared[].sibling). star[i]: number of the star of prepared[i], below `stars`.
 * ST_MEMORY only. O(n). */
MUST_USE enum status siblings_link(struct prepared prepared[], const uint32_t star[], size_t n, size_t stars, struct err *e);
/* Names, in each window of the list, the siblings of which a transit [T1, T4] touches its reserve, and sets the flag; so each of two planets
 * that transit at once names the other. Windows of transits and of occultations are looked at alike, but only a transit of a sibling counts:
 * its occultation takes away the light of the planet alone, which is lost in that of the star. A sibling without a usable ephemeris sets
 * siblings_unknown in every window of the star, whatever else is named. */
void siblings_mark(const struct night *night, struct window_list *list);

#endif
