/* SPDX-License-Identifier: MIT
 * Settings that change results and therefore lie in the store: text by key. */
#ifndef WANE_DB_STORED_SETTINGS_H
#define WANE_DB_STORED_SETTINGS_H

#include "db/store.h"

enum { STORED_SETTING_MAX = 200 };
/* The value; "" when it is not set. A row whose checksum is wrong: ST_STORE. */
MUST_USE enum status stored_setting(struct store *s, const char *key, char value[STORED_SETTING_MAX + 1], struct err *e);
/* Inside a change set. key 1..80 characters; "" takes it away. */
MUST_USE enum status stored_setting_put(struct store *s, const char *key, const char *value, struct err *e);

#endif
