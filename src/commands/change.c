/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "commands/commands.h"
#include "commands/publish.h"

stericol_status stericol_command_change(stericol_session *session)
{
    stericol_setup setup;
    stericol_status status = stericol_setup_make(session, STERICOL_PAIR_TWO_EPOCHS, &setup);

    if (status == STERICOL_OK)
        status = stericol_publish(session, &setup, NULL);
    stericol_setup_free(&setup);
    return status;
}
