/* SPDX-License-Identifier: Apache-2.0 */
/* libkelspan: evaluate and integrate records of linear thermal expansion. Includes every header of the library. */
#ifndef KELSPAN_H
#define KELSPAN_H

#include <kelspan/status.h>
#include <kelspan/arena.h>
#include <kelspan/text.h>
#include <kelspan/unit.h>
#include <kelspan/record.h>
#include <kelspan/answer.h>

#endif
