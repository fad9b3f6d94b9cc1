/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Alone in its file, since the affinity mask needs _GNU_SOURCE (set for this file in CMakeLists.txt). */
#include "job/workers.h"

#include <sched.h>

/* More CPUs than any machine that Linux runs on has (NR_CPUS is at most 8192). */
enum { MOST_CPUS = 65536 };

size_t stericol_default_threads(void)
{
    size_t quota = stericol_cpu_quota(""), count = 1;

    /* The call fails while the set is smaller than the kernel's. */
    for (size_t cpus = 1024; cpus <= MOST_CPUS; cpus *= 2) {
        cpu_set_t *set = CPU_ALLOC(cpus);
        int answer;

        if (set == NULL)
            break;
        answer = sched_getaffinity(0, CPU_ALLOC_SIZE(cpus), set);
        if (answer == 0)
            count = (size_t)CPU_COUNT_S(CPU_ALLOC_SIZE(cpus), set);
        CPU_FREE(set);
        if (answer == 0)
            break;
    }
    if (quota != 0 && quota < count)
        count = quota;
    if (count > STERICOL_WORKERS_MOST)
        count = STERICOL_WORKERS_MOST;
    return count == 0 ? 1 : count;
}
