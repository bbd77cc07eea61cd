/* SPDX-License-Identifier: MIT
 * Texts of the page that do not depend on a window: help, limits, first run. */
#include "tui/pages/night_detail.h"

#include "ephem/number_text.h"
#include "tui/cautions.h"
#include "tui/parts/columns.h"
#include "tui/parts/keys.h"

#include <math.h>
#include <stdio.h>

enum { HELP_INDENT = 14, FIGURE_INDENT = 14, PLAIN_INDENT = 2 };

static void heading(struct text_view *v, const char *text)
{
	if (v->n > 0)
		text_view_add(v, ROLE_TEXT, 0, "");
	text_view_add(v, ROLE_STRONG, 0, text);
}

static void key_lines(struct text_view *v)
{
	for (size_t i = 0; i < key_count; i++) {
		char labels[64];
		if (!keys[i].sentence)
			continue;
		key_labels(keys[i].action, labels, sizeof labels);
		text_view_addf(v, ROLE_TEXT, HELP_INDENT, "%-13s %s", labels, keys[i].sentence);
	}
}

static void figure_lines(struct text_view *v)
{
	for (int c = 0; c < ROW_CELLS; c++) {
		const struct row_column *rc = &row_columns[c];
		const char *sentence = rc->sentence;
		int at = rc->column ? column_find(rc->column) : -1;
		if (at >= 0)
			sentence = columns[at].sentence;
		char title[40];
		snprintf(title, sizeof title, "%s%s%s", rc->heading,
			 rc->unit && *rc->unit && c != ROW_COVER ? ", " : "",
			 rc->unit && c != ROW_COVER ? rc->unit : "");
		text_view_addf(v, ROLE_TEXT, FIGURE_INDENT, "%-13s %s", title, sentence ? sentence : "");
	}
}

static void cover_legend(struct text_view *v)
{
	/* the view is written before the tier of the terminal is known to it: both forms are named */
	text_view_add(v, ROLE_TEXT, FIGURE_INDENT,
		      "              In the picture of the cover a full block (#) is a part that can be "
		      "observed whole, a high one (+) "
		      "at least half of it, a low one (-) less than half, x none; a dot is a part that this "
		      "event has not.");
	text_view_add(v, ROLE_TEXT, FIGURE_INDENT,
		      "              Under `lost by` the letters B I F E A name the parts, then follows what "
		      "takes them: Sun, low "
		      "(altitude), mask, Moon, air (airmass), noon (it runs into the neighbouring night).");
}

void help_lines(struct text_view *v, int width)
{
	text_view_start(v, width);
	text_view_add(v, ROLE_STRONG, 0, "Keys (q, ? or Esc comes back)");
	key_lines(v);
	heading(v, "Cautions");
	for (size_t i = 0; i < caution_count; i++)
		text_view_add(v, ROLE_TEXT, PLAIN_INDENT, cautions[i]);
	heading(v, "Figures");
	figure_lines(v);
	cover_legend(v);
	heading(v, "Doubts");
	for (int f = 0; f < FLAG_COUNT; f++)
		text_view_addf(v, ROLE_TEXT, PLAIN_INDENT, "%s: %s", flag_rules[f].word,
			       flag_rules[f].sentence);
}

void limit_lines(struct text_view *v, int width, const struct limits *l, const char *remark)
{
	static const char *const sources[] = {
	    [FROM_BUILT_IN] = "built in",      [FROM_SETTINGS] = "from the settings file",
	    [FROM_SITE] = "from the site",     [FROM_TELESCOPE] = "from the telescope",
	    [FROM_TARGET] = "from the target", [FROM_OPTION] = "from the command line"};
	text_view_start(v, width);
	text_view_add(v, ROLE_STRONG, 0, "Limits of this run (l, q or Esc comes back)");
	if (*remark)
		text_view_add(v, ROLE_WARN, PLAIN_INDENT, remark);
	for (int id = 0; id < LIM_COUNT; id++) {
		const struct limit_rule *rule = &limit_rules[id];
		char value[NUMBER_TEXT_MAX];
		number_text(l->value[id], value);
		if (l->value[id] == BASELINE_AUTO && (id == LIM_BASELINE_BEFORE || id == LIM_BASELINE_AFTER))
			snprintf(value, sizeof value, "auto");
		bool set = value[0] != '\0';
		text_view_addf(v, ROLE_TEXT, PLAIN_INDENT, "%s: %s%s%s (%s). %s", rule->key,
			       set ? value : "not set", set && *rule->unit ? " " : "", set ? rule->unit : "",
			       sources[l->source[id]], rule->sentence);
	}
	text_view_add(
	    v, ROLE_FAINT, PLAIN_INDENT,
	    "A target may have limits of its own; they go before all but those of the command line.");
}

void first_run_lines(struct text_view *v, int width, bool has_site, bool has_targets, const char *db_path)
{
	text_view_start(v, width);
	text_view_add(v, ROLE_STRONG, 0, "Welcome to wane: starlight wanes when a planet crosses its star.");
	text_view_add(v, ROLE_TEXT, 0, "");
	if (!has_site) {
		text_view_add(v, ROLE_TEXT, 0,
			      "No observing site is known yet. Leave with q and tell wane where you stand:");
		text_view_add(
		    v, ROLE_KEY, 6,
		    "  wane site add \"Tern Hill\" --place 38.62,-109.36,2100 --zone America/Denver");
		text_view_add(v, ROLE_TEXT, 2,
			      "  degrees north, degrees east (west is negative), metres; the zone names its "
			      "local time");
	}
	if (!has_targets) {
		text_view_add(v, ROLE_TEXT, 0,
			      "No targets are stored yet. Leave with q and read a table of them:");
		text_view_add(v, ROLE_KEY, 6, "  wane import targets.csv");
	}
	if (has_site && has_targets)
		text_view_add(v, ROLE_TEXT, 0, "All is there: start wane again.");
	text_view_add(v, ROLE_TEXT, 0,
		      "To look round first, in an invented observatory that stores nothing:");
	text_view_add(v, ROLE_KEY, 6, "  wane demo");
	char path[520];
	text_clean(db_path, path, sizeof path);
	text_view_addf(v, ROLE_FAINT, 2, "Database: %s", *path ? path : "none");
	heading(v, "Cautions");
	for (size_t i = 0; i < caution_count; i++)
		text_view_add(v, ROLE_TEXT, PLAIN_INDENT, cautions[i]);
}
