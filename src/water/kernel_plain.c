/* SPDX-License-Identifier: GPL-3.0-or-later */
#define STERICOL_KERNEL stericol_kernel_plain
#define STERICOL_KERNEL_NAME "plain"
#define STERICOL_KERNEL_FUSED 0
#include "water/kernel_body.h"
