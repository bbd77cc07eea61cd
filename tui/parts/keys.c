/* SPDX-License-Identifier: MIT */
#include "tui/parts/keys.h"

#include "db/text_clean.h"
#include "tui/parts/grid.h"

#include <stdio.h>
#include <string.h>

/* The footer shows them in this order, as many as fit. `[`, `O` and `A` to `D` stay free: a slow line can
 * split an arrow key into them. */
const struct key keys[] = {
    {'q', "q", ACT_QUIT, "quit", "Leave wane."},
    {CONTROL('C'), "^C", ACT_QUIT, NULL, NULL},
    {'?', "?", ACT_HELP, "help", "Show or leave this page: keys, figures, cautions."},
    {PRESS_F1, "F1", ACT_HELP, NULL, NULL},
    {'j', "j", ACT_DOWN, NULL, "Go to the next window."},
    {PRESS_DOWN, "Down", ACT_DOWN, NULL, NULL},
    {'k', "k", ACT_UP, NULL, "Go to the window before."},
    {PRESS_UP, "Up", ACT_UP, NULL, NULL},
    {'<', "<", ACT_NIGHT_BEFORE, "> night", "Show the night before."},
    {PRESS_LEFT, "Left", ACT_NIGHT_BEFORE, NULL, NULL},
    {'>', ">", ACT_NIGHT_AFTER, NULL, "Show the night after."},
    {PRESS_RIGHT, "Right", ACT_NIGHT_AFTER, NULL, NULL},
    {PRESS_ENTER, "Enter", ACT_DETAILS, "details",
     "Show all about the selected window, or come back to the list."},
    {'p', "p", ACT_PIN, "pin",
     "Pin the selected window into the plan, or let go of it again. The plan is worked out anew at once and "
     "not "
     "stored."},
    {'m', "m", ACT_MARK, "mark",
     "Say what became of the selected item of the plan: started, done, partly, lost. It is stored at once."},
    {'K', "K", ACT_KEEP, "keep", "Store the plan as it is shown and keep it as the plan of the night."},
    {'v', "v", ACT_PLAN, "plan",
     "Show the plan in words: items and blocks in order, what was left out and why, what moved, what "
     "changed."},
    {'d', "d", ACT_DROP, "drop", "Drop the selected window from the plan, or let it in again; not stored."},
    {'L', "L", ACT_LOST_TIME, "lost time",
     "Type a span that is lost (22:40..23:30, the site's clock): what is left is planned anew, not stored. "
     "What "
     "has begun stays."},
    {'.', ".", ACT_TONIGHT, "tonight", "Come back to tonight and to the window that comes next."},
    {'/', "/", ACT_FIND, "find", "Go to the next window whose name holds what is typed."},
    {'n', "n", ACT_FIND_NEXT, NULL, "Go to the next one that was looked for."},
    {'N', "N", ACT_FIND_BEFORE, NULL, "Go to the one before that was looked for."},
    {'f', "f", ACT_FILTER, "filter",
     "Show only windows of which a sentence is true, such as `done > 50 & alt > 40`, or whose name or tags "
     "hold a word. An empty sentence, or Esc in the list, shows all again."},
    {'s', "s", ACT_SORT, "sort", "Choose by what the list is sorted; the same choice again turns it round."},
    {'3', "3", ACT_DRIFT_PAGE, "drift",
     "Show the drift page: how ephemerides age and what would refresh them."},
    {'1', "1", ACT_NIGHT_PAGE, NULL, "Show the night page, this one."},
    {'t', "t", ACT_DATE, "date", "Type a date: the night that begins on its evening is shown."},
    {'S', "S", ACT_SITE, "site", "Choose another of the stored sites."},
    {'l', "l", ACT_LIMITS, "limits", "Say the limits of this run in sentences."},
    {'a', "a", ACT_LONG_SHOTS, "long shots",
     "Show or hide long shots, windows whose better limb has a chance below one half."},
    {'u', "u", ACT_UNDO, "undo",
     "Take back the newest change of the plan that is not stored; without one, the newest stored change of a "
     "plan."},
    {'x', "x", ACT_AFRESH, "plan afresh",
     "Plan the night afresh, without the stored pins, drops, blocks and lost time; marks stay. Not stored."},
    {'=', "=", ACT_COMPARE, "compare", "Lay another stored draft of the night beside the plan."},
    {'w', "w", ACT_SAVE_AS, "write draft", "Store the plan as a draft of another name, which is not kept."},
    {'R', "R", ACT_RED, "red",
     "Red on black for eyes used to the dark, and back. Other windows and the lines of a terminal "
     "multiplexer stay as bright as they are."},
    {PRESS_PAGE_DOWN, "PgDn", ACT_PAGE_DOWN, NULL, "Go a page down."},
    {CONTROL('F'), "^F", ACT_PAGE_DOWN, NULL, NULL},
    {' ', "Space", ACT_PAGE_DOWN, NULL, NULL},
    {PRESS_PAGE_UP, "PgUp", ACT_PAGE_UP, NULL, "Go a page up."},
    {CONTROL('B'), "^B", ACT_PAGE_UP, NULL, NULL},
    {'g', "g", ACT_FIRST, NULL, "Go to the first window."},
    {PRESS_HOME, "Home", ACT_FIRST, NULL, NULL},
    {'G', "G", ACT_LAST, NULL, "Go to the last window."},
    {PRESS_END, "End", ACT_LAST, NULL, NULL},
    {PRESS_ESCAPE, "Esc", ACT_LEAVE, NULL,
     "Leave a view or a question and change nothing; in the list, take the filter away."},
    {CONTROL('L'), "^L", ACT_REPAINT, NULL, "Draw the whole screen again."},
    {CONTROL('Z'), "^Z", ACT_SUSPEND, NULL, "Go back to the shell for a while; `fg` comes back."},
};
const size_t key_count = sizeof keys / sizeof keys[0];

static struct key_table night_keys(void)
{
	return (struct key_table){keys, key_count};
}

enum action key_action_in(const struct key_table *t, uint32_t code)
{
	if (code == '\n')
		code = PRESS_ENTER;
	for (size_t i = 0; i < t->n; i++)
		if (t->key[i].code == code)
			return t->key[i].action;
	return ACT_NONE;
}

enum action key_action(uint32_t code)
{
	const struct key_table t = night_keys();
	return key_action_in(&t, code);
}

void key_labels_in(const struct key_table *t, enum action action, char *out, size_t n)
{
	size_t used = 0;
	if (n > 0)
		out[0] = '\0';
	for (size_t i = 0; i < t->n && used < n; i++)
		if (t->key[i].action == action)
			used +=
			    (size_t)snprintf(out + used, n - used, "%s%s", used ? " " : "", t->key[i].label);
}

void key_labels(enum action action, char *out, size_t n)
{
	const struct key_table t = night_keys();
	key_labels_in(&t, action, out, n);
}

void key_footer_in(const struct key_table *t, int columns, char *out, size_t n)
{
	size_t used = 0;
	if (n > 0)
		out[0] = '\0';
	for (size_t i = 0; i < t->n; i++) {
		if (!t->key[i].footer)
			continue;
		char entry[64];
		int length = snprintf(entry, sizeof entry, "%s%s %s", used ? "  " : "", t->key[i].label,
				      t->key[i].footer);
		if (length < 0 || used + (size_t)length >= n || (int)used + length > columns)
			break;
		memcpy(out + used, entry, (size_t)length + 1);
		used += (size_t)length;
	}
}

void key_footer(int columns, char *out, size_t n)
{
	const struct key_table t = night_keys();
	key_footer_in(&t, columns, out, n);
}

void key_called(uint32_t code, char *out, size_t n)
{
	for (size_t i = 0; i < key_count; i++)
		if (keys[i].code == code) {
			snprintf(out, n, "%s", keys[i].label);
			return;
		}
	if (code < 32) {
		snprintf(out, n, "^%c", (char)(code + '@'));
	} else if (code < KEYS_SPECIAL && !codepoint_is_hostile(code) && codepoint_width(code) > 0) {
		char bytes[4];
		snprintf(out, n, "%.*s", (int)utf8_encode(code, bytes), bytes);
	} else {
		snprintf(out, n, "that key");
	}
}

void key_unknown_text(uint32_t code, char *out, size_t n)
{
	char name[32];
	key_called(code, name, sizeof name);
	snprintf(out, n, "%s does nothing here; ? shows the keys.", name);
}

bool key_paste(bool *pasting, bool asking, uint32_t code, const char **left_out)
{
	const bool edge = code == PRESS_PASTE_BEGIN || code == PRESS_PASTE_END;
	*left_out = NULL;
	if (edge) {
		*pasting = code == PRESS_PASTE_BEGIN;
		if (*pasting && !asking)
			*left_out = "Pasted text was left out: nothing is being typed here.";
	}
	return edge || (*pasting && !asking);
}
