/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Writes the manual page and the completion script while the program is built: write_manual PAGE COMPLETION.
 */
#include "job/help.h"

#include <stdio.h>

static int write_text(const char *path, stericol_text *text)
{
    FILE *file = text->failed ? NULL : fopen(path, "w");
    int wrong = file == NULL || fputs(stericol_text_string(text), file) < 0;

    if (file != NULL && fclose(file) != 0)
        wrong = 1;
    if (wrong)
        fprintf(stderr, "write_manual: %s: cannot be written\n", path);
    stericol_text_free(text);
    return wrong;
}

int main(int argc, char **argv)
{
    stericol_text page = {0}, completion = {0};

    if (argc != 3) {
        fputs("usage: write_manual PAGE COMPLETION\n", stderr);
        return 2;
    }
    stericol_manual_page(&page);
    stericol_completion_script(&completion);
    return write_text(argv[1], &page) | write_text(argv[2], &completion);
}
