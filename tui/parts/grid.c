/* SPDX-License-Identifier: MIT */
#include "tui/parts/grid.h"

#include "db/combining.h"
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
};

const char *glyph_text(enum glyph glyph, enum tier tier)
{
	return glyphs[glyph][tier];
}

/* Ranges of Unicode 15.0 EastAsianWidth.txt with W or F, merged across unassigned gaps. */
static const struct {
	uint32_t first, last;
} wide[] = {
    {0x1100, 0x115E},	{0x231A, 0x231B},   {0x2329, 0x232A},	{0x23E9, 0x23EC},   {0x23F0, 0x23F0},
    {0x23F3, 0x23F3},	{0x25FD, 0x25FE},   {0x2614, 0x2615},	{0x2648, 0x2653},   {0x267F, 0x267F},
    {0x2693, 0x2693},	{0x26A1, 0x26A1},   {0x26AA, 0x26AB},	{0x26BD, 0x26BE},   {0x26C4, 0x26C5},
    {0x26CE, 0x26CE},	{0x26D4, 0x26D4},   {0x26EA, 0x26EA},	{0x26F2, 0x26F3},   {0x26F5, 0x26F5},
    {0x26FA, 0x26FA},	{0x26FD, 0x26FD},   {0x2705, 0x2705},	{0x270A, 0x270B},   {0x2728, 0x2728},
    {0x274C, 0x274C},	{0x274E, 0x274E},   {0x2753, 0x2755},	{0x2757, 0x2757},   {0x2795, 0x2797},
    {0x27B0, 0x27B0},	{0x27BF, 0x27BF},   {0x2B1B, 0x2B1C},	{0x2B50, 0x2B50},   {0x2B55, 0x2B55},
    {0x2E80, 0x303E},	{0x3041, 0x3247},   {0x3250, 0x4DBF},	{0x4E00, 0xA4CF},   {0xA960, 0xA97C},
    {0xAC00, 0xD7A3},	{0xF900, 0xFAFF},   {0xFE10, 0xFE19},	{0xFE30, 0xFE6B},   {0xFF01, 0xFF60},
    {0xFFE0, 0xFFE6},	{0x16FE0, 0x18D08}, {0x1AFF0, 0x1B2FB}, {0x1F004, 0x1F004}, {0x1F0CF, 0x1F0CF},
    {0x1F18E, 0x1F18E}, {0x1F191, 0x1F19A}, {0x1F200, 0x1F320}, {0x1F32D, 0x1F335}, {0x1F337, 0x1F37C},
    {0x1F37E, 0x1F393}, {0x1F3A0, 0x1F3CA}, {0x1F3CF, 0x1F3D3}, {0x1F3E0, 0x1F3F0}, {0x1F3F4, 0x1F3F4},
    {0x1F3F8, 0x1F43E}, {0x1F440, 0x1F440}, {0x1F442, 0x1F4FC}, {0x1F4FF, 0x1F53D}, {0x1F54B, 0x1F54E},
    {0x1F550, 0x1F567}, {0x1F57A, 0x1F57A}, {0x1F595, 0x1F596}, {0x1F5A4, 0x1F5A4}, {0x1F5FB, 0x1F64F},
    {0x1F680, 0x1F6C5}, {0x1F6CC, 0x1F6CC}, {0x1F6D0, 0x1F6D2}, {0x1F6D5, 0x1F6DF}, {0x1F6EB, 0x1F6EC},
    {0x1F6F4, 0x1F6FC}, {0x1F7E0, 0x1F7F0}, {0x1F90C, 0x1F93A}, {0x1F93C, 0x1F945}, {0x1F947, 0x1F9FF},
    {0x1FA70, 0x1FAF8}, {0x20000, 0x3FFFD},
};

int codepoint_width(uint32_t cp)
{
	if (cp < 0x300)
		return 1;
	if (codepoint_combines(cp))
		return 0;
	for (size_t lo = 0, hi = sizeof wide / sizeof wide[0]; lo < hi;) {
		size_t at = (lo + hi) / 2;
		if (cp > wide[at].last)
			lo = at + 1;
		else if (cp < wide[at].first)
			hi = at;
		else
			return 2;
	}
	return 1;
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

int text_columns(const char *text)
{
	size_t left = strlen(text);
	int columns = 0;
	while (left > 0)
		columns += codepoint_width(next_codepoint(&text, &left, TIER_UNICODE));
	return columns;
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
