/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The layout of a record's file, to the byte: it is a promise, and the digest rests on it. */
#include "../support/contents.h"

#include <locale.h>

/* Compared piece by piece between the check values, whose last digits are the evaluator's. */
static void
expect_rich(const kel_text *text)
{
    static const char head[] =
        "{\n"
        "  \"kelspan_record\": 1,\n"
        "  \"form\": \"piecewise\",\n"
        "  \"base\": \"current length\",\n"
        "  \"reference_temperature_K\": 293.15,\n"
        "  \"reference_defaulted\": true,\n"
        "  \"range_K\": [4.2, 899.5],\n"
        "  \"gaps_K\": [\n"
        "    [90, 110.5],\n"
        "    [300, 350]\n"
        "  ],\n"
        "  \"pieces\": [\n"
        "    {\"from_K\": 4.2, \"to_K\": 77, \"chebyshev_per_K\": [4.05e-6, 3.9e-6, -3.3333333333333335e-7]},\n"
        "    {\"from_K\": 77, \"to_K\": 200, \"chebyshev_per_K\": [0.000011]},\n"
        "    {\"from_K\": 200, \"to_K\": 900, \"chebyshev_per_K\": [0.0000161803398874989, 2.5e-6, 5e-324]}\n"
        "  ],\n"
        "  \"continuity\": [\"curvature\", \"none\"],\n"
        "  \"transitions\": [\n"
        "    {\"at_K\": 2, \"step\": \"none\", \"length_step\": 0},\n"
        "    {\"at_K\": 200, \"step\": \"fitted\", \"length_step\": -8.4e-6},\n"
        "    {\"at_K\": 950, \"step\": \"stated\", \"length_step\": 0.001}\n"
        "  ],\n"
        "  \"modes\": [\n"
        "    {\n"
        "      \"kind\": \"fit\",\n"
        "      \"label\": \"scatter\",\n"
        "      \"chebyshev_per_K\": [\n"
        "        [1e-8, -2e-8, 0],\n"
        "        [3e-8],\n"
        "        [1e-9, -0, 4e-9]\n"
        "      ],\n"
        "      \"length_steps\": [0, 2e-7, 0]\n"
        "    },\n"
        "    {\n"
        "      \"kind\": \"lot\",\n"
        "      \"label\": \"lot spread 2 %\",\n"
        "      \"chebyshev_per_K\": [\n"
        "        [2e-8, 0, 0],\n"
        "        [2e-7],\n"
        "        [3.2e-7, 0, 0]\n"
        "      ],\n"
        "      \"length_steps\": [0, 0, 0.00001]\n"
        "    }\n"
        "  ],\n"
        "  \"variance\": \"mixed\",\n"
        "  \"scatter_known\": true,\n"
        "  \"observations\": 3,\n"
        "  \"parameters\": 6,\n"
        "  \"degrees_of_freedom\": -3,\n"
        "  \"residual_standard_deviation\": null,\n"
        "  \"chi2\": 0.3333333333333333,\n"
        "  \"lot_spread\": \"2 %\",\n"
        "  \"sources\": [\n"
        "    {\n"
        "      \"name\": \"nt-40.csv\",\n"
        "      \"digest\": \"" KEL_TEST_HEX "\",\n"
        "      \"material\": \"NT-40\",\n"
        "      \"condition\": \"annealed\",\n"
        "      \"direction\": \"rolling\",\n"
        "      \"product_form\": \"sheet\",\n"
        "      \"source\": \"bench log 7\",\n"
        "      \"lineage\": \"one dilatometer\",\n"
        "      \"scale\": \"ITS-90\",\n"
        "      \"branch\": \"heating\",\n"
        "      \"reference_temperature_K\": 293.15,\n"
        "      \"base\": \"reference length\",\n"
        "      \"rows\": 12,\n"
        "      \"left_out\": 3,\n"
        "      \"uncertainty\": [\n"
        "        \"2 %\",\n"
        "        \"0.5 % + 1e-5 [1] k=2 from 77 K to 300 K\"\n"
        "      ],\n"
        "      \"notes\": [\n"
        "        \"rows 3 and 4 were printed in \\\"italics\\\"\\tin the \\\\ source, "
        "\xE2\x88\x92 as minus; \\u0001\\u007f\"\n"
        "      ]\n"
        "    },\n"
        "    {\n"
        "      \"name\": \"stra\xC3\x9F" "e.csv\",\n"
        "      \"digest\": null,\n"
        "      \"material\": null,\n"
        "      \"condition\": null,\n"
        "      \"direction\": null,\n"
        "      \"product_form\": null,\n"
        "      \"source\": null,\n"
        "      \"lineage\": null,\n"
        "      \"scale\": null,\n"
        "      \"branch\": null,\n"
        "      \"reference_temperature_K\": null,\n"
        "      \"base\": \"current length\",\n"
        "      \"rows\": 0,\n"
        "      \"left_out\": 0,\n"
        "      \"uncertainty\": [],\n"
        "      \"notes\": []\n"
        "    }\n"
        "  ],\n"
        "  \"columns\": [\n"
        "    {\"source\": 0, \"kind\": \"coefficient\", \"label\": \"NT-40 annealed\", \"observations\": 2, "
        "\"degrees_of_freedom\": 1.25, \"residual_standard_deviation\": 3e-8, \"scatter\": 2e-8, \"resolution\": 1e-8, "
        "\"variance\": \"estimated\"},\n"
        "    {\"source\": 1, \"kind\": \"mean coefficient\", \"label\": null, \"observations\": 1, "
        "\"degrees_of_freedom\": null, \"residual_standard_deviation\": null, \"scatter\": null, \"resolution\": null, "
        "\"variance\": \"given\"}\n"
        "  ],\n"
        "  \"rows_thinned\": false,\n"
        "  \"rows\": [\n"
        "    {\"source\": 0, \"column\": 0, \"line\": 4, \"kind\": \"coefficient\", \"from_K\": 77, \"to_K\": 77, "
        "\"observed\": 7.9e-6, \"fitted\": 7.8e-6, \"residual\": 1e-7, \"shared_term\": 0, \"u\": 2e-8, "
        "\"side\": \"none\", \"left_out\": null},\n"
        "    {\"source\": 0, \"column\": 0, \"line\": 5, \"kind\": \"coefficient\", \"from_K\": 200, \"to_K\": 200, "
        "\"observed\": 0.000011, \"fitted\": 0.000011, \"residual\": 0, \"shared_term\": -1e-9, \"u\": null, "
        "\"side\": \"below\", \"left_out\": null},\n"
        "    {\"source\": 1, \"column\": 1, \"line\": 9, \"kind\": \"mean coefficient\", "
        "\"from_K\": 293.15, \"to_K\": 200, "
        "\"observed\": 0.000012, \"fitted\": 0.000013, \"residual\": -1e-6, \"shared_term\": 0, \"u\": 1e-7, "
        "\"side\": \"above\", \"left_out\": null},\n"
        "    {\"source\": 0, \"column\": 0, \"line\": 6, \"kind\": \"expansion\", \"from_K\": null, \"to_K\": 5, "
        "\"observed\": null, \"fitted\": null, \"residual\": null, \"shared_term\": null, \"u\": null, "
        "\"side\": \"none\", \"left_out\": \"status mark '*'\"}\n"
        "  ],\n"
        "  \"checks\": [\n"
        "    {\"temperature_K\": 4.2, \"coefficient_per_K\": ";
    static const char tail[] =
        "\",\n"
        "  \"annotations\": {\"approved\": {\"by\": \"QA\", \"limit\": 1.50},\n  \"tags\": [\"}\", \"\\\"]\"]}\n"
        "}\n";
    char got[sizeof head];
    ck_assert_uint_gt(text->size, sizeof head + sizeof tail);
    memcpy(got, text->bytes, sizeof head - 1);
    got[sizeof head - 1] = '\0';
    ck_assert_str_eq(got, head);
    ck_assert_str_eq(text->bytes + text->size - (sizeof tail - 1), tail);
    const char *digest = strstr(text->bytes, "}\n  ],\n  \"digest\": \"");
    ck_assert_ptr_nonnull(digest);
    ck_assert_uint_eq((size_t)(text->bytes + text->size - digest),
                      strlen("}\n  ],\n  \"digest\": \"") + 64 + sizeof tail - 1);
}

START_TEST(lays_out_everything)
{
    rich r;
    kel_record *record = build_content(rich_content(&r));
    kel_text text = format_record(record);
    expect_rich(&text);
    kel_text_free(&text);
    kel_record_free(record);
}
END_TEST

START_TEST(lays_out_next_to_nothing)
{
    static const char head[] = "{\n"
                               "  \"kelspan_record\": 1,\n"
                               "  \"form\": \"adopted\",\n"
                               "  \"base\": \"reference length\",\n"
                               "  \"reference_temperature_K\": 293.15,\n"
                               "  \"reference_defaulted\": false,\n"
                               "  \"range_K\": [100, 300],\n"
                               "  \"gaps_K\": [],\n"
                               "  \"pieces\": [\n"
                               "    {\"from_K\": 100, \"to_K\": 300, \"chebyshev_per_K\": [0.000015, 2e-6]}\n"
                               "  ],\n"
                               "  \"continuity\": [],\n"
                               "  \"transitions\": [],\n"
                               "  \"modes\": [],\n"
                               "  \"variance\": \"none\",\n"
                               "  \"scatter_known\": false,\n"
                               "  \"observations\": 0,\n"
                               "  \"parameters\": 2,\n"
                               "  \"degrees_of_freedom\": null,\n"
                               "  \"residual_standard_deviation\": null,\n"
                               "  \"chi2\": null,\n"
                               "  \"lot_spread\": null,\n"
                               "  \"sources\": [],\n"
                               "  \"columns\": [],\n"
                               "  \"rows_thinned\": false,\n"
                               "  \"rows\": [],\n"
                               "  \"checks\": [\n";
    kel_content content = small_content();
    kel_record *record = build_content(&content);
    kel_text text = format_record(record);
    ck_assert_msg(strncmp(text.bytes, head, strlen(head)) == 0, "got %s", text.bytes);
    ck_assert_str_eq(text.bytes + text.size - 4, "\"\n}\n");
    ck_assert_ptr_null(strstr(text.bytes, "annotations"));
    kel_text_free(&text);
    kel_record_free(record);
}
END_TEST

/* Where a locale with a decimal comma is installed. */
START_TEST(is_free_of_locale)
{
    static const char *const locales[] = { "de_DE.UTF-8", "fr_FR.UTF-8", "nl_NL.UTF-8" };
    rich r;
    kel_record *record = build_content(rich_content(&r));
    for (int l = 0; l < KEL_LENGTH(locales); l++)
        if (setlocale(LC_ALL, locales[l]) != NULL) {
            kel_text text = format_record(record);
            expect_rich(&text);
            kel_text_free(&text);
        }
    kel_record_free(record);
}
END_TEST

/* It appends, so that several can stand in one text. */
START_TEST(appends)
{
    kel_content content = small_content();
    kel_record *record = build_content(&content);
    kel_text one = format_record(record), two = format_record(record);
    kel_error err;
    ck_assert_int_eq(kel_record_format(&two, record, &err), KEL_OK);
    ck_assert_uint_eq(two.size, 2 * one.size);
    ck_assert_mem_eq(two.bytes + one.size, one.bytes, one.size);
    ck_assert_int_eq(kel_record_format(NULL, record, &err), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_format(&two, NULL, &err), KEL_E_ARGUMENT);
    kel_text_free(&one);
    kel_text_free(&two);
    kel_record_free(record);
}
END_TEST

KEL_TCASE(layout, lays_out_everything, lays_out_next_to_nothing, is_free_of_locale, appends)
KEL_TEST_MAIN("record_format", layout)
