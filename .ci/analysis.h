/* SPDX-License-Identifier: MIT
 * Read before each file by the static analysis only: err_set returns the status that it is given, which the analyser can't see from outside. */
#include "ephem/err.h"
#define err_set(e, s, ...) ((void)(err_set)((e), (s), __VA_ARGS__), (s))
