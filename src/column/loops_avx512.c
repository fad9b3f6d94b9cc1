/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_LOOPS stericol_loops_avx512
#define STERICOL_LOOPS_NAME "avx512"
#include "column/loops_body.h"
