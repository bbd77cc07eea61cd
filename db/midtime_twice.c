/* SPDX-License-Identifier: MIT
 * Rows of a mid-time table that say the same. */
#include "db/midtime_rows.h"

#include "db/import.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static int order(double x, double y)
{
	return (x > y) - (x < y);
}

static int by_content(const void *a, const void *b)
{
	const struct midtime_text *x = *(const struct midtime_text *const *)a;
	const struct midtime_text *y = *(const struct midtime_text *const *)b;
	int o = order(x->row.mid.day, y->row.mid.day);
	if (o == 0)
		o = order(x->row.mid.frac, y->row.mid.frac);
	if (o == 0)
		o = order(x->row.err_d, y->row.err_d);
	if (o == 0)
		o = (int)x->row.kind - (int)y->row.kind;
	if (o == 0)
		o = (int)x->has_epoch - (int)y->has_epoch;
	if (o == 0 && x->has_epoch)
		o = (x->row.epoch > y->row.epoch) - (x->row.epoch < y->row.epoch);
	return o ? o : strcmp(x->row.time_scale, y->row.time_scale);
}

static int by_content_and_line(const void *a, const void *b)
{
	const struct midtime_text *x = *(const struct midtime_text *const *)a;
	const struct midtime_text *y = *(const struct midtime_text *const *)b;
	int o = by_content(a, b);
	return o ? o : (x->line > y->line) - (x->line < y->line);
}

enum status midtime_say_twice(const struct midtime_table *t,
			      void (*say)(void *ctx, const struct import_message *m), void *ctx,
			      struct err *e)
{
	const struct midtime_text **sorted = malloc((t->n + 1) * sizeof(const struct midtime_text *));
	if (!sorted)
		return err_set(e, ST_MEMORY, "no memory to read a table");
	for (size_t i = 0; i < t->n; i++)
		sorted[i] = &t->row[i];
	qsort(sorted, t->n, sizeof(const struct midtime_text *), by_content_and_line);
	for (size_t i = 1; i < t->n; i++) {
		char text[80];
		if (by_content(&sorted[i - 1], &sorted[i]) != 0)
			continue;
		snprintf(text, sizeof text, "the same as line %ld: stored once", sorted[i - 1]->line);
		const struct import_message m = {.line = sorted[i]->line,
						 .column = sorted[i]->column,
						 .field = "mid_jd",
						 .text = text,
						 .got = sorted[i]->row.mid_text,
						 .expected = "",
						 .warning = true};
		if (say)
			say(ctx, &m);
	}
	free(sorted);
	return ST_OK;
}
