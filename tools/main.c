/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan: finds the command and runs it. */
#include "commands.h"
#include "files.h"
#include "messages.h"
#include "reservations.h"

#include <errno.h>
#include <fcntl.h>
#include <getopt.h>
#include <gsl/gsl_errno.h>
#include <unistd.h>

/* A closed stream would be given to the next file that is opened, and a result would land in it. Each is filled with
   something on which its own use fails: reading from a write-only one, writing to a read-only one. */
static bool
fill_streams(void)
{
    for (int fd = 0; fd <= 2; fd++)
        if (fcntl(fd, F_GETFD) == -1 && errno == EBADF && open("/dev/null", fd == 0 ? O_WRONLY : O_RDONLY) != fd)
            return false;
    return true;
}

/* Version and licences; the library that runs may be newer than the one it was built with. */
static int
print_version(const job *j)
{
    sink s;
    sink_begin(&s, STDOUT_FILENO);
    kel_text_printf(&s.pending, "kelspan %s\nlicence GPL-3.0-or-later; libkelspan Apache-2.0\n", kel_version());
    return sink_end(j, &s);
}

/* Help wins over everything else on the line that was understood. */
static int
run_command(job *j, int argc, char **argv)
{
    int status = options_read(j, argc, argv);
    if (status != EXIT_FINE)
        return status;
    if (option_given(j, OPT_HELP))
        return help_of(j, j->command);
    status = reservations_begin(j);
    return status == EXIT_FINE ? j->command->run(j) : status;
}

/* The program's own options end at the command's name: the leading + keeps getopt from looking behind it. */
static int
dispatch(job *j, int argc, char **argv)
{
    static const struct option longs[] = {
        { "help", no_argument, NULL, 'h' }, { "version", no_argument, NULL, 'V' }, { NULL, 0, NULL, 0 }
    };
    opterr = 0;
    switch (getopt_long(argc, argv, "+hV", longs, NULL)) {
    case 'h':
        return help_all(j);
    case 'V':
        return print_version(j);
    case -1:
        break;
    default:
        return usage(j, "there is no option %s before a command", argv[optind - 1]);
    }
    if (optind >= argc)
        return usage(j, "which command?");
    const char *name = argv[optind];
    j->command = command_find(name);
    return j->command == NULL ? unknown_command(j, name) : run_command(j, argc - optind, argv + optind);
}

int
main(int argc, char **argv)
{
    job j = { 0 };
    if (!fill_streams())
        return EXIT_FAILED;
    gsl_set_error_handler_off();
    j.memory = kel_arena_new();
    if (j.memory == NULL)
        return fail_memory(&j);
    int status = dispatch(&j, argc, argv);
    kel_arena_free(j.memory);
    return status;
}
