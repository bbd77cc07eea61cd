/* SPDX-License-Identifier: MIT
 * The keys of the drift page. */
#include "tui/parts/keys.h"

static const struct key list[] = {
    {'q', "q", ACT_QUIT, "quit", "Leave wane."},
    {CONTROL('C'), "^C", ACT_QUIT, NULL, NULL},
    {'?', "?", ACT_HELP, "help", "Show or leave this page: keys, figures, pictures."},
    {PRESS_F1, "F1", ACT_HELP, NULL, NULL},
    {'1', "1", ACT_NIGHT_PAGE, "night", "Show the night page."},
    {'3', "3", ACT_DRIFT_PAGE, NULL, "Show the drift page, this one."},
    {'j', "j", ACT_DOWN, NULL, "Go to the next target."},
    {PRESS_DOWN, "Down", ACT_DOWN, NULL, NULL},
    {'k', "k", ACT_UP, NULL, "Go to the target before."},
    {PRESS_UP, "Up", ACT_UP, NULL, NULL},
    {'t', "t", ACT_AT, "date", "Type the chosen date, for which sigma is told and a refresh is judged."},
    {PRESS_ENTER, "Enter", ACT_DETAILS, "residuals",
     "Show the residuals of the selected target's mid-times, or come back to the list."},
    {'s', "s", ACT_SORT, "sort", "Choose by what the list is sorted; the same choice again turns it round."},
    {'/', "/", ACT_FIND, "find", "Go to the next target whose name holds what is typed."},
    {'n', "n", ACT_FIND_NEXT, NULL, "Go to the next one that was looked for."},
    {'N', "N", ACT_FIND_BEFORE, NULL, "Go to the one before that was looked for."},
    {'f', "f", ACT_FILTER, "filter",
     "Show only targets whose name, tags or remarks hold a text, such as `stale`, or do not: `!stale`. An "
     "empty one, or "
     "Esc in the list, shows all again."},
    {'R', "R", ACT_RED, "red", "Red on black for eyes used to the dark, and back."},
    {PRESS_PAGE_DOWN, "PgDn", ACT_PAGE_DOWN, NULL, "Go a page down."},
    {CONTROL('F'), "^F", ACT_PAGE_DOWN, NULL, NULL},
    {' ', "Space", ACT_PAGE_DOWN, NULL, NULL},
    {PRESS_PAGE_UP, "PgUp", ACT_PAGE_UP, NULL, "Go a page up."},
    {CONTROL('B'), "^B", ACT_PAGE_UP, NULL, NULL},
    {'g', "g", ACT_FIRST, NULL, "Go to the first target."},
    {PRESS_HOME, "Home", ACT_FIRST, NULL, NULL},
    {'G', "G", ACT_LAST, NULL, "Go to the last target."},
    {PRESS_END, "End", ACT_LAST, NULL, NULL},
    {PRESS_ESCAPE, "Esc", ACT_LEAVE, NULL,
     "Leave a view or a question and change nothing; in the list, take the filter away."},
    {CONTROL('L'), "^L", ACT_REPAINT, NULL, "Draw the whole screen again."},
    {CONTROL('Z'), "^Z", ACT_SUSPEND, NULL, "Go back to the shell for a while; `fg` comes back."},
};
const struct key_table drift_keys = {list, sizeof list / sizeof list[0]};

static const struct key residuals[] = {
    {'q', "q", ACT_QUIT, "back", "Come back to the list."},
    {CONTROL('C'), "^C", ACT_QUIT, NULL, NULL},
    {PRESS_ESCAPE, "Esc", ACT_LEAVE, NULL, NULL},
    {PRESS_ENTER, "Enter", ACT_DETAILS, NULL, NULL},
    {'j', "j", ACT_DOWN, "k choose", "Go to the next mid-time."},
    {PRESS_DOWN, "Down", ACT_DOWN, NULL, NULL},
    {PRESS_RIGHT, "Right", ACT_DOWN, NULL, NULL},
    {'k', "k", ACT_UP, NULL, "Go to the mid-time before."},
    {PRESS_UP, "Up", ACT_UP, NULL, NULL},
    {PRESS_LEFT, "Left", ACT_UP, NULL, NULL},
    {'m', "m", ACT_MODEL, "model", "Lay the mid-times against the other fit: linear or quadratic."},
    {'x', "x", ACT_COUNT_IN_FIT, "exclude or include",
     "Take the mid-times of the chosen epoch out of the fit, or in again; stored at once as one change."},
    {'u', "u", ACT_UNDO, "undo", "Take back the newest exclusion or inclusion of this target; that is a change, too."},
    {'R', "R", ACT_RED, "red", "Red on black, and back."},
    {PRESS_PAGE_DOWN, "PgDn", ACT_PAGE_DOWN, NULL, "Go ten mid-times on."},
    {PRESS_PAGE_UP, "PgUp", ACT_PAGE_UP, NULL, "Go ten mid-times back."},
    {'g', "g", ACT_FIRST, NULL, "Go to the first mid-time."},
    {PRESS_HOME, "Home", ACT_FIRST, NULL, NULL},
    {'G', "G", ACT_LAST, NULL, "Go to the last mid-time."},
    {PRESS_END, "End", ACT_LAST, NULL, NULL},
    {CONTROL('L'), "^L", ACT_REPAINT, NULL, "Draw the whole screen again."},
    {CONTROL('Z'), "^Z", ACT_SUSPEND, NULL, "Go back to the shell for a while."},
};
const struct key_table residual_keys = {residuals, sizeof residuals / sizeof residuals[0]};
