/* SPDX-License-Identifier: MIT
 * A sentence that chooses windows:
 *
 *	sentence = group { "|" group }          one of them is true
 *	group    = term { "&" term }            all of them are true
 *	term     = figure op value | text-word op text | [ "!" ] "planned" | [ "!" ] text
 *	op       = "<" | "<=" | ">" | ">=" | "=" | "!="
 *
 * figure: a heading of the list or a name of the column table; of times the value is HH:MM as the list shows
 * them, 12:00 to 23:59 in the evening; chances and cover by their heading are percents, by their column name
 * shares. text-word: name, tags, lost, doubts, state, kind, plan: `=` is true when it holds the text. A text
 *alone is looked for in name and tags. Capitals and blanks do not count. What is unknown makes no term true.
 */
#ifndef WANE_TUI_PAGES_NIGHT_FILTER_H
#define WANE_TUI_PAGES_NIGHT_FILTER_H

#include "tui/pages/night_rows.h"
#include "tui/parts/columns.h"

enum { FILTER_TERMS_MAX = 12, FILTER_TEXT_BYTES = 120 };
enum filter_op { OP_LESS, OP_AT_MOST, OP_MORE, OP_AT_LEAST, OP_IS, OP_IS_NOT };
enum filter_kind { TERM_ANY_TEXT, TERM_TEXT, TERM_NUMBER, TERM_MAG, TERM_WORTH, TERM_TIME, TERM_PLANNED };
struct filter_term {
	bool or_before; /* begins a group */
	enum filter_kind kind;
	int at; /* TERM_TEXT: which word; TERM_NUMBER, TERM_TIME: column */
	enum filter_op op;
	double value, factor;	      /* of a time: minutes since the local midnight before the evening */
	char text[FILTER_TEXT_BYTES]; /* folded */
};
struct filter {
	int n; /* 0: every window */
	struct filter_term term[FILTER_TERMS_MAX];
};
/* ST_SYNTAX with a sentence that says what was expected where; *f is unchanged then. */
MUST_USE enum status filter_parse(const char *text, struct filter *f, struct err *e);
bool filter_keeps(const struct filter *f, const struct night_row *row, const struct night *night,
		  const struct zone *zone);

/* Whether a text holds another; capitals (of ASCII) and blanks do not count. An empty one is in none. */
bool text_holds(const char *text, const char *piece);

#endif
