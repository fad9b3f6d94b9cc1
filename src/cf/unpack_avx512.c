/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_CF_LOOPS stericol_cf_loops_avx512
#define STERICOL_CF_LOOPS_NAME "avx512"
#include "cf/unpack_body.h"
