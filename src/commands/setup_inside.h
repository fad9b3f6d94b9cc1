/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The parts of the set-up; nobody else includes this. */
#ifndef STERICOL_COMMANDS_SETUP_INSIDE_H
#define STERICOL_COMMANDS_SETUP_INSIDE_H

#include "commands/setup.h"

/* setup_fields.c: --background-salinity and --salinity-anomaly, as fields that can be put onto the grid. */
stericol_status stericol_setup_backgrounds(stericol_session *session, stericol_setup *setup);
/* setup_places.c: sea floor, cells and their areas, regions. */
stericol_status stericol_setup_places(stericol_session *session, stericol_setup *setup);

#endif
