/* SPDX-License-Identifier: MIT */
#include "tui/parts/term_guard.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/types.h>
#include <termios.h>
#include <unistd.h>

#if defined(__SANITIZE_ADDRESS__) || defined(__SANITIZE_THREAD__)
#define SANITIZED 1
#elif defined(__has_feature)
#if __has_feature(address_sanitizer) || __has_feature(thread_sanitizer) ||                                   \
    __has_feature(undefined_behavior_sanitizer)
#define SANITIZED 1
#endif
#endif
#ifndef SANITIZED
#define SANITIZED 0
#endif

static const int quiet[] = {SIGHUP, SIGTERM, SIGINT, SIGQUIT};
static const int crashes[] = {SIGSEGV, SIGABRT, SIGBUS, SIGFPE};
enum {
	QUIET = sizeof quiet / sizeof quiet[0],
	CRASHES = sizeof crashes / sizeof crashes[0],
	CRASH_STACK_BYTES = 65536
};

/* Handlers have nothing but globals to work with. */
static volatile sig_atomic_t end_asked, woken;
static struct {
	bool kept, started, leaving;
	struct termios modes;
	int error_fd; /* standard error as it was; -1 when it was left alone */
	FILE *said;   /* what goes there meanwhile */
	sigset_t mask;
	struct sigaction quiet[QUIET], crash[CRASHES], cont;
	void *crash_stack;
} guard = {.error_fd = -1};

static void on_quiet(int signal_number)
{
	(void)signal_number;
	end_asked = 1;
}

static void on_cont(int signal_number)
{
	(void)signal_number;
	woken = 1;
}

/* Bracketed paste off, cursor on, attributes off, main screen, normal keys. */
static const char restore[] = "\033[?2004l\033[?25h\033[0m\033[?1049l\033[?1l\033>\r\n";
static const char crash_text[] =
    "wane: crashed; the terminal was put back, the database keeps only whole changes\n";

/* Async-signal-safe calls only; the handler is already reset (SA_RESETHAND), so raise ends the process as the
 * signal would have. */
static void on_crash(int signal_number)
{
	ssize_t ignored = write(STDOUT_FILENO, restore, sizeof restore - 1);
	tcsetattr(STDIN_FILENO, TCSANOW, &guard.modes);
	ignored +=
	    write(guard.error_fd >= 0 ? guard.error_fd : STDERR_FILENO, crash_text, sizeof crash_text - 1);
	(void)ignored;
	raise(signal_number);
}

void guard_keep_terminal(void)
{
	guard.kept = tcgetattr(STDIN_FILENO, &guard.modes) == 0;
	guard.said = tmpfile();
	if (!guard.said)
		return;
	fflush(stderr);
	guard.error_fd = dup(STDERR_FILENO);
	if (guard.error_fd >= 0)
		dup2(fileno(guard.said), STDERR_FILENO);
}

static void start_crash_handlers(void)
{
	struct sigaction act = {.sa_handler = on_crash, .sa_flags = SA_ONSTACK | (int)SA_RESETHAND};
	sigemptyset(&act.sa_mask);
	guard.crash_stack = malloc(CRASH_STACK_BYTES);
	stack_t stack = {.ss_sp = guard.crash_stack, .ss_size = CRASH_STACK_BYTES};
	if (!guard.crash_stack || sigaltstack(&stack, NULL) != 0)
		act.sa_flags &= ~SA_ONSTACK;
	for (int i = 0; i < CRASHES; i++)
		sigaction(crashes[i], &act, &guard.crash[i]);
}

void guard_start(void)
{
	struct sigaction act = {.sa_handler = on_quiet};
	sigset_t block;
	sigemptyset(&act.sa_mask);
	sigemptyset(&block);
	for (int i = 0; i < QUIET; i++) {
		sigaction(quiet[i], &act, &guard.quiet[i]);
		sigaddset(&block, quiet[i]);
	}
	act.sa_handler = on_cont;
	sigaction(SIGCONT, &act, &guard.cont);
	sigaddset(&block, SIGCONT);
	sigaddset(&block, SIGWINCH);
	sigprocmask(SIG_BLOCK, &block, &guard.mask);
	if (!SANITIZED) /* they report crashes themselves */
		start_crash_handlers();
	end_asked = woken = 0;
	guard.started = true;
}

static void stop_handlers(void)
{
	/* a lost line signals more than once; the second must not cut short the way out */
	const struct sigaction ignore = {.sa_handler = SIG_IGN};
	for (int i = 0; i < QUIET; i++)
		sigaction(quiet[i], guard.leaving ? &ignore : &guard.quiet[i], NULL);
	sigaction(SIGCONT, &guard.cont, NULL);
	if (!SANITIZED) {
		stack_t none = {.ss_flags = SS_DISABLE};
		for (int i = 0; i < CRASHES; i++)
			sigaction(crashes[i], &guard.crash[i], NULL);
		sigaltstack(&none, NULL);
		free(guard.crash_stack);
	}
	sigprocmask(SIG_SETMASK, &guard.mask, NULL);
}

static void copy_said(void)
{
	char text[4096];
	size_t n;
	fflush(stderr);
	rewind(guard.said);
	while ((n = fread(text, 1, sizeof text, guard.said)) > 0)
		if (write(guard.error_fd, text, n) < 0)
			break;
}

void guard_give_back(void)
{
	if (guard.started)
		stop_handlers();
	if (guard.kept)
		tcsetattr(STDIN_FILENO, TCSANOW, &guard.modes);
	if (guard.error_fd >= 0) {
		copy_said();
		dup2(guard.error_fd, STDERR_FILENO);
		close(guard.error_fd);
	}
	if (guard.said)
		fclose(guard.said);
	memset(&guard, 0, sizeof guard);
	guard.error_fd = -1;
}

void guard_inside_mask(sigset_t *mask)
{
	*mask = guard.mask;
}

bool guard_take_end(void)
{
	bool asked = end_asked;
	end_asked = 0;
	guard.leaving |= asked;
	return asked;
}

void guard_leave(void)
{
	guard.leaving = true;
}

bool guard_take_woken(void)
{
	bool was = woken;
	woken = 0;
	return was;
}

bool guard_stop(void)
{
	/* the first process of a login, or a group whose parent is in another one, has nobody who could wake
	 * it; the kernel would not stop it */
	if (getsid(0) == getpid() || getsid(getppid()) != getsid(0))
		return false;
	return raise(SIGTSTP) == 0;
}
