/* SPDX-License-Identifier: MIT
 * wane: from the command line to a subcommand or the interface. */
#include "tui/commands/table.h"
#include "tui/diagnose.h"
#include "tui/pages/page_run.h"
#include "tui/sheets/out.h"

#include <errno.h>
#include <fcntl.h>
#include <locale.h>
#include <signal.h>
#include <string.h>
#include <unistd.h>

/* A closed standard stream would give its number to the next file that is opened: the database. What is
 * written to a standard output that was closed fails, as it should: its place is taken by a file that can
 * only be read. */
static void keep_streams(void)
{
	for (int fd = 0; fd <= 2; fd++)
		if (fcntl(fd, F_GETFD) < 0 && errno == EBADF)
			(void)!open("/dev/null", fd == 2 ? O_WRONLY : O_RDONLY);
}

static int open_interface(const struct env *env, const struct options *o)
{
	struct run run;
	struct err e;
	int code;
	if (!env->stdin_tty || !env->stdout_tty) {
		diagnose("terminal",
			 "standard input and output must be a terminal for the interface; `wane night "
			 "--plain` prints the night");
		return EXIT_UNMET;
	}
	if (run_open(&run, env, o, NEED_STORE | NEED_FIRST_SITE | NEED_TARGETS, &code, &e) != ST_OK)
		return diagnose_whole(&e, code);
	err_clear(&e);
	code = page_run(&run, run_tonight(&run), &e);
	if (code != EXIT_DONE && e.text[0])
		diagnose("interface", "%s", e.text);
	run_close(&run);
	return code;
}

static int dispatch(const struct env *env, const struct options *o)
{
	struct err e;
	enum format format;
	const struct command *c = o->n_words > 0 ? command_find(o->word[0]) : NULL;
	if (o->version) {
		printf("wane %s\n", WANE_VERSION);
		return EXIT_DONE;
	}
	if (o->n_words == 0) {
		if (o->help) {
			general_help(stdout);
			return EXIT_DONE;
		}
		if (options_allowed(o, GROUP_COMPUTE | GROUP_WINDOWS, "the interface", &e) != ST_OK)
			return diagnose_whole(&e, EXIT_USAGE);
		return open_interface(env, o);
	}
	if (!c) {
		const char *names[32], *near;
		char got[ERR_QUOTE_MAX];
		for (size_t i = 0; i < command_count; i++)
			names[i] = commands[i].name;
		near = nearest_word(o->word[0], names, command_count);
		err_quote(o->word[0], strlen(o->word[0]), got);
		diagnose("subcommand", "unknown (got \"%s\"%s%s; see wane --help)", got,
			 near ? ", did you mean " : "", near ? near : "");
		return EXIT_USAGE;
	}
	if (o->help) {
		command_help(stdout, c);
		return EXIT_DONE;
	}
	if (options_allowed(o, c->groups, c->name, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	if (format_of(o, c->formats, &format, &e) != ST_OK)
		return usage_fault("--format", &e);
	if (o->n_words - 1 > c->words_max) {
		char got[ERR_QUOTE_MAX];
		const char *extra = o->word[c->words_max + 1];
		err_quote(extra, strlen(extra), got);
		diagnose(c->name, "an argument too many (got \"%s\", expected wane %s%s%s)", got, c->name,
			 c->arguments[0] ? " " : "", c->arguments);
		return EXIT_USAGE;
	}
	return c->function(env, o);
}

int main(int argc, char *argv[])
{
	struct env env;
	struct options options;
	struct err e;
	keep_streams();
	setlocale(LC_CTYPE, "");  /* numbers stay as in "C" */
	signal(SIGXFSZ, SIG_IGN); /* a size limit becomes a write error */
	env_read(&env);
	if (options_parse(&options, argc, argv, &e) != ST_OK)
		return diagnose_whole(&e, EXIT_USAGE);
	int code = dispatch(&env, &options);
	struct out standard = {.file = stdout, .to_stdout = true};
	if (out_commit(&standard, &e) != ST_OK) /* a command that failed has said why */
		return code != EXIT_DONE ? code : diagnose_whole(&e, EXIT_UNMET);
	if (fclose(stdout) != 0) {
		diagnose("standard output", "%s", strerror(errno));
		return EXIT_UNMET;
	}
	return code;
}
