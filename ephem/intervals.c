/* SPDX-License-Identifier: MIT */
#include "ephem/intervals.h"

#include <math.h>
#include <stddef.h>

struct intervals intervals_none(void)
{
	struct intervals set;
	set.n = 0;
	set.overflow = false;
	return set;
}

struct intervals intervals_one(double from_d, double to_d)
{
	struct intervals set = intervals_none();
	intervals_append(&set, from_d, to_d);
	return set;
}

void intervals_append(struct intervals *set, double from_d, double to_d)
{
	if (!(to_d > from_d)) /* NaN too */
		return;
	if (set->n > 0 && from_d <= set->s[set->n - 1].to_d) {
		/* after an overflow the end of the last span must stay where it is: the dropped spans lie
		 * behind it */
		if (to_d > set->s[set->n - 1].to_d && !set->overflow)
			set->s[set->n - 1].to_d = to_d;
		return;
	}
	if (set->n == SPANS_MAX || set->overflow) {
		set->overflow = true;
		return;
	}
	set->s[set->n++] = (struct span){.from_d = from_d, .to_d = to_d};
}

struct intervals intervals_and(const struct intervals *a, const struct intervals *b)
{
	struct intervals out = intervals_none();
	int i = 0, j = 0;
	while (i < a->n && j < b->n) {
		struct span p = a->s[i], q = b->s[j];
		intervals_append(&out, fmax(p.from_d, q.from_d), fmin(p.to_d, q.to_d));
		if (p.to_d < q.to_d)
			i++;
		else
			j++;
	}
	out.overflow = out.overflow || a->overflow || b->overflow;
	return out;
}

struct intervals intervals_or(const struct intervals *a, const struct intervals *b)
{
	struct intervals out = intervals_none();
	int i = 0, j = 0;
	while (i < a->n || j < b->n) {
		bool left = j == b->n || (i < a->n && a->s[i].from_d <= b->s[j].from_d);
		struct span next = left ? a->s[i++] : b->s[j++];
		intervals_append(&out, next.from_d, next.to_d);
	}
	out.overflow = out.overflow || a->overflow || b->overflow;
	return out;
}

struct intervals intervals_outside(const struct intervals *a, double from_d, double to_d)
{
	struct intervals out = intervals_none();
	double at = from_d;
	for (int i = 0; i < a->n; i++) {
		intervals_append(&out, at, fmin(a->s[i].from_d, to_d));
		at = fmax(at, a->s[i].to_d);
	}
	/* spans that an overflow dropped lie behind the last one: what follows it can't be called outside */
	if (!a->overflow)
		intervals_append(&out, at, to_d);
	out.overflow = out.overflow || a->overflow;
	return out;
}

struct intervals intervals_clip(const struct intervals *a, double from_d, double to_d)
{
	struct intervals out = intervals_none();
	for (int i = 0; i < a->n; i++)
		intervals_append(&out, fmax(a->s[i].from_d, from_d), fmin(a->s[i].to_d, to_d));
	out.overflow = a->overflow;
	return out;
}

struct intervals intervals_bridge(const struct intervals *a, double gap_d)
{
	struct intervals out = intervals_none();
	for (int i = 0; i < a->n; i++) {
		if (out.n > 0 && a->s[i].from_d - out.s[out.n - 1].to_d <= gap_d)
			out.s[out.n - 1].to_d = a->s[i].to_d;
		else
			intervals_append(&out, a->s[i].from_d, a->s[i].to_d);
	}
	out.overflow = out.overflow || a->overflow;
	return out;
}

struct intervals intervals_fit(const struct intervals *a, double lo_d, double hi_d)
{
	struct intervals out = intervals_none();
	for (int i = 0; i < a->n; i++)
		intervals_append(&out, a->s[i].from_d - lo_d, a->s[i].to_d - hi_d);
	out.overflow = a->overflow;
	return out;
}

double intervals_length(const struct intervals *a)
{
	double sum = 0.0;
	for (int i = 0; i < a->n; i++)
		sum += a->s[i].to_d - a->s[i].from_d;
	return sum;
}

double intervals_overlap(const struct intervals *a, double from_d, double to_d)
{
	double sum = 0.0;
	for (int i = 0; i < a->n; i++) {
		double part = fmin(a->s[i].to_d, to_d) - fmax(a->s[i].from_d, from_d);
		if (part > 0.0)
			sum += part;
	}
	return sum;
}

const struct span *intervals_at(const struct intervals *a, double t_d)
{
	for (int i = 0; i < a->n; i++)
		if (t_d >= a->s[i].from_d && t_d <= a->s[i].to_d)
			return &a->s[i];
	return NULL;
}

bool intervals_contain(const struct intervals *a, double t_d)
{
	return intervals_at(a, t_d) != NULL;
}
