/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The options of `fit` that shape the curve. */
#ifndef KELSPAN_FIT_SETTINGS_H
#define KELSPAN_FIT_SETTINGS_H

#include "options.h"

typedef struct fit_settings { kel_fit_options options; } fit_settings;

/* EXIT_FINE, or EXIT_USAGE after saying what is wrong. The lists live as long as the job. */
int fit_settings_read(job *j, fit_settings *out);

#endif
