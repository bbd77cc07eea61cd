/* SPDX-License-Identifier: MIT */
#include "db/read_csv.h"

#include <errno.h>
#include <fcntl.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

struct magic {
	const char *bytes;
	size_t n, at;
	const char *says;
};

const char *file_looks_like(const char *data, size_t n)
{
	static const struct magic kinds[] = {
	    {"\xFF\xFE\0\0", 4, 0, "this is UTF-32 text: save it as UTF-8"},
	    {"\0\0\xFE\xFF", 4, 0, "this is UTF-32 text: save it as UTF-8"},
	    {"\xFF\xFE", 2, 0, "this is UTF-16 text: save it as UTF-8"},
	    {"\xFE\xFF", 2, 0, "this is UTF-16 text: save it as UTF-8"},
	    {"\x1F\x8B", 2, 0, "this is a gzip file: unpack it first"},
	    {"PK\x03\x04", 4, 0, "this is a zip file or a spreadsheet: save the sheet as CSV"},
	    {"BZh", 3, 0, "this is a bzip2 file: unpack it first"},
	    {"\xFD"
	     "7zXZ",
	     5, 0, "this is an xz file: unpack it first"},
	    {"\x28\xB5\x2F\xFD", 4, 0, "this is a zstd file: unpack it first"},
	    {"\x7F"
	     "ELF",
	     4, 0, "this is a program"},
	    {"%PDF", 4, 0, "this is a PDF"},
	    {"\x89PNG", 4, 0, "this is a picture"},
	    {"\xD0\xCF\x11\xE0", 4, 0, "this is an old spreadsheet or document: save the sheet as CSV"},
	    {"SIMPLE  =", 9, 0, "this is a FITS file"},
	    {"SQLite format 3", 16, 0, "this is a database"},
	    {"<", 1, 0, "this is XML or HTML"},
	};
	if (n == 0)
		return "the file is empty";
	for (size_t i = 0; i < sizeof kinds / sizeof kinds[0]; i++)
		if (n >= kinds[i].n && memcmp(data, kinds[i].bytes, kinds[i].n) == 0)
			return kinds[i].says;
	if (n >= 4 && n % 2 == 0 &&
	    ((data[0] == '\0' && data[2] == '\0') || (data[1] == '\0' && data[3] == '\0')))
		return "this is UTF-16 text: save it as UTF-8";
	return NULL;
}

static enum status read_all(int fd, const char *path, size_t room, char **data, size_t *n, struct err *e)
{
	char *block = malloc(room);
	size_t used = 0;
	enum status s = ST_OK;
	if (!block)
		return err_set(e, ST_MEMORY, "no memory to read %s", path);
	for (;;) {
		if (used == room) {
			char *larger = room > CSV_FILE_BYTES_MAX ? NULL : realloc(block, 2 * room);
			if (!larger) {
				s = err_set(e, room > CSV_FILE_BYTES_MAX ? ST_IO : ST_MEMORY,
					    room > CSV_FILE_BYTES_MAX ? "%s: larger than 64 MiB"
								      : "no memory to read %s",
					    path);
				break;
			}
			block = larger;
			room *= 2;
		}
		ssize_t got = read(fd, block + used, room - used);
		if (got < 0 && errno == EINTR)
			continue;
		if (got < 0)
			s = err_set(e, ST_IO, "%s: %s", path, strerror(errno));
		if (got <= 0)
			break;
		used += (size_t)got;
	}
	if (s == ST_OK && used > CSV_FILE_BYTES_MAX)
		s = err_set(e, ST_IO, "%s: larger than 64 MiB", path);
	if (s != ST_OK) {
		free(block);
		return s;
	}
	*data = block;
	*n = used;
	return ST_OK;
}

enum status file_read(const char *path, char **data, size_t *n, struct err *e)
{
	*data = NULL;
	*n = 0;
	if (strcmp(path, "-") == 0)
		return read_all(STDIN_FILENO, "standard input", 65536, data, n, e);
	int fd = open(path, O_RDONLY | O_CLOEXEC | O_NONBLOCK | O_NOCTTY); /* a pipe must not hang here */
	if (fd < 0)
		return err_set(e, errno == ENOENT ? ST_ABSENT : ST_IO, "%s: %s", path, strerror(errno));
	struct stat st;
	enum status s;
	if (fstat(fd, &st) != 0)
		s = err_set(e, ST_IO, "%s: %s", path, strerror(errno));
	else if (S_ISDIR(st.st_mode))
		s = err_set(e, ST_IO, "%s: this is a folder", path);
	else if (!S_ISREG(st.st_mode))
		s = err_set(e, ST_IO, "%s: not a regular file (`-` reads standard input)", path);
	else if (st.st_size > CSV_FILE_BYTES_MAX)
		s = err_set(e, ST_IO, "%s: larger than 64 MiB", path);
	else
		s = read_all(fd, path, (size_t)st.st_size + 1, data, n, e);
	close(fd);
	return s;
}
