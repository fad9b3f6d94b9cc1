/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * CPU quota and free memory, read from made-up trees of /proc and /sys.  Formats: proc(5); Linux
 * Documentation/admin-guide/cgroup-v2.rst (cpu.max, memory.max, memory.high, memory.current, memory.stat) and
 * cgroup-v1/memory.rst, scheduler/sched-bwc.rst (cpu.cfs_quota_us, cpu.cfs_period_us).
 */
#define _XOPEN_SOURCE 700 /* nftw(3) */

#include "support/testing.h"

#include "job/memory.h"
#include "job/room.h"
#include "job/workers.h"

#include <ftw.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#define MIB ((size_t)1 << 20)

static char root[4096];

static int remove_one(const char *path, const struct stat *status, int kind, struct FTW *place)
{
    (void)status;
    (void)kind;
    (void)place;
    return remove(path);
}

static int make_root(void **state)
{
    (void)state;
    snprintf(root, sizeof root, "%s/system_XXXXXX", TEST_BUILD_FOLDER);
    return mkdtemp(root) == NULL ? -1 : 0;
}

static int remove_root(void **state)
{
    (void)state;
    return nftw(root, remove_one, 8, FTW_DEPTH | FTW_PHYS);
}

/* Writes a file under the root with the folders above it. */
static void put(const char *path, const char *bytes)
{
    char whole[8192];
    FILE *file;

    snprintf(whole, sizeof whole, "%s%s", root, path);
    for (char *slash = strchr(whole + strlen(root) + 1, '/'); slash != NULL; slash = strchr(slash + 1, '/')) {
        *slash = '\0';
        mkdir(whole, 0777);
        *slash = '/';
    }
    file = fopen(whole, "w");
    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, strlen(bytes), file), strlen(bytes));
    assert_int_equal(fclose(file), 0);
}

static void nothing_known_is_zero(void **state)
{
    (void)state;
    assert_int_equal(stericol_cpu_quota(root), 0);
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 0);
}

static void the_quota_of_version_2_is_read(void **state)
{
    (void)state;
    put("/proc/self/cgroup", "0::/user/job\n");
    put("/sys/fs/cgroup/user/job/cpu.max", "max 100000\n");
    assert_int_equal(stericol_cpu_quota(root), 0);
    put("/sys/fs/cgroup/user/job/cpu.max", "400000 100000\n");
    assert_int_equal(stericol_cpu_quota(root), 4);
    put("/sys/fs/cgroup/user/cpu.max", "250000 100000\n"); /* the group above is tighter: 2.5, rounded up */
    assert_int_equal(stericol_cpu_quota(root), 3);
    put("/sys/fs/cgroup/cpu.max", "50000 100000\n"); /* as a container sees its own */
    assert_int_equal(stericol_cpu_quota(root), 1);
}

static void the_quota_of_version_1_is_read(void **state)
{
    (void)state;
    put("/proc/self/cgroup", "5:memory:/m\n4:cpu,cpuacct:/box\n3:cpuset:/other\n0::/\n");
    put("/sys/fs/cgroup/cpu,cpuacct/box/cpu.cfs_quota_us", "-1\n");
    put("/sys/fs/cgroup/cpu,cpuacct/box/cpu.cfs_period_us", "100000\n");
    put("/sys/fs/cgroup/cpuset/other/cpu.cfs_quota_us", "100000\n"); /* another controller's folder */
    put("/sys/fs/cgroup/cpuset/other/cpu.cfs_period_us", "100000\n");
    assert_int_equal(stericol_cpu_quota(root), 0);
    put("/sys/fs/cgroup/cpu,cpuacct/box/cpu.cfs_quota_us", "150000\n");
    assert_int_equal(stericol_cpu_quota(root), 2);
}

static void free_memory_is_the_least_of_all(void **state)
{
    char line[64];

    (void)state;
    put("/proc/meminfo",
        "MemTotal:        8388608 kB\nMemFree:          524288 kB\nMemAvailable:    4194304 kB\n");
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 4096 * MIB);
    put("/proc/self/cgroup", "0::/user/job\n");
    put("/sys/fs/cgroup/user/job/memory.current", "1073741824\n");
    put("/sys/fs/cgroup/user/job/memory.max", "max\n");
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 4096 * MIB);
    put("/sys/fs/cgroup/user/job/memory.max", "3221225472\n"); /* 3 GiB less 1 GiB in use */
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 2048 * MIB);
    put("/sys/fs/cgroup/user/job/memory.stat", "anon 5\ninactive_file 536870912\nactive_file 7\n");
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 2560 * MIB);
    put("/sys/fs/cgroup/user/job/memory.high", "2147483648\n");
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 1536 * MIB);
    put("/sys/fs/cgroup/user/memory.current", "1073741824\n");
    put("/sys/fs/cgroup/user/memory.max", "1610612736\n");
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 512 * MIB);
    snprintf(line, sizeof line, "%ld 100 50 1 0 60 0\n", (long)(64 * MIB) / sysconf(_SC_PAGESIZE));
    put("/proc/self/statm", line);
    assert_int_equal(stericol_free_memory_within(root, 128 * MIB), 64 * MIB);
    /* Nothing left is not the same as nothing known. */
    assert_int_equal(stericol_free_memory_within(root, 32 * MIB), 1);
}

static void free_memory_of_version_1_is_read(void **state)
{
    (void)state;
    put("/proc/meminfo", "MemAvailable:    4194304 kB\n");
    put("/proc/self/cgroup", "7:memory:/box\n");
    put("/sys/fs/cgroup/memory/box/memory.usage_in_bytes", "1073741824\n");
    put("/sys/fs/cgroup/memory/box/memory.limit_in_bytes", "9223372036854771712\n"); /* how no limit reads */
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 4096 * MIB);
    put("/sys/fs/cgroup/memory/memory.usage_in_bytes", "1073741824\n"); /* the container's own mount */
    put("/sys/fs/cgroup/memory/memory.limit_in_bytes", "2147483648\n");
    put("/sys/fs/cgroup/memory/memory.stat", "cache 9\ntotal_inactive_file 268435456\n");
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 1280 * MIB);
}

static void broken_files_are_passed_over(void **state)
{
    (void)state;
    put("/proc/meminfo", "MemAvailable: lots\n");
    put("/proc/self/cgroup", "nonsense\n::\n0::/a\n1:memory\n");
    put("/sys/fs/cgroup/a/memory.current", "");
    put("/sys/fs/cgroup/a/memory.max", "-5\n");
    put("/sys/fs/cgroup/a/cpu.max", "100000 0\n");
    put("/sys/fs/cgroup/cpu.max", "0 100000\n");
    assert_int_equal(stericol_free_memory_within(root, SIZE_MAX), 0);
    assert_int_equal(stericol_cpu_quota(root), 0);
}

static void this_machine_has_memory(void **state)
{
    size_t bytes = stericol_free_memory("");

    (void)state;
    assert_true(bytes > 0);
    /* Other processes take and give memory between the two calls; no tenfold change is expected. */
    assert_true(stericol_default_memory() > bytes / 20 && stericol_default_memory() < bytes * 5);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test_setup_teardown(nothing_known_is_zero, make_root, remove_root),
        cmocka_unit_test_setup_teardown(the_quota_of_version_2_is_read, make_root, remove_root),
        cmocka_unit_test_setup_teardown(the_quota_of_version_1_is_read, make_root, remove_root),
        cmocka_unit_test_setup_teardown(free_memory_is_the_least_of_all, make_root, remove_root),
        cmocka_unit_test_setup_teardown(free_memory_of_version_1_is_read, make_root, remove_root),
        cmocka_unit_test_setup_teardown(broken_files_are_passed_over, make_root, remove_root),
        cmocka_unit_test(this_machine_has_memory)};

    return cmocka_run_group_tests(tests, NULL, NULL);
}
