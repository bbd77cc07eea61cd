/* SPDX-License-Identifier: MIT
 * What every fuzz target asserts with: a broken property says itself and stops the run, so that the fuzzer
 * keeps the input. */
#ifndef WANE_TESTS_FUZZ_PROPERTY_H
#define WANE_TESTS_FUZZ_PROPERTY_H

#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);

static inline void property_at(const char *file, int line, const char *text, int holds)
{
	if (!holds) {
		fprintf(stderr, "%s:%d: broken: %s\n", file, line, text);
		abort();
	}
}
#define property(holds) property_at(__FILE__, __LINE__, #holds, (holds) ? 1 : 0)

/* The bytes in a block of exactly their size, so that a read past the end is seen. NULL for none. */
static inline char *exact_copy(const uint8_t *data, size_t size)
{
	char *copy = size ? malloc(size) : NULL;
	for (size_t i = 0; copy && i < size; i++)
		copy[i] = (char)data[i];
	return copy;
}

#endif
