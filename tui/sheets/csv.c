/* SPDX-License-Identifier: MIT */
#include "tui/sheets/csv.h"

#include "db/write_csv.h"

#include <stdlib.h>

static void begin(struct csv_out *c)
{
	if (c->started)
		fputc(',', c->file);
	c->started = true;
}

static void cell(struct csv_out *c, const char *text, bool is_text)
{
	char usual[1024];
	size_t need = csv_cell_write(text, is_text, usual, sizeof usual);
	begin(c);
	if (need < sizeof usual) {
		fputs(usual, c->file);
		return;
	}
	char *large = malloc(need + 1);
	if (!large) {
		c->failed = true;
		return;
	}
	csv_cell_write(text, is_text, large, need + 1);
	fputs(large, c->file);
	free(large);
}

void csv_text(struct csv_out *c, const char *text)
{
	cell(c, text, true);
}

void csv_checked(struct csv_out *c, const char *text)
{
	cell(c, text, false);
}

void csv_number(struct csv_out *c, const char *text)
{
	begin(c);
	fputs(text, c->file);
}

void csv_end_line(struct csv_out *c)
{
	fputc('\n', c->file);
	c->started = false;
}
