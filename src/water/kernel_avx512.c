/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_KERNEL stericol_kernel_avx512
#define STERICOL_KERNEL_NAME "avx512"
#define STERICOL_KERNEL_FUSED 1
#include "water/kernel_body.h"
