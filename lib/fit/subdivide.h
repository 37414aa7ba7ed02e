/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Pieces cut at further temperatures, curves carried over unchanged. Not installed. */
#ifndef KELSPAN_SUBDIVIDE_H
#define KELSPAN_SUBDIVIDE_H

#include <kelspan.h>

/* Cuts pieces[count] at those of cuts[cut_count] (any order) that lie strictly inside one. *out: *out_count pieces,
   each with the number of coefficients of the piece it came from. parent[i]: the index of that piece. */
kel_status kel__subdivide(kel_piece **out, size_t *out_count, size_t **parent, const kel_piece *pieces, size_t count,
                          const double *cuts, size_t cut_count, kel_arena *memory, kel_error *err);

/* Coefficients of one curve on the cut pieces: the same polynomials, to within a few eps of sum |c_k| of the parent. */
void kel__carry_over(double *out, const kel_piece *out_pieces, size_t out_count, const size_t *parent,
                     const double *coefficients, const kel_piece *pieces);

#endif
