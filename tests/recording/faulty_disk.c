/* A disk that fails on command, under any program that is started with this library preloaded.
   The environment variable DISK_FAULT says how: "fsync" (nothing is forced out), "full" (no room), "broken"
   (no write succeeds). Files on descriptors 0 to 2 are left alone. */
#define _GNU_SOURCE
#include <dlfcn.h>
#include <errno.h>
#include <stdlib.h>
#include <string.h>
#include <sys/types.h>
#include <unistd.h>

static int fault(const char *name) {
    const char *now = getenv("DISK_FAULT");
    return now && strcmp(now, name) == 0;
}

static int refused(int fd) {
    if (fd <= 2) return 0;
    if (fault("full")) errno = ENOSPC;
    else if (fault("broken")) errno = EIO;
    else return 0;
    return 1;
}

#define NEXT(name) ((__typeof__(&name))dlsym(RTLD_NEXT, #name))

ssize_t write(int fd, const void *data, size_t size) { return refused(fd) ? -1 : NEXT(write)(fd, data, size); }
ssize_t pwrite(int fd, const void *data, size_t size, off_t at) {
    return refused(fd) ? -1 : NEXT(pwrite)(fd, data, size, at);
}
ssize_t pwrite64(int fd, const void *data, size_t size, off64_t at) {
    return refused(fd) ? -1 : NEXT(pwrite64)(fd, data, size, at);
}
int fsync(int fd) { if (fault("fsync")) { errno = EIO; return -1; } return NEXT(fsync)(fd); }
int fdatasync(int fd) { if (fault("fsync")) { errno = EIO; return -1; } return NEXT(fdatasync)(fd); }
