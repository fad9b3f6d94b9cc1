/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One function a command; each returns the status that becomes the exit code, its message in the session's
 * context. */
#ifndef STERICOL_COMMANDS_COMMANDS_H
#define STERICOL_COMMANDS_COMMANDS_H

#include "commands/session.h"

typedef stericol_status stericol_command_function(stericol_session *session);

stericol_command_function stericol_command_change, stericol_command_inspect, stericol_command_column,
    stericol_command_scenario;

#endif
