/* SPDX-License-Identifier: MIT
 * Horizon masks: a fault has its place; what was taken is in order and in range, and the text in the store
 * reads back the same. */
#include "db/read_mask.h"

#include "tests/fuzz/property.h"

#include <string.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
	static char text[MASK_TEXT_MAX], again[MASK_TEXT_MAX];
	char *bytes = exact_copy(data, size);
	struct mask m, back;
	struct err e = {.status = ST_OK};
	bool unsorted;
	enum status s = mask_parse("m", bytes, size, &m, &unsorted, &e);
	free(bytes);
	if (s != ST_OK) {
		long line = 0, column = 0;
		property(sscanf(e.text, "m:%ld:%ld: ", &line, &column) == 2 && line >= 1 && column >= 1);
		property(!strchr(e.text, '\n'));
		return 0;
	}
	property(m.n >= 1 && m.n <= MASK_KNOTS_MAX);
	for (size_t i = 0; i < m.n; i++) {
		property(m.knot[i].az_deg >= 0.0 && m.knot[i].az_deg < 360.0);
		property(m.knot[i].alt_deg >= -10.0 && m.knot[i].alt_deg <= 90.0);
		property(i == 0 || m.knot[i].az_deg > m.knot[i - 1].az_deg);
	}
	mask_text(&m, text);
	property(mask_of_text(text, &back, &e) == ST_OK && back.n == m.n);
	mask_text(&back, again);
	property(strcmp(text, again) == 0);
	return 0;
}
