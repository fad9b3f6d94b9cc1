/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/commands.h"
#include "commands/publish.h"

stericol_status stericol_command_scenario(stericol_session *session)
{
    stericol_setup setup;
    stericol_status status = stericol_setup_make(session, STERICOL_PAIR_SCENARIO, &setup);

    if (status == STERICOL_OK)
        status = stericol_publish(session, &setup, "Steric height of a prescribed warming and freshening");
    stericol_setup_free(&setup);
    return status;
}
