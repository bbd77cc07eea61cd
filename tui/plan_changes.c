/* SPDX-License-Identifier: MIT
 * What became of a plan: from one to another of the same night, event by event, in words. */
#include "tui/plan_parts.h"

#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { LINE_BYTES = 900 };
/* Times are told to the minute. */
#define MINUTE_S 60.0

struct lines {
	char **line;
	size_t n;
	bool failed;
};
__attribute__((format(printf, 2, 3))) static void add(struct lines *l, const char *format, ...)
{
	char text[LINE_BYTES];
	va_list args;
	va_start(args, format);
	vsnprintf(text, sizeof text, format, args);
	va_end(args);
	char **more = l->failed ? NULL : realloc(l->line, (l->n + 1) * sizeof *more);
	if (more)
		l->line = more;
	char *copy = more ? malloc(strlen(text) + 1) : NULL;
	if (!copy) {
		l->failed = true;
		return;
	}
	memcpy(copy, text, strlen(text) + 1);
	l->line[l->n++] = copy;
}

/* --- one event in both --- */

struct found {
	const struct plan_item_view *item;
	const struct plan_member_view *member;
};

static struct found find(const struct plan_view *v, const struct plan_member_view *m)
{
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++) {
			const struct plan_member_view *other = &v->item[i].member[k];
			const bool target = m->target_id != 0 ? m->target_id == other->target_id
							      : strcmp(m->target, other->target) == 0;
			if (target && m->kind == other->kind && m->epoch == other->epoch &&
			    strcmp(m->branch, other->branch) == 0)
				return (struct found){&v->item[i], other};
		}
	return (struct found){NULL, NULL};
}

/* `starts 12 min later, at 22:41 MDT`; "" no change worth telling. */
static void shift_words(const struct plan_view *v, const char *verb, struct utc before, struct utc after,
			char *out, size_t n)
{
	char at[PLAN_CLOCK_BYTES];
	const double late_s = utc_diff_s(&v->run->leap, before, after);
	out[0] = '\0';
	if (fabs(late_s) < MINUTE_S)
		return;
	plan_clock_words(v, after, at);
	snprintf(out, n, "%s %.0f min %s, at %s", verb, fabs(late_s) / 60.0,
		 late_s > 0.0 ? "later" : "earlier", at);
}

static void join(char *out, size_t n, const char *part)
{
	const size_t used = strlen(out);
	if (part[0] && used < n)
		plan_put_words(out + used, n - used, "%s%s", used ? "; " : "", part);
}

static void why_words(const struct found *old, const struct found *new, char *out, size_t n)
{
	out[0] = '\0';
	if (old->member->ephemeris_id != new->member->ephemeris_id)
		plan_put_words(out, n, " (ephemeris version %d, %s)", new->member->ephemeris_version,
			       new->member->ephemeris_source[0] ? new->member->ephemeris_source
								: "no source");
}

static void event_changes(struct lines *l, const struct plan_view *v, const struct found *old,
			  const struct found *new)
{
	char words[LINE_BYTES / 2] = "", part[200], why[360], with[PLAN_NAME_BYTES];
	shift_words(v, "mid-time", old->member->mid, new->member->mid, part, sizeof part);
	join(words, sizeof words, part);
	shift_words(v, "starts", old->item->start, new->item->start, part, sizeof part);
	join(words, sizeof words, part);
	shift_words(v, "ends", old->item->end, new->item->end, part, sizeof part);
	join(words, sizeof words, part);
	if (strcmp(old->member->variant, new->member->variant) != 0) {
		snprintf(part, sizeof part, "%s instead of %s", new->member->variant, old->member->variant);
		join(words, sizeof words, part);
	}
	if (old->item->state != new->item->state) {
		snprintf(part, sizeof part, "%s%s%s", plan_state_words[new->item->state],
			 new->item->cause[0] ? ", " : "", new->item->cause);
		join(words, sizeof words, part);
	}
	if (new->item->n > 1 && old->item->n == 1) {
		plan_item_name(new->item, with);
		plan_put_words(part, sizeof part, "one pointing now: %s", with);
		join(words, sizeof words, part);
	}
	why_words(old, new, why, sizeof why);
	if (words[0])
		add(l, "%s: %s%s", new->member->target, words, why);
}

/* --- new and gone --- */

static void event_new(struct lines *l, const struct plan_view *after, const struct found *new)
{
	char from[PLAN_CLOCK_BYTES], to[PLAN_CLOCK_BYTES];
	plan_clock_words(after, new->item->start, from);
	plan_clock_words(after, new->item->end, to);
	add(l, "%s: new, %s to %s (%s)", new->member->target, from, to, new->member->variant);
}

static const char *why_left(const struct plan_view *after, const struct plan_member_view *m)
{
	for (size_t i = 0; i < after->n_left; i++)
		if (strcmp(after->left[i].target, m->target) == 0 && after->left[i].kind == m->kind &&
		    after->left[i].epoch == m->epoch)
			return after->left[i].reason;
	return "it has no window this night now";
}

/* --- blocks --- */

static bool same_instant(const struct plan_view *v, struct utc a, struct utc b)
{
	return fabs(utc_diff_s(&v->run->leap, a, b)) < 0.5;
}

static bool has_block(const struct plan_view *v, const struct plan_block_view *b)
{
	for (size_t i = 0; i < v->n_blocks; i++)
		if (v->block[i].kind == b->kind && strcmp(v->block[i].text, b->text) == 0 &&
		    same_instant(v, v->block[i].from, b->from) && same_instant(v, v->block[i].to, b->to))
			return true;
	return false;
}

static void block_changes(struct lines *l, const struct plan_view *of, const struct plan_view *other,
			  const char *word)
{
	char from[PLAN_CLOCK_BYTES], to[PLAN_CLOCK_BYTES];
	for (size_t i = 0; i < of->n_blocks; i++) {
		const struct plan_block_view *b = &of->block[i];
		if (has_block(other, b))
			continue;
		plan_clock_words(of, b->from, from);
		plan_clock_words(of, b->to, to);
		add(l, "%s%s: %s, %s to %s", b->kind == BLOCK_LOST || b->kind == BLOCK_POOR ? "" : "block ",
		    b->text, word, from, to);
	}
}

enum status plan_changes(const struct plan_view *before, const struct plan_view *after, char ***lines,
			 size_t *n, struct err *e)
{
	struct lines l = {.line = NULL};
	block_changes(&l, after, before, "new");
	for (size_t i = 0; i < after->n_items; i++)
		for (size_t k = 0; k < after->item[i].n; k++) {
			const struct found new = {&after->item[i], &after->item[i].member[k]};
			const struct found old = find(before, new.member);
			if (old.item)
				event_changes(&l, after, &old, &new);
			else
				event_new(&l, after, &new);
		}
	for (size_t i = 0; i < before->n_items; i++)
		for (size_t k = 0; k < before->item[i].n; k++) {
			const struct plan_member_view *m = &before->item[i].member[k];
			if (!find(after, m).item)
				add(&l, "%s: gone, %s", m->target, why_left(after, m));
		}
	block_changes(&l, before, after, "gone");
	if (l.failed) {
		for (size_t i = 0; i < l.n; i++)
			free(l.line[i]);
		free(l.line);
		return err_set(e, ST_MEMORY, "memory: none for the changes of a plan");
	}
	*lines = l.line;
	*n = l.n;
	return ST_OK;
}
