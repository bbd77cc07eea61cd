/* SPDX-License-Identifier: MIT */
#include "tui/diagnose.h"

#include "db/text_clean.h"

#include <stdarg.h>
#include <string.h>

static void print_clean(FILE *to, const char *line)
{
	char clean[2 * DIAGNOSIS_BYTES];
	text_clean(line, clean, sizeof clean);
	fprintf(to, "%s\n", clean);
}

void diagnose(const char *word, const char *format, ...)
{
	char text[DIAGNOSIS_BYTES], line[DIAGNOSIS_BYTES + 128];
	va_list list;
	va_start(list, format);
	vsnprintf(text, sizeof text, format, list);
	va_end(list);
	snprintf(line, sizeof line, "wane: %.100s: %s", word, text);
	print_clean(stderr, line);
}

int diagnose_err(const char *word, const struct err *e, int exit_code)
{
	diagnose(word, "%s", e->text);
	return exit_code;
}

int diagnose_whole(const struct err *e, int exit_code)
{
	char line[sizeof e->text + 16];
	snprintf(line, sizeof line, "wane: %s", e->text);
	print_clean(stderr, line);
	return exit_code;
}

void diagnoses_add(struct diagnoses *d, bool doubt, long line, long column, const char *field,
		   const char *text, const char *got, const char *expected)
{
	long *count = doubt ? &d->doubts : &d->faults;
	char *out = doubt ? d->doubt[*count % DIAGNOSES_SHOWN] : d->fault[*count % DIAGNOSES_SHOWN];
	char quoted[ERR_QUOTE_MAX + 300] = "";
	if ((*count)++ >= DIAGNOSES_SHOWN)
		return;
	if (!strstr(text, "(got \"")) {
		bool guess =
		    strncmp(expected, "did you mean ", 13) == 0; /* in the place of what is expected */
		snprintf(quoted, sizeof quoted, " (got \"%.*s\"%s%.250s)", ERR_QUOTE_MAX, got,
			 !expected[0] ? ""
			 : guess      ? ", "
				      : ", expected ",
			 expected);
	}
	snprintf(out, DIAGNOSIS_BYTES, "wane: %.200s:%ld:%ld: %.40s: %.300s%s", d->file, line, column, field,
		 text, quoted);
}

void diagnoses_print(const struct diagnoses *d, FILE *to)
{
	long shown_faults = d->faults < DIAGNOSES_SHOWN ? d->faults : DIAGNOSES_SHOWN;
	long shown_doubts =
	    d->doubts < DIAGNOSES_SHOWN - shown_faults ? d->doubts : DIAGNOSES_SHOWN - shown_faults;
	for (long i = 0; i < shown_faults; i++)
		print_clean(to, d->fault[i]);
	for (long i = 0; i < shown_doubts; i++)
		print_clean(to, d->doubt[i]);
	long more_faults = d->faults - shown_faults, more_doubts = d->doubts - shown_doubts;
	if (more_faults + more_doubts > 0)
		fprintf(to, "wane: more: %ld more not shown (%ld refused, %ld doubtful)\n",
			more_faults + more_doubts, more_faults, more_doubts);
}
