/* SPDX-License-Identifier: MIT
 * One table of a target's fields: CSV in and out, `target set`, forms and the store read it. */
#ifndef WANE_DB_FIELDS_H
#define WANE_DB_FIELDS_H

#include "ephem/err.h"
#include "ephem/model.h"

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

enum field_kind { FIELD_NAME, FIELD_TEXT, FIELD_NUMBER, FIELD_RA, FIELD_DEC, FIELD_DATE /* two-part t0 */, FIELD_SCALE };
enum field_home { HOME_TARGET, HOME_EPHEMERIS }; /* the table that keeps it; ephemeris rows are append-only versions */

struct field {
	const char *name; /* column name of the target table format */
	const char *unit; /* "" none */
	enum field_kind kind;
	enum field_home home;
	size_t offset;    /* in struct target */
	double min, max;  /* of a number, both included unless open_min */
	bool open_min;
	bool essential;   /* out of range refuses the row; else the value is kept and flagged as doubtful */
	const char *sentence;
};
enum { FIELD_COUNT = 43 };
/* In the order of the target table format: name, ra_deg, ... source, t0_period_cov_d2, ... baseline_after_min, ecosw_err, t0_dpde_cov_d2,
 * period_dpde_cov_d2. */
extern const struct field fields[FIELD_COUNT];
/* Places in the table of the fields that the code knows by name. */
enum {
	FIELD_AT_NAME = 0,
	FIELD_AT_RA = 1,
	FIELD_AT_DEC = 2,
	FIELD_AT_T0 = 5,
	FIELD_AT_T0_ERR = 6,
	FIELD_AT_SCALE = 7,
	FIELD_AT_PERIOD = 8,
	FIELD_AT_PERIOD_ERR = 9,
	FIELD_AT_DURATION = 10,
	FIELD_AT_INC = 14,
	FIELD_AT_SOURCE = 22,
	FIELD_AT_COVARIANCE = 23,
	FIELD_AT_DPDE = 24,
	FIELD_AT_DPDE_ERR = 25,
	FIELD_AT_DURATION_ERR = 26,
	FIELD_AT_T0_DPDE_COV = 41,
	FIELD_AT_PERIOD_DPDE_COV = 42
};
/* Longest text of a FIELD_TEXT, FIELD_SCALE or doubtful value in the store [bytes]; a longer text is cut and flagged. */
enum { FIELD_TEXT_MAX = 255, FIELD_NOTE_MAX = 2000 };
/* Index by name, -1 none. */
int field_find(const char *name);

/* Texts of a row, one a field, "" missing; pointers borrowed. */
struct field_texts {
	const char *text[FIELD_COUNT];
};
/* Reads the texts into *t (whose text pointers then borrow from texts). Essential faults: ST_SYNTAX / ST_RANGE, *bad_field its index.
 * Other faults: the value becomes NAN, bit (1 << field) set in *doubts, the text stays for the store to keep. */
MUST_USE enum status fields_read(const struct field_texts *texts, struct target *t, uint64_t *doubts, int *bad_field, struct err *e);
/* Why a text of a doubtful field can't be true, a short sentence. *beside (may be NULL): what would be right beside the target's other
 * values; NULL when it is bad by itself (field_expected says what would be right then). */
const char *field_doubt(int field, const char *text, const char **beside);
/* What is expected of a field, for messages: `a number above 0 d`. */
void field_expected(int field, char *out, size_t n);
/* Most bytes that the store keeps of a text field. */
size_t field_text_max(int field);
/* Text of one field of a target: shortest digits that read back equal. */
void field_text(const struct target *t, int field, char *out, size_t n);

#endif
