/* SPDX-License-Identifier: GPL-3.0-or-later */
/* libkelspan-fit: read tables, fit them, adopt coefficients. Includes every header of both libraries. */
#ifndef KELSPAN_FIT_ALL_H
#define KELSPAN_FIT_ALL_H

#include <math.h>
#include <kelspan.h>
#include <kelspan/rows.h>
#include <kelspan/table.h>
#include <kelspan/fit.h>
#include <kelspan/leastsquares.h>
#include <kelspan/coefficients.h>

#endif
