/* SPDX-License-Identifier: Apache-2.0 */
/* Failures of the operating system as messages. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_IO_ERROR_H
#define KELSPAN_IO_ERROR_H

#include "core.h"

/* KEL_E_IO "cannot write 'nt40.json': No space left on device"; `action` is "write", "read". reason: a value of
   errno. */
kel_status kel__io_error(kel_error *err, const char *action, const char *path, int reason);

#endif
