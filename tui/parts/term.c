/* SPDX-License-Identifier: MIT */
#include "tui/parts/term.h"

#include "db/text_clean.h"
#include "tui/parts/keys.h"
#include "tui/parts/term_guard.h"

#include <curses.h>
#include <term.h>

#include <fcntl.h>
#include <langinfo.h>
#include <locale.h>
#include <math.h>
#include <poll.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/select.h>
#include <time.h>
#include <unistd.h>
#include <wchar.h>

enum {
	ESCAPE_WAIT_MS = 50,
	ESCAPE_WAIT_DEFAULT_MS = 1000,
	KEY_PASTE_BEGIN = KEY_MAX + 1,
	KEY_PASTE_END = KEY_MAX + 2
};

/* One process has one terminal, and curses is global itself. */
static struct {
	SCREEN *screen;
	enum tier tier;
	enum palette palette;
	bool colour, many_colours;
	char bytes[4]; /* of a character that has not come in whole */
	size_t n_bytes;
	cchar_t *line; /* [line_cols] for one row */
	int line_cols;
} term;

/* --- looks --- */

struct look {
	short fg, bg;
	attr_t attr;
};

/* 256 colours: 74, 221 and 166 are told apart by colour-blind eyes (worst pair CIE76 distance 30 over
 * simulated protan, deutan and tritan vision; green, yellow and red: 6). Red palette: no green and no blue,
 * on black that is set and not left to the terminal. */
static struct look look_of(enum palette palette, bool many, enum role role)
{
	static const struct look normal[ROLE_COUNT] = {
	    {-1, -1, A_NORMAL},	 {245, -1, A_NORMAL}, {-1, -1, A_BOLD}, {74, -1, A_NORMAL},
	    {221, -1, A_NORMAL}, {166, -1, A_BOLD},   {-1, -1, A_BOLD}, {240, -1, A_NORMAL}};
	static const struct look few[ROLE_COUNT] = {{-1, -1, A_NORMAL},
						    {-1, -1, A_DIM},
						    {-1, -1, A_BOLD},
						    {COLOR_CYAN, -1, A_NORMAL},
						    {COLOR_YELLOW, -1, A_NORMAL},
						    {COLOR_MAGENTA, -1, A_BOLD},
						    {-1, -1, A_BOLD},
						    {-1, -1, A_DIM}};
	static const struct look red[ROLE_COUNT] = {
	    {124, 16, A_NORMAL}, {88, 16, A_NORMAL}, {160, 16, A_NORMAL}, {124, 16, A_NORMAL},
	    {160, 16, A_NORMAL}, {160, 16, A_BOLD},  {160, 16, A_NORMAL}, {88, 16, A_NORMAL}};
	static const struct look few_red[ROLE_COUNT] = {
	    {COLOR_RED, COLOR_BLACK, A_NORMAL}, {COLOR_RED, COLOR_BLACK, A_DIM},
	    {COLOR_RED, COLOR_BLACK, A_BOLD},	{COLOR_RED, COLOR_BLACK, A_NORMAL},
	    {COLOR_RED, COLOR_BLACK, A_BOLD},	{COLOR_RED, COLOR_BLACK, A_BOLD},
	    {COLOR_RED, COLOR_BLACK, A_BOLD},	{COLOR_RED, COLOR_BLACK, A_DIM}};
	static const attr_t plain[ROLE_COUNT] = {A_NORMAL, A_NORMAL, A_BOLD, A_NORMAL,
						 A_NORMAL, A_BOLD,   A_BOLD, A_NORMAL};
	if (palette == PALETTE_NONE)
		return (struct look){-1, -1, plain[role]};
	if (palette == PALETTE_CONTRAST) /* white on black 21:1 (WCAG 2.2 asks 7:1 of its best grade) */
		return (struct look){many ? 231 : COLOR_WHITE, many ? 16 : COLOR_BLACK, A_BOLD};
	if (palette == PALETTE_RED)
		return many ? red[role] : few_red[role];
	return many ? normal[role] : few[role];
}

static void set_up_pairs(void)
{
	if (!term.colour)
		return;
	for (int role = 0; role < ROLE_COUNT; role++) {
		struct look look = look_of(term.palette, term.many_colours, (enum role)role);
		init_pair((short)(role + 1), look.fg, look.bg);
	}
	cchar_t blank;
	setcchar(&blank, L" ", A_NORMAL, (short)(term.palette == PALETTE_NONE ? 0 : ROLE_TEXT + 1), NULL);
	bkgrndset(&blank);
}

void term_set_palette(enum palette palette)
{
	term.palette = term.colour ? palette : PALETTE_NONE;
	set_up_pairs();
}

enum palette term_palette(void)
{
	return term.palette;
}

bool term_has_colour(void)
{
	return term.colour;
}

enum tier term_tier(void)
{
	return term.tier;
}

/* --- opening and closing --- */

/* A login from afar may name a locale that is not installed here; its characters are UTF-8 all the same.
 * Numbers stay in the C locale. */
static void choose_characters(const struct term_options *o)
{
	if (!setlocale(LC_CTYPE, "") || (o->utf8 && strcmp(nl_langinfo(CODESET), "UTF-8") != 0))
		if (o->utf8 && !setlocale(LC_CTYPE, "C.UTF-8"))
			setlocale(LC_CTYPE, "C");
	bool utf8 = strcmp(nl_langinfo(CODESET), "UTF-8") == 0;
	term.tier = !utf8 || o->glyphs == GLYPHS_ASCII ? TIER_ASCII
		    : o->glyphs == GLYPHS_BASIC	       ? TIER_BASIC
						       : TIER_UNICODE;
}

static bool capability(const char *name)
{
	const char *text = tigetstr(name);
	return text && text != (const char *)-1;
}

static void send_capability(const char *name)
{
	const char *text = tigetstr(name);
	if (text && text != (const char *)-1)
		putp(text);
	fflush(stdout);
}

static void set_modes(void)
{
	raw();
	noecho();
	nonl();
	nodelay(stdscr, TRUE);
	keypad(stdscr, TRUE);
	meta(stdscr, TRUE);
	if (get_escdelay() == ESCAPE_WAIT_DEFAULT_MS) /* not set by the user */
		set_escdelay(ESCAPE_WAIT_MS);
	send_capability("BE"); /* pasted text comes in between marks */
}

static void set_up_colour(const struct term_options *o)
{
	term.colour = !o->no_color && has_colors() && start_color() == OK && use_default_colors() == OK;
	term.many_colours = term.colour && COLORS >= 256;
	term_set_palette(o->palette);
}

enum status term_open(const struct term_options *o, struct err *e)
{
	if (!isatty(STDIN_FILENO) || !isatty(STDOUT_FILENO))
		return err_set(e, ST_IO,
			       "the interface needs a terminal; `wane night` prints the same without one");
	choose_characters(o);
	/* set, they would freeze the size */
	unsetenv("LINES");
	unsetenv("COLUMNS");
	guard_keep_terminal();
	term.screen = newterm(NULL, stdout, stdin);
	if (!term.screen) {
		guard_give_back();
		return err_set(e, ST_IO,
			       "the terminal type is not known here; try TERM=xterm-256color, or `wane "
			       "night` without the interface");
	}
	if (!capability("cup")) {
		term_close();
		return err_set(e, ST_IO,
			       "this terminal can't place its cursor; `wane night` prints the same");
	}
	if (term.tier == TIER_UNICODE && o->glyphs == GLYPHS_AUTO && strncmp(termname(), "linux", 5) == 0)
		term.tier = TIER_BASIC;
	set_modes();
	set_up_colour(o);
	define_key("\033[200~", KEY_PASTE_BEGIN);
	define_key("\033[201~", KEY_PASTE_END);
	curs_set(0);
	guard_start();
	return ST_OK;
}

static bool line_is_gone(void)
{
	struct pollfd fd = {.fd = STDIN_FILENO, .events = POLLIN};
	return poll(&fd, 1, 0) > 0 && (fd.revents & (POLLHUP | POLLERR | POLLNVAL));
}

/* What is written to a terminal that is gone must not look like a failure of the program. */
static void turn_streams_away(void)
{
	int nowhere = open("/dev/null", O_RDWR);
	if (nowhere < 0)
		return;
	dup2(nowhere, STDIN_FILENO);
	dup2(nowhere, STDOUT_FILENO);
	close(nowhere);
	clearerr(stdout);
}

void term_close(void)
{
	if (!term.screen)
		return;
	if (line_is_gone())
		turn_streams_away();
	curs_set(1);
	send_capability("BD");
	endwin();
	guard_give_back();
	delscreen(term.screen);
	free(term.line);
	memset(&term, 0, sizeof term);
}

void term_size(int *rows, int *cols)
{
	getmaxyx(stdscr, *rows, *cols);
}

/* --- showing --- */

/* Fills one curses cell. Where the C library sees another width than the grid, a `?` keeps the row straight.
 */
static void fill(cchar_t *out, const struct cell *c)
{
	/* a lit bar has one look: colours are hard to tell in it, and changes of look are what costs to send
	 */
	bool bar = c->selected && term.palette != PALETTE_RED;
	enum role role = bar ? ROLE_STRONG : (enum role)c->role;
	struct look look = look_of(term.palette, term.many_colours, role);
	attr_t attr = look.attr;
	if (c->selected)
		attr |= term.palette == PALETTE_RED ? A_BOLD
						    : A_REVERSE; /* a lit bar would spoil dark adaptation */
	wchar_t text[CELL_MARKS + 2] = {(wchar_t)c->cp};
	int n = 1;
	for (int i = 0; i < CELL_MARKS && c->mark[i]; i++)
		if (wcwidth((wchar_t)c->mark[i]) == 0)
			text[n++] = (wchar_t)c->mark[i];
	if (wcwidth(text[0]) != c->width) {
		text[0] = L'?';
		text[1] = L'\0';
	}
	short pair = term.palette == PALETTE_NONE ? 0 : (short)(role + 1);
	setcchar(out, text, attr, pair, NULL);
}

static bool is_plain_blank(const struct cell *c)
{
	return c->cp == ' ' && c->mark[0] == 0 && !c->selected;
}

/* A blank shows nothing of a role: the few between two texts of one role take it, so that they are sent
 * without switching looks to and fro. Every palette has one background for all roles. Returns the role for
 * column col; *until: where the run of blanks ends for which it holds. */
static enum role sent_role(const struct cell *line, int col, int cols, int *until)
{
	enum { RUN_MAX = 20 };
	enum role own = (enum role)line[col].role;
	*until = col + 1;
	if (!is_plain_blank(&line[col]))
		return own;
	while (*until < cols && is_plain_blank(&line[*until]))
		++*until;
	if (col == 0 || *until == cols || *until - col > RUN_MAX)
		return own;
	const struct cell *left = &line[col - 1], *right = &line[*until];
	return !left->selected && !right->selected && left->role == right->role ? (enum role)left->role : own;
}

static bool line_room(int cols)
{
	if (term.line_cols >= cols)
		return true;
	cchar_t *line = realloc(term.line, sizeof *line * (size_t)cols);
	if (!line)
		return false;
	term.line = line;
	term.line_cols = cols;
	return true;
}

void term_show(const struct grid *g, bool whole)
{
	int rows, cols;
	term_size(&rows, &cols);
	if (!line_room(g->cols))
		return;
	erase();
	for (int row = 0; row < g->rows && row < rows; row++) {
		const struct cell *line = &g->cell[row * g->cols];
		int n = 0, until = 0;
		enum role role = ROLE_TEXT;
		for (int col = 0; col < g->cols && col < cols; col++) {
			struct cell cell = line[col];
			const struct cell *c = &cell;
			if (c->width == 0)
				continue;
			if (col >= until)
				role = sent_role(line, col, g->cols, &until);
			cell.role = (uint8_t)role;
			fill(&term.line[n++], c);
			/* a `?` for a wide character takes one column: the second one is a blank */
			if (c->width == 2 && wcwidth((wchar_t)c->cp) != 2) {
				struct cell blank = {
				    .cp = ' ', .width = 1, .role = c->role, .selected = c->selected};
				fill(&term.line[n++], &blank);
			}
		}
		mvadd_wchnstr(row, 0, term.line, n);
	}
	if (whole)
		clearok(curscr, TRUE);
	curs_set(g->cursor_shown ? 1 : 0);
	/* screen readers and braille lines follow the cursor, hidden or not */
	move(g->cursor_row, g->cursor_col);
	refresh();
}

/* --- keys --- */

static uint32_t special(int key)
{
	static const struct {
		int curses;
		uint32_t code;
	} map[] = {
	    {KEY_UP, PRESS_UP},
	    {KEY_DOWN, PRESS_DOWN},
	    {KEY_LEFT, PRESS_LEFT},
	    {KEY_RIGHT, PRESS_RIGHT},
	    {KEY_PPAGE, PRESS_PAGE_UP},
	    {KEY_NPAGE, PRESS_PAGE_DOWN},
	    {KEY_HOME, PRESS_HOME},
	    {KEY_END, PRESS_END},
	    {KEY_DC, PRESS_DELETE},
	    {KEY_BACKSPACE, PRESS_BACKSPACE},
	    {KEY_F(1), PRESS_F1},
	    {KEY_RESIZE, PRESS_RESIZE},
	    {KEY_ENTER, PRESS_ENTER},
	    {KEY_PASTE_BEGIN, PRESS_PASTE_BEGIN},
	    {KEY_PASTE_END, PRESS_PASTE_END},
	};
	for (size_t i = 0; i < sizeof map / sizeof map[0]; i++)
		if (map[i].curses == key)
			return map[i].code;
	return PRESS_OTHER;
}

/* Adds a byte; true when it completes a character or shows that none will come. */
static bool decode(int byte, uint32_t *code)
{
	if (term.n_bytes == sizeof term.bytes)
		term.n_bytes = 0;
	term.bytes[term.n_bytes++] = (char)byte;
	unsigned char lead = (unsigned char)term.bytes[0];
	size_t want = lead >= 0xF0 ? 4 : lead >= 0xE0 ? 3 : lead >= 0xC0 ? 2 : 1;
	if (term.n_bytes < want && (term.n_bytes == 1 || ((unsigned)byte & 0xC0u) == 0x80))
		return false;
	if (utf8_decode(term.bytes, term.n_bytes, code) != term.n_bytes)
		*code = byte < 0x80 ? (uint32_t)byte
				    : PRESS_OTHER; /* a broken one does not swallow the key behind it */
	term.n_bytes = 0;
	return true;
}

bool term_key(uint32_t *code)
{
	for (;;) {
		int key = getch();
		if (key == ERR)
			return false;
		if (key >= KEY_MIN) {
			term.n_bytes = 0;
			*code = special(key);
			return true;
		}
		if (decode(key, code))
			return true;
	}
}

/* --- waiting --- */

bool term_suspend(void)
{
	send_capability("BD");
	if (!guard_stop())
		return false;
	send_capability("BE");
	return true;
}

enum term_event term_wait(double seconds)
{
	struct timespec limit = {.tv_sec = (time_t)seconds,
				 .tv_nsec = (long)((seconds - floor(seconds)) * 1e9)};
	sigset_t inside;
	fd_set readable;
	FD_ZERO(&readable);
	FD_SET(STDIN_FILENO, &readable);
	guard_inside_mask(&inside);
	/* signals are let in only while this sleeps: none is lost between a look at its flag and the sleep */
	int ready = pselect(STDIN_FILENO + 1, &readable, NULL, NULL, &limit, &inside);
	if (guard_take_end())
		return TERM_ENDED;
	if (guard_take_woken()) {
		send_capability("BE");
		return TERM_WOKEN;
	}
	if (ready > 0 && line_is_gone()) {
		guard_leave();
		return TERM_LOST;
	}
	return TERM_KEYS;
}
