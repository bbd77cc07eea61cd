/* SPDX-License-Identifier: MIT
 * What is said of a window that was left out is true: what forcing it in puts out is not in the order that
 * holds it, and the cost is what that order is worth less. */
#include "tui/plan_make.h"

#include "tests/support/check.h"
#include "tests/support/observing_store.h"
#include "tests/support/plan_run.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char more[] = "others are worth more: forcing it in would ",
		  as_much[] = "others are worth as much: forcing it in would ";

static bool has_member(const struct plan_view *v, const struct plan_member_view *m)
{
	for (size_t i = 0; i < v->n_items; i++)
		for (size_t k = 0; k < v->item[i].n; k++)
			if (v->item[i].member[k].target_id == m->target_id &&
			    v->item[i].member[k].epoch == m->epoch)
				return true;
	return false;
}

/* Whether the sentence says that an item goes; no target of this night comes twice. */
static bool named(const char *reason, const struct plan_item_view *item)
{
	char name[200] = "";
	for (size_t k = 0; k < item->n; k++)
		snprintf(name + strlen(name), sizeof name - strlen(name), "%s%s", k ? " + " : "",
			 item->member[k].target);
	return strstr(reason, name) != NULL;
}

static void check_forced(const struct plan_view *v, const struct plan_left_view *left,
			 const struct plan_view *forced)
{
	size_t gone = 0;
	for (size_t i = 0; i < v->n_items; i++) {
		bool lacks = false;
		for (size_t k = 0; k < v->item[i].n; k++)
			lacks = lacks || !has_member(forced, &v->item[i].member[k]);
		gone += lacks;
		if (lacks != named(left->reason, &v->item[i]) && !strstr(left->reason, "and others"))
			check_fail("%s: %s; but %s %s", left->target, left->reason,
				   v->item[i].member[0].target, lacks ? "goes" : "stays");
	}
	if ((gone > 0) != (strstr(left->reason, "would put out ") != NULL) ||
	    (gone == 0) != (strstr(left->reason, "would cut others shorter ") != NULL))
		check_fail("%s: %s; %zu go", left->target, left->reason, gone);
	const char *cost = strstr(left->reason, " and cost ");
	assert_non_null(cost);
	cost += strlen(" and cost ");
	const double said = strcmp(cost, "nothing") == 0 ? 0.0 : strtod(cost, NULL);
	check_close("cost", said, v->worth - forced->worth, 0.0051); /* two decimals */
}

static void true_of_the_forced_order(void **state)
{
	(void)state;
	struct plan_run *p = plan_run_open("2026-04-22T20:00:00Z");
	struct plan_case c, forced;
	const char *const drop[] = {"Tern 31 b"};
	int n_more = 0, n_put = 0;
	plan_case_open(&c, p, &(struct plan_wish){.drop = drop, .n_drop = 1, .costs = true, .moved_min = NAN},
		       ST_OK);
	for (size_t i = 0; i < c.view.n_left; i++) {
		const struct plan_left_view *left = &c.view.left[i];
		const bool is_more = strncmp(left->reason, more, strlen(more)) == 0;
		if (isnan(left->cost))
			continue;
		if (!is_more && strncmp(left->reason, as_much, strlen(as_much)) != 0)
			check_fail("%s: %s", left->target, left->reason);
		assert_int_equal(is_more, left->cost >= 0.005);
		n_more += is_more;
		n_put += strstr(left->reason, "put out") != NULL;
		const char *const pin[] = {left->target};
		const struct plan_wish wish = {
		    .drop = drop, .n_drop = 1, .pin = pin, .n_pin = 1, .moved_min = NAN};
		plan_case_open(&forced, p, &wish, ST_OK);
		check_forced(&c.view, left, &forced.view);
		plan_case_close(&forced);
	}
	assert_true(n_more > 8 && n_put > 5);
	plan_case_close(&c);
	plan_run_close(p);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(true_of_the_forced_order)};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
