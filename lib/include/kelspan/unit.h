/* SPDX-License-Identifier: Apache-2.0 */
/* Units at the edge: parsed once, applied exactly. Inside everything is K, 1/K, 1 and m. */
#ifndef KELSPAN_UNIT_H
#define KELSPAN_UNIT_H

#include <stdint.h>
#include <kelspan/status.h>

#ifdef __cplusplus
extern "C" {
#endif

typedef enum kel_dimension {
    KEL_DIM_TEMPERATURE,   /* K, degC, degF, degR: a point on a scale */
    KEL_DIM_DIFFERENCE,    /* the same names, meant as a difference: 10 degC is 10 K */
    KEL_DIM_PER_KELVIN,    /* coefficients */
    KEL_DIM_ONE,           /* expansion, strain */
    KEL_DIM_LENGTH
} kel_dimension;

/* SI value = (printed + offset) * numerator / denominator * 10^exponent, all exact: offset = offset_e2/100.
   degF as a temperature: (x + 459.67) * 5/9. One correctly rounded operation makes the double (kel_unit_read). */
typedef struct kel_unit {
    kel_dimension dimension;
    int64_t offset_e2;
    int64_t numerator, denominator; /* coprime to 10 as far as possible, both > 0, below 2^31 */
    int exponent;
    char name[40];                  /* canonical ASCII spelling for output: "K", "degC", "1e-6/K", "um/(m.K)", "%" */
} kel_unit;

/* Parses a unit of the given dimension that fills the n bytes. DIM_TEMPERATURE and DIM_DIFFERENCE take the same names.
   Spellings of the trade are taken: 1e-6/K, 10^-6/K, 10⁻⁶ K⁻¹, x10^-6/K, ppm/K, ppm/degF, um/(m.K), um/m-K, µm/m/°C,
   1/MK, uin/in/degF, µin/(in·°F), %/K, %, 1e-5, ppm, microstrain, mm/m, um/m, in/100 ft, 1, 1/K, ...
   KEL_E_UNIT: unknown (column: first byte not understood) or of another dimension (the message names both). Since 0.1.
   */
KEL_API kel_status kel_unit_parse(kel_unit *out, kel_dimension dimension, const char *bytes, size_t n, kel_error *err);

/* The unit whatever its dimension is: first of PER_KELVIN, ONE, TEMPERATURE, LENGTH that it fits. Same errors. */
KEL_API kel_status kel_unit_parse_any(kel_unit *out, const char *bytes, size_t n, kel_error *err);

/* Reads a decimal number (grammar of kel_number_read) in `unit` and gives the SI value, the number and the unit
   together rounded once: 68 in degF is the double nearest 293.15. *resolution, if not NULL, gets one unit of the last
   printed digit in SI (the offset plays no part; an exponent shifts it: 1.25e-3 has resolution 1e-5). Temperatures
   below 0 K: KEL_E_RANGE. Since 0.1. */
KEL_API kel_status kel_unit_read(double *out, double *resolution, const kel_unit *unit, const char *bytes, size_t n,
                                 kel_error *err);

/* si in `unit` (correctly rounded to within 1 ulp), and back for numbers that do not come from text (within 1 ulp). */
KEL_API double kel_unit_from_si(const kel_unit *unit, double si);
KEL_API double kel_unit_to_si(const kel_unit *unit, double value);

/* "77K", "-321degF", "-321 °F", "20C", "540R": number and unit in one word; the unit is required (KEL_E_UNIT "... needs
   a unit, for example 293 K or 20 degC"). *unit, if not NULL, gets the unit for answering in kind. dimension is
   KEL_DIM_TEMPERATURE, KEL_DIM_DIFFERENCE, KEL_DIM_LENGTH ("250mm", "12.5in", "40um", "1ft", "5mil") or any other.
   Since 0.1. */
KEL_API kel_status kel_quantity_parse(double *out, kel_unit *unit, kel_dimension dimension, const char *text,
                                      kel_error *err);

#ifdef __cplusplus
}
#endif
#endif
