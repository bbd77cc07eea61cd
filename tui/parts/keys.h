/* SPDX-License-Identifier: MIT
 * One table of keys: what is pressed, what it does, the word of the footer and the sentence of the help. */
#ifndef WANE_TUI_PARTS_KEYS_H
#define WANE_TUI_PARTS_KEYS_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* A key is a Unicode character (control keys are theirs: ^L is 12) or one of these. */
enum key_code {
	KEYS_SPECIAL = 0x110000,
	PRESS_UP,
	PRESS_DOWN,
	PRESS_LEFT,
	PRESS_RIGHT,
	PRESS_PAGE_UP,
	PRESS_PAGE_DOWN,
	PRESS_HOME,
	PRESS_END,
	PRESS_DELETE,
	PRESS_BACKSPACE,
	PRESS_F1,
	PRESS_RESIZE,	   /* the terminal has another size */
	PRESS_PASTE_BEGIN, /* what follows until PASTE_END is pasted text */
	PRESS_PASTE_END,
	PRESS_OTHER, /* a key that has no meaning here */
};
#define PRESS_ENTER 13u
#define PRESS_TAB 9u
#define PRESS_ESCAPE 27u
#define CONTROL(letter) ((uint32_t)(letter)&0x1Fu)

enum action {
	ACT_NONE,
	ACT_UP,
	ACT_DOWN,
	ACT_PAGE_UP,
	ACT_PAGE_DOWN,
	ACT_FIRST,
	ACT_LAST,
	ACT_NIGHT_BEFORE,
	ACT_NIGHT_AFTER,
	ACT_TONIGHT,
	ACT_DATE,
	ACT_DETAILS,
	ACT_FIND,
	ACT_FIND_NEXT,
	ACT_FIND_BEFORE,
	ACT_SORT,
	ACT_FILTER,
	ACT_SITE,
	ACT_LONG_SHOTS,
	ACT_LIMITS,
	ACT_HELP,
	ACT_RED,
	ACT_REPAINT,
	ACT_SUSPEND,
	ACT_NIGHT_PAGE,
	ACT_DRIFT_PAGE,
	ACT_PIN,
	ACT_DROP,
	ACT_KEEP,
	ACT_MARK,
	ACT_LOST_TIME,
	ACT_AFRESH,
	ACT_PLAN,
	ACT_COMPARE,
	ACT_SAVE_AS,
	ACT_UNDO, /* on the drift page, too */
	ACT_LEAVE,
	ACT_QUIT,
	/* of the drift page alone */
	ACT_AT,
	ACT_MODEL,
	ACT_COUNT_IN_FIT,
	ACT_COUNT
};

struct key {
	uint32_t code;
	const char *label; /* as it is written on the screen; rows of one action join theirs */
	enum action action;
	const char *footer;   /* word of the footer; NULL: in the help only */
	const char *sentence; /* of the help; NULL in the further rows of an action */
};
/* The keys of a page, in the order of its footer. */
struct key_table {
	const struct key *key;
	size_t n;
};
extern const struct key keys[]; /* of the night page */
extern const size_t key_count;
extern const struct key_table drift_keys, residual_keys; /* of the drift page and of its view of residuals */

enum action key_action_in(const struct key_table *t, uint32_t code);
void key_labels_in(const struct key_table *t, enum action action, char *out, size_t n);
void key_footer_in(const struct key_table *t, int columns, char *out, size_t n);
/* The same of the night page. */
enum action key_action(uint32_t code);
/* Labels of all keys of an action joined by blanks: `j Down`. */
void key_labels(enum action action, char *out, size_t n);
/* `q quit  ? help ...` as far as whole entries fit into a number of columns. */
void key_footer(int columns, char *out, size_t n);
/* What a key is called, for `nothing on ...`. */
void key_called(uint32_t code, char *out, size_t n);

/* What is said of a key that does nothing. */
void key_unknown_text(uint32_t code, char *out, size_t n);
/* Bracketed paste: text where something is typed (asking), and left out elsewhere. True: the key is dealt
 * with. *left_out is set to a message when a paste begins that nobody asked for, else NULL. */
bool key_paste(bool *pasting, bool asking, uint32_t code, const char **left_out);

#endif
