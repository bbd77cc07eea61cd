/* SPDX-License-Identifier: MIT */
#include "tui/run_write.h"

enum status run_write_open(struct run *run, struct store **out, struct err *e)
{
	*out = run->store;
	if (!run->db_path[0])
		return run->store ? ST_OK : err_set(e, ST_ABSENT, "nothing is stored");
	enum status s = store_open(run->db_path, STORE_WRITE, out, e);
	if (s == ST_OK && store_read_only(*out)) {
		store_close(*out);
		return err_set(e, ST_STORE, "the database can't be written");
	}
	return s;
}

void run_write_close(struct run *run, struct store *s)
{
	if (s != run->store)
		store_close(s);
}
