/* SPDX-License-Identifier: MIT
 * Checks for cmocka tests. cmocka's own float comparison casts to float and can't tell two Julian dates seconds apart: never used. */
#ifndef WANE_TESTS_SUPPORT_CHECK_H
#define WANE_TESTS_SUPPORT_CHECK_H

#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>

/* |got - want| <= tolerance, else fails with name, source and both values (17 digits). Two NaN are equal; one NaN fails. */
void check_close_at(const char *file, int line, const char *what, double got, double want, double tolerance);
#define check_close(what, got, want, tolerance) check_close_at(__FILE__, __LINE__, what, got, want, tolerance)
/* Fails with a message, printf style. */
void check_fail_at(const char *file, int line, const char *format, ...) __attribute__((format(printf, 3, 4), noreturn));
#define check_fail(...) check_fail_at(__FILE__, __LINE__, __VA_ARGS__)

/* Random numbers for property loops: xorshift64*, seed from WANE_SEED or fixed; the seed is printed once. */
struct rng {
	uint64_t state;
};
struct rng rng_open(const char *loop_name);
double rng_unit(struct rng *r);                       /* [0, 1) */
double rng_between(struct rng *r, double lo, double hi);
/* Folder given by make check DATA=DIR (environment WANE_DATA); NULL when missing: skip with the citation. */
const char *data_folder(void);
/* Prints `SKIP: why` (the runner counts it) and skips the cmocka test. */
#define check_skip(why) do { print_message("SKIP: %s\n", why); skip(); } while (0)

#endif
