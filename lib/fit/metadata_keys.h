/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The keys of metadata: what each is called and who reads its value. Not installed. */
#ifndef KELSPAN_METADATA_KEYS_H
#define KELSPAN_METADATA_KEYS_H

#include "metadata.h"

typedef struct kel__key kel__key;

/* One statement. key is NULL where it is not known. */
typedef struct kel__item {
    kel__entry entry;
    const kel__key *key;
    bool set;                  /* by the user, not by the file */
    bool dropped;              /* overruled, or said before */
} kel__item;

/* Strings live in the arena, items until they are finished in memory of their own. */
struct kel__metadata_reader {
    kel_arena *arena;
    bool coefficients;
    kel__item *items;
    size_t count, capacity;
};

/* The metadata under way. The arrays have room for as many as there are items. */
typedef struct kel__draft {
    kel__metadata out;
    kel__clause *uncertainty, *lot;
    kel_declared_transition *transitions;
    kel__item **transition_items;
    const char **notes;
} kel__draft;

struct kel__key {
    const char *name, *other;  /* the spelling that is written, and one more that is read */
    kel_status (*take)(kel__draft *draft, kel__item *item, kel_error *err);
    size_t offset;             /* of its member in kel__metadata, for those that have one */
    bool repeatable;
    bool coefficients;         /* of coefficient files only */
    bool text;                 /* free text: nothing behind the colon means not stated */
};

/* The key of that name, or NULL. value tells the two meanings of `scale` in a coefficient file apart. */
const kel__key *kel__key_find(const char *name, size_t n, const char *value, bool coefficients);
/* `decimal` is read before the others, `reference temperature` is compared by its value. */
extern const char kel__key_decimal[], kel__key_reference[], kel__key_lot[];

#endif
