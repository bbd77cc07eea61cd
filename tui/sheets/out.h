/* SPDX-License-Identifier: MIT
 * Where a result goes: standard output, or a file that is written whole or not at all. */
#ifndef WANE_TUI_SHEETS_OUT_H
#define WANE_TUI_SHEETS_OUT_H

#include "ephem/err.h"

#include <stdbool.h>
#include <stdio.h>

enum { OUT_PATH_MAX = 4096 };
struct out {
	FILE *file;      /* write here */
	bool to_stdout, force;
	int fd, dir_fd;  /* of the temporary file and of its folder; -1 */
	char name[256];  /* the file's name within the folder */
	char temp[320];
};

/* path NULL or "-": standard output. Else a temporary file beside the target (through symbolic links to what they point at), made with O_EXCL and
 * O_NOFOLLOW; its name holds the process id, and left-overs of dead processes older than an hour are swept. An existing target is refused
 * without force (ST_CONFLICT), as is anything but a regular file. Release with out_commit or out_abandon. */
MUST_USE enum status out_open(struct out *o, const char *path, bool force, struct err *e);
/* Whether two paths lead to one file: equal device and inode behind all links; where one does not exist yet, an equal name in one folder. */
bool out_same_file(const char *a, const char *b);
/* Everything written reaches the disk (file, name), or nothing of it: ST_IO with the reason and the old file whole. A replaced file's mode bits
 * are kept. Standard output: flushed and checked. */
MUST_USE enum status out_commit(struct out *o, struct err *e);
void out_abandon(struct out *o);

#endif
