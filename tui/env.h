/* SPDX-License-Identifier: MIT
 * The environment, read once at start. Nothing else in the program calls getenv or asks for the time. */
#ifndef WANE_TUI_ENV_H
#define WANE_TUI_ENV_H

#include "ephem/timescale.h"

#include <stdbool.h>

struct env {
	char data_path[512];     /* default database: $XDG_DATA_HOME/wane/wane.db ("" when no home is known) */
	char settings_path[512]; /* default settings: $XDG_CONFIG_HOME/wane/settings.ini */
	bool settings_apart;      /* the demo: the settings file is not read */
	char state_dir[512];     /* $XDG_STATE_HOME/wane */
	char user[64];           /* for change sets; "unknown" */
	char zoneinfo_dir[256];  /* $TZDIR or /usr/share/zoneinfo */
	bool no_color;           /* NO_COLOR present and not empty */
	bool utf8;               /* the locale's character set */
	bool stdin_tty, stdout_tty;
};
void env_read(struct env *env);
/* The one clock function. With `--now TIME` frozen; with `--now TIME+` it started there and runs. */
struct wall_clock {
	const struct leap_table *leap;
	bool fixed, running;
	struct utc start;      /* of --now */
	double start_monotonic_s;
};
/* Marks the start of a clock that runs from `start`. */
void wall_start(struct wall_clock *c);
struct utc wall_now(const struct wall_clock *c);

#endif
