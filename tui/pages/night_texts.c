/* SPDX-License-Identifier: MIT
 * Texts of the page that do not depend on a window: help, limits, first run. */
#include "tui/pages/night_detail.h"

#include "ephem/angle_text.h"
#include "ephem/number_text.h"
#include "tui/cautions.h"
#include "tui/pages/night_sort.h"
#include "tui/parts/columns.h"
#include "tui/parts/keys.h"

#include <math.h>
#include <stdio.h>

enum { HELP_INDENT = 14, FIGURE_INDENT = 14, LEGEND_INDENT = 8, PLAIN_INDENT = 2, CHOICE_COLUMNS = 470 };

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

/* What each picture means; glyphs of one line belong together. */
static const struct {
	enum glyph glyph[2];
	const char *sentence;
} legend[] = {
    {{GLYPH_SHARE_ALL, GLYPH_COUNT}, "Cover: this part can be observed whole."},
    {{GLYPH_SHARE_MOST, GLYPH_COUNT}, "Cover: at least half of it."},
    {{GLYPH_SHARE_SOME, GLYPH_COUNT}, "Cover: less than half."},
    {{GLYPH_SHARE_NONE, GLYPH_COUNT}, "Cover: nothing of it."},
    {{GLYPH_SHARE_NO_PART, GLYPH_COUNT}, "Cover: this event has no such part."},
    {{GLYPH_DAY, GLYPH_COUNT}, "Sky band and strip: the Sun is up."},
    {{GLYPH_TWILIGHT, GLYPH_COUNT}, "The Sun is down, and above its limit: nothing may be observed."},
    {{GLYPH_LATE, GLYPH_COUNT}, "Sky band: the Sun is below its limit and above -18 deg."},
    {{GLYPH_MOON, GLYPH_COUNT},
     "Sky band: the Moon is up, less than half lit. In the picture of altitudes: where it stands."},
    {{GLYPH_MOON_BRIGHT, GLYPH_COUNT}, "Sky band: the Moon is up and more than half lit."},
    {{GLYPH_FREE, GLYPH_COUNT}, "Strip: nothing happens; the star can be observed. Blank: it can't."},
    {{GLYPH_PAD, GLYPH_COUNT}, "Strip: kept for an event that comes early or late (pad)."},
    {{GLYPH_BASELINE, GLYPH_COUNT}, "Strip: baseline before or after."},
    {{GLYPH_INGRESS, GLYPH_EGRESS}, "Strip: ingress, egress."},
    {{GLYPH_FLAT, GLYPH_MID}, "Strip: flat part, mid-time."},
    {{GLYPH_LOST_RESERVE, GLYPH_COUNT}, "Strip: pad or baseline that is lost."},
    {{GLYPH_LOST, GLYPH_LOST_MID},
     "Strip: ingress, flat part or egress that is lost; mid-time that is lost."},
    {{GLYPH_EARLIER, GLYPH_LATER}, "Strip: the reserve begins before, or ends after what is shown."},
    {{GLYPH_ITEM_SLEW, GLYPH_COUNT}, "Strip: the move to an item of the plan, from when it is to begin."},
    {{GLYPH_ITEM_START, GLYPH_ITEM_END}, "Strip: the item of the plan begins, ends."},
    {{GLYPH_PLANNED, GLYPH_PINNED}, "State: in the plan; pinned into it."},
    {{GLYPH_STARTED, GLYPH_DONE}, "State: marked as started, as done."},
    {{GLYPH_PARTLY, GLYPH_MISSED}, "State: marked as partly done, as lost."},
    {{GLYPH_DROPPED, GLYPH_COUNT}, "State: dropped from the plan."},
    {{GLYPH_NOW, GLYPH_COUNT}, "Now."},
    {{GLYPH_LIMIT, GLYPH_COUNT}, "Altitudes: the limit."},
    {{GLYPH_MASK, GLYPH_COUNT}, "Altitudes: the horizon mask in the star's direction."},
};

static void legend_lines(struct text_view *v, enum tier tier)
{
	text_view_add(
	    v, ROLE_TEXT, PLAIN_INDENT,
	    "A strip is the light of the star over the night, high outside the event and low in it. A "
	    "cell with the middle of a limb or the mid-time shows that; an hour begins in the cell of "
	    "its first digit. In the picture of altitudes the star's line is whole where the star can "
	    "be observed and broken where it can't; 1 2 m 3 4 under it are the contacts.");
	for (size_t i = 0; i < sizeof legend / sizeof legend[0]; i++) {
		enum glyph second = legend[i].glyph[1];
		text_view_addf(v, ROLE_TEXT, LEGEND_INDENT, "  %s %s   %s",
			       glyph_text(legend[i].glyph[0], tier),
			       second == GLYPH_COUNT ? " " : glyph_text(second, tier), legend[i].sentence);
	}
	text_view_add(
	    v, ROLE_TEXT, PLAIN_INDENT,
	    "Under `lost by` the letters B I F E A name the parts, then follows what takes them: Sun, "
	    "low (altitude), mask, Moon, air (airmass), noon (it runs into the neighbouring night).");
}

static void filter_lines(struct text_view *v)
{
	text_view_add(
	    v, ROLE_TEXT, PLAIN_INDENT,
	    "`done > 50 & alt > 40` shows windows for which both are true, `|` between them those for "
	    "which one is; `on < 23:00` compares with the time as it is shown, 12:00 to 23:59 in the "
	    "evening; `lost = Moon` and `tags != old` look into texts; a text alone, `tern 1`, is looked "
	    "for in name and tags, `!tern 1` its absence; `planned` alone shows what is in the plan, `plan = "
	    "pinned` what stands so there. What is unknown makes no comparison true.");
	text_view_add(
	    v, ROLE_TEXT, PLAIN_INDENT,
	    "Words: on t1 mid t4 leave sigma cover in eg done alt airm moon depth mag worth (as in the list, "
	    "chances in percent), of a forecast snr timing noise bits sky (timing in minutes), name tags "
	    "lost doubts state kind plan, and the column names of `wane night "
	    "--format csv` (chances as shares).");
}

void help_lines(struct text_view *v, int width, enum tier tier)
{
	text_view_start(v, width);
	text_view_add(v, ROLE_STRONG, 0, "Keys (q, ? or Esc comes back)");
	key_lines(v);
	heading(v, "Cautions");
	for (size_t i = 0; i < caution_count; i++)
		text_view_add(v, ROLE_TEXT, PLAIN_INDENT, cautions[i]);
	heading(v, "Pictures");
	legend_lines(v, tier);
	heading(v, "Filter");
	filter_lines(v);
	heading(v, "Figures");
	figure_lines(v);
	heading(v, "Doubts");
	for (int f = 0; f < FLAG_COUNT; f++)
		text_view_addf(v, ROLE_TEXT, PLAIN_INDENT, "%s: %s", flag_rules[f].word,
			       flag_rules[f].sentence);
}

void sort_lines(struct text_view *v, int sort, bool turned)
{
	text_view_start(v, CHOICE_COLUMNS);
	text_view_add(v, ROLE_STRONG, 0, "Sort the list by");
	for (int i = 0; i < SORT_COUNT; i++)
		text_view_addf(v, i == sort ? ROLE_STRONG : ROLE_TEXT, 0, "  %c  %s%s%s", sort_rules[i].key,
			       sort_rules[i].word, sort_rules[i].greatest_first ? ", greatest first" : "",
			       i != sort ? ""
			       : turned	 ? " (now, turned round)"
					 : " (now; again turns it round)");
}

void site_lines(struct text_view *v, const struct site_list *sites)
{
	size_t most = TEXT_LINES_MAX - CHOICE_FIRST_LINE;
	text_view_start(v, CHOICE_COLUMNS);
	text_view_addf(v, ROLE_STRONG, 0, "Stand at which of the stored sites?%s",
		       sites->n > most ? " (the first of them)" : "");
	for (size_t i = 0; i < sites->n && i < most; i++) {
		const struct site *s = &sites->site[i];
		char name[NAME_BYTES_MAX], zone[80], lat[ANGLE_TEXT_MAX], lon[ANGLE_TEXT_MAX];
		text_clean(s->name, name, sizeof name);
		text_clean(s->zone, zone, sizeof zone);
		lat_text(s->lat_deg, 2, lat);
		lon_text(s->lon_east_deg, 2, lon);
		text_view_addf(v, ROLE_TEXT, 0, "  %s  %s %s  %.0f m  %s", name, lat, lon, s->height_m, zone);
	}
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
