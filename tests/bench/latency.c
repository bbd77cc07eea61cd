/* SPDX-License-Identifier: MIT
 * From key to screen: the program itself on a pseudo-terminal of 200 x 60, with 10,000 invented targets
 * stored. Each key is sent when the screen is still; its time ends with the last byte that follows, its cost
 * is the bytes. `latency WANE [TARGETS]`. Figures only: machines differ and share their time; the budgets are
 * 16 ms and 2 kB for a move of the cursor. */
#include <fcntl.h>
#include <math.h>
#include <poll.h>
#include <pty.h>
#include <signal.h>
#include <stdbool.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

enum { TARGETS = 10000, ROWS = 60, COLS = 200, QUIET_MS = 60, KEYS_MAX = 300, OPEN_MS = 120000 };
#define PI 3.14159265358979323846
#define BUDGET_MS 16.0
#define BUDGET_BYTES 2000.0

static double now_ms(void)
{
	struct timespec t;
	clock_gettime(CLOCK_MONOTONIC, &t);
	return 1e3 * (double)t.tv_sec + 1e-6 * (double)t.tv_nsec;
}

static double random_between(uint64_t *state, double lo, double hi)
{
	*state ^= *state >> 12;
	*state ^= *state << 25;
	*state ^= *state >> 27;
	return lo + (hi - lo) * (double)((*state * 0x2545F4914F6CDD1Du) >> 11) * 0x1p-53;
}

static bool write_targets(const char *path, int n)
{
	uint64_t state = 20270201u * 0x9E3779B97F4A7C15u | 1u;
	FILE *f = fopen(path, "w");
	if (!f)
		return false;
	fputs("name,ra_deg,dec_deg,t0_jd,t0_err_d,time_scale,period_d,period_err_d,duration_h,k,mag\n", f);
	for (int i = 0; i < n; i++) {
		double ra = random_between(&state, 0.0, 360.0);
		double dec = asin(random_between(&state, -1.0, 1.0)) * 180.0 / PI;
		double t0 = 2458000.0 + random_between(&state, -500.0, 500.0);
		double t0_err = exp(random_between(&state, log(1e-4), log(3e-3)));
		double period = exp(random_between(&state, log(0.5), log(30.0)));
		double period_err = exp(random_between(&state, log(1e-7), log(1e-5)));
		fprintf(f, "Bench %d b,%.6f,%.6f,%.6f,%.6f,BJD_TDB,%.7f,%.8f,%.2f,0.1,%.1f\n", i, ra, dec, t0,
			t0_err, period, period_err, random_between(&state, 1.0, 6.0),
			random_between(&state, 8.0, 15.0));
	}
	return fclose(f) == 0;
}

static bool run(char *const argv[])
{
	int status = 0;
	pid_t child = fork();
	if (child == 0) {
		int nowhere = open("/dev/null", O_WRONLY);
		dup2(nowhere, STDOUT_FILENO);
		execv(argv[0], argv);
		_exit(127);
	}
	return child > 0 && waitpid(child, &status, 0) == child && WIFEXITED(status) &&
	       WEXITSTATUS(status) == 0;
}

/* Reads until nothing came for a while; *last_ms: when the last byte came. Returns the bytes. */
static size_t read_frame(int fd, int wait_ms, double *last_ms)
{
	char bytes[1 << 16];
	size_t n = 0;
	struct pollfd p = {.fd = fd, .events = POLLIN};
	while (poll(&p, 1, n ? QUIET_MS : wait_ms) > 0) {
		ssize_t got = read(fd, bytes, sizeof bytes);
		if (got <= 0)
			break;
		n += (size_t)got;
		*last_ms = now_ms();
	}
	return n;
}

static int rising(const void *a, const void *b)
{
	double x = *(const double *)a, y = *(const double *)b;
	return (x > y) - (x < y);
}

static void measure(int fd, const char *what, const char *keys, int times, bool budget)
{
	double ms[KEYS_MAX], bytes[KEYS_MAX];
	int n = 0;
	size_t kinds = strlen(keys);
	for (int i = 0; i < times && i < KEYS_MAX; i++) {
		double start = now_ms(), last = start;
		if (write(fd, keys + (size_t)i % kinds, 1) != 1)
			return;
		bytes[n] = (double)read_frame(fd, 2000, &last);
		ms[n++] = last - start;
	}
	qsort(ms, (size_t)n, sizeof ms[0], rising);
	qsort(bytes, (size_t)n, sizeof bytes[0], rising);
	printf("%-28s %3d keys: median %6.2f ms, worst %6.2f ms; median %5.0f B, worst %5.0f B", what, n,
	       ms[n / 2], ms[n - 1], bytes[n / 2], bytes[n - 1]);
	if (budget)
		printf("; of the budget: %.2f and %.2f", ms[n / 2] / BUDGET_MS, bytes[n / 2] / BUDGET_BYTES);
	printf("\n");
}

static int open_page(const char *wane, const char *db, pid_t *child)
{
	struct winsize size = {.ws_row = ROWS, .ws_col = COLS};
	int fd;
	*child = forkpty(&fd, NULL, NULL, &size);
	if (*child == 0) {
		setenv("TERM", "xterm-256color", 1);
		setenv("LC_ALL", "C.UTF-8", 1);
		unsetenv("NO_COLOR");
		execl(wane, wane, "--db", db, "--now", "2026-04-23T04:14:05Z", (char *)NULL);
		_exit(127);
	}
	return *child > 0 ? fd : -1;
}

int main(int argc, char **argv)
{
	if (argc < 2)
		return 2;
	char *wane = argv[1], folder[] = "/tmp/wane-latency-XXXXXX", db[64], csv[64];
	int n = argc > 2 ? (int)strtol(argv[2], NULL, 10) : TARGETS;
	if (!mkdtemp(folder))
		return 1;
	snprintf(db, sizeof db, "%s/wane.db", folder);
	snprintf(csv, sizeof csv, "%s/targets.csv", folder);
	char *site[] = {wane,	  "--db",	    db,	       "site",
			"add",	  "Tern Hill",	    "--place", "38.62,-109.36,2100",
			"--zone", "America/Denver", NULL};
	char *import[] = {wane, "--db", db, "import", csv, NULL};
	pid_t child = -1;
	int fd = -1;
	if (write_targets(csv, n) && run(site) && run(import)) {
		double start = now_ms(), last = start;
		fd = open_page(wane, db, &child);
		size_t bytes = fd >= 0 ? read_frame(fd, OPEN_MS, &last) : 0;
		printf("page of %d x %d, %d targets stored: open after %.0f ms, %zu B\n", COLS, ROWS, n,
		       last - start, bytes);
		measure(fd, "cursor down", "j", 200, true);
		measure(fd, "cursor up and down", "kj", 100, true);
		measure(fd, "page up and down", "\006\002", 40, false);
		measure(fd, "details and back", "\r", 20, false);
		measure(fd, "night after", ">", 10, false);
		kill(child, SIGTERM);
		waitpid(child, NULL, 0);
	}
	unlink(db);
	unlink(csv);
	rmdir(folder);
	return fd >= 0 ? 0 : 1;
}
