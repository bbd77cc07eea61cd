/* SPDX-License-Identifier: MIT
 * Orders that take every event once, found without a proof: from a relaxed answer, and by the relaxed method
 * with a memory. */
#include "ephem/running_order_parts.h"

#include <stdlib.h>
#include <string.h>

enum { WORD = 64 };
#define MEMORY_MAX                                                                                           \
	((size_t)1 << 22) /* words; beyond that there is no memory and the relaxed answers have to do */

enum status order_maker_open(struct order_maker *m, struct order_net *net, int n_events,
			     struct order_found *found, struct err *e)
{
	size_t n = (size_t)net->n, words = ((size_t)n_events + WORD - 1) / WORD;
	*m = (struct order_maker){.net = net, .found = found, .words = n * words <= MEMORY_MAX ? words : 0};
	m->owner = calloc((size_t)n_events + 1, sizeof *m->owner);
	m->kept = calloc(n + 1, sizeof *m->kept);
	m->chain = calloc(n + 1, sizeof *m->chain);
	m->before = calloc(n + 1, sizeof *m->before);
	m->value = calloc(n + 1, sizeof *m->value);
	m->top = calloc(n + 1, sizeof *m->top);
	m->held = calloc(n * m->words + 1, sizeof *m->held);
	if (!m->owner || !m->kept || !m->chain || !m->before || !m->value || !m->top || !m->held)
		return err_set(e, ST_MEMORY, "no memory for a running order of %d items", net->n);
	for (int i = 0; i < n_events; i++)
		m->owner[i] = -1;
	return ST_OK;
}

void order_maker_close(struct order_maker *m)
{
	free(m->owner);
	free(m->kept);
	free(m->chain);
	free(m->before);
	free(m->value);
	free(m->top);
	free(m->held);
}

/* Of two items with an event in common the lesser goes. */
static void keep_each_event_once(struct order_maker *m, const int chain[], int n)
{
	const struct order_net *net = m->net;
	for (int k = 0; k < n; k++) {
		const struct order_spot *spot = &net->spot[chain[k]];
		bool clash = false;
		int64_t others = 0;
		for (int i = 0; i < spot->n_events; i++) {
			int owner = m->owner[spot->event[i]];
			if (owner >= 0 && m->kept[owner]) {
				clash = true;
				others += net->score[chain[owner]];
			}
		}
		m->kept[k] = !clash || others < net->score[chain[k]];
		for (int i = 0; m->kept[k] && i < spot->n_events; i++) {
			int owner = m->owner[spot->event[i]];
			if (owner >= 0)
				m->kept[owner] = false;
			m->owner[spot->event[i]] = k;
		}
	}
	for (int k = 0; k < n; k++)
		for (int i = 0; i < net->spot[chain[k]].n_events; i++)
			m->owner[net->spot[chain[k]].event[i]] = -1;
}

void order_make_from_chain(struct order_maker *m, const int chain[], int n)
{
	struct order_net *net = m->net;
	struct order_found *found = m->found;
	keep_each_event_once(m, chain, n);
	int64_t score = 0;
	int last = -1;
	for (int k = 0; k < n; k++) {
		if (m->kept[k] && last >= 0 && !order_may_follow(net, last, chain[k]))
			m->kept[k] = false; /* gaps that break the triangle inequality, or by a rounding */
		if (!m->kept[k])
			continue;
		last = chain[k];
		score += net->score[last];
	}
	if (score <= found->score)
		return;
	found->score = score;
	found->n = 0;
	for (int k = 0; k < n; k++)
		if (m->kept[k])
			found->chain[found->n++] = chain[k];
}

static bool holds_any(const struct order_maker *m, int rank, const struct order_spot *spot)
{
	const uint64_t *held = &m->held[(size_t)rank * m->words];
	for (int i = 0; i < spot->n_events; i++)
		if (held[spot->event[i] / WORD] >> (spot->event[i] % WORD) & 1u)
			return true;
	return false;
}

/* Best order found so far that ends before rank j and holds none of its events; -1: none. */
static int best_without(const struct order_maker *m, int j, int64_t *best)
{
	const struct order_spot *spot = &m->net->spot[j];
	int at = -1;
	*best = 0;
	for (int i = m->net->near[j] - 1; i >= 0 && m->top[i + 1] > *best; i--) {
		if (m->value[i] <= *best || holds_any(m, i, spot) || !order_may_follow(m->net, i, j))
			continue;
		*best = m->value[i];
		at = i;
	}
	return at;
}

void order_make_from_gains(struct order_maker *m, const int64_t gain[])
{
	const struct order_net *net = m->net;
	int end = -1, n = 0;
	if (m->words == 0)
		return;
	m->top[0] = 0;
	for (int j = 0; j < net->n; j++) {
		uint64_t *held = &m->held[(size_t)j * m->words];
		m->value[j] = ORDER_BARRED;
		m->top[j + 1] = m->top[j];
		if (gain[j] <= ORDER_BARRED / 2)
			continue;
		int64_t best;
		int at = m->before[j] = best_without(m, j, &best);
		if (at >= 0)
			memcpy(held, &m->held[(size_t)at * m->words], m->words * sizeof *held);
		else
			memset(held, 0, m->words * sizeof *held);
		for (int i = 0; i < net->spot[j].n_events; i++)
			held[net->spot[j].event[i] / WORD] |= (uint64_t)1 << (net->spot[j].event[i] % WORD);
		m->value[j] = gain[j] + best;
		if (m->value[j] > m->top[j]) {
			m->top[j + 1] = m->value[j];
			end = j;
		}
	}
	for (int j = end; j >= 0; j = m->before[j])
		n++;
	for (int j = end, k = n; j >= 0; j = m->before[j])
		m->chain[--k] = j;
	order_make_from_chain(m, m->chain, n);
}
