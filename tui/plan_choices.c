/* SPDX-License-Identifier: MIT
 * What the user chose for a plan: pins, drops, blocks, lost and poor time, as lines to store and laid over
 * each other. */
#include "ephem/number_text.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char *const choice_words[CHOICE_KINDS] = {"pin", "drop", "block", "lost", "poor"};
static const char *const block_words[] = {"set", "standing", "lost", "poor"};
static const char shown_word[] = "shown", missed_word[] = "missed", cut_word[] = "cut";

/* --- stored lines --- */

/* Cell k of a line whose cells are parted by tabs; the last may be asked for with all that follows. */
static const char *cell(struct plan_view *v, const char *line, size_t n, int k)
{
	const char *at = line, *end = line + n;
	for (; k > 0 && at < end; k--) {
		const char *tab = memchr(at, '\t', (size_t)(end - at));
		at = tab ? tab + 1 : end;
	}
	const char *tab = memchr(at, '\t', (size_t)(end - at));
	return plan_copy_n(v, at, (size_t)((tab ? tab : end) - at));
}

static void read_shown(struct plan_view *v, const char *line, size_t n)
{
	const char *kind = cell(v, line, n, 1), *noise = cell(v, line, n, 4);
	struct plan_block_view b = {.text = cell(v, line, n, 5), .noise = 1.0};
	size_t k = 0;
	while (k < sizeof block_words / sizeof block_words[0] && strcmp(block_words[k], kind) != 0)
		k++;
	if (k == sizeof block_words / sizeof block_words[0] || v->n_blocks == CHOICES_MAX ||
	    utc_parse(&v->run->leap, cell(v, line, n, 2), &b.from, NULL) != ST_OK ||
	    utc_parse(&v->run->leap, cell(v, line, n, 3), &b.to, NULL) != ST_OK)
		return;
	b.kind = (enum plan_block_kind)k;
	if (noise[0] && number_parse(noise, strlen(noise), &b.noise, NULL, NULL) != ST_OK)
		return;
	if (!v->block)
		v->block = plan_alloc(v, CHOICES_MAX, sizeof *v->block);
	if (v->block)
		v->block[v->n_blocks++] = b;
}

static void read_line(struct plan_view *v, struct plan_choices *c, const char *line, size_t n)
{
	const char *word = cell(v, line, n, 0), *text = cell(v, line, n, 1);
	if (!text[0])
		return;
	if (strcmp(word, shown_word) == 0)
		read_shown(v, line, n);
	else if (strcmp(word, missed_word) == 0 && c->n_missed < CHOICES_MAX)
		c->missed[c->n_missed++] = text;
	else if (strcmp(word, cut_word) == 0 && c->n_cut < CHOICES_MAX)
		c->cut[c->n_cut++] = (struct plan_cut){text, cell(v, line, n, 2), cell(v, line, n, 3)};
	for (int k = 0; k < CHOICE_KINDS; k++)
		if (strcmp(word, choice_words[k]) == 0 && c->n < CHOICES_MAX)
			c->choice[c->n++] = (struct plan_choice){(enum choice_kind)k, text};
}

void choices_read(struct plan_view *v, struct plan_choices *c, const char *lines)
{
	c->n = c->n_missed = c->n_cut = c->n_reopened = 0;
	while (*lines) {
		const size_t n = strcspn(lines, "\n");
		read_line(v, c, lines, n);
		lines += n + (lines[n] == '\n');
	}
}

/* n bytes of cells more into out, which holds `used` of room; how many are used then. */
static size_t put_line(char *out, size_t room, size_t used, const char *a, const char *b)
{
	const int n = snprintf(out ? out + used : NULL, out ? room - used : 0, "%s\t%s\n", a, b);
	return used + (size_t)(n > 0 ? n : 0);
}

static size_t put_block(const struct plan_view *v, char *out, size_t room, size_t used,
			const struct plan_block_view *b)
{
	char from[UTC_TEXT_MAX], to[UTC_TEXT_MAX], noise[NUMBER_TEXT_MAX];
	utc_text(&v->run->leap, b->from, 0, from);
	utc_text(&v->run->leap, b->to, 0, to);
	number_text(b->noise, noise);
	const int n = snprintf(out ? out + used : NULL, out ? room - used : 0, "%s\t%s\t%s\t%s\t%s\t%s\n",
			       shown_word, block_words[b->kind], from, to, noise, b->text);
	return used + (size_t)(n > 0 ? n : 0);
}

static size_t put_cut(char *out, size_t room, size_t used, const struct plan_cut *cut)
{
	const int n = snprintf(out ? out + used : NULL, out ? room - used : 0, "%s\t%s\t%s\t%s\n", cut_word,
			       cut->key, cut->was, cut->note);
	return used + (size_t)(n > 0 ? n : 0);
}

/* Writes into out, or, NULL, only counts. */
static size_t put_all(const struct plan_view *v, const struct plan_choices *c, char *out, size_t room)
{
	size_t used = 0;
	for (size_t i = 0; i < c->n; i++)
		used = put_line(out, room, used, choice_words[c->choice[i].kind], c->choice[i].text);
	for (size_t i = 0; i < v->n_blocks; i++)
		used = put_block(v, out, room, used, &v->block[i]);
	for (size_t i = 0; i < c->n_missed; i++)
		used = put_line(out, room, used, missed_word, c->missed[i]);
	for (size_t i = 0; i < c->n_cut; i++)
		used = put_cut(out, room, used, &c->cut[i]);
	return used;
}

const char *choices_text(struct plan_view *v, const struct plan_choices *c)
{
	const size_t room = put_all(v, c, NULL, 0) + 1;
	char *out = plan_alloc(v, room, 1);
	if (out)
		(void)put_all(v, c, out, room);
	return out;
}

/* --- events by name --- */

static enum status target_by_name(const struct run *r, const char *name, const struct target **out,
				  struct err *e)
{
	char got[ERR_QUOTE_MAX];
	const long i = target_list_find(&r->targets, name);
	err_quote(name, strlen(name), got);
	if (i < 0)
		return err_set(e, ST_ABSENT, "no such target is stored (got \"%s\"; see wane target list)",
			       got);
	*out = &r->targets.t[i];
	return ST_OK;
}

enum status event_name_find(const struct run *r, const char *text, struct event_name *out, struct err *e)
{
	char name[NAME_BYTES_MAX], got[ERR_QUOTE_MAX], *end = NULL;
	const char *at = strrchr(text, '@');
	*out = (struct event_name){.target = NULL};
	/* a name may hold the sign itself */
	if (!at || target_list_find(&r->targets, text) >= 0)
		return target_by_name(r, text, &out->target, e);
	err_quote(text, strlen(text), got);
	out->epoch = strtol(at + 1, &end, 10);
	if (!at[1] || *end || (size_t)(at - text) >= sizeof name || labs(out->epoch) > 100000000L)
		return err_set(e, ST_SYNTAX, "no event (got \"%s\", expected NAME or NAME@EPOCH)", got);
	snprintf(name, sizeof name, "%.*s", (int)(at - text), text);
	out->one = true;
	return target_by_name(r, name, &out->target, e);
}

/* Whether b is among the events that a names. */
static bool covers(const struct event_name *a, const struct event_name *b)
{
	return a->target == b->target && (!a->one || (b->one && a->epoch == b->epoch));
}

/* --- wishes --- */

bool wish_any(const struct plan_wish *w)
{
	return w->n_pin + w->n_drop + w->n_block + w->n_lost + w->n_poor + w->n_free + w->n_unblock +
		       w->n_unlost >
		   0 ||
	       w->rebuild || w->afresh || w->from;
}

static void remove_at(struct plan_choices *c, size_t i)
{
	memmove(&c->choice[i], &c->choice[i + 1], (c->n - i - 1) * sizeof c->choice[0]);
	c->n--;
}

/* Takes pins (or drops) of the events that `name` covers away. */
static bool take_away(const struct plan_view *v, struct plan_choices *c, enum choice_kind kind,
		      const struct event_name *name)
{
	bool found = false;
	for (size_t i = c->n; i-- > 0;) {
		struct event_name other;
		if (c->choice[i].kind == kind &&
		    event_name_find(v->run, c->choice[i].text, &other, NULL) == ST_OK &&
		    covers(name, &other)) {
			remove_at(c, i);
			found = true;
		}
	}
	return found;
}

static enum status add(struct plan_view *v, struct plan_choices *c, enum choice_kind kind, const char *text,
		       struct err *e)
{
	char clean[NAME_BYTES_MAX + 64];
	(void)text_clean(text, clean, sizeof clean);
	for (size_t i = 0; i < c->n; i++)
		if (c->choice[i].kind == kind && strcmp(c->choice[i].text, clean) == 0)
			return ST_OK;
	if (c->n == CHOICES_MAX)
		return err_set(e, ST_RANGE, "a plan holds at most %d choices", CHOICES_MAX);
	c->choice[c->n++] = (struct plan_choice){kind, plan_copy(v, clean)};
	return ST_OK;
}

static enum status named(struct err *e, const char *word, enum status s)
{
	struct err inner = *e;
	return err_set(e, s, "%s: %.440s", word, inner.text);
}

/* Whether the same events are chosen already, under whatever spelling of the name. */
static bool has_choice(const struct plan_view *v, const struct plan_choices *c, enum choice_kind kind,
		       const struct event_name *name)
{
	for (size_t i = 0; i < c->n; i++) {
		struct event_name other;
		if (c->choice[i].kind == kind &&
		    event_name_find(v->run, c->choice[i].text, &other, NULL) == ST_OK &&
		    covers(name, &other) && covers(&other, name))
			return true;
	}
	return false;
}

/* Of names with an epoch, or of those without. */
static enum status pin_or_drop(struct plan_view *v, struct plan_choices *c, enum choice_kind kind, bool one,
			       const char *text, struct err *e)
{
	struct event_name name;
	enum status s = event_name_find(v->run, text, &name, e);
	if (s == ST_OK && name.one == one) {
		(void)take_away(v, c, kind == CHOICE_PIN ? CHOICE_DROP : CHOICE_PIN, &name);
		if (!has_choice(v, c, kind, &name))
			s = add(v, c, kind, text, e);
	}
	return s == ST_OK ? s : named(e, choice_words[kind], s);
}

/* One event goes before all of its target: those without an epoch first, so that they take none of the others
 * away. */
static enum status pins_and_drops(struct plan_view *v, struct plan_choices *c, const struct plan_wish *w,
				  struct err *e)
{
	enum status s = ST_OK;
	for (int one = 0; one < 2; one++) {
		for (int i = 0; s == ST_OK && i < w->n_pin; i++)
			s = pin_or_drop(v, c, CHOICE_PIN, one != 0, w->pin[i], e);
		for (int i = 0; s == ST_OK && i < w->n_drop; i++)
			s = pin_or_drop(v, c, CHOICE_DROP, one != 0, w->drop[i], e);
	}
	return s;
}

static enum status free_event(struct plan_view *v, struct plan_choices *c, const char *text, struct err *e)
{
	struct event_name name;
	char got[ERR_QUOTE_MAX];
	enum status s = event_name_find(v->run, text, &name, e);
	if (s != ST_OK)
		return named(e, "free", s);
	bool found = take_away(v, c, CHOICE_PIN, &name);
	found = take_away(v, c, CHOICE_DROP, &name) || found;
	err_quote(text, strlen(text), got);
	return found ? ST_OK
		     : err_set(e, ST_ABSENT, "free: it is neither pinned nor dropped (got \"%s\")", got);
}

/* Blocks go by their text, lost and poor time by the span. */
static bool same_choice(const struct plan_choice *c, const char *text)
{
	const char *label = strchr(c->text, '=');
	const size_t n = strlen(text);
	if (strcmp(c->text, text) == 0)
		return true;
	if (c->kind == CHOICE_BLOCK)
		return label && strcmp(label + 1, text) == 0;
	return strncmp(c->text, text, n) == 0 && c->text[n] == ' '; /* poor: the factor behind the span */
}

static enum status take_span(struct plan_choices *c, const char *word, bool block, const char *text,
			     struct err *e)
{
	char got[ERR_QUOTE_MAX];
	bool found = false;
	for (size_t i = c->n; i-- > 0;) {
		const enum choice_kind k = c->choice[i].kind;
		const bool kind = block ? k == CHOICE_BLOCK : k == CHOICE_LOST || k == CHOICE_POOR;
		if (kind && same_choice(&c->choice[i], text)) {
			remove_at(c, i);
			found = true;
		}
	}
	err_quote(text, strlen(text), got);
	return found ? ST_OK : err_set(e, ST_ABSENT, "%s: there is none (got \"%s\")", word, got);
}

/* An event that is pinned and dropped in one wish. */
static enum status at_odds(const struct run *r, const struct plan_wish *w, struct err *e)
{
	for (int i = 0; i < w->n_pin; i++)
		for (int k = 0; k < w->n_drop; k++) {
			struct event_name a, b;
			char got[ERR_QUOTE_MAX];
			if (event_name_find(r, w->pin[i], &a, NULL) != ST_OK ||
			    event_name_find(r, w->drop[k], &b, NULL) != ST_OK ||
			    !(covers(&a, &b) && covers(&b, &a)))
				continue;
			err_quote(w->pin[i], strlen(w->pin[i]), got);
			return err_set(e, ST_SYNTAX, "pin: dropped as well (got \"%s\")", got);
		}
	return ST_OK;
}

enum status choices_wish(struct plan_view *v, struct plan_choices *c, const struct plan_wish *w,
			 struct err *e)
{
	enum status s = at_odds(v->run, w, e);
	for (int i = 0; s == ST_OK && i < w->n_free; i++)
		s = free_event(v, c, w->free[i], e);
	for (int i = 0; s == ST_OK && i < w->n_unblock; i++)
		s = take_span(c, "unblock", true, w->unblock[i], e);
	for (int i = 0; s == ST_OK && i < w->n_unlost; i++)
		s = take_span(c, "unlost", false, w->unlost[i], e);
	if (s == ST_OK)
		s = pins_and_drops(v, c, w, e);
	for (int i = 0; s == ST_OK && i < w->n_block; i++)
		s = add(v, c, CHOICE_BLOCK, w->block[i], e);
	for (int i = 0; s == ST_OK && i < w->n_lost; i++)
		s = add(v, c, CHOICE_LOST, w->lost[i], e);
	for (int i = 0; s == ST_OK && i < w->n_poor; i++)
		s = add(v, c, CHOICE_POOR, w->poor[i], e);
	return s;
}
