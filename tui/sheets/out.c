/* SPDX-License-Identifier: MIT */
#define _GNU_SOURCE /* renameat2 */
#include "tui/sheets/out.h"

#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum { TEMP_TRIES = 100, STALE_S = 3600 };
static const char temp_prefix[] = ".wane-out.";

static enum status refused(struct err *e, const char *path, int error)
{
	return err_set(e, error == EEXIST ? ST_CONFLICT : ST_IO, "%.300s: %s", path,
		       error == EEXIST ? "the file exists; --force replaces it" : strerror(error));
}

/* The file behind symbolic links; a path whose last part does not exist yet stays as it is. */
static enum status resolve(const char *path, char out[OUT_PATH_MAX], struct err *e)
{
	struct stat st;
	if (lstat(path, &st) == 0 && S_ISLNK(st.st_mode)) {
		char *whole = realpath(path, NULL);
		if (!whole)
			return refused(e, path, errno);
		size_t n = strlen(whole);
		if (n < OUT_PATH_MAX)
			memcpy(out, whole, n + 1);
		free(whole);
		return n < OUT_PATH_MAX ? ST_OK : refused(e, path, ENAMETOOLONG);
	}
	if (strlen(path) >= OUT_PATH_MAX)
		return refused(e, path, ENAMETOOLONG);
	memcpy(out, path, strlen(path) + 1);
	return ST_OK;
}

/* Device and inode of the folder that a path's last part stands in. */
static bool folder_of(const char *path, struct stat *st)
{
	const char *slash = strrchr(path, '/');
	char folder[OUT_PATH_MAX];
	size_t n = slash ? (size_t)(slash - path) : 0;
	if (n >= sizeof folder)
		return false;
	memcpy(folder, path, n);
	folder[n] = '\0';
	return stat(!slash ? "." : n == 0 ? "/" : folder, st) == 0;
}

bool out_same_file(const char *a, const char *b)
{
	struct stat of_a, of_b;
	bool is_a = stat(a, &of_a) == 0, is_b = stat(b, &of_b) == 0;
	if (is_a != is_b)
		return false;
	if (!is_a) { /* neither exists: the names decide */
		const char *name_a = strrchr(a, '/'), *name_b = strrchr(b, '/');
		if (strcmp(name_a ? name_a + 1 : a, name_b ? name_b + 1 : b) != 0 || !folder_of(a, &of_a) ||
		    !folder_of(b, &of_b))
			return false;
	}
	return of_a.st_dev == of_b.st_dev && of_a.st_ino == of_b.st_ino;
}

/* Folder opened, last part into o->name. */
static enum status open_folder(struct out *o, char *path, struct err *e)
{
	char *slash = strrchr(path, '/');
	const char *name = slash ? slash + 1 : path;
	if (!name[0])
		return refused(e, path, EISDIR);
	if (strlen(name) >= sizeof o->name)
		return refused(e, path, ENAMETOOLONG);
	snprintf(o->name, sizeof o->name, "%s", name);
	if (slash == path)
		slash[1] = '\0';
	else if (slash)
		*slash = '\0';
	o->dir_fd = open(slash ? path : ".", O_RDONLY | O_DIRECTORY | O_CLOEXEC);
	return o->dir_fd < 0 ? refused(e, slash ? path : ".", errno) : ST_OK;
}

/* Temporary files that a killed process left behind, judged by the clock of the file system. */
static void sweep_stale(const struct out *o)
{
	int fd = openat(o->dir_fd, ".", O_RDONLY | O_DIRECTORY | O_CLOEXEC);
	DIR *dir = fd < 0 ? NULL : fdopendir(fd);
	const struct dirent *entry;
	struct stat st, own;
	if (!dir) {
		if (fd >= 0)
			close(fd);
		return;
	}
	while (fstat(o->fd, &own) == 0 && (entry = readdir(dir)) != NULL) {
		if (strncmp(entry->d_name, temp_prefix, sizeof temp_prefix - 1) != 0)
			continue;
		long pid = strtol(entry->d_name + sizeof temp_prefix - 1, NULL, 10);
		if (pid <= 0 || kill((pid_t)pid, 0) == 0 || errno != ESRCH)
			continue;
		if (fstatat(o->dir_fd, entry->d_name, &st, AT_SYMLINK_NOFOLLOW) == 0 && S_ISREG(st.st_mode) &&
		    st.st_uid == getuid() && own.st_mtime - st.st_mtime > STALE_S)
			unlinkat(o->dir_fd, entry->d_name, 0);
	}
	closedir(dir);
}

static enum status make_temp(struct out *o, const char *path, mode_t mode, struct err *e)
{
	for (int i = 0; i < TEMP_TRIES; i++) {
		snprintf(o->temp, sizeof o->temp, "%s%ld.%d", temp_prefix, (long)getpid(), i);
		o->fd =
		    openat(o->dir_fd, o->temp, O_WRONLY | O_CREAT | O_EXCL | O_NOFOLLOW | O_CLOEXEC, mode);
		if (o->fd >= 0 || errno != EEXIST)
			break;
	}
	if (o->fd < 0) {
		o->temp[0] = '\0';
		return refused(e, path, errno);
	}
	int copy = dup(o->fd);
	o->file = copy < 0 ? NULL : fdopen(copy, "w");
	if (o->file)
		return ST_OK;
	int error = errno;
	if (copy >= 0)
		close(copy);
	return refused(e, path, error);
}

enum status out_open(struct out *o, const char *path, bool force, struct err *e)
{
	char whole[OUT_PATH_MAX] = "";
	struct stat st;
	*o = (struct out){.fd = -1, .dir_fd = -1, .force = force};
	if (!path || strcmp(path, "-") == 0) {
		o->to_stdout = true;
		o->file = stdout;
		return ST_OK;
	}
	enum status s = resolve(path, whole, e);
	if (s == ST_OK)
		s = open_folder(o, whole, e);
	if (s == ST_OK && fstatat(o->dir_fd, o->name, &st, AT_SYMLINK_NOFOLLOW) == 0) {
		if (!S_ISREG(st.st_mode))
			s = err_set(e, ST_IO, "%.300s: not a regular file", path);
		else if (!force)
			s = refused(e, path, EEXIST);
	}
	if (s == ST_OK)
		s = make_temp(o, path, 0666, e);
	if (s == ST_OK)
		sweep_stale(o);
	if (s != ST_OK)
		out_abandon(o);
	return s;
}

/* The new name: never over a file that appeared meanwhile, unless force. */
static int put_in_place(const struct out *o)
{
	if (o->force)
		return renameat(o->dir_fd, o->temp, o->dir_fd, o->name);
	if (renameat2(o->dir_fd, o->temp, o->dir_fd, o->name, RENAME_NOREPLACE) == 0)
		return 0;
	if (errno != EINVAL && errno != ENOSYS)
		return -1;
	/* a file system without that flag: a second link refuses an existing name too */
	if (linkat(o->dir_fd, o->temp, o->dir_fd, o->name, 0) != 0)
		return -1;
	return unlinkat(o->dir_fd, o->temp, 0);
}

static int flush_file(struct out *o)
{
	int bad = ferror(o->file) ? EIO : 0;
	if (fflush(o->file) != 0)
		bad = errno;
	if (fclose(o->file) != 0 && !bad)
		bad = errno;
	o->file = NULL;
	return bad;
}

enum status out_commit(struct out *o, struct err *e)
{
	struct stat st;
	if (o->to_stdout) {
		errno = 0;
		int flushed = fflush(stdout), error = errno;
		if (flushed != 0 || ferror(stdout))
			return err_set(e, ST_IO, "standard output: %s", strerror(error ? error : EIO));
		return ST_OK;
	}
	int error = flush_file(o);
	if (!error && o->force && fstatat(o->dir_fd, o->name, &st, AT_SYMLINK_NOFOLLOW) == 0 &&
	    fchmod(o->fd, st.st_mode & 07777) != 0)
		error = errno;
	if (!error && fsync(o->fd) != 0)
		error = errno;
	if (!error && close(o->fd) != 0)
		error = errno;
	else if (error)
		close(o->fd);
	o->fd = -1;
	if (!error && put_in_place(o) != 0)
		error = errno;
	else if (!error)
		o->temp[0] = '\0';
	if (!error && fsync(o->dir_fd) != 0 && errno != EINVAL)
		error = errno;
	enum status s = error ? refused(e, o->name, error) : ST_OK;
	out_abandon(o);
	return s;
}

void out_abandon(struct out *o)
{
	if (o->to_stdout)
		return;
	if (o->file)
		fclose(o->file);
	if (o->fd >= 0)
		close(o->fd);
	if (o->temp[0] && o->dir_fd >= 0)
		unlinkat(o->dir_fd, o->temp, 0);
	if (o->dir_fd >= 0)
		close(o->dir_fd);
	*o = (struct out){.fd = -1, .dir_fd = -1};
}
