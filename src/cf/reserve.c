/* SPDX-License-Identifier: GPL-3.0-or-later */
#if defined(__linux__)
#define _GNU_SOURCE /* fallocate() */
#endif

#include "cf/staging.h"

#include <errno.h>
#include <fcntl.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <sys/statvfs.h>

/* Asks for blocks without changing the file's size; EOPNOTSUPP where the system or the file system cannot. */
static int allocate(int handle, off_t bytes)
{
#if defined(__linux__)
    while (fallocate(handle, FALLOC_FL_KEEP_SIZE, 0, bytes) != 0)
        if (errno != EINTR)
            return errno == ENOSPC || errno == EDQUOT || errno == EFBIG ? errno : EOPNOTSUPP;
    return 0;
#else
    (void)handle;
    (void)bytes;
    return EOPNOTSUPP;
#endif
}

int stericol_cf_reserve(int handle, unsigned long long *held, unsigned long long more)
{
    struct statvfs disk;
    struct rlimit limit;
    struct stat now;
    unsigned long long wanted;

    if (fstat(handle, &now) != 0)
        return errno;
    wanted = (unsigned long long)now.st_size + more;
    if (wanted <= *held)
        return 0;
    if (getrlimit(RLIMIT_FSIZE, &limit) == 0 && limit.rlim_cur != RLIM_INFINITY && wanted > limit.rlim_cur)
        return EFBIG;
    switch (allocate(handle, (off_t)wanted)) {
    case 0:
        *held = wanted;
        return 0;
    case EOPNOTSUPP:
        break;
    default:
        return errno;
    }
    if (fstatvfs(handle, &disk) == 0 && disk.f_frsize > 0 && disk.f_bavail < more / disk.f_frsize + 1)
        return ENOSPC;
    return 0;
}
