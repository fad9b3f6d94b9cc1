/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What /proc and the control groups say: CPU quota and free memory. */
#include "base/text.h"
#include "job/memory.h"
#include "job/room.h"
#include "job/workers.h"

#include <limits.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <unistd.h>

enum { LONGEST_PATH = 4096, LONGEST_LINE = 4096 };

/* ---- small files ---- */

static FILE *open_under(const char *root, const char *path)
{
    char whole[LONGEST_PATH];
    int length = snprintf(whole, sizeof whole, "%s%s", root, path);

    return length < 0 || (size_t)length >= sizeof whole ? NULL : fopen(whole, "r");
}

bool stericol_system_line(const char *root, const char *path, char *line, size_t room)
{
    FILE *file = open_under(root, path);
    bool good;

    if (file == NULL)
        return false;
    good = fgets(line, room > INT_MAX ? INT_MAX : (int)room, file) != NULL;
    fclose(file);
    if (good)
        line[strcspn(line, "\n")] = '\0';
    return good;
}

bool stericol_system_value(const char *root, const char *path, const char *key, unsigned long long *value)
{
    FILE *file = open_under(root, path);
    char line[LONGEST_LINE];
    size_t length = strlen(key);
    bool found = false;

    if (file == NULL)
        return false;
    while (!found && fgets(line, sizeof line, file) != NULL)
        if (strncmp(line, key, length) == 0 && (line[length] == ' ' || line[length] == '\t')) {
            const char *digits = line + length + strspn(line + length, " \t");
            char *end;

            *value = strtoull(digits, &end, 10);
            found = end != digits;
        }
    fclose(file);
    return found;
}

/* ---- control groups ---- */

/* Whether `list`, "cpu,cpuacct", names the controller. */
static bool names_controller(const char *list, const char *controller)
{
    size_t length = strlen(controller);

    while (*list != '\0') {
        size_t part = strcspn(list, ",");

        if (part == length && strncmp(list, controller, length) == 0)
            return true;
        list += part + (list[part] == ',');
    }
    return false;
}

/* Visits mount/group and what lies above it; inside a container the group may not be seen, the mount point
 * is. */
static void visit_upwards(const char *root, int version, const char *mount, const char *group,
                          stericol_group_visit *visit, void *user)
{
    char folder[LONGEST_PATH];
    size_t top = strlen(mount);
    int length = snprintf(folder, sizeof folder, "%s%s", mount, strcmp(group, "/") == 0 ? "" : group);

    if (length < 0 || (size_t)length >= sizeof folder)
        return;
    for (;;) {
        char *slash;

        visit(user, root, version, folder);
        slash = strrchr(folder, '/');
        if (strlen(folder) <= top || slash == NULL)
            return;
        *slash = '\0';
    }
}

/* The places where systemd and the container engines mount them. */
void stericol_visit_groups(const char *root, const char *controller, stericol_group_visit *visit, void *user)
{
    FILE *file = open_under(root, "/proc/self/cgroup");
    char line[LONGEST_LINE], mount[LONGEST_PATH];

    if (file == NULL)
        return;
    while (fgets(line, sizeof line, file) != NULL) {
        char *list = strchr(line, ':'), *group = list == NULL ? NULL : strchr(list + 1, ':');

        if (group == NULL)
            continue;
        line[strcspn(line, "\n")] = '\0';
        *list++ = '\0';
        *group++ = '\0';
        if (*list == '\0') {
            visit_upwards(root, 2, "/sys/fs/cgroup", group, visit, user);
            visit_upwards(root, 2, "/sys/fs/cgroup/unified", group, visit, user);
        } else if (names_controller(list, controller)) {
            snprintf(mount, sizeof mount, "/sys/fs/cgroup/%s", list);
            visit_upwards(root, 1, mount, group, visit, user);
            snprintf(mount, sizeof mount, "/sys/fs/cgroup/%s", controller);
            visit_upwards(root, 1, mount, group, visit, user);
        }
    }
    fclose(file);
}

/* A number that is the whole first line of folder/name; false for "max" and what is not there. */
static bool group_number(const char *root, const char *folder, const char *name, unsigned long long *value)
{
    char path[LONGEST_PATH], line[64];
    long long number;
    int length = snprintf(path, sizeof path, "%s/%s", folder, name);

    if (length < 0 || (size_t)length >= sizeof path || !stericol_system_line(root, path, line, sizeof line) ||
        !stericol_parse_whole(line, 0, LLONG_MAX, &number))
        return false;
    *value = (unsigned long long)number;
    return true;
}

/* ---- CPU quota ---- */

static void least_quota(void *user, const char *root, int version, const char *folder)
{
    size_t *least = user;
    unsigned long long quota = 0, period = 0;
    size_t cpus;

    if (version == 2) {
        char path[LONGEST_PATH], line[64];
        int length = snprintf(path, sizeof path, "%s/cpu.max", folder);

        if (length < 0 || (size_t)length >= sizeof path ||
            !stericol_system_line(root, path, line, sizeof line) ||
            sscanf(line, "%llu %llu", &quota, &period) != 2)
            return;
    } else if (!group_number(root, folder, "cpu.cfs_quota_us", &quota) ||
               !group_number(root, folder, "cpu.cfs_period_us", &period)) {
        return;
    }
    if (quota == 0 || period == 0 || quota / period >= SIZE_MAX)
        return;
    cpus = (size_t)(quota / period + (quota % period != 0));
    if (*least == 0 || cpus < *least)
        *least = cpus;
}

size_t stericol_cpu_quota(const char *root)
{
    size_t least = 0;

    stericol_visit_groups(root, "cpu", least_quota, &least);
    return least;
}

/* ---- memory ---- */

typedef struct bound {
    bool known;
    unsigned long long bytes;
} bound;

static void lower_bound(bound *least, unsigned long long limit, unsigned long long used)
{
    unsigned long long left = limit > used ? limit - used : 0;

    if (!least->known || left < least->bytes)
        *least = (bound){true, left};
}

/* File pages that were not used lately are given back before a limit bites. */
static unsigned long long less_reclaimable(const char *root, const char *folder, const char *key,
                                           unsigned long long used)
{
    char path[LONGEST_PATH];
    unsigned long long pages;
    int length = snprintf(path, sizeof path, "%s/memory.stat", folder);

    if (length < 0 || (size_t)length >= sizeof path || !stericol_system_value(root, path, key, &pages))
        return used;
    return used > pages ? used - pages : 0;
}

static void least_memory(void *user, const char *root, int version, const char *folder)
{
    static const char *const limits[3][3] = {
        {NULL}, {"memory.limit_in_bytes"}, {"memory.max", "memory.high"}};
    unsigned long long limit, used;

    if (!group_number(root, folder, version == 2 ? "memory.current" : "memory.usage_in_bytes", &used))
        return;
    used = less_reclaimable(root, folder, version == 2 ? "inactive_file" : "total_inactive_file", used);
    for (size_t i = 0; limits[version][i] != NULL; i++)
        if (group_number(root, folder, limits[version][i], &limit))
            lower_bound(user, limit, used);
}

size_t stericol_free_memory_within(const char *root, size_t address_space)
{
    bound least = {0};
    unsigned long long value;
    char line[128];

    if (stericol_system_value(root, "/proc/meminfo", "MemAvailable:", &value) && value <= ULLONG_MAX / 1024)
        lower_bound(&least, value * 1024, 0);
    stericol_visit_groups(root, "memory", least_memory, &least);
    if (address_space != SIZE_MAX && stericol_system_line(root, "/proc/self/statm", line, sizeof line) &&
        sscanf(line, "%llu", &value) == 1)
        lower_bound(&least, address_space, value * (unsigned long long)sysconf(_SC_PAGESIZE));
    if (!least.known)
        return 0;
    if (least.bytes == 0)
        return 1; /* none left is not the same as not known */
    return least.bytes < SIZE_MAX ? (size_t)least.bytes : SIZE_MAX;
}

size_t stericol_free_memory(const char *root)
{
    struct rlimit limit;
    size_t address_space = SIZE_MAX;

    if (getrlimit(RLIMIT_AS, &limit) == 0 && limit.rlim_cur != RLIM_INFINITY && limit.rlim_cur < SIZE_MAX)
        address_space = (size_t)limit.rlim_cur;
    return stericol_free_memory_within(root, address_space);
}

size_t stericol_default_memory(void)
{
    size_t bytes = stericol_free_memory("");

    if (bytes == 0)
        return (size_t)1 << 30;
    return bytes / 2 + bytes % 2;
}
