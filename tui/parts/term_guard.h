/* SPDX-License-Identifier: MIT
 * What keeps a terminal usable whatever ends the program: kept modes, signals, a standard error that does not
 * write over the screen. */
#ifndef WANE_TUI_PARTS_TERM_GUARD_H
#define WANE_TUI_PARTS_TERM_GUARD_H

#include <signal.h>
#include <stdbool.h>

/* Before the terminal is taken over: keeps its modes and turns standard error away. */
void guard_keep_terminal(void);
/* After it was taken over (curses puts in handlers of its own): HUP, TERM, INT and QUIT ask the loop to end,
 * CONT to draw again, a crash puts the terminal back before it kills the process. Blocks the first five
 * outside the mask of guard_inside_mask. */
void guard_start(void);
/* Undoes both; writes what came on standard error meanwhile. */
void guard_give_back(void);
/* Signal mask for the one place where signals are let in. */
void guard_inside_mask(sigset_t *mask);
/* Whether such a signal came since the last call. */
bool guard_take_end(void);
/* The program is about to leave for another reason: further such signals are ignored from guard_give_back on,
 * as after an end. */
void guard_leave(void);
bool guard_take_woken(void);
/* Stops the process group's turn as ^Z does; false when no shell could wake it. */
bool guard_stop(void);

#endif
