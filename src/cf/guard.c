/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The first contact with a file happens in a child process: on a damaged file the NetCDF and HDF5 libraries
 * can crash, loop, or ask for all the memory there is.  The child opens the file and walks its header; what
 * becomes of it decides.  The parent has not touched the file before and forks with all signals held back, so
 * that no handler of the program's runs in the child.
 */
#include "cf/room.h"

#include <errno.h>
#include <fcntl.h>
#include <netcdf.h>
#include <poll.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

#define REMEDY "copy it again, or see what `ncdump -h` says of it"

/* What the child reports when it comes to its end. */
typedef struct verdict {
    unsigned magic; /* tells a whole report from none */
    int status;     /* of NetCDF */
} verdict;

enum { MAGIC = 0x57e71c01 };

/* Bytes of address space that the process has now; 0 where the system does not say. */
static size_t address_space(void)
{
    char line[128];
    int handle = open("/proc/self/statm", O_RDONLY | O_CLOEXEC);
    ssize_t length = handle < 0 ? -1 : read(handle, line, sizeof line - 1);

    if (handle >= 0)
        close(handle);
    if (length <= 0)
        return 0;
    line[length] = '\0';
    return (size_t)strtoull(line, NULL, 10) * (size_t)sysconf(_SC_PAGESIZE);
}

static void limit(int resource, rlim_t soft, rlim_t hard)
{
    struct rlimit set;

    if (getrlimit(resource, &set) != 0)
        return;
    if (set.rlim_max == RLIM_INFINITY || set.rlim_max > hard)
        set.rlim_max = hard;
    set.rlim_cur = set.rlim_max < soft ? set.rlim_max : soft;
    (void)setrlimit(resource, &set);
}

/*
 * The memory limit counts from what the process has already, since the child inherits that (and a sanitizer's
 * shadow, which is terabytes).  Without /proc there is no limit on memory.
 */
static void limit_child(const stericol_cf_guard_limits *limits)
{
    size_t inherited = address_space();

    limit(RLIMIT_CORE, 0, 0);
    limit(RLIMIT_CPU, limits->processor_seconds, limits->processor_seconds + 1);
    if (inherited != 0)
        limit(RLIMIT_AS, inherited + limits->memory, inherited + limits->memory);
}

static void default_signals(void)
{
    int signal_number;
    sigset_t none;

    for (signal_number = 1; signal_number < 32; signal_number++)
        (void)signal(signal_number, SIG_DFL); /* refused for two of them, which cannot be caught anyway */
    sigemptyset(&none);
    (void)sigprocmask(SIG_SETMASK, &none, NULL);
}

/* The child: silent, limited, and gone without flushing anything of the parent's. */
static _Noreturn void be_child(int report, const char *target, stericol_cf_guarded *look,
                               const stericol_cf_guard_limits *limits)
{
    verdict found = {.magic = MAGIC};
    int nowhere = open("/dev/null", O_RDWR);

    default_signals();
    if (nowhere >= 0) {
        (void)dup2(nowhere, STDOUT_FILENO);
        (void)dup2(nowhere, STDERR_FILENO);
    }
    limit_child(limits);
    found.status = look(target);
    while (write(report, &found, sizeof found) < 0 && errno == EINTR)
        ;
    _exit(0);
}

static long long milliseconds(void)
{
    struct timespec now;

    (void)clock_gettime(CLOCK_MONOTONIC, &now);
    return (long long)now.tv_sec * 1000 + now.tv_nsec / 1000000;
}

/* Waits until the child reports or its end of the pipe closes; false when the time is over. */
static bool wait_for(int report, unsigned seconds, verdict *found)
{
    const long long end = milliseconds() + (long long)seconds * 1000;
    struct pollfd waiting = {.fd = report, .events = POLLIN};

    for (;;) {
        long long left = end - milliseconds();
        int ready = left <= 0 ? 0 : poll(&waiting, 1, (int)left);

        if (ready > 0) {
            if (read(report, found, sizeof *found) != (ssize_t)sizeof *found)
                found->magic = 0;
            return true;
        }
        if (ready == 0)
            return false;
        if (errno != EINTR)
            return false;
    }
}

/* How the child ended: 0, or the signal that ended it; -1 where someone else collected it. */
static int collect(pid_t child)
{
    int ended;

    while (waitpid(child, &ended, 0) < 0) {
        if (errno != EINTR)
            return -1;
    }
    return WIFSIGNALED(ended) ? WTERMSIG(ended) : 0;
}

static stericol_status judge(stericol_context *context, const char *path, const verdict *found, bool in_time,
                             int ended)
{
    if (!in_time || ended == SIGXCPU)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, REMEDY,
                             "is damaged or not NetCDF: reading its header does not come to an end");
    if (found->magic == MAGIC && found->status == NC_NOERR)
        return STERICOL_OK;
    if (found->magic == MAGIC && found->status == NC_ENOMEM)
        return stericol_fail(
            context, STERICOL_INPUT, path, NULL, REMEDY,
            "is damaged or not NetCDF: its header asks for more memory than any header needs");
    if (found->magic == MAGIC && found->status == STERICOL_CF_BEYOND)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, REMEDY,
                             "is damaged or not NetCDF: its header holds more than any header needs");
    if (found->magic == MAGIC)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, REMEDY,
                             "is damaged or not NetCDF: its header cannot be read (%s)",
                             nc_strerror(found->status));
    if (ended == SIGINT || ended == SIGTERM || ended == SIGHUP)
        return stericol_fail(context, STERICOL_INTERRUPTED, path, NULL, NULL, "interrupted while opening");
    return stericol_fail(context, STERICOL_INPUT, path, NULL, REMEDY,
                         "is damaged or not NetCDF: the NetCDF library fails on its header");
}

stericol_status stericol_cf_guard(stericol_context *context, const char *path, const char *target,
                                  stericol_cf_guarded *look, const stericol_cf_guard_limits *limits)
{
    verdict found = {0};
    sigset_t all, before;
    int report[2], ended;
    bool in_time;
    pid_t child;

    if (pipe(report) != 0)
        return stericol_fail(context, STERICOL_INPUT, path, NULL, "close other programs",
                             "cannot be checked before it is opened (%s)", strerror(errno));
    sigfillset(&all);
    (void)pthread_sigmask(SIG_SETMASK, &all, &before);
    child = fork();
    if (child == 0) {
        close(report[0]);
        be_child(report[1], target, look, limits);
    }
    (void)pthread_sigmask(SIG_SETMASK, &before, NULL);
    close(report[1]);
    if (child < 0) {
        close(report[0]);
        return stericol_fail(context, STERICOL_MEMORY, path, NULL, "close other programs",
                             "no process can be started to check it (%s)", strerror(errno));
    }
    in_time = wait_for(report[0], limits->seconds, &found);
    close(report[0]);
    if (!in_time)
        (void)kill(child, SIGKILL);
    ended = collect(child);
    return judge(context, path, &found, in_time, ended);
}
