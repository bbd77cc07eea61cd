/* SPDX-License-Identifier: MIT */
#include "tui/sheets/plan_words.h"

#include "db/text_clean.h"

#include <string.h>

const char *const plan_block_words[] = {"block", "standing", "lost", "poor"};
const char plan_sun_up_reason[] = "the Sun is up for some of it: do not slew there";

const char *plan_kind_word(enum event_kind kind)
{
	return kind == KIND_TRANSIT ? "transit" : "occultation";
}

void plan_line(const char *text, char *out, size_t size)
{
	size_t n = text_clean(text, out, size), used = 0;
	for (size_t i = 0; i < n; i++)
		if (out[i] != ' ' || (used > 0 && out[used - 1] != ' '))
			out[used++] = out[i];
	if (used > 0 && out[used - 1] == ' ')
		used--;
	out[used] = '\0';
}

void plan_names(const struct plan_item_view *item, char out[PLAN_NAMES_BYTES])
{
	char name[NAME_BYTES_MAX];
	size_t used = 0;
	out[0] = '\0';
	for (size_t i = 0; i < item->n; i++) {
		plan_line(item->member[i].target, name, sizeof name);
		if (used + strlen(name) + 8 >= PLAN_NAMES_BYTES) {
			snprintf(out + used, PLAN_NAMES_BYTES - used, " + ...");
			return;
		}
		used += (size_t)snprintf(out + used, PLAN_NAMES_BYTES - used, "%s%s", i ? " + " : "", name);
	}
}

void plan_standing_words(const struct plan_view *v, char *out, size_t size)
{
	char draft[200];
	plan_line(v->draft, draft, sizeof draft);
	if (v->stored)
		snprintf(out, size, "%sdraft %s, edition %d", v->kept ? "the kept plan: " : "", draft,
			 v->edition);
	else if (draft[0])
		snprintf(out, size, "a proposal from draft %s, not stored", draft);
	else
		snprintf(out, size, "a proposal, not stored");
}
