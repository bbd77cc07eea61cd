/* SPDX-License-Identifier: MIT
 * What may be stored of a plan. */
#include "db/plan_rows.h"

#include "db/midtime_rows.h"
#include "db/telescope_rows.h"
#include "db/text_clean.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

void plan_title(int64_t night_mjd, const char *draft, char out[PLAN_TITLE_MAX])
{
	char night[NIGHT_TEXT_MAX], clean[PLAN_TITLE_MAX / 2];
	night_date_text(night_mjd, night);
	(void)text_clean(draft, clean, sizeof clean);
	snprintf(out, PLAN_TITLE_MAX, "plan of %s, draft %s", night, clean);
}

enum status plan_utc_check(const char *what, const char *text, struct err *e)
{
	static const char form[] = "0000-00-00T00:00:00Z";
	char got[ERR_QUOTE_MAX];
	bool good = strlen(text) == sizeof form - 1;
	for (size_t i = 0; good && i < sizeof form - 1; i++)
		good = form[i] == '0' ? text[i] >= '0' && text[i] <= '9' : text[i] == form[i];
	if (good)
		return ST_OK;
	err_quote(text, strlen(text), got);
	return err_set(e, ST_SYNTAX, "%s: no UTC time (got \"%s\", expected one like 2026-04-22T03:00:00Z)",
		       what, got);
}

enum status plan_key_check(const char *key, struct err *e)
{
	if (!*key)
		return err_set(e, ST_SYNTAX, "an item of a plan needs a key");
	return text_check("key of an item", key, PLAN_KEY_CHARS_MAX, e);
}

char *plan_lines_clean(const char *text)
{
	size_t n = strlen(text), used = 0;
	char *out = malloc(3 * n + 1);
	if (!out)
		return NULL;
	for (size_t i = 0; i < n;) {
		uint32_t cp;
		size_t length = utf8_decode(text + i, n - i, &cp);
		if (length == 0)
			used += utf8_encode(0xFFFD, out + used);
		else if (cp == '\t' || cp == '\n' || !codepoint_is_hostile(cp))
			used += utf8_encode(cp, out + used);
		i += length ? length : 1;
	}
	out[used] = '\0';
	return out;
}

/* An invalid byte counts as the character that will stand for it. */
static enum status short_enough(const char *what, const char *text, size_t chars_max, struct err *e)
{
	size_t n = strlen(text), chars = 0;
	for (size_t i = 0; i < n; chars++) {
		uint32_t cp;
		size_t length = utf8_decode(text + i, n - i, &cp);
		i += length ? length : 1;
	}
	if (chars > chars_max)
		return err_set(e, ST_RANGE, "plan: %s: too long (got %zu characters, expected at most %zu)",
			       what, chars, chars_max);
	return ST_OK;
}

static enum status worth_check(const char *what, double worth, struct err *e)
{
	if (worth >= 0.0 && worth <= PLAN_WORTH_MAX)
		return ST_OK;
	return err_set(e, ST_RANGE, "plan: %s: not a worth (got \"%g\", expected 0..1e12)", what, worth);
}

static enum status window_check(const struct plan_window_row *w, struct err *e)
{
	static const char *const variants[] = {"whole", "short", "ingress", "egress"};
	char got[ERR_QUOTE_MAX];
	bool known = false;
	for (size_t i = 0; i < sizeof variants / sizeof variants[0]; i++)
		known = known || strcmp(w->variant, variants[i]) == 0;
	err_quote(w->variant, strlen(w->variant), got);
	if (!known)
		return err_set(
		    e, ST_SYNTAX,
		    "plan: variant: unknown (got \"%s\", expected whole, short, ingress or egress)", got);
	if (w->kind != KIND_TRANSIT && w->kind != KIND_OCCULTATION)
		return err_set(e, ST_RANGE, "plan: neither a transit nor an occultation (got \"%d\")",
			       (int)w->kind);
	if (w->epoch < -MIDTIME_EPOCH_MAX || w->epoch > MIDTIME_EPOCH_MAX)
		return err_set(e, ST_RANGE, "plan: no such epoch (got \"%ld\")", w->epoch);
	enum status st = name_check(w->target, strlen(w->target), NULL, e);
	if (st == ST_OK)
		st = worth_check("a window", w->worth, e);
	return st == ST_OK ? short_enough("figures", w->figures, PLAN_LINE_CHARS_MAX, e) : st;
}

static enum status item_check(const struct plan_item_row *item, struct err *e)
{
	enum status st = plan_key_check(item->key, e);
	if (st == ST_OK)
		st = plan_utc_check("plan: slew by", item->slew_by_utc, e);
	if (st == ST_OK)
		st = plan_utc_check("plan: start", item->start_utc, e);
	if (st == ST_OK && *item->latest_start_utc)
		st = plan_utc_check("plan: latest start", item->latest_start_utc, e);
	if (st == ST_OK)
		st = plan_utc_check("plan: end", item->end_utc, e);
	if (st == ST_OK)
		st = worth_check("an item", item->worth, e);
	if (st == ST_OK && item->n > PLAN_WINDOWS_MAX)
		st = err_set(e, ST_RANGE, "plan: an item has at most %d windows (got \"%zu\")",
			     (int)PLAN_WINDOWS_MAX, item->n);
	for (size_t i = 0; st == ST_OK && i < item->n; i++)
		st = window_check(&item->window[i], e);
	return st;
}

static int by_key(const void *a, const void *b)
{
	return strcmp(*(const char *const *)a, *(const char *const *)b);
}

static enum status keys_differ(const struct plan_row *p, struct err *e)
{
	const char **key = malloc((p->n + 1) * sizeof *key);
	enum status st = ST_OK;
	if (!key)
		return err_set(e, ST_MEMORY, "database: no memory");
	for (size_t i = 0; i < p->n; i++)
		key[i] = p->item[i].key;
	if (p->n > 0)
		qsort(key, p->n, sizeof *key, by_key);
	for (size_t i = 1; st == ST_OK && i < p->n; i++)
		if (strcmp(key[i - 1], key[i]) == 0)
			st = err_set(e, ST_SYNTAX, "plan: two items have the key \"%.200s\"", key[i]);
	free(key);
	return st;
}

enum status plan_check(const struct plan_row *p, struct err *e)
{
	enum status st = name_check(p->draft, strlen(p->draft), NULL, e);
	if (st == ST_OK)
		st = text_check("draft", p->draft, PLAN_DRAFT_CHARS_MAX, e);
	if (st == ST_OK && (p->night_mjd < NIGHT_MJD_MIN || p->night_mjd > NIGHT_MJD_MAX))
		st = err_set(e, ST_RANGE, "plan: not a night of 1900 to 2100");
	if (st == ST_OK)
		st = short_enough("limits", p->limits, PLAN_LINE_CHARS_MAX, e);
	if (st == ST_OK)
		st = text_check("date of the leap table", p->leap_date, 20, e);
	if (st == ST_OK)
		st = short_enough("choices", p->choices, PLAN_CHOICES_CHARS_MAX, e);
	if (st == ST_OK)
		st = short_enough("what is left out", p->left_out, PLAN_LEFT_CHARS_MAX, e);
	if (st == ST_OK)
		st = worth_check("worth", p->worth, e);
	if (st == ST_OK)
		st = worth_check("bound", p->bound, e);
	if (st == ST_OK && p->n > PLAN_ITEMS_MAX)
		st = err_set(e, ST_RANGE, "plan: at most %d items (got \"%zu\")", (int)PLAN_ITEMS_MAX, p->n);
	for (size_t i = 0; st == ST_OK && i < p->n; i++)
		st = item_check(&p->item[i], e);
	return st == ST_OK ? keys_differ(p, e) : st;
}
