/* SPDX-License-Identifier: MIT */
#include "tui/parts/grid.h"

#include "db/text_clean.h"

#include <stdlib.h>
#include <string.h>

const char role_letters[ROLE_COUNT + 1] = "tfsgwbkr";

/* unicode, basic (characters that console fonts hold), ASCII */
static const char *const glyphs[GLYPH_COUNT][TIER_COUNT] = {
    [GLYPH_SELECTED] = {"▸", ">", ">"},	  [GLYPH_CUT] = {"…", "~", "~"},
    [GLYPH_RULE] = {"─", "─", "-"},	  [GLYPH_SHARE_ALL] = {"█", "█", "#"},
    [GLYPH_SHARE_MOST] = {"▆", "+", "+"}, [GLYPH_SHARE_SOME] = {"▂", "-", "-"},
    [GLYPH_SHARE_NONE] = {"×", "x", "x"}, [GLYPH_SHARE_NO_PART] = {"·", ".", "."},
    [GLYPH_MORE_ABOVE] = {"↑", "^", "^"}, [GLYPH_MORE_BELOW] = {"↓", "v", "v"},
    [GLYPH_DEGREE] = {"°", "°", "d"},	  [GLYPH_PLUS_MINUS] = {"±", "±", "~"},
    [GLYPH_BLANK] = {" ", " ", " "},	  [GLYPH_DAY] = {"≡", "%", "%"},
    [GLYPH_TWILIGHT] = {"=", "=", "="},	  [GLYPH_LATE] = {"-", "-", "-"},
    [GLYPH_MOON] = {"(", "(", "("},	  [GLYPH_MOON_BRIGHT] = {"O", "O", "O"},
    [GLYPH_FREE] = {"·", "·", "."},	  [GLYPH_PAD] = {"⠉", "'", "'"},
    [GLYPH_BASELINE] = {"▔", "¯", "\""},  [GLYPH_INGRESS] = {"╲", "\\", "\\"},
    [GLYPH_FLAT] = {"▁", "_", "_"},	  [GLYPH_MID] = {"▾", "v", "v"},
    [GLYPH_EGRESS] = {"╱", "/", "/"},	  [GLYPH_LOST_RESERVE] = {":", ":", ":"},
    [GLYPH_LOST] = {"!", "!", "!"},	  [GLYPH_LOST_MID] = {"╳", "X", "X"},
    [GLYPH_EARLIER] = {"«", "«", "<"},	  [GLYPH_LATER] = {"»", "»", ">"},
    [GLYPH_NOW] = {"¦", "¦", "|"},	  [GLYPH_LIMIT] = {"╌", "-", "-"},
    [GLYPH_MASK] = {"^", "^", "^"},	  [GLYPH_CHOSEN] = {"┊", ":", ":"},
    [GLYPH_AFTER] = {"∙", "·", "+"},	  [GLYPH_POINT] = {"●", "*", "*"},
    [GLYPH_POINT_OUT] = {"○", "o", "o"},  [GLYPH_POINT_CHOSEN] = {"◆", "#", "#"},
    [GLYPH_ITEM_SLEW] = {"→", "~", "~"},  [GLYPH_ITEM_START] = {"[", "[", "["},
    [GLYPH_ITEM_END] = {"]", "]", "]"},	  [GLYPH_PLANNED] = {"○", "o", "o"},
    [GLYPH_PINNED] = {"◆", "P", "P"},	  [GLYPH_STARTED] = {"◐", "s", "s"},
    [GLYPH_DONE] = {"✓", "+", "+"},	  [GLYPH_PARTLY] = {"½", "½", "/"},
    [GLYPH_MISSED] = {"×", "x", "x"},	  [GLYPH_DROPPED] = {"−", "-", "-"},
    [GLYPH_ERROR_BAR] = {"│", "|", "|"},  [GLYPH_ZERO] = {"╌", "-", "-"},
};

const char *glyph_text(enum glyph glyph, enum tier tier)
{
	return glyphs[glyph][tier];
}

/* The next character fit for a cell of the tier. */
static uint32_t next_codepoint(const char **text, size_t *left, enum tier tier)
{
	uint32_t cp;
	size_t length = utf8_decode(*text, *left, &cp);
	if (length == 0) {
		length = 1;
		cp = '?';
	}
	*text += length;
	*left -= length;
	if (codepoint_is_hostile(cp))
		return '?';
	/* a console font holds Latin-1 and the glyphs above, little else that can be relied on */
	if (cp > 0x7E &&
	    (tier == TIER_ASCII || (tier == TIER_BASIC && cp > 0xFF && cp != 0x2500 && cp != 0x2588)))
		return codepoint_width(cp) == 0 ? 0 : '?';
	return cp;
}

enum status grid_resize(struct grid *g, int rows, int cols, struct err *e)
{
	rows = rows < 1 ? 1 : rows > GRID_ROWS_MAX ? GRID_ROWS_MAX : rows;
	cols = cols < 1 ? 1 : cols > GRID_COLS_MAX ? GRID_COLS_MAX : cols;
	if (!g->cell || g->rows != rows || g->cols != cols) {
		struct cell *cell = calloc((size_t)rows * (size_t)cols, sizeof *cell);
		if (!cell)
			return err_set(e, ST_MEMORY, "no memory for a screen of %d x %d", cols, rows);
		free(g->cell);
		g->cell = cell;
		g->rows = rows;
		g->cols = cols;
	}
	grid_clear(g);
	return ST_OK;
}

void grid_close(struct grid *g)
{
	free(g->cell);
	*g = (struct grid){0};
}

void grid_clear(struct grid *g)
{
	const struct cell blank = {.cp = ' ', .width = 1, .role = ROLE_TEXT};
	for (int i = 0; i < g->rows * g->cols; i++)
		g->cell[i] = blank;
	grid_cursor(g, 0, 0, false);
}

static struct cell *cell_at(struct grid *g, int row, int col)
{
	return &g->cell[row * g->cols + col];
}

/* Blanks the other half of a wide character that is about to be overwritten. */
static void unpair(struct grid *g, int row, int col)
{
	struct cell *c = cell_at(g, row, col);
	if (c->width == 0 && col > 0)
		*cell_at(g, row, col - 1) =
		    (struct cell){.cp = ' ', .width = 1, .role = c->role, .selected = c->selected};
	if (c->width == 2 && col + 1 < g->cols)
		*cell_at(g, row, col + 1) =
		    (struct cell){.cp = ' ', .width = 1, .role = c->role, .selected = c->selected};
}

static void set_cell(struct grid *g, int row, int col, uint32_t cp, int width, enum role role)
{
	for (int i = 0; i < width; i++)
		unpair(g, row, col + i);
	bool selected = cell_at(g, row, col)->selected;
	*cell_at(g, row, col) =
	    (struct cell){.cp = cp, .width = (uint8_t)width, .role = (uint8_t)role, .selected = selected};
	if (width == 2)
		*cell_at(g, row, col + 1) = (struct cell){.role = (uint8_t)role, .selected = selected};
}

static void add_mark(struct cell *c, uint32_t cp)
{
	for (int i = 0; i < CELL_MARKS; i++)
		if (c->mark[i] == 0) {
			c->mark[i] = cp;
			return;
		}
}

int grid_put(struct grid *g, int row, int col, int width, const char *text, enum role role)
{
	if (row < 0 || row >= g->rows || col < 0 || col >= g->cols || width <= 0)
		return 0;
	if (width > g->cols - col)
		width = g->cols - col;
	bool cut = text_columns(text) > width;
	int room = cut ? width - 1 : width, used = 0, base = -1;
	size_t left = strlen(text);
	while (left > 0) {
		uint32_t cp = next_codepoint(&text, &left, g->tier);
		if (cp == 0)
			continue;
		int w = codepoint_width(cp);
		if (w == 0) {
			if (base >= 0)
				add_mark(cell_at(g, row, base), cp);
			continue;
		}
		if (used + w > room)
			break;
		base = col + used;
		set_cell(g, row, base, cp, w, role);
		used += w;
	}
	if (cut)
		used += grid_glyph(g, row, col + used, GLYPH_CUT, role);
	return used;
}

int grid_put_right(struct grid *g, int row, int col, int width, const char *text, enum role role)
{
	int columns = text_columns(text);
	if (columns >= width)
		return grid_put(g, row, col, width, text, role);
	return grid_put(g, row, col + width - columns, columns, text, role);
}

int grid_glyph(struct grid *g, int row, int col, enum glyph glyph, enum role role)
{
	if (row < 0 || row >= g->rows || col < 0 || col >= g->cols)
		return 0;
	const char *text = glyph_text(glyph, g->tier);
	uint32_t cp = '?';
	if (utf8_decode(text, strlen(text), &cp) == 0)
		return 0;
	set_cell(g, row, col, cp, 1, role);
	return 1;
}

int grid_dots(struct grid *g, int row, int col, uint8_t dots, enum role role)
{
	/* dots 1 to 3 and 7 of the Unicode chart stand left, 4 to 6 and 8 right, from above */
	static const uint8_t chart[8] = {0, 1, 2, 6, 3, 4, 5, 7};
	if (row < 0 || row >= g->rows || col < 0 || col >= g->cols || dots == 0)
		return 0;
	uint32_t cp = 0x2800;
	for (int bit = 0; bit < 8; bit++)
		if (dots & (1u << bit))
			cp |= 1u << chart[bit];
	if (g->tier != TIER_UNICODE)
		cp = !(dots & 0xCCu) ? '"' : !(dots & 0x33u) ? ',' : ';';
	set_cell(g, row, col, cp, 1, role);
	return 1;
}

void grid_rule(struct grid *g, int row)
{
	for (int col = 0; col < g->cols; col++)
		grid_glyph(g, row, col, GLYPH_RULE, ROLE_RULE);
}

void grid_select(struct grid *g, int row, int col, int width)
{
	if (row < 0 || row >= g->rows)
		return;
	for (int i = col < 0 ? 0 : col; i < col + width && i < g->cols; i++)
		cell_at(g, row, i)->selected = true;
}

void grid_cursor(struct grid *g, int row, int col, bool shown)
{
	g->cursor_row = row < 0 ? 0 : row >= g->rows ? g->rows - 1 : row;
	g->cursor_col = col < 0 ? 0 : col >= g->cols ? g->cols - 1 : col;
	g->cursor_shown = shown;
}

/* Output that counts what it can't hold. */
struct sink {
	char *out;
	size_t size, used;
};

static void sink_add(struct sink *s, uint32_t cp)
{
	char bytes[4];
	size_t n = utf8_encode(cp, bytes);
	for (size_t i = 0; i < n; i++, s->used++)
		if (s->used + 1 < s->size)
			s->out[s->used] = bytes[i];
}

static bool cell_is_blank(const struct cell *c, bool roles)
{
	return c->cp == ' ' && c->mark[0] == 0 && !(roles && (c->selected || c->role != ROLE_TEXT));
}

static char role_letter(const struct cell *c)
{
	char letter = role_letters[c->role];
	return c->selected ? (char)(letter - 'a' + 'A') : letter;
}

size_t grid_to_text(const struct grid *g, bool roles, char *out, size_t size)
{
	struct sink sink = {out, size, 0};
	for (int row = 0; row < g->rows; row++) {
		const struct cell *line = &g->cell[row * g->cols];
		int end = g->cols;
		while (end > 0 && cell_is_blank(&line[end - 1], roles))
			end--;
		for (int col = 0; col < end; col++) {
			const struct cell *c = &line[col];
			if (roles) {
				sink_add(&sink, cell_is_blank(c, true)
						    ? ' '
						    : (uint32_t)(unsigned char)role_letter(c));
				continue;
			}
			if (c->width == 0)
				continue;
			sink_add(&sink, c->cp);
			for (int i = 0; i < CELL_MARKS && c->mark[i]; i++)
				sink_add(&sink, c->mark[i]);
		}
		sink_add(&sink, '\n');
	}
	if (size > 0)
		out[sink.used < size ? sink.used : size - 1] = '\0';
	return sink.used;
}
