/* SPDX-License-Identifier: MIT */
#include "tests/support/check.h"

#include "db/read_csv.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

/* Cells of a row as `[a][b]`, appended. */
static void show(const struct csv_row *row, char *out, size_t size)
{
	size_t used = strlen(out);
	for (size_t i = 0; i < row->n && used < size; i++)
		used += (size_t)snprintf(out + used, size - used, "[%s]", row->cell[i].text);
	if (used < size)
		snprintf(out + used, size - used, "\n");
}

/* Reads data from a block of exactly its size, so that a sanitizer sees any byte read behind it. The text:
 * header, rows, or
 * `! line:column: message` where it stops. */
static void read_whole(const char *data, size_t n, char *out, size_t size)
{
	char *block = malloc(n ? n : 1);
	assert_non_null(block);
	memcpy(block, data, n);
	struct csv *csv = NULL;
	struct csv_row row;
	struct err e = {0};
	long line = 0, column = 0;
	int more = 0;
	out[0] = '\0';
	if (csv_open(block, n, &csv, &line, &column, &e) == ST_OK) {
		show(csv_header(csv), out, size);
		while ((more = csv_next(csv, &row, &line, &column, &e)) != CSV_END && more != CSV_BROKEN) {
			if (more == CSV_ROW)
				show(&row, out, size);
			else
				snprintf(out + strlen(out), size - strlen(out), "? %ld:%ld\n", line, column);
		}
		if (more < 0) {
			struct err again;
			long l, c;
			assert_int_equal(csv_next(csv, &row, &l, &c, &again), 0);
		}
	} else {
		assert_null(csv);
		more = -1;
	}
	if (more < 0)
		snprintf(out + strlen(out), size - strlen(out), "! %ld:%ld: %s", line, column, e.text);
	csv_close(csv);
	free(block);
}

struct sample {
	const char *data, *want;
	size_t n; /* 0: up to the NUL */
};

static void run(const struct sample *rows, size_t n)
{
	for (size_t i = 0; i < n; i++) {
		char out[2048];
		read_whole(rows[i].data, rows[i].n ? rows[i].n : strlen(rows[i].data), out, sizeof out);
		/* an error is compared up to what the row gives of it */
		const char *fault = strchr(rows[i].want, '!');
		if (fault ? strncmp(out, rows[i].want, strlen(rows[i].want)) != 0
			  : strcmp(out, rows[i].want) != 0)
			check_fail("row %zu:\ngot  %s\nwant %s", i, out, rows[i].want);
	}
}
#define RUN(rows) run(rows, sizeof rows / sizeof rows[0])

static void test_rows(void **state)
{
	/* RFC 4180 section 2, rules 1 to 7, and its examples in our words */
	static const struct sample rows[] = {
	    {"a,b\nc,d\n", "[a][b]\n[c][d]\n", 0},
	    {"a,b\nc,d", "[a][b]\n[c][d]\n", 0},
	    {"a,b\r\nc,d\r\n", "[a][b]\n[c][d]\n", 0},
	    {"a,b\rc,d\r", "[a][b]\n[c][d]\n", 0},
	    {"a,b\n\"c\",\"d,e\"\n", "[a][b]\n[c][d,e]\n", 0},
	    {"a,b\n\"c\"\"c\",\"\"\n", "[a][b]\n[c\"c][]\n", 0},
	    {"a,b\n\"c\nc\",d\n", "[a][b]\n[c\nc][d]\n", 0},
	    {"a,b\n,\n", "[a][b]\n[][]\n", 0},
	    {"a,b\n1,", "[a][b]\n[1][]\n", 0},
	    {"a,b\n 1 , 2\n", "[a][b]\n[ 1 ][ 2]\n", 0},
	    {"a,b\n\n\n1,2\n   \n3,4\n\n", "[a][b]\n[1][2]\n[3][4]\n", 0},
	    {"a,b\n1\n1,2,3\n", "[a][b]\n[1]\n[1][2][3]\n", 0},
	    {"\xEF\xBB\xBF"
	     "a,b\n1,2\n",
	     "[a][b]\n[1][2]\n", 0},
	    {"a,b\n#x,y\n1,2\n# z\n3,4\n", "[a][b]\n[1][2]\n[3][4]\n", 0},
	    {"a,b\n\"#x\",y\n", "[a][b]\n[#x][y]\n", 0},
	    {"a,b\n", "[a][b]\n", 0},
	    {"a", "[a]\n", 0},
	};
	(void)state;
	RUN(rows);
}

static void test_separators(void **state)
{
	static const struct sample rows[] = {
	    {"a;b;c\n1,5;2;3\n", "[a][b][c]\n[1,5][2][3]\n", 0},
	    {"a\tb\tc\n1\t\t3\n", "[a][b][c]\n[1][][3]\n", 0},
	    {"a\tb\tc\n\t\t\n", "[a][b][c]\n[][][]\n", 0},
	    {"\"a;b;c\",d\n1,2\n", "[a;b;c][d]\n[1][2]\n", 0},
	    {"a,b;c,d\n1,2,3\n", "[a][b;c][d]\n[1][2][3]\n", 0},
	};
	(void)state;
	RUN(rows);
}

static void test_header(void **state)
{
	static const struct sample rows[] = {
	    {"# name,ra\n1,2\n", "[name][ra]\n[1][2]\n", 0},
	    {"# a table\n# name,ra\n# \n\nx,2\n", "! 5:1: no header", 0},
	    {"# a table\n# name,ra\nx,2\n", "[name][ra]\n[x][2]\n", 0},
	    {"#name;ra;dec\nx;2;3\n", "[name][ra][dec]\n[x][2][3]\n", 0},
	    {"## name,ra\nx,12:30:00\n", "[name][ra]\n[x][12:30:00]\n", 0},
	    {"# one,two\n# name,ra,dec\nx,-1e5\n", "! 3:1: no header", 0},
	    {"# a comment, with a comma\nname,ra\nx,1\n", "[name][ra]\n[x][1]\n", 0},
	    {"x,1\ny,2\n", "! 1:1: no header: the first row holds numbers", 0},
	    {"# name,ra\n", "[name][ra]\n", 0},
	    {"# \"x,1\ny,2\n", "! 2:1: no header", 0},
	};
	(void)state;
	RUN(rows);
}

static void test_faults(void **state)
{
	static const struct sample rows[] = {
	    {"a,b\n1,\"2\n3,4\n", "[a][b]\n! 2:3: the quote that opens this cell is never closed", 0},
	    {"a,b\n1,2\n\"x\"y,\"4\n5,6\n", "[a][b]\n[1][2]\n? 3:4\n[5][6]\n", 0},
	    {"a,b\n1,2\nx\"y,4\n5,6\n", "[a][b]\n[1][2]\n? 3:2\n[5][6]\n", 0},
	    {"a,b\n1,2\0\n5,6\n", "[a][b]\n? 2:4\n[5][6]\n", 13},
	    /* a NUL in a quoted cell of two lines: what follows stays in step */
	    {"a,b\n\"1\0\n\",2\n5,6\n", "[a][b]\n? 2:3\n[5][6]\n", 16},
	    /* a row that can't be read does not hide a quote that is never closed */
	    {"a,b\n1\0,\"2\n5,6\n", "[a][b]\n! 2:4: the quote that opens", 14},
	    {"\"a,b\n1,2\n", "! 1:1: the quote that opens", 0},
	    {"a\"b,c\n", "! 1:2: a quote inside", 0},
	    {"", "! 1:1: the file is empty", 0},
	    {"\n\n  \n", "! 4:1: the table is empty", 0},
	    {"# only\n#\n", "! 2:2: the table is empty", 0},
	};
	(void)state;
	RUN(rows);
}

static void test_kinds_of_files(void **state)
{
	static const struct {
		const char *data;
		size_t n;
		const char *says;
	} rows[] = {
	    {"\xFF\xFE"
	     "a\0,\0",
	     6, "UTF-16"},
	    {"\xFE\xFF\0a", 4, "UTF-16"},
	    {"\xFF\xFE\0\0", 4, "UTF-32"},
	    {"a\0,\0b\0", 6, "UTF-16"},
	    {"\x1F\x8B\x08", 3, "gzip"},
	    {"PK\x03\x04", 4, "zip"},
	    {"BZh9", 4, "bzip2"},
	    {"\x7F"
	     "ELF",
	     4, "program"},
	    {"%PDF-1.4", 8, "PDF"},
	    {"SIMPLE  =   T", 13, "FITS"},
	    {"<?xml ", 6, "XML"},
	    {"SQLite format 3\0", 16, "database"},
	    {"\xFD"
	     "7zXZ\0",
	     6, "xz"},
	    {"\x89PNG\r\n", 6, "picture"},
	    {"", 0, "empty"},
	};
	(void)state;
	for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
		const char *says = file_looks_like(rows[i].data, rows[i].n);
		if (!says || !strstr(says, rows[i].says))
			check_fail("row %zu: %s", i, says ? says : "looks like text");
	}
	assert_null(file_looks_like("name,ra\n", 8));
	assert_null(file_looks_like("\xEF\xBB\xBFname", 7));
	assert_null(file_looks_like("a", 1));
}

static void test_places(void **state)
{
	static const char data[] = "name,note\r\nx,\"two\nlines\"\n# c\ny,z\n";
	static const struct {
		long line, column;
	} want[] = {{2, 1}, {2, 3}, {5, 1}, {5, 3}};
	struct csv *csv;
	struct csv_row row;
	struct err e;
	long line, column;
	size_t k = 0;
	(void)state;
	assert_int_equal(csv_open(data, sizeof data - 1, &csv, &line, &column, &e), ST_OK);
	assert_int_equal(csv_header(csv)->line, 1);
	assert_int_equal(csv_header(csv)->cell[1].column, 6);
	while (csv_next(csv, &row, &line, &column, &e) > 0)
		for (size_t i = 0; i < row.n; i++, k++) {
			assert_int_equal(row.cell[i].line, want[k].line);
			assert_int_equal(row.cell[i].column, want[k].column);
			assert_int_equal(row.cell[i].length, strlen(row.cell[i].text));
		}
	assert_int_equal(k, 4);
	csv_close(csv);
}

static void test_limits(void **state)
{
	char *data = malloc(CSV_CELL_BYTES_MAX + 64), out[256];
	(void)state;
	assert_non_null(data);
	/* a cell of exactly the limit, then one more byte */
	for (int more = 0; more < 2; more++) {
		size_t n = 0;
		memcpy(data, "a,b\nx,", 6);
		n = 6;
		memset(data + n, 'y', (size_t)CSV_CELL_BYTES_MAX + (size_t)more);
		n += (size_t)CSV_CELL_BYTES_MAX + (size_t)more;
		struct csv *csv;
		struct csv_row row;
		struct err e;
		long line, column;
		assert_int_equal(csv_open(data, n, &csv, &line, &column, &e), ST_OK);
		assert_int_equal(csv_next(csv, &row, &line, &column, &e), more ? CSV_BAD_ROW : CSV_ROW);
		if (more)
			assert_int_equal(line * 100 + column, 203);
		csv_close(csv);
	}
	for (int more = 0; more < 2; more++) {
		size_t n = (size_t)CSV_CELLS_MAX + (size_t)more - 1;
		memset(data, ',', n);
		read_whole(data, n, out, sizeof out);
		assert_int_equal(strstr(out, "too many cells") != NULL, more);
	}
	free(data);
}

static void test_file_read(void **state)
{
	char folder[] = "/tmp/wane-test-XXXXXX", path[64], *data;
	size_t n;
	struct err e;
	(void)state;
	assert_non_null(mkdtemp(folder));
	snprintf(path, sizeof path, "%s/a.csv", folder);
	assert_int_equal(file_read(path, &data, &n, &e), ST_ABSENT);
	FILE *f = fopen(path, "w");
	assert_non_null(f);
	assert_int_equal(fwrite("a,b\n\0c", 1, 6, f), 6);
	assert_int_equal(fclose(f), 0);
	assert_int_equal(file_read(path, &data, &n, &e), ST_OK);
	assert_int_equal(n, 6);
	assert_memory_equal(data, "a,b\n\0c", 6);
	free(data);
	assert_int_equal(file_read(folder, &data, &n, &e), ST_IO);
	assert_non_null(strstr(e.text, "folder"));
	assert_int_equal(unlink(path), 0);
	assert_int_equal(mkfifo(path, 0600), 0);
	assert_int_equal(file_read(path, &data, &n, &e), ST_IO); /* and does not hang */
	assert_non_null(strstr(e.text, "regular"));
	assert_int_equal(file_read("/dev/zero", &data, &n, &e), ST_IO);
	assert_int_equal(unlink(path), 0);
	/* a hole of just over 64 MiB takes no space on the disk */
	f = fopen(path, "w");
	assert_non_null(f);
	assert_int_equal(fclose(f), 0);
	assert_int_equal(truncate(path, (off_t)CSV_FILE_BYTES_MAX + 1), 0);
	assert_int_equal(file_read(path, &data, &n, &e), ST_IO);
	assert_non_null(strstr(e.text, "64 MiB"));
	assert_null(data);
	assert_int_equal(unlink(path), 0);
	assert_int_equal(rmdir(folder), 0);
}

/* Any bytes: the reader ends, and never reads beyond them. */
static void test_any_bytes(void **state)
{
	static const char pieces[] = "a1,;\t\"\"\n\r# \0";
	struct rng r = rng_open("read_csv");
	(void)state;
	for (int turn = 0; turn < 20000; turn++) {
		char data[40], out[512];
		size_t n = (size_t)rng_between(&r, 0, sizeof data);
		for (size_t i = 0; i < n; i++)
			data[i] = pieces[(size_t)rng_between(&r, 0, sizeof pieces - 1)];
		read_whole(data, n, out, sizeof out);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
	    cmocka_unit_test(test_rows),	   cmocka_unit_test(test_separators),
	    cmocka_unit_test(test_header),	   cmocka_unit_test(test_faults),
	    cmocka_unit_test(test_kinds_of_files), cmocka_unit_test(test_places),
	    cmocka_unit_test(test_limits),	   cmocka_unit_test(test_file_read),
	    cmocka_unit_test(test_any_bytes),
	};
	return cmocka_run_group_tests_name("read_csv", tests, NULL, NULL);
}
