/* SPDX-License-Identifier: MIT
 * The relaxed answer: best order of intervals with a gap for each pair, events not looked at. */
#include "ephem/running_order_parts.h"

#include <stdlib.h>

enum { UNKNOWN, HOLDS, FAILS };
#define ASKED_MAX ((size_t)1 << 26) /* bytes; beyond that a gap is worked out each time */

bool order_gap_holds(const struct order_gaps *gaps, double to_d, int from_class, double from_d, int to_class)
{
	if (to_d + gaps->most_d <= from_d)
		return true;
	return to_d + gaps->least_d <= from_d &&
	       to_d + gaps->gap_d(gaps->ctx, from_class, to_class) <= from_d;
}

static bool near_pair(struct order_net *net, int i, int j)
{
	const struct order_spot *a = &net->spot[i], *b = &net->spot[j];
	unsigned char *cell = net->asked ? &net->asked[net->cell[j] + (size_t)(i - net->sure[j])] : NULL;
	if (cell && *cell != UNKNOWN)
		return *cell == HOLDS;
	bool holds = order_gap_holds(net->gaps, a->to_d, a->gap_class, b->from_d, b->gap_class);
	if (cell)
		*cell = holds ? HOLDS : FAILS;
	return holds;
}

bool order_may_follow(struct order_net *net, int i, int j)
{
	return i < net->sure[j] || (i < net->near[j] && near_pair(net, i, j));
}

/* Ranks in [low, high) that end so early that from_d lies gap_d behind. Rounded sums keep their order, so
 * bisection is safe. */
static int count_before(const struct order_net *net, int low, int high, double gap_d, double from_d)
{
	while (low < high) {
		int middle = low + (high - low) / 2;
		if (net->spot[middle].to_d + gap_d <= from_d)
			low = middle + 1;
		else
			high = middle;
	}
	return low;
}

enum status order_net_link(struct order_net *net, struct err *e)
{
	size_t pairs = 0;
	int first = 0; /* of the segment: what comes before it is parted from it by a fixed item, which keeps
			  the gaps to both */
	for (int j = 0; j < net->n; j++) {
		if (net->spot[j].segment != net->spot[first].segment)
			first = j;
		double from_d = net->spot[j].from_d;
		net->sure[j] = count_before(net, first, j, net->gaps->most_d, from_d);
		net->near[j] = count_before(net, net->sure[j], j, net->gaps->least_d, from_d);
		net->cell[j] = pairs;
		pairs += (size_t)(net->near[j] - net->sure[j]);
	}
	if (pairs == 0 || pairs > ASKED_MAX)
		return ST_OK;
	net->asked = calloc(pairs, 1);
	return net->asked ? ST_OK
			  : err_set(e, ST_MEMORY, "no memory for a running order of %d items", net->n);
}

/* Best that may stand before j. From the latest backwards, until what is left can't be better; what is sure
 * wins a tie, being earlier. */
static int64_t best_before(struct order_net *net, int j, int *before)
{
	int sure = net->sure[j], at = net->top_at[sure];
	int64_t best = net->top[sure];
	for (int i = net->near[j] - 1; i >= sure; i--) {
		if (net->top[i + 1] < best || (net->top[i + 1] == best && at < sure))
			break;
		if (net->value[i] < best || (net->value[i] == best && at < sure) || !near_pair(net, i, j))
			continue;
		best = net->value[i];
		at = i;
	}
	*before = at;
	return best;
}

int64_t order_relaxed(struct order_net *net, const int64_t gain[])
{
	net->top[0] = 0;
	net->top_at[0] = -1;
	for (int j = 0; j < net->n; j++) {
		net->top[j + 1] = net->top[j];
		net->top_at[j + 1] = net->top_at[j];
		net->value[j] = ORDER_BARRED;
		if (gain[j] <= ORDER_BARRED / 2)
			continue;
		net->value[j] = gain[j] + best_before(net, j, &net->before[j]);
		if (net->value[j] > net->top[j]) {
			net->top[j + 1] = net->value[j];
			net->top_at[j + 1] = j;
		}
	}
	return net->top[net->n];
}

void order_ends(struct order_net *net, const int64_t gain[], int64_t end[], int64_t beyond[])
{
	int64_t surely = 0; /* best end of those that surely may follow: beyond[k] is for all ranks below k */
	for (int i = 0; i < net->n; i++)
		end[i] = beyond[i + 1] = 0;
	beyond[0] = 0;
	for (int i = net->n - 1; i >= 0; i--) {
		surely = beyond[i + 1] > surely ? beyond[i + 1] : surely;
		if (gain[i] <= ORDER_BARRED / 2) {
			end[i] = ORDER_BARRED;
			continue;
		}
		end[i] =
		    gain[i] + (end[i] > surely ? end[i] : surely); /* so far it held the best near follower */
		int64_t *below = &beyond[net->sure[i]];
		*below = end[i] > *below ? end[i] : *below;
		for (int k = net->sure[i]; k < net->near[i]; k++)
			if (end[i] > end[k] && near_pair(net, k, i))
				end[k] = end[i];
	}
}

int order_chain(const struct order_net *net, int chain[])
{
	int n = 0;
	for (int j = net->top_at[net->n]; j >= 0; j = net->before[j])
		n++;
	int k = n;
	for (int j = net->top_at[net->n]; j >= 0; j = net->before[j])
		chain[--k] = j;
	return n;
}
