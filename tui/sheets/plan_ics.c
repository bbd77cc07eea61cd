/* SPDX-License-Identifier: MIT
 * A running order as iCalendar (RFC 5545): an event for each item and block, cancelled ones for items that
 * are gone, and a journal entry that says what the night is and what was left out. No METHOD: DTSTAMP is then
 * when the data was last changed (sec. 3.8.7.2), and comes from the store. */
#include "tui/sheets/ics_write.h"
#include "tui/sheets/plan_words.h"

#include "db/store.h"
#include "db/text_clean.h"
#include "tui/cautions.h"
#include "tui/pages/night_head.h"

#include <stdlib.h>
#include <string.h>

enum { LINE_BYTES = 1400, SITE_BYTES = 704 };

static const char no_more[] = "it is in the plan no more";

/* --- words --- */

static void put_instant(FILE *to, const struct plan_view *v, const char *word, struct utc t)
{
	char both[SHEET_BOTH_BYTES];
	sheet_both(v, t, both);
	fprintf(to, "%s %s\n", word, both);
}

static void place_words(const struct plan_view *v, char out[SITE_BYTES])
{
	char site[NAME_BYTES_MAX], telescope[NAME_BYTES_MAX];
	plan_line(v->run->site.name, site, sizeof site);
	plan_line(v->telescope, telescope, sizeof telescope);
	snprintf(out, SITE_BYTES, "%s%s%s", site, telescope[0] ? ", " : "", telescope);
}

static void night_line(FILE *to, const struct plan_view *v)
{
	char name[64], place[SITE_BYTES], standing[300];
	night_name(v->night->night.mjd, name, sizeof name);
	place_words(v, place);
	plan_standing_words(v, standing, sizeof standing);
	fprintf(to, "Night %s at %s. Plan: %s.\n", name, place, standing);
}

static void put_figure(FILE *to, const char *before, const char *figure, const char *behind)
{
	if (figure[0])
		fprintf(to, "%s%s%s", before, figure, behind);
}

static void member_words(FILE *to, const struct plan_view *v, const struct plan_member_view *m)
{
	char line[LINE_BYTES], figure[NUMBER_TEXT_MAX];
	struct utc t;
	plan_line(m->target, line, sizeof line);
	fprintf(to, "%s: %s, epoch %ld: %s", line, plan_kind_word(m->kind), m->epoch,
		plan_variant_sentence(m->variant));
	plan_star_words(m, line, sizeof line);
	put_figure(to, "; ", line, "");
	plan_figure(m, "depth_ppt", 1, figure);
	put_figure(to, ", depth ", figure, " ppt");
	fputc('\n', to);
	for (int c = 0; c < CONTACT_COUNT; c++)
		if (plan_contact_at(m, (enum plan_contact)c, &t))
			put_instant(to, v, plan_contact_words[c], t);
	plan_per_cent(m, "chance_done", figure);
	fprintf(to, "chance of both limbs in clear weather: %s%s", figure[0] ? figure : "none can be given",
		figure[0] ? " %" : "");
	plan_figure(m, "sigma_min", 1, figure);
	put_figure(to, "; error of the mid-time: ", figure, " min");
	fputc('\n', to);
	plan_list_words(m, "flags", line, sizeof line);
	put_figure(to, "marked: ", line, "\n");
	if (m->moved) {
		plan_line(m->moved_why, line, sizeof line);
		number_text_fixed(m->moved_min, 1, figure);
		fprintf(to, "MOVED since it was planned: the mid-time is later by %s min%s%s\n", figure,
			line[0] ? ": " : "", line);
	}
}

static void item_words(FILE *to, const struct plan_view *v, const struct plan_item_view *item,
		       const char *gone)
{
	char line[LINE_BYTES];
	night_line(to, v);
	if (gone)
		fprintf(to, "CANCELLED: %s.\n", gone);
	fprintf(to, "state: %s", plan_state_words[item->state]);
	plan_line(item->cause, line, sizeof line);
	put_figure(to, ", because of ", line, "");
	plan_line(item->note, line, sizeof line);
	put_figure(to, "; note: ", line, "");
	fputc('\n', to);
	put_instant(to, v, "slew by", item->slew_by);
	put_instant(to, v, "start", item->start);
	if (item->has_latest)
		put_instant(to, v, "latest start", item->latest_start);
	put_instant(to, v, "leave", item->end);
	for (size_t i = 0; i < item->n; i++)
		member_words(to, v, &item->member[i]);
	plan_line(item->if_missed, line, sizeof line);
	put_figure(to, "", line, "\n");
	fprintf(to, "%s\n%s\n", cautions[0], cautions[caution_count - 1]);
}

/* --- components --- */

/* A text made by `words`, as a property. */
static FILE *words_open(char **text, size_t *n, struct ics *c)
{
	FILE *to = open_memstream(text, n);
	c->failed = c->failed || !to;
	return to;
}

static void words_close(struct ics *c, FILE *to, char **text, const char *name)
{
	if (fclose(to) != 0)
		c->failed = true;
	else
		ics_text(c, name, *text);
	free(*text);
}

static void put_uid(struct ics *c, const struct plan_view *v, const char *kind, const char *rest)
{
	const size_t room = strlen(kind) + strlen(rest) + 32;
	char uuid[UUID_BYTES], *key = malloc(room);
	if (!key) {
		c->failed = true;
		return;
	}
	/* a window that touches two nights has a row, and an item, in each */
	snprintf(key, room, "%s/N%ld/%s", kind, (long)v->night->night.mjd, rest);
	plan_item_uuid(v->run->store ? store_id(v->run->store) : "", key, uuid);
	ics_value(c, "UID", uuid);
	free(key);
}

/* When an item was marked last, "" never: a mark changes what its neighbours say, too. */
static const char *last_mark(const struct plan_view *v)
{
	const char *last = "";
	for (size_t i = 0; i < v->n_items; i++)
		if (strcmp(v->item[i].marked_utc, last) > 0)
			last = v->item[i].marked_utc;
	return last;
}

/* DTSTAMP and SEQUENCE: from the store, never the clock. */
static void put_revision(struct ics *c, const struct plan_view *v)
{
	char stamp[ICS_TIME_BYTES] = "19700101T000000Z", sequence[24];
	/* all are of one form, `YYYY-MM-DDTHH:MM:SSZ`: the later one is the greater one */
	const char *marked_utc = last_mark(v);
	const char *revised = strcmp(marked_utc, v->stored_utc) > 0 ? marked_utc : v->stored_utc;
	revised = strcmp(v->revised_utc, revised) > 0 ? v->revised_utc : revised;
	struct utc t;
	if (revised[0] && utc_parse(&v->run->leap, revised, &t, NULL) == ST_OK)
		ics_time(t, false, stamp);
	ics_value(c, "DTSTAMP", stamp);
	/* an event has one identifier in every draft of its night: the number counts the revisions of all; a
	 * proposal has 0, so that the first plan that is stored is newer */
	snprintf(sequence, sizeof sequence, "%lld", v->revisions > 0 ? (long long)v->revisions : 0LL);
	ics_value(c, "SEQUENCE", sequence);
}

static void put_place(struct ics *c, const struct plan_view *v)
{
	char place[SITE_BYTES], lat[NUMBER_TEXT_MAX], lon[NUMBER_TEXT_MAX], geo[2 * NUMBER_TEXT_MAX];
	place_words(v, place);
	number_text_fixed(v->run->site.lat_deg, 6, lat);
	number_text_fixed(v->run->site.lon_east_deg, 6, lon);
	snprintf(geo, sizeof geo, "%s;%s", lat, lon);
	ics_text(c, "LOCATION", place);
	ics_value(c, "GEO", geo);
}

/* [from, to] outward to whole seconds; an event has some length. */
static void put_span(struct ics *c, const struct plan_view *v, struct utc from, struct utc to)
{
	char start[ICS_TIME_BYTES], end[ICS_TIME_BYTES];
	ics_time(from, false, start);
	ics_time(to, true, end);
	if (strcmp(end, start) <= 0)
		ics_time(utc_add_s(&v->run->leap, from, 1.0), true, end);
	ics_value(c, "DTSTART", start);
	ics_value(c, "DTEND", end);
}

static void put_alarm(struct ics *c, const struct plan_view *v, const struct plan_item_view *item,
		      const char *names)
{
	char at[ICS_TIME_BYTES], words[PLAN_NAMES_BYTES + 2 * SHEET_BOTH_BYTES], both[SHEET_BOTH_BYTES];
	ics_time(item->slew_by, false, at);
	sheet_both(v, item->slew_by, both);
	snprintf(words, sizeof words, "Slew to %s by %s", names, both);
	ics_value(c, "BEGIN", "VALARM");
	ics_value(c, "ACTION", "DISPLAY");
	ics_value(c, "TRIGGER;VALUE=DATE-TIME", at);
	ics_text(c, "DESCRIPTION", words);
	ics_value(c, "END", "VALARM");
}

static bool to_come(const struct plan_item_view *item)
{
	return item->state == PLAN_PLANNED || item->state == PLAN_PINNED;
}

/* gone: why it is cancelled; NULL it is not. */
static void put_item(struct ics *c, const struct plan_view *v, const struct plan_item_view *item,
		     const char *gone)
{
	char names[PLAN_NAMES_BYTES], summary[PLAN_NAMES_BYTES + 64], *text = NULL;
	bool kind[2] = {false, false};
	size_t n = 0;
	FILE *to = words_open(&text, &n, c);
	if (!to)
		return;
	item_words(to, v, item, gone);
	plan_names(item, names);
	for (size_t i = 0; i < item->n; i++)
		kind[item->member[i].kind] = true;
	snprintf(summary, sizeof summary, "%s (%s%s%s%s)", names, kind[KIND_TRANSIT] ? "transit" : "",
		 kind[KIND_TRANSIT] && kind[KIND_OCCULTATION] ? ", " : "",
		 kind[KIND_OCCULTATION] ? "occultation" : "", gone ? ", cancelled" : "");
	ics_value(c, "BEGIN", "VEVENT");
	put_uid(c, v, "item", item->key);
	put_revision(c, v);
	put_span(c, v, item->start, item->end);
	ics_text(c, "SUMMARY", summary);
	words_close(c, to, &text, "DESCRIPTION");
	put_place(c, v);
	ics_value(c, "STATUS", gone ? "CANCELLED" : v->kept ? "CONFIRMED" : "TENTATIVE");
	for (int k = 0; k < 2; k++)
		if (kind[k])
			ics_text(c, "CATEGORIES", plan_kind_word((enum event_kind)k));
	if (!gone && to_come(item))
		put_alarm(c, v, item, names);
	ics_value(c, "END", "VEVENT");
}

/* Of the site and its telescope: by their numbers, which outlive their names. A place that is not stored has
 * only its name. */
static void put_place_key(const struct plan_view *v, char out[SITE_BYTES])
{
	if (v->run->site.id != 0)
		snprintf(out, SITE_BYTES, "S%lld/O%lld", (long long)v->run->site.id,
			 (long long)v->run->telescope.id);
	else
		place_words(v, out);
}

static void put_block(struct ics *c, const struct plan_view *v, const struct plan_block_view *b, bool gone)
{
	static const char *const what[] = {"block", "standing block", "lost time", "poor time"};
	char words[LINE_BYTES], summary[LINE_BYTES + 32], from[ICS_TIME_BYTES], to[ICS_TIME_BYTES],
	    *text = NULL;
	size_t n = 0;
	FILE *file = words_open(&text, &n, c);
	if (!file)
		return;
	ics_time(b->from, false, from);
	ics_time(b->to, true, to);
	night_line(file, v);
	if (gone)
		fprintf(file, "CANCELLED: %s.\n", no_more);
	put_instant(file, v, "from", b->from);
	put_instant(file, v, "to", b->to);
	if (b->kind == BLOCK_POOR)
		fprintf(file, "noise times %g\n", b->noise);
	if (b->near_sun)
		fprintf(file, "The Sun is up or in bright twilight for some of it. %s\n", cautions[0]);
	plan_line(b->text, words, sizeof words - 128);
	snprintf(summary, sizeof summary, "%s%s%s%s", what[b->kind], words[0] ? ": " : "", words,
		 gone ? " (cancelled)" : "");
	ics_value(c, "BEGIN", "VEVENT");
	/* an item's key is stored; a block has none */
	char place[SITE_BYTES], key[LINE_BYTES + SITE_BYTES + 2 * ICS_TIME_BYTES + 16];
	put_place_key(v, place);
	snprintf(key, sizeof key, "%s/%s/%s/%s/%s", place, plan_block_words[b->kind], words, from, to);
	put_uid(c, v, "block", key);
	put_revision(c, v);
	put_span(c, v, b->from, b->to);
	ics_text(c, "SUMMARY", summary);
	words_close(c, file, &text, "DESCRIPTION");
	put_place(c, v);
	ics_value(c, "STATUS", gone ? "CANCELLED" : v->kept ? "CONFIRMED" : "TENTATIVE");
	ics_text(c, "CATEGORIES", plan_block_words[b->kind]);
	ics_value(c, "END", "VEVENT");
}

static void journal_words(FILE *to, const struct plan_view *v)
{
	char line[LINE_BYTES], reason[LINE_BYTES];
	size_t items = 0;
	night_line(to, v);
	for (size_t i = 0; i < v->n_items; i++)
		items += !v->item[i].in_day;
	fprintf(to, items == 0 ? "Nothing is planned.\n" : "%zu in the running order.\n", items);
	for (size_t i = 0; i < v->n_items; i++) {
		if (!v->item[i].in_day)
			continue;
		plan_names(&v->item[i], line);
		fprintf(to, "left out: %s: %s\n", line, plan_sun_up_reason);
	}
	for (size_t i = 0; i < v->n_left; i++) {
		plan_line(v->left[i].target, line, sizeof line);
		plan_line(v->left[i].reason, reason, sizeof reason);
		fprintf(to, "left out: %s, %s, epoch %ld: %s\n", line, plan_kind_word(v->left[i].kind),
			v->left[i].epoch, reason);
	}
	for (size_t i = 0; i < caution_count; i++)
		fprintf(to, "%s\n", cautions[i]);
}

/* What belongs to no event; a calendar has at least one component (sec. 3.6). */
static void put_journal(struct ics *c, const struct plan_view *v)
{
	char place[SITE_BYTES], name[64], summary[SITE_BYTES + 80], key[SITE_BYTES], date[16], *text = NULL;
	size_t n = 0;
	FILE *to = words_open(&text, &n, c);
	if (!to)
		return;
	journal_words(to, v);
	place_words(v, place);
	night_name(v->night->night.mjd, name, sizeof name);
	snprintf(summary, sizeof summary, "Night %s at %s", name, place);
	put_place_key(v, key);
	const struct date d = date_from_mjd(v->night->night.mjd);
	snprintf(date, sizeof date, "%04d%02d%02d", d.year, d.month, d.day);
	ics_value(c, "BEGIN", "VJOURNAL");
	put_uid(c, v, "night", key);
	put_revision(c, v);
	ics_value(c, "DTSTART;VALUE=DATE", date);
	ics_text(c, "SUMMARY", summary);
	words_close(c, to, &text, "DESCRIPTION");
	ics_value(c, "STATUS", v->kept ? "FINAL" : "DRAFT");
	ics_value(c, "END", "VJOURNAL");
}

/* One that is there twice has one identifier. */
static bool block_before(const struct plan_view *v, size_t i)
{
	for (size_t k = 0; k < i; k++)
		if (plan_block_same(v, &v->block[k], &v->block[i]))
			return true;
	return false;
}

bool plan_sheet_ics(FILE *to, const struct plan_view *v)
{
	struct ics c = {.file = to};
	ics_value(&c, "BEGIN", "VCALENDAR");
	ics_value(&c, "VERSION", "2.0");
	ics_value(&c, "PRODID", "-//wane//night sheet//EN");
	put_journal(&c, v);
	/* no calendar calls an observer to a field that the Sun is over; it may have done so before the site
	 * was put right */
	for (size_t i = 0; i < v->n_items; i++)
		if (!v->item[i].in_day || v->stored)
			put_item(&c, v, &v->item[i], v->item[i].in_day ? plan_sun_up_reason : NULL);
	for (size_t i = 0; i < v->n_blocks; i++)
		if (!block_before(v, i))
			put_block(&c, v, &v->block[i], false);
	for (size_t i = 0; i < v->n_gone; i++)
		put_item(&c, v, &v->gone[i], no_more);
	for (size_t i = 0; i < v->n_gone_blocks; i++)
		put_block(&c, v, &v->gone_block[i], true);
	ics_value(&c, "END", "VCALENDAR");
	return !c.failed;
}
