/* SPDX-License-Identifier: MIT
 * Rows as arrays of typed cells, and the checksum of a row over the types and values of its cells. */
#ifndef WANE_DB_ROW_CRC_H
#define WANE_DB_ROW_CRC_H

#include "ephem/err.h"

#include <sqlite3.h>
#include <stddef.h>
#include <stdint.h>

enum cell_type { CELL_NULL, CELL_INT, CELL_REAL, CELL_TEXT };
struct cell {
	enum cell_type type;
	int length; /* of text [bytes] */
	union {
		int64_t i;
		double r;
		const char *text; /* borrowed */
	} u;
};
enum { ROW_CELLS_MAX = 64 };

struct cell cell_int(int64_t value);
/* NAN and infinities become NULL, -0 becomes 0: what SQLite would keep. */
struct cell cell_real(double value);
struct cell cell_text(const char *text);
/* NAN for NULL. */
double cell_number(const struct cell *c);

struct crc_table {
	uint32_t t[8][256];
};
/* CRC-32 (polynomial 0xEDB88320, as in ISO 3309), eight bytes at a time. */
void crc_table_fill(struct crc_table *table);
uint32_t crc_bytes(const struct crc_table *table, uint32_t crc, const void *data, size_t n);
/* Checksum of cell[n]. */
uint32_t row_crc(const struct crc_table *table, const struct cell *cell, size_t n);

/* Columns first .. first + n - 1 of the statement's row. Texts are borrowed until the statement is stepped or
 * reset. A blob, which nothing here writes, becomes a number that the checksum doesn't fit. */
void cells_read(sqlite3_stmt *stmt, int first, struct cell *cell, size_t n);
/* Binds cell[n] to the parameters from first on; texts must live until the statement is reset. */
MUST_USE enum status cells_bind(sqlite3_stmt *stmt, int first, const struct cell *cell, size_t n,
				struct err *e);

#endif
