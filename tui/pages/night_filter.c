/* SPDX-License-Identifier: MIT */
#include "tui/pages/night_filter.h"

#include "ephem/number_text.h"
#include "tui/pages/night_sort.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* Headings of the list. */
static const struct {
	const char *word, *column;
	double factor;
} figures[] = {
    {"on", "usable_start_utc", 1},   {"t1", "t1_utc", 1},
    {"mid", "mid_utc", 1},	     {"t4", "t4_utc", 1},
    {"leave", "usable_end_utc", 1},  {"sigma", "sigma_min", 1},
    {"cover", "coverage", 100},	     {"in", "chance_ingress", 100},
    {"eg", "chance_egress", 100},    {"done", "chance_done", 100},
    {"alt", "alt_mid_deg", 1},	     {"airm", "airmass_mid", 1},
    {"moon", "moon_sep_deg", 1},     {"depth", "depth_ppt", 1},
    {"noise", "noise_ppt_min", 1},   {"snr", "depth_snr", 1},
    {"s/n", "depth_snr", 1},	     {"timing", "timing_s", 1.0 / 60.0},
    {"tim", "timing_s", 1.0 / 60.0}, {"bits", "gain_bits", 1},
    {"sky", "sky_mag_arcsec2", 1},
};
enum { WORD_NAME, WORD_TAGS, WORD_LOST, WORD_DOUBTS, WORD_STATE, WORD_KIND, WORD_PLAN, WORD_COUNT };
static const char *const text_words[WORD_COUNT] = {"name", "tags", "lost", "doubts", "state", "kind", "plan"};
static char folded(char c)
{
	return c >= 'A' && c <= 'Z' ? (char)(c - 'A' + 'a') : c;
}

/* Copies text[0..n) without blanks and capitals. */
static void fold(const char *text, size_t n, char *out, size_t size)
{
	size_t used = 0;
	for (size_t i = 0; i < n && used + 1 < size; i++)
		if (text[i] != ' ')
			out[used++] = folded(text[i]);
	out[used] = '\0';
}

/* piece: folded. */
static bool holds_folded(const char *text, const char *piece)
{
	for (; *text && *piece; text++) {
		const char *t = text, *p = piece;
		while (*t && *p && (*t == ' ' || folded(*t) == *p)) {
			p += *t != ' ';
			t++;
		}
		if (!*p)
			return true;
	}
	return false;
}

bool text_holds(const char *text, const char *piece)
{
	char small[FILTER_TEXT_BYTES * 4];
	fold(piece, strlen(piece), small, sizeof small);
	return holds_folded(text, small);
}

/* --- reading --- */

struct piece {
	const char *s;
	size_t n;
};

static struct piece trimmed(const char *s, size_t n)
{
	while (n > 0 && *s == ' ') {
		s++;
		n--;
	}
	while (n > 0 && s[n - 1] == ' ')
		n--;
	return (struct piece){s, n};
}

/* Finds the operator of a term; its length, 0 when there is none. */
static size_t find_op(struct piece term, size_t *at, enum filter_op *op)
{
	static const struct {
		const char *text;
		enum filter_op op;
	} ops[] = {{"<=", OP_AT_MOST}, {">=", OP_AT_LEAST}, {"!=", OP_IS_NOT},
		   {"<", OP_LESS},     {">", OP_MORE},	    {"=", OP_IS}};
	for (*at = 0; *at < term.n; ++*at)
		for (size_t i = 0; i < sizeof ops / sizeof ops[0]; i++) {
			size_t length = strlen(ops[i].text);
			if (*at + length <= term.n && memcmp(term.s + *at, ops[i].text, length) == 0) {
				*op = ops[i].op;
				return length;
			}
		}
	return 0;
}

/* What a word stands for. */
static bool find_word(struct piece word, struct filter_term *t)
{
	char small[FILTER_TEXT_BYTES];
	fold(word.s, word.n, small, sizeof small);
	t->factor = 1.0;
	const char *column = small;
	for (int i = 0; i < WORD_COUNT; i++)
		if (strcmp(small, text_words[i]) == 0) {
			t->kind = TERM_TEXT;
			t->at = i;
			return true;
		}
	if (strcmp(small, "mag") == 0 || strcmp(small, "worth") == 0) {
		t->kind = small[0] == 'm' ? TERM_MAG : TERM_WORTH;
		return true;
	}
	for (size_t i = 0; i < sizeof figures / sizeof figures[0]; i++)
		if (strcmp(small, figures[i].word) == 0) {
			column = figures[i].column;
			t->factor = figures[i].factor;
		}
	t->at = column_find(column);
	if (t->at < 0 || columns[t->at].get)
		return false;
	t->kind = columns[t->at].type == VALUE_UTC ? TERM_TIME : TERM_NUMBER;
	return true;
}

static bool two_digits(const char *s, int most, int *out)
{
	if (s[0] < '0' || s[0] > '9' || s[1] < '0' || s[1] > '9')
		return false;
	*out = 10 * (s[0] - '0') + (s[1] - '0');
	return *out <= most;
}

static enum status read_value(struct piece value, struct piece said, struct filter_term *t, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	int hour, minute;
	err_quote(value.s, value.n, got);
	if (value.n == 0)
		return err_set(e, ST_SYNTAX, "nothing stands behind `%.*s`", (int)said.n, said.s);
	if (t->kind == TERM_TEXT) {
		if (t->op != OP_IS && t->op != OP_IS_NOT)
			return err_set(e, ST_SYNTAX, "%s is a text: it takes = or !=", text_words[t->at]);
		fold(value.s, value.n, t->text, sizeof t->text);
		return ST_OK;
	}
	if (t->kind != TERM_TIME)
		return number_parse(value.s, value.n, &t->value, NULL, NULL) == ST_OK
			   ? ST_OK
			   : err_set(e, ST_SYNTAX, "`%.*s` needs a number (got \"%s\")", (int)said.n, said.s,
				     got);
	if (value.n != 5 || value.s[2] != ':' || !two_digits(value.s, 23, &hour) ||
	    !two_digits(value.s + 3, 59, &minute))
		return err_set(e, ST_SYNTAX, "`%.*s` needs a time HH:MM (got \"%s\")", (int)said.n, said.s,
			       got);
	t->value = 60.0 * hour + minute + (hour < 12 ? 1440.0 : 0.0);
	return ST_OK;
}

static enum status read_term(struct piece term, struct filter_term *t, struct err *e)
{
	size_t at, length = find_op(term, &at, &t->op);
	char got[ERR_QUOTE_MAX];
	if (term.n == 0)
		return err_set(e, ST_SYNTAX, "a condition is missing beside & or |");
	if (length == 0) {
		bool negated = term.s[0] == '!';
		t->kind = TERM_ANY_TEXT;
		t->op = negated ? OP_IS_NOT : OP_IS;
		fold(term.s + negated, term.n - negated, t->text, sizeof t->text);
		if (strcmp(t->text, "planned") == 0)
			t->kind = TERM_PLANNED;
		return t->text[0] ? ST_OK : err_set(e, ST_SYNTAX, "nothing stands behind !");
	}
	struct piece word = trimmed(term.s, at), said = {term.s, at + length};
	if (!find_word(word, t)) {
		err_quote(word.s, word.n, got);
		return err_set(e, ST_SYNTAX, "no figure is called \"%s\"; ? in the list says which there are",
			       got);
	}
	return read_value(trimmed(term.s + at + length, term.n - at - length), said, t, e);
}

enum status filter_parse(const char *text, struct filter *f, struct err *e)
{
	struct filter read = {.n = 0};
	bool or_before = false;
	if (trimmed(text, strlen(text)).n == 0) {
		f->n = 0;
		return ST_OK;
	}
	for (;;) {
		size_t n = strcspn(text, "&|");
		if (read.n == FILTER_TERMS_MAX)
			return err_set(e, ST_SYNTAX, "more than %d conditions", FILTER_TERMS_MAX);
		struct filter_term *t = &read.term[read.n++];
		t->or_before = or_before;
		enum status s = read_term(trimmed(text, n), t, e);
		if (s != ST_OK)
			return s;
		if (!text[n])
			break;
		or_before = text[n] == '|';
		text += n + 1;
	}
	*f = read;
	return ST_OK;
}

/* --- choosing --- */

static bool compare(double figure, enum filter_op op, double value, double half_step)
{
	switch (op) {
	case OP_LESS:
		return figure < value;
	case OP_AT_MOST:
		return figure <= value;
	case OP_MORE:
		return figure > value;
	case OP_AT_LEAST:
		return figure >= value;
	case OP_IS: /* as it is shown */
		return fabs(figure - value) <= half_step;
	default:
		return fabs(figure - value) > half_step; /* never of NaN */
	}
}

/* Minutes on the site's clock since the midnight before the evening, rounded as the list shows them. */
static double clock_minutes(double t_d, const struct night *night, const struct zone *zone)
{
	if (isnan(t_d))
		return NAN;
	struct local_time l = zone_local(zone, utc_add_s(night->clock.leap, night_utc(night, t_d), 30.0));
	return 1440.0 * (l.mjd - night->mjd) + floor(l.sod_s / 60.0);
}

static const char *text_of(const struct night_row *row, int word)
{
	static const char *const states[] = {
	    [STATE_AHEAD] = "ahead", [STATE_NEXT] = "next", [STATE_NOW] = "now", [STATE_PAST] = "past"};
	switch (word) {
	case WORD_TAGS:
		return row->window->event.prepared->target->tags;
	case WORD_LOST:
		return row->lost_long;
	case WORD_DOUBTS:
		return row->flags;
	case WORD_STATE:
		return states[row->state];
	case WORD_PLAN:
		return row->plan.order > 0 ? plan_state_words[row->plan.state]
		       : row->plan.dropped ? "dropped"
					   : "";
	case WORD_KIND:
		return row->window->event.kind == KIND_TRANSIT ? "transit" : "occultation";
	default:
		return row->name;
	}
}

/* The last place that is shown. */
static double step_of(const struct filter_term *t)
{
	if (t->factor < 1.0) /* minutes of seconds */
		return 0.1;
	return t->factor > 1.0 ? 1.0 : pow(10.0, -columns[t->at].people_decimals);
}

static bool term_is_true(const struct filter_term *t, const struct night_row *row, const struct night *night,
			 const struct zone *zone)
{
	bool found;
	switch (t->kind) {
	case TERM_ANY_TEXT:
		found = holds_folded(row->name, t->text) || holds_folded(text_of(row, WORD_TAGS), t->text);
		return found == (t->op == OP_IS);
	case TERM_TEXT:
		return holds_folded(text_of(row, t->at), t->text) == (t->op == OP_IS);
	case TERM_PLANNED:
		return (row->plan.order > 0) == (t->op == OP_IS);
	case TERM_WORTH:
		return compare(row->worth, t->op, t->value, 0.005);
	case TERM_MAG:
		return compare(row->window->event.prepared->target->mag, t->op, t->value, 0.05);
	case TERM_TIME:
		return compare(clock_minutes(row_figure(row, columns[t->at].name), night, zone), t->op,
			       t->value, 0.25);
	default:
		return compare(t->factor * row_figure(row, columns[t->at].name), t->op, t->value,
			       0.5 * step_of(t));
	}
}

bool filter_keeps(const struct filter *f, const struct night_row *row, const struct night *night,
		  const struct zone *zone)
{
	bool group = true;
	for (int i = 0; i < f->n; i++) {
		if (f->term[i].or_before) {
			if (group)
				return true;
			group = true;
		}
		group = group && term_is_true(&f->term[i], row, night, zone);
	}
	return group;
}
