/* SPDX-License-Identifier: MIT */
#include "tui/env.h"

#include <langinfo.h>
#include <math.h>
#include <pwd.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>
#include <unistd.h>

enum { MJD_OF_UNIX_ZERO = 40587 };

static const char *variable(const char *name)
{
	const char *text = getenv(name);
	return text ? text : "";
}

/* $XDG_.../rest, else $HOME/fallback/rest; relative values are to be ignored (XDG Base Directory
 * Specification); a path that does not fit is none. */
static void home_path(char *out, size_t n, const char *xdg, const char *fallback, const char *rest)
{
	const char *base = variable(xdg), *home = variable("HOME");
	int length = 0;
	out[0] = '\0';
	if (base[0] == '/')
		length = snprintf(out, n, "%s/wane%s", base, rest);
	else if (home[0] == '/')
		length = snprintf(out, n, "%s/%s/wane%s", home, fallback, rest);
	if (length < 0 || (size_t)length >= n)
		out[0] = '\0';
}

static void read_user(char *out, size_t n)
{
	const char *name = variable("USER");
	const struct passwd *entry = getpwuid(getuid());
	if (entry && entry->pw_name && entry->pw_name[0])
		name = entry->pw_name;
	snprintf(out, n, "%s", name[0] ? name : "unknown");
}

/* Whether the locale that is asked for writes UTF-8. One that is not installed here (a login from afar) can't be set, but its name still
 * says what the terminal shows. */
static bool characters_are_utf8(void)
{
	const char *asked[] = {variable("LC_ALL"), variable("LC_CTYPE"), variable("LANG")};
	if (strcmp(nl_langinfo(CODESET), "UTF-8") == 0)
		return true;
	for (size_t i = 0; i < sizeof asked / sizeof asked[0]; i++)
		if (asked[i][0])
			return strstr(asked[i], ".UTF-8") || strstr(asked[i], ".utf8") || strstr(asked[i], ".utf-8");
	return false;
}

void env_read(struct env *env)
{
	memset(env, 0, sizeof *env);
	home_path(env->data_path, sizeof env->data_path, "XDG_DATA_HOME", ".local/share", "/wane.db");
	home_path(env->settings_path, sizeof env->settings_path, "XDG_CONFIG_HOME", ".config",
		  "/settings.ini");
	home_path(env->state_dir, sizeof env->state_dir, "XDG_STATE_HOME", ".local/state", "");
	read_user(env->user, sizeof env->user);
	const char *zones = variable("TZDIR");
	if (zones[0] != '/' || strlen(zones) >= sizeof env->zoneinfo_dir)
		zones = "/usr/share/zoneinfo";
	snprintf(env->zoneinfo_dir, sizeof env->zoneinfo_dir, "%s", zones);
	env->no_color = variable("NO_COLOR")[0] != '\0';
	env->utf8 = characters_are_utf8();
	env->stdin_tty = isatty(STDIN_FILENO) == 1;
	env->stdout_tty = isatty(STDOUT_FILENO) == 1;
}

static double monotonic_s(void)
{
	struct timespec t;
	if (clock_gettime(CLOCK_MONOTONIC, &t) != 0)
		return 0.0;
	return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

void wall_start(struct wall_clock *c)
{
	c->start_monotonic_s = monotonic_s();
}

struct utc wall_now(const struct wall_clock *c)
{
	if (c->fixed && !c->running)
		return c->start;
	if (c->fixed)
		return utc_add_s(c->leap, c->start, monotonic_s() - c->start_monotonic_s);
	struct timespec t;
	if (clock_gettime(CLOCK_REALTIME, &t) != 0)
		return (struct utc){.mjd = MJD_OF_UNIX_ZERO};
	/* POSIX seconds have no leap second: each day is 86400 long */
	int64_t days = (int64_t)t.tv_sec / 86400, rest = (int64_t)t.tv_sec % 86400;
	if (rest < 0) {
		rest += 86400;
		days--;
	}
	return (struct utc){.mjd = (int32_t)(days + MJD_OF_UNIX_ZERO),
			    .sod_s = (double)rest + 1e-9 * (double)t.tv_nsec};
}
