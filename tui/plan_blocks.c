/* SPDX-License-Identifier: MIT
 * Blocks, lost and poor time of a night: from what was typed and from the telescope's standing ones to
 * instants. */
#include "ephem/number_text.h"
#include "tui/plan_parts.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { SPAN_BYTES = 160, LABEL_BYTES = 200 };
/* A block while the Sun is above this gets its caution. */
#define NEAR_SUN_ALT_DEG (-6.0)

struct typed_block {
	char span[SPAN_BYTES], label[LABEL_BYTES];
	double noise;
};

/* --- what was typed --- */

static enum status wrong(const char *text, const char *expected, struct err *e)
{
	char got[ERR_QUOTE_MAX];
	err_quote(text, strlen(text), got);
	return err_set(e, ST_SYNTAX, "can't be read (got \"%s\", expected %s)", got, expected);
}

/* n bytes without the blanks round them; false: too long. */
static bool trimmed(const char *text, size_t n, char *out, size_t room)
{
	text_trim(&text, &n);
	if (n >= room)
		return false;
	snprintf(out, room, "%.*s", (int)n, text);
	return true;
}

/* `FROM..TO=TEXT`, n bytes. */
static enum status split_block(const char *text, size_t n, struct typed_block *out, struct err *e)
{
	const char *equals = memchr(text, '=', n);
	*out = (struct typed_block){.noise = 1.0};
	if (!equals || !trimmed(text, (size_t)(equals - text), out->span, sizeof out->span) ||
	    !trimmed(equals + 1, n - (size_t)(equals - text) - 1, out->label, sizeof out->label) ||
	    !out->span[0] || !out->label[0])
		return wrong(text, "FROM..TO=TEXT", e);
	return ST_OK;
}

/* `FROM..TO xN`. */
static enum status split_poor(const char *text, struct typed_block *out, struct err *e)
{
	static const char expected[] = "FROM..TO xN, N from 1 to 20";
	const char *x = strrchr(text, 'x');
	*out = (struct typed_block){.label = "poor time"};
	if (!x || x == text || (x[-1] != ' ' && x[-1] != '\t') ||
	    number_parse(x + 1, strlen(x + 1), &out->noise, NULL, NULL) != ST_OK ||
	    !(out->noise >= 1.0 && out->noise <= POOR_NOISE_MAX) ||
	    !trimmed(text, (size_t)(x - text), out->span, sizeof out->span) || !out->span[0])
		return wrong(text, expected, e);
	return ST_OK;
}

static enum status split_choice(const struct plan_choice *c, struct typed_block *out, struct err *e)
{
	if (c->kind == CHOICE_BLOCK)
		return split_block(c->text, strlen(c->text), out, e);
	if (c->kind == CHOICE_POOR)
		return split_poor(c->text, out, e);
	*out = (struct typed_block){.label = "lost time", .noise = 1.0};
	return trimmed(c->text, strlen(c->text), out->span, sizeof out->span) ? ST_OK
									      : wrong(c->text, "FROM..TO", e);
}

/* --- echo --- */

void echo_line(struct echo *echo, const char *line)
{
	if (!echo)
		return;
	const size_t n = strlen(line);
	char *longer = echo->failed ? NULL : realloc(echo->text, echo->n + n + 2);
	if (!longer) {
		echo->failed = true;
		return;
	}
	echo->text = longer;
	snprintf(longer + echo->n, n + 2, "%s\n", line);
	echo->n += n + 1;
}

void echo_add(struct echo *echo, const char *what, const struct plan_clock *clock, double from_d, double to_d)
{
	char from[PLAN_ECHO_BYTES], to[PLAN_ECHO_BYTES], line[2 * PLAN_ECHO_BYTES + LABEL_BYTES + 64];
	if (!echo)
		return;
	plan_echo(clock, from_d, from);
	plan_echo(clock, to_d, to);
	if (to_d > from_d)
		snprintf(line, sizeof line, "%s: %s to %s", what, from, to);
	else
		snprintf(line, sizeof line, "%s: %s", what, from);
	echo_line(echo, line);
}

/* --- to instants --- */

int64_t plan_telescope_id(const struct run *r)
{
	return r->telescope.id;
}

static void put_block(struct plan_view *v, enum plan_block_kind kind, const struct typed_block *t,
		      const struct night *night, double from_d, double to_d)
{
	if (!v->block)
		v->block = plan_alloc(v, CHOICES_MAX, sizeof *v->block);
	if (!v->block || v->n_blocks == CHOICES_MAX)
		return;
	v->block[v->n_blocks++] = (struct plan_block_view){
	    .kind = kind,
	    .text = plan_copy(v, t->label),
	    .from = utc_rounded(&v->run->leap, night_utc(night, from_d), 0),
	    .to = utc_rounded(&v->run->leap, night_utc(night, to_d), 0),
	    .noise = t->noise,
	};
}

static bool wished(const struct plan_choice *c, const char *const text[], int n)
{
	for (int i = 0; i < n; i++)
		if (strcmp(c->text, text[i]) == 0)
			return true;
	return false;
}

static bool typed_now(const struct plan_choice *c, const struct plan_wish *w)
{
	return c->kind == CHOICE_BLOCK	? wished(c, w->block, w->n_block)
	       : c->kind == CHOICE_LOST ? wished(c, w->lost, w->n_lost)
					: wished(c, w->poor, w->n_poor);
}

static enum status resolve(struct plan_view *v, const struct plan_choice *c, const struct plan_clock *clock,
			   const struct plan_wish *w, struct echo *echo, struct err *e)
{
	static const enum plan_block_kind kinds[CHOICE_KINDS] = {
	    [CHOICE_BLOCK] = BLOCK_SET, [CHOICE_LOST] = BLOCK_LOST, [CHOICE_POOR] = BLOCK_POOR};
	static const char *const words[CHOICE_KINDS] = {
	    [CHOICE_BLOCK] = "block", [CHOICE_LOST] = "lost", [CHOICE_POOR] = "poor"};
	struct typed_block t;
	double from_d, to_d;
	char what[LABEL_BYTES + 16];
	enum status s = split_choice(c, &t, e);
	if (s == ST_OK)
		s = plan_span(clock, t.span, &from_d, &to_d, e);
	if (s != ST_OK) {
		struct err inner = *e;
		return err_set(e, s, "%s: %.440s", words[c->kind], inner.text);
	}
	put_block(v, kinds[c->kind], &t, clock->night, from_d, to_d);
	if (echo && typed_now(c, w)) {
		snprintf(what, sizeof what, "%s%s%s", words[c->kind], c->kind == CHOICE_BLOCK ? " " : "",
			 c->kind == CHOICE_BLOCK ? t.label : "");
		echo_add(echo, what, clock, from_d, to_d);
	}
	return ST_OK;
}

/* A standing block that does not happen this night is left out, and that is said. */
static void resolve_standing(struct plan_view *v, const char *text, size_t n, const struct plan_clock *clock,
			     struct echo *echo)
{
	struct typed_block t;
	struct err e = {.text = ""};
	double from_d, to_d;
	char line[sizeof e.text + LABEL_BYTES + SPAN_BYTES];
	enum status s = split_block(text, n, &t, &e);
	if (s == ST_OK)
		s = plan_span(clock, t.span, &from_d, &to_d, &e);
	if (s == ST_OK) {
		put_block(v, BLOCK_STANDING, &t, clock->night, from_d, to_d);
		return;
	}
	snprintf(line, sizeof line, "standing block %s left out: %s", t.label, e.text);
	if (echo)
		echo_line(echo, line);
}

static int by_time(const void *a, const void *b)
{
	const struct plan_block_view *left = a, *right = b;
	if (left->from.mjd != right->from.mjd)
		return left->from.mjd < right->from.mjd ? -1 : 1;
	if (left->from.sod_s < right->from.sod_s || left->from.sod_s > right->from.sod_s)
		return left->from.sod_s < right->from.sod_s ? -1 : 1;
	return left->kind != right->kind ? (left->kind < right->kind ? -1 : 1)
					 : strcmp(left->text, right->text);
}

enum status blocks_resolve(struct plan_view *v, const struct plan_choices *c, const struct plan_clock *clock,
			   const struct plan_wish *wish, struct echo *echo, struct err *e)
{
	const char *blocks = v->run->telescope.blocks;
	enum status s = ST_OK;
	v->n_blocks = 0;
	for (size_t i = 0; s == ST_OK && i < c->n; i++)
		if (c->choice[i].kind != CHOICE_PIN && c->choice[i].kind != CHOICE_DROP)
			s = resolve(v, &c->choice[i], clock, wish, echo, e);
	while (s == ST_OK && *blocks) {
		const size_t n = strcspn(blocks, ";");
		if (strspn(blocks, " \t") < n)
			resolve_standing(v, blocks, n, clock, echo);
		blocks += n + (blocks[n] == ';');
	}
	if (s == ST_OK && v->n_blocks > 0)
		qsort(v->block, v->n_blocks, sizeof *v->block, by_time);
	return s;
}

/* --- what they take --- */

static struct intervals without(const struct intervals *all, const struct intervals *taken)
{
	const struct intervals rest = intervals_outside(taken, -1e3, 1e3);
	return intervals_and(all, &rest);
}

void blocks_free_time(const struct plan_view *v, const struct night *night, struct free_time *free)
{
	struct intervals lost = intervals_none(), blocked = intervals_none();
	for (size_t i = 0; i < v->n_blocks; i++) {
		const struct plan_block_view *b = &v->block[i];
		const struct intervals one =
		    intervals_one(night_of_utc(night, b->from), night_of_utc(night, b->to));
		if (b->kind == BLOCK_LOST)
			lost = intervals_or(&lost, &one);
		else if (b->kind != BLOCK_POOR)
			blocked = intervals_or(&blocked, &one);
	}
	free->clear = without(&free->clear, &lost);
	free->unblocked = without(&free->unblocked, &blocked);
}

double poor_share(const struct plan_view *v, const struct night *night, const struct window *w)
{
	const double length_d = w->event.t4_d - w->event.t1_d;
	double kept = 1.0;
	if (!(length_d > 0.0))
		return 0.0;
	for (size_t i = 0; i < v->n_blocks; i++) {
		const struct plan_block_view *b = &v->block[i];
		if (b->kind != BLOCK_POOR)
			continue;
		const struct intervals one =
		    intervals_one(night_of_utc(night, b->from), night_of_utc(night, b->to));
		const double share = intervals_overlap(&one, w->event.t1_d, w->event.t4_d) / length_d;
		kept *= 1.0 - share * (1.0 - 1.0 / (b->noise * b->noise));
	}
	return 1.0 - kept;
}

void blocks_near_sun(struct plan_view *v)
{
	const struct night *night = &v->night->night;
	const struct intervals dark = night_sun_below(night, NEAR_SUN_ALT_DEG);
	for (size_t i = 0; i < v->n_blocks; i++) {
		const double from_d = night_of_utc(night, v->block[i].from),
			     to_d = night_of_utc(night, v->block[i].to);
		const bool done_with_it = v->block[i].kind == BLOCK_SET || v->block[i].kind == BLOCK_STANDING;
		/* a second is what times are rounded to */
		v->block[i].near_sun =
		    done_with_it && to_d - from_d - intervals_overlap(&dark, from_d, to_d) > 1.0 / 86400.0;
	}
}
