/* SPDX-License-Identifier: MIT */
#include "tui/commands/result.h"

#include "tui/diagnose.h"

int result_open(const struct run *r, int formats, enum format *format, struct out *out)
{
	struct err e;
	if (format_of(r->options, formats, format, &e) != ST_OK)
		return usage_fault("--format", &e);
	return run_out_open(r, out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}

int result_commit(struct out *out, bool whole)
{
	struct err e;
	if (!whole) {
		out_abandon(out);
		diagnose("memory", "none for a long cell");
		return EXIT_UNMET;
	}
	return out_commit(out, &e) == ST_OK ? EXIT_DONE : diagnose_whole(&e, EXIT_UNMET);
}
