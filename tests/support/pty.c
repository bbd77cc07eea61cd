/* SPDX-License-Identifier: MIT */
#include "tests/support/pty.h"

#include "tests/support/check.h"

#include <errno.h>
#include <poll.h>
#include <pty.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/ioctl.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>
#include <utmp.h>

static double now_s(void)
{
	struct timespec t;
	clock_gettime(CLOCK_MONOTONIC, &t);
	return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

void pty_open(struct pty *t, char *const argv[], int rows, int cols, const char *term, const char *variable,
	      const char *value)
{
	struct winsize size = {.ws_row = (unsigned short)rows, .ws_col = (unsigned short)cols};
	*t = (struct pty){.seen = calloc(1, PTY_BYTES_MAX)};
	if (!t->seen)
		check_fail("no memory");
	int slave;
	if (openpty(&t->fd, &slave, NULL, NULL, &size) != 0)
		check_fail("openpty: %s", strerror(errno));
	tcgetattr(slave, &t->modes);
	t->child = fork();
	if (t->child < 0)
		check_fail("fork: %s", strerror(errno));
	if (t->child == 0) {
		close(t->fd);
		login_tty(slave);
		setenv("TERM", term, 1);
		if (variable)
			setenv(variable, value, 1);
		execv(argv[0], argv);
		_exit(127);
	}
	close(slave);
}

void pty_close(struct pty *t)
{
	if (t->child > 0) {
		kill(t->child, SIGKILL);
		waitpid(t->child, NULL, 0);
	}
	if (t->fd >= 0)
		close(t->fd);
	free(t->seen);
	*t = (struct pty){.fd = -1};
}

/* Takes what comes within a time; false at the end of the line. */
static bool take(struct pty *t, int wait_ms)
{
	struct pollfd p = {.fd = t->fd, .events = POLLIN};
	if (poll(&p, 1, wait_ms) <= 0)
		return true;
	char bytes[4096];
	ssize_t n = read(t->fd, bytes, sizeof bytes);
	if (n <= 0)
		return false;
	for (ssize_t i = 0; i < n; i++)
		if (bytes[i] && t->n + 1 < PTY_BYTES_MAX)
			t->seen[t->n++] = bytes[i];
	t->seen[t->n] = '\0';
	return true;
}

void pty_send(struct pty *t, const char *keys)
{
	t->mark = t->n;
	if (write(t->fd, keys, strlen(keys)) != (ssize_t)strlen(keys))
		check_fail("the terminal takes no keys");
}

void pty_resize(struct pty *t, int rows, int cols)
{
	struct winsize size = {.ws_row = (unsigned short)rows, .ws_col = (unsigned short)cols};
	t->mark = t->n;
	if (ioctl(t->fd, TIOCSWINSZ, &size) != 0)
		check_fail("TIOCSWINSZ: %s", strerror(errno));
}

static bool seen_since(const struct pty *t, const char *text)
{
	return strstr(t->seen + t->mark, text) != NULL;
}

static void give_up(struct pty *t, const char *text)
{
	print_error("%s\n", t->seen + t->mark);
	pty_close(t);
	check_fail("waited %d s for: %s", PTY_LIMIT_S, text);
}

void pty_wait(struct pty *t, const char *text)
{
	double until = now_s() + PTY_LIMIT_S;
	while (!seen_since(t, text))
		if (!take(t, 100) || now_s() > until)
			give_up(t, text);
}

void pty_screen(struct pty *t, const char *keys, const char *text)
{
	double until = now_s() + PTY_LIMIT_S, again = 0.0;
	pty_send(t, keys);
	while (!seen_since(t, text)) {
		if (now_s() > again) {
			if (write(t->fd, "\014", 1) != 1)
				give_up(t, text);
			again = now_s() + 2.0;
		}
		if (!take(t, 50) || now_s() > until)
			give_up(t, text);
	}
}

int pty_end(struct pty *t)
{
	double until = now_s() + PTY_LIMIT_S;
	int status;
	bool line = t->fd >= 0;
	for (;;) {
		if (line)
			line = take(t, 20);
		pid_t done = waitpid(t->child, &status, WNOHANG);
		if (done == t->child)
			break;
		if (now_s() > until)
			give_up(t, "the end of the program");
		if (!line)
			poll(NULL, 0, 20);
	}
	for (size_t before = t->n + 1; line && before != t->n;) {
		before = t->n;
		line = take(t, 50);
	}
	t->child = 0;
	return status;
}

/* Whether the last of some pairs of sequences is the one that takes back. */
static void expect_last(const struct pty *t, const char *on, const char *off)
{
	const char *last_on = NULL, *last_off = NULL;
	for (const char *p = t->seen; (p = strstr(p, on)); p++)
		last_on = p;
	for (const char *p = t->seen; (p = strstr(p, off)); p++)
		last_off = p;
	if (last_on && (!last_off || last_off < last_on))
		check_fail("the terminal keeps \\e%s", on + 1);
}

void pty_expect_restored(struct pty *t)
{
	struct termios modes;
	expect_last(t, "\033[?1049h", "\033[?1049l");
	expect_last(t, "\033[?25l", "\033[?25h");
	expect_last(t, "\033[?2004h", "\033[?2004l");
	expect_last(t, "\033[?1h", "\033[?1l");
	if (tcgetattr(t->fd, &modes) != 0)
		check_fail("tcgetattr: %s", strerror(errno));
	assert_int_equal(modes.c_lflag, t->modes.c_lflag);
	assert_int_equal(modes.c_iflag, t->modes.c_iflag);
	assert_int_equal(modes.c_oflag, t->modes.c_oflag);
}
