/* SPDX-License-Identifier: MIT
 * Taking stored mid-times out of the fits and in again from the interface, whose own store is open for
 * reading only, and taking such a change back. */
#ifndef WANE_TUI_MIDTIME_MARK_H
#define WANE_TUI_MIDTIME_MARK_H

#include "db/midtimes.h"
#include "tui/run.h"

#include <stdbool.h>

enum { MARKED_BYTES = 160 };
/* One change set: the times of an epoch and kind count or not. The file is opened for writing as long as that
 * takes; a run without a file (in memory) writes its own store. *said tells what was done. ST_ABSENT: no such
 * time; ST_STORE: the file can't be written. */
MUST_USE enum status midtime_mark(struct run *run, int64_t target_id, long epoch, enum event_kind kind,
				  bool use, char said[static MARKED_BYTES], struct err *e);
/* Takes back the newest such change of the target that holds, whoever made it. ST_ABSENT: none; ST_CONFLICT as
 * history_undo. */
MUST_USE enum status midtime_mark_undo(struct run *run, int64_t target_id, char said[static MARKED_BYTES],
				       struct err *e);

#endif
