/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_LOOPS stericol_loops_plain
#define STERICOL_LOOPS_NAME "plain"
#include "column/loops_body.h"
