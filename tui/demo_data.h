/* SPDX-License-Identifier: MIT
 * The invented list of the demo: config-example/demo-targets.csv as bytes, made by the build. */
#ifndef WANE_TUI_DEMO_DATA_H
#define WANE_TUI_DEMO_DATA_H

#include <stddef.h>

extern const char demo_targets_csv[];
extern const size_t demo_targets_csv_size; /* without a closing NUL */

#endif
