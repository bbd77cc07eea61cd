/* SPDX-License-Identifier: MIT
 * The night sheet as text: the night as a strip of characters. */
#include "tui/sheets/plan_page.h"

#include "db/text_clean.h"
#include "tui/parts/text_width.h"

#include <math.h>
#include <string.h>

enum { LABEL_COLUMNS = 14, CELLS = PLAN_PAGE_COLUMNS - LABEL_COLUMNS - 2 };
struct strip {
	const struct night *night;
	double from_d, cell_d;
};

/* Half an hour around the time that the Sun is down, or the whole night. */
static struct strip strip_of(const struct plan_view *v)
{
	const struct night *n = &v->night->night;
	const double margin_d = 0.5 / 24.0;
	double from_d = isfinite(n->times.sunset_d) ? n->times.sunset_d - margin_d : 0.0;
	double to_d = isfinite(n->times.sunrise_d) ? n->times.sunrise_d + margin_d : n->length_d;
	if (to_d <= from_d) {
		from_d = 0.0;
		to_d = n->length_d;
	}
	return (struct strip){.night = n, .from_d = from_d, .cell_d = (to_d - from_d) / CELLS};
}

static double middle_d(const struct strip *s, int cell)
{
	return s->from_d + (cell + 0.5) * s->cell_d;
}

/* The first columns of a name, padded. */
static void put_row(struct plan_page *p, const char *label, const char *cells)
{
	char text[LABEL_COLUMNS * 4 * 3];
	plan_line(label, text, sizeof text);
	for (size_t n = strlen(text); n > 0 && text_columns(text) > LABEL_COLUMNS - 1;) {
		do
			n--;
		while (n > 0 && ((unsigned char)text[n] & 0xC0) == 0x80);
		text[n] = '\0';
	}
	int n = CELLS;
	while (n > 0 && cells[n - 1] == ' ')
		n--;
	fprintf(p->to, "  %s%*s%.*s\n", text, n > 0 ? LABEL_COLUMNS - text_columns(text) : 0, "", n, cells);
}

/* Two digits where an hour begins; every second hour where there is no room for all. */
static void hours_row(struct plan_page *p, const struct strip *s, const struct zone *zone, const char *label)
{
	char cells[CELLS + 1];
	const int step = 1.0 / 24.0 / s->cell_d < 3.5 ? 2 : 1;
	double before_s = 0.0;
	memset(cells, ' ', CELLS);
	cells[CELLS] = '\0';
	for (int i = 0; i < CELLS - 1; i++) {
		const struct local_time l = zone_local(zone, night_utc(s->night, s->from_d + i * s->cell_d));
		const int hour = (int)(l.sod_s / 3600.0) % 24;
		const double into_s = fmod(l.sod_s, 3600.0); /* an hour that comes twice begins twice */
		if (i > 0 && into_s < before_s && hour % step == 0) {
			cells[i] = (char)('0' + hour / 10);
			cells[i + 1] = (char)('0' + hour % 10);
		}
		before_s = into_s;
	}
	put_row(p, label, cells);
}

static void sky_rows(struct plan_page *p, const struct strip *s)
{
	char sun[CELLS + 1] = "", moon[CELLS + 1] = "";
	const struct night *n = s->night;
	const struct intervals dark = night_sun_below(n, p->v->run->limits.value[LIM_SUN]);
	for (int i = 0; i < CELLS; i++) {
		const double t_d = middle_d(s, i);
		sun[i] = intervals_contain(&n->sun_up, t_d) ? '#' : intervals_contain(&dark, t_d) ? '.' : '/';
		moon[i] = !intervals_contain(&n->moon_up, t_d)	    ? ' '
			  : intervals_contain(&n->moon_bright, t_d) ? 'M'
								    : 'm';
	}
	put_row(p, "Sun", sun);
	put_row(p, "Moon", moon);
}

/* Fills the cells whose middle lies in [from, to], and at least the one that holds `from`. */
static void fill(const struct strip *s, char cells[CELLS], struct utc from, struct utc to, char mark)
{
	const double from_d = night_of_utc(s->night, from), to_d = night_of_utc(s->night, to);
	const double at = floor((from_d - s->from_d) / s->cell_d);
	for (int i = 0; i < CELLS; i++)
		if (at == i || (middle_d(s, i) >= from_d && middle_d(s, i) <= to_d))
			cells[i] = mark;
}

static void item_row(struct plan_page *p, const struct strip *s, const struct plan_item_view *item)
{
	char cells[CELLS + 1], label[PLAN_NAMES_BYTES + 16], names[PLAN_NAMES_BYTES];
	memset(cells, ' ', CELLS);
	cells[CELLS] = '\0';
	for (size_t i = 0; i < item->n; i++)
		fill(s, cells, item->member[i].t1, item->member[i].t4, '=');
	/* what lies outside the item is not observed */
	const double from_d = night_of_utc(s->night, item->start), to_d = night_of_utc(s->night, item->end);
	for (int i = 0; i < CELLS; i++) {
		const bool inside = middle_d(s, i) >= from_d && middle_d(s, i) <= to_d;
		cells[i] = !inside && cells[i] == '=' ? ':' : inside && cells[i] == ' ' ? '-' : cells[i];
	}
	plan_names(item, names);
	snprintf(label, sizeof label, "%d %s", item->order, names);
	put_row(p, label, cells);
}

void page_strip(struct plan_page *p)
{
	const struct plan_view *v = p->v;
	const struct strip s = strip_of(v);
	page_put(p, 0, "%s", "");
	if (v->run->zone)
		hours_row(p, &s, v->run->zone, "local");
	hours_row(p, &s, NULL, "UTC");
	sky_rows(p, &s);
	for (size_t i = 0; i < v->n_items; i++)
		if (!v->item[i].in_day)
			item_row(p, &s, &v->item[i]);
	for (size_t i = 0; i < v->n_blocks; i++) {
		char cells[CELLS + 1];
		memset(cells, ' ', CELLS);
		cells[CELLS] = '\0';
		fill(&s, cells, v->block[i].from, v->block[i].to, v->block[i].kind == BLOCK_POOR ? '~' : 'x');
		if (cells[strspn(cells, " ")]) /* not before or behind the strip */
			put_row(p,
				v->block[i].text[0] ? v->block[i].text : plan_block_words[v->block[i].kind],
				cells);
	}
	page_put(p, 2,
		 "  # Sun up, / twilight, . below the Sun limit, m M Moon up (M: more than half lit), - on "
		 "target, = "
		 "T1 to T4, : what of them is not observed, x not observing, ~ poor");
}
