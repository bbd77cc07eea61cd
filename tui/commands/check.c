/* SPDX-License-Identifier: MIT */
#include "tui/commands/table.h"

#include "db/store.h"
#include "tui/diagnose.h"
#include "tui/sheets/out.h"

static void say_line(void *ctx, const char *line)
{
	char clean[600];
	text_clean(line, clean, sizeof clean);
	fprintf(ctx, "%s\n", clean);
}

static void put_count(FILE *to, const char *link, long n, const char *what)
{
	fprintf(to, "%s%ld %s%s", link, n, what, n == 1 ? "" : "s");
}

static int check_store(struct run *r, FILE *to)
{
	struct store_counts count;
	struct err e;
	int faults = 0;
	if (!r->store) {
		fprintf(to, "%s: no database yet; nothing to check\n", r->db_path);
		return EXIT_DONE;
	}
	if (store_check(r->store, say_line, to, &faults, &e) != ST_OK ||
	    store_count(r->store, &count, &e) != ST_OK)
		return diagnose_err("check", &e, EXIT_UNMET);
	put_count(to, "", count.targets, "target");
	put_count(to, ", ", count.ephemerides, "ephemeris version");
	put_count(to, ", ", count.sites, "site");
	put_count(to, ", ", count.telescopes, "telescope");
	put_count(to, ", ", count.allotments, "allotment");
	put_count(to, ", ", count.goals, "goal");
	put_count(to, ", ", count.plans, "plan");
	put_count(to, ", ", count.changes, "change");
	fputc('\n', to);
	if (faults > 0)
		fprintf(to, "NOT SOUND: %d fault%s in %s\n", faults, faults == 1 ? "" : "s", r->db_path);
	else
		fprintf(to, "sound: %s\n", r->db_path);
	return faults > 0 ? EXIT_UNMET : EXIT_DONE;
}

int command_check(const struct env *env, const struct options *o)
{
	struct run run;
	struct out out;
	struct err e;
	int code;
	if (run_open(&run, env, o, NEED_STORE, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	if (run_out_open(&run, &out, &e) != ST_OK) {
		run_close(&run);
		return diagnose_whole(&e, EXIT_UNMET);
	}
	code = check_store(&run, out.file);
	run_close(&run);
	if (out_commit(&out, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_UNMET);
	return code;
}
