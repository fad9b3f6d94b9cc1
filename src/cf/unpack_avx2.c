/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_CF_LOOPS stericol_cf_loops_avx2
#define STERICOL_CF_LOOPS_NAME "avx2"
#include "cf/unpack_body.h"
