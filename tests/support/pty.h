/* SPDX-License-Identifier: MIT
 * A program on a pseudo-terminal: what it writes is kept, keys and signals are sent, texts are waited for
 * (never a time). */
#ifndef WANE_TESTS_SUPPORT_PTY_H
#define WANE_TESTS_SUPPORT_PTY_H

#include <stdbool.h>
#include <stddef.h>
#include <sys/types.h>
#include <termios.h>

enum { PTY_BYTES_MAX = 1 << 21, PTY_LIMIT_S = 60 };
struct pty {
	pid_t child;
	int fd;
	char *seen; /* all bytes so far, NULs left out, NUL-terminated */
	size_t n, mark;
	struct termios modes; /* before the program began */
};
/* Starts argv on a terminal of a size and type; `variable`=`value` is put into its environment when variable
 * is not NULL. */
void pty_open(struct pty *t, char *const argv[], int rows, int cols, const char *term, const char *variable,
	      const char *value);
/* Ends the child if it still runs and lets go of everything. */
void pty_close(struct pty *t);
/* Sends keys; what is waited for afterwards must come after them. */
void pty_send(struct pty *t, const char *keys);
void pty_resize(struct pty *t, int rows, int cols);
/* Waits for a text among the bytes that came since the last pty_send or pty_resize; fails after PTY_LIMIT_S.
 */
void pty_wait(struct pty *t, const char *text);
/* Sends keys and then ^L again and again until the screen holds a text. */
void pty_screen(struct pty *t, const char *keys, const char *text);
/* Waits for the end of the child: its wait status. */
int pty_end(struct pty *t);
/* Fails unless the terminal is as it was: main screen, cursor shown, modes. */
void pty_expect_restored(struct pty *t);

#endif
