/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How much memory a run may take. */
#ifndef STERICOL_JOB_MEMORY_H
#define STERICOL_JOB_MEMORY_H

#include <stddef.h>

/*
 * Bytes that this process can still take: the least of MemAvailable (proc(5)), of what the control group and
 * the groups above it leave (versions 2 and 1), and of what RLIMIT_AS leaves.  0 where nothing is known.
 * `root` stands before /proc and /sys, "" for this machine.
 */
size_t stericol_free_memory(const char *root);

/* Half of stericol_free_memory(""); 1 GiB where nothing is known. */
size_t stericol_default_memory(void);

#endif
