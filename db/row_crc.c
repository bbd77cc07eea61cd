/* SPDX-License-Identifier: MIT */
#include "db/row_crc.h"

#include <math.h>
#include <string.h>

struct cell cell_int(int64_t value)
{
	return (struct cell){.type = CELL_INT, .u.i = value};
}

struct cell cell_real(double value)
{
	if (!isfinite(value))
		return (struct cell){.type = CELL_NULL};
	return (struct cell){.type = CELL_REAL, .u.r = value + 0.0};
}

struct cell cell_text(const char *text)
{
	return (struct cell){.type = CELL_TEXT, .length = (int)strlen(text), .u.text = text};
}

double cell_number(const struct cell *c)
{
	return c->type == CELL_REAL ? c->u.r : c->type == CELL_INT ? (double)c->u.i : (double)NAN;
}

void crc_table_fill(struct crc_table *table)
{
	for (uint32_t i = 0; i < 256; i++) {
		uint32_t c = i;
		for (int bit = 0; bit < 8; bit++)
			c = c & 1 ? 0xEDB88320u ^ c >> 1 : c >> 1;
		table->t[0][i] = c;
	}
	for (uint32_t i = 0; i < 256; i++)
		for (int k = 1; k < 8; k++)
			table->t[k][i] = table->t[k - 1][i] >> 8 ^ table->t[0][table->t[k - 1][i] & 0xFF];
}

static uint32_t little_endian(const unsigned char *b)
{
	return (uint32_t)b[0] | (uint32_t)b[1] << 8 | (uint32_t)b[2] << 16 | (uint32_t)b[3] << 24;
}

uint32_t crc_bytes(const struct crc_table *table, uint32_t crc, const void *data, size_t n)
{
	const unsigned char *b = data;
	crc = ~crc;
	for (; n >= 8; n -= 8, b += 8) {
		uint32_t lo = crc ^ little_endian(b), hi = little_endian(b + 4);
		crc = table->t[7][lo & 0xFF] ^ table->t[6][lo >> 8 & 0xFF] ^ table->t[5][lo >> 16 & 0xFF] ^
		      table->t[4][lo >> 24] ^ table->t[3][hi & 0xFF] ^ table->t[2][hi >> 8 & 0xFF] ^
		      table->t[1][hi >> 16 & 0xFF] ^ table->t[0][hi >> 24];
	}
	for (; n > 0; n--, b++)
		crc = crc >> 8 ^ table->t[0][(crc ^ *b) & 0xFF];
	return ~crc;
}

/* Least significant byte first, so that the checksum is the same on every machine. */
static void store_64(unsigned char *out, uint64_t value)
{
	out[0] = (unsigned char)value;
	out[1] = (unsigned char)(value >> 8);
	out[2] = (unsigned char)(value >> 16);
	out[3] = (unsigned char)(value >> 24);
	out[4] = (unsigned char)(value >> 32);
	out[5] = (unsigned char)(value >> 40);
	out[6] = (unsigned char)(value >> 48);
	out[7] = (unsigned char)(value >> 56);
}

uint32_t row_crc(const struct crc_table *table, const struct cell *cell, size_t n)
{
	/* the fixed parts of the cells are gathered, texts are taken where they stand */
	unsigned char fixed[16 * ROW_CELLS_MAX];
	size_t used = 0;
	uint32_t crc = 0;
	for (size_t i = 0; i < n; i++) {
		if (used + 9 > sizeof fixed) {
			crc = crc_bytes(table, crc, fixed, used);
			used = 0;
		}
		fixed[used++] = (unsigned char)cell[i].type;
		uint64_t bits = 0;
		if (cell[i].type == CELL_NULL)
			continue;
		if (cell[i].type == CELL_INT)
			bits = (uint64_t)cell[i].u.i;
		else if (cell[i].type == CELL_REAL)
			memcpy(&bits, &cell[i].u.r, sizeof bits);
		else
			bits = (uint64_t)cell[i].length;
		store_64(fixed + used, bits);
		used += 8;
		if (cell[i].type == CELL_TEXT && cell[i].length > 0) {
			crc = crc_bytes(table, crc, fixed, used);
			used = 0;
			crc = crc_bytes(table, crc, cell[i].u.text, (size_t)cell[i].length);
		}
	}
	return crc_bytes(table, crc, fixed, used);
}

void cells_read(sqlite3_stmt *stmt, int first, struct cell *cell, size_t n)
{
	for (size_t i = 0; i < n; i++) {
		/* one call into the statement a column; the value belongs to this thread alone */
		sqlite3_value *value = sqlite3_column_value(stmt, first + (int)i);
		cell[i] = (struct cell){.type = CELL_NULL};
		switch (sqlite3_value_type(value)) {
		case SQLITE_INTEGER:
			cell[i] = cell_int(sqlite3_value_int64(value));
			break;
		case SQLITE_FLOAT:
			cell[i].type = CELL_REAL;
			cell[i].u.r = sqlite3_value_double(value);
			break;
		case SQLITE_TEXT: {
			const char *text = (const char *)sqlite3_value_text(value);
			cell[i].type = CELL_TEXT;
			cell[i].length = text ? sqlite3_value_bytes(value) : 0;
			cell[i].u.text = text ? text : "";
			break;
		}
		case SQLITE_BLOB: /* never written */
			cell[i] = cell_int(INT64_MIN);
			break;
		default:
			break;
		}
	}
}

enum status cells_bind(sqlite3_stmt *stmt, int first, const struct cell *cell, size_t n, struct err *e)
{
	for (size_t i = 0; i < n; i++) {
		int at = first + (int)i, rc = SQLITE_OK;
		switch (cell[i].type) {
		case CELL_NULL:
			rc = sqlite3_bind_null(stmt, at);
			break;
		case CELL_INT:
			rc = sqlite3_bind_int64(stmt, at, cell[i].u.i);
			break;
		case CELL_REAL:
			rc = sqlite3_bind_double(stmt, at, cell[i].u.r);
			break;
		case CELL_TEXT:
			rc = sqlite3_bind_text(stmt, at, cell[i].u.text, cell[i].length, SQLITE_STATIC);
			break;
		}
		if (rc != SQLITE_OK)
			return err_set(e, rc == SQLITE_NOMEM ? ST_MEMORY : ST_STORE,
				       "database: %s (binding value %d)", sqlite3_errstr(rc), at);
	}
	return ST_OK;
}
