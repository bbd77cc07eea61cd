/* SPDX-License-Identifier: MIT
 * A run on a store in memory with the invented observatory and its list of targets, for tests of plans from end to end. */
#ifndef WANE_TESTS_SUPPORT_PLAN_RUN_H
#define WANE_TESTS_SUPPORT_PLAN_RUN_H

#include "tui/plan_make.h"

enum { PLAN_RUN_EVENING_MJD = 61152 /* 2026-04-22 */ };
struct plan_run {
	struct env env;
	struct options options;
	struct run run;
};
/* now: as --now takes it. Fails the test on any fault. */
struct plan_run *plan_run_open(const char *now);
void plan_run_close(struct plan_run *p);
/* Another present. */
void plan_run_now(struct plan_run *p, const char *utc);

/* A plan with its night. */
struct plan_case {
	struct night_view night;
	struct plan_view view;
	char *echo;
};
/* Fails the test unless plan_get answers with `expected`; the view is there after ST_OK alone. *c may not move while it is open. */
void plan_case_open(struct plan_case *c, struct plan_run *p, const struct plan_wish *wish, enum status expected);
void plan_case_close(struct plan_case *c);
/* The item that holds a target, the first in order; NULL none. */
const struct plan_item_view *plan_case_item(const struct plan_case *c, const char *target);
/* Why a target was left out; "" it was not. */
const char *plan_case_left(const struct plan_case *c, const char *target);

#endif
