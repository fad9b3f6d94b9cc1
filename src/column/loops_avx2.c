/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_LOOPS stericol_loops_avx2
#define STERICOL_LOOPS_NAME "avx2"
#include "column/loops_body.h"
