/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From the sums of a pair pipeline to the result file, the table and the closing words. */
#ifndef STERICOL_COMMANDS_PUBLISH_H
#define STERICOL_COMMANDS_PUBLISH_H

#include "commands/setup.h"

/*
 * Runs the pair, writes the result file where --output is given, prints the table and says what the user
 * should know. `title` is that of the result.
 */
stericol_status stericol_publish(stericol_session *session, const stericol_setup *setup, const char *title);

#endif
