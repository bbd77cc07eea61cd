/* SPDX-License-Identifier: MIT
 * The terminal: the only module that knows curses. One terminal a process, one thread. Grids go out, keys and
 * signals come in. */
#ifndef WANE_TUI_PARTS_TERM_H
#define WANE_TUI_PARTS_TERM_H

#include "ephem/err.h"
#include "tui/parts/grid.h"
#include "tui/settings.h"

#include <stdbool.h>
#include <stdint.h>

struct term_options {
	bool utf8;     /* the locale's character set, or that of the one that it names */
	bool no_color; /* no colour is asked for; bold and reverse stay */
	enum glyphs
	    glyphs; /* AUTO: by locale and terminal; a richer tier than the locale can write is not taken */
	enum palette palette; /* to begin with */
};

/* Takes the terminal over. ST_IO with a hint: standard input or output is no terminal, TERM is unknown or
 * can't place the cursor. While it is open, standard error goes to a file that has no name; term_close copies
 * it out. */
MUST_USE enum status term_open(const struct term_options *o, struct err *e);
/* Gives it back as it was. Safe when it is not open. */
void term_close(void);

void term_size(int *rows, int *cols);
enum tier term_tier(void);
bool term_has_colour(void);
void term_set_palette(enum palette palette);
enum palette term_palette(void);
/* Shows a grid; only what changed is sent. `whole`: everything again, whatever is believed to stand there. */
void term_show(const struct grid *g, bool whole);
/* The next key that waits (keys.h); false when none does. */
bool term_key(uint32_t *code);
/* Stops the process until the shell wakes it; false when the shell can't stop it (then nothing happened). */
bool term_suspend(void);

enum term_event {
	TERM_KEYS,  /* something to read, or the time is over: see term_key */
	TERM_WOKEN, /* the process was stopped and goes on: draw the whole screen */
	TERM_ENDED, /* a signal asks the program to end: close and leave with exit status 0 */
	TERM_LOST,  /* the terminal is gone: leave without drawing */
};
/* Sleeps until a key, a signal or the time (seconds, 0 does not wait). Signals are let in only here. */
enum term_event term_wait(double seconds);

#endif
