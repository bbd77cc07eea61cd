/* SPDX-License-Identifier: MIT */
#include "tests/support/golden.h"

#include "tests/support/check.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char divider[] = "== roles\n";

static char *read_whole(const char *path)
{
	FILE *f = fopen(path, "rb");
	if (!f)
		return NULL;
	char *text = calloc(1, 1 << 20);
	size_t n = text ? fread(text, 1, (1 << 20) - 1, f) : 0;
	fclose(f);
	if (text)
		text[n] = '\0';
	return text;
}

static char *render(const struct grid *g)
{
	size_t text = grid_to_text(g, false, NULL, 0), roles = grid_to_text(g, true, NULL, 0);
	char *out = malloc(text + roles + sizeof divider);
	if (!out)
		check_fail("no memory");
	grid_to_text(g, false, out, text + 1);
	memcpy(out + text, divider, sizeof divider - 1);
	grid_to_text(g, true, out + text + sizeof divider - 1, roles + 1);
	return out;
}

static void write_whole(const char *path, const char *text)
{
	FILE *f = fopen(path, "wb");
	if (!f || fputs(text, f) < 0 || fclose(f) != 0)
		check_fail("%s: can't be written", path);
}

/* Fails with the first line in which the two differ. */
static void differ(const char *path, const char *want, const char *got)
{
	for (int line = 1;; line++) {
		size_t w = strcspn(want, "\n"), g = strcspn(got, "\n");
		if (w != g || memcmp(want, got, w) != 0)
			check_fail(
			    "%s:%d differs (look at it, then `make golden` rewrites)\nkept: %.*s\nnow:  %.*s",
			    path, line, (int)w, want, (int)g, got);
		if (!want[w] && !got[g])
			return;
		if (!want[w] || !got[g])
			check_fail("%s:%d: %s lines than kept", path, line, want[w] ? "fewer" : "more");
		want += w + 1;
		got += g + 1;
	}
}

void golden_check(const char *name, const struct grid *g)
{
	const char *top = getenv("WANE_TOP"), *mode = getenv("WANE_GOLDEN");
	char path[1024];
	snprintf(path, sizeof path, "%s/tests/data/golden/%s.txt", top ? top : ".", name);
	char *now = render(g);
	if (mode && strcmp(mode, "update") == 0) {
		write_whole(path, now);
		free(now);
		return;
	}
	char *kept = read_whole(path);
	if (!kept) {
		free(now);
		check_fail("%s: missing; `make golden` writes it", path);
	}
	differ(path, kept, now);
	free(kept);
	free(now);
}
