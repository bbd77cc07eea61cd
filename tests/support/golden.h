/* SPDX-License-Identifier: MIT
 * Screens kept as text in tests/data/golden. */
#ifndef WANE_TESTS_SUPPORT_GOLDEN_H
#define WANE_TESTS_SUPPORT_GOLDEN_H

#include "tui/parts/grid.h"

/* Compares a grid with tests/data/golden/NAME.txt, a second part of which (behind a line `== roles`) holds
 * its role letters; fails with the first line that differs. With WANE_GOLDEN=update (`make golden`) the file
 * is written instead. */
void golden_check(const char *name, const struct grid *g);

#endif
