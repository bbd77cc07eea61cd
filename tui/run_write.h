/* SPDX-License-Identifier: MIT
 * Writing from the interface, whose own store is open for reading only: the file is opened for writing for as
 * long as one change takes. */
#ifndef WANE_TUI_RUN_WRITE_H
#define WANE_TUI_RUN_WRITE_H

#include "tui/run.h"

/* The run's own store where that is the only one (in memory), else the file. ST_ABSENT: nothing is stored;
 * ST_STORE: the file can't be written. What was opened is closed with run_write_close. */
MUST_USE enum status run_write_open(struct run *run, struct store **out, struct err *e);
void run_write_close(struct run *run, struct store *s);

#endif
