/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_CF_LOOPS stericol_cf_loops_plain
#define STERICOL_CF_LOOPS_NAME "plain"
#include "cf/unpack_body.h"
