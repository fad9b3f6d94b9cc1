/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_KERNEL stericol_kernel_avx2
#define STERICOL_KERNEL_NAME "avx2"
#define STERICOL_KERNEL_FUSED 1
#include "water/kernel_body.h"
