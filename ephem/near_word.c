/* SPDX-License-Identifier: MIT */
#include "ephem/near_word.h"

#include <stdbool.h>
#include <string.h>

static size_t smaller(size_t a, size_t b)
{
	return a < b ? a : b;
}

/* Edit distance of two words shorter than 64; a swap of neighbours counts as one. */
static size_t distance(const char *a, const char *b)
{
	enum { ROOM = 64 };
	size_t na = strlen(a), nb = strlen(b), rows_of[3][ROOM];
	size_t *above = rows_of[0], *last = rows_of[1], *row = rows_of[2];
	if (na >= ROOM || nb >= ROOM)
		return ROOM;
	for (size_t j = 0; j <= nb; j++)
		last[j] = j;
	for (size_t i = 1; i <= na; i++) {
		row[0] = i;
		for (size_t j = 1; j <= nb; j++) {
			row[j] =
			    smaller(last[j - 1] + (a[i - 1] != b[j - 1]), smaller(last[j], row[j - 1]) + 1);
			if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1])
				row[j] = smaller(row[j], above[j - 2] + 1);
		}
		size_t *free_row = above;
		above = last;
		last = row;
		row = free_row;
	}
	return last[nb];
}

/* A word of this many letters may be two mistakes away from what was meant, or its beginning; a shorter one a
 * single mistake. */
enum { NEAR_LETTERS = 6 };

static const char *shortest_from(const char *word, const char *const list[], size_t n)
{
	const char *best = NULL;
	for (size_t i = 0; i < n; i++)
		/* NOLINTNEXTLINE(clang-analyzer-core.NonNullParamChecker): lists hold n words */
		if (strncmp(list[i], word, strlen(word)) == 0 && (!best || strlen(list[i]) < strlen(best)))
			best = list[i];
	return best;
}

const char *nearest_word(const char *word, const char *const list[], size_t n)
{
	const char *best = NULL;
	bool long_enough = strlen(word) - strspn(word, "-") >= NEAR_LETTERS;
	size_t least = long_enough ? 2 : 1;
	for (size_t i = 0; i < n; i++) {
		size_t d = distance(word, list[i]);
		if (d <= least && (!best || d < least)) {
			best = list[i];
			least = d;
		}
	}
	return best || !long_enough ? best : shortest_from(word, list, n);
}
