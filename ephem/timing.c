/* SPDX-License-Identifier: MIT */
#include "ephem/timing.h"

#include "ephem/units.h"

#include <math.h>

/* Mid-time last: what is left of it then is what nothing else explains. */
enum { P_LEVEL, P_SLOPE, P_STEP, P_DEPTH, P_DURATION, P_MID, P_COUNT };

/* A parameter whose derivative is a sum of others' to this share of its square can't be told from them. */
#define DEPENDENT 1e-11

/* The event's light curve around its mid-time, minutes. Integrals run from before the event. */
struct curve {
	double t1, t2, t3, t4;
	double round, middle, half;	  /* floor: 1 - round ((x - middle) / half)^2 */
	double in_rate, out_rate;	  /* of the limbs, per minute */
	double light2, light3, light4;	  /* integral of the missing light up to a contact, depth 1 */
	double longer2, longer3, longer4; /* of its derivative by the duration */
	double exposure, depth;
	double per_half, per_length, per_exposure;
};

static bool curve_of(const struct timing_event *e, struct curve *c)
{
	*c = (struct curve){.t1 = e->t1_d * DAY_MIN, .t4 = e->t4_d * DAY_MIN, .depth = e->depth_ppt};
	const bool grazing = isnan(e->t2_d) || isnan(e->t3_d);
	c->middle = 0.5 * (c->t1 + c->t4);
	c->t2 = grazing ? c->middle : e->t2_d * DAY_MIN;
	c->t3 = grazing ? c->middle : e->t3_d * DAY_MIN;
	if (!(c->depth > 0.0 && isfinite(c->depth) && c->t1 < c->t2 && c->t2 <= c->t3 && c->t3 < c->t4))
		return false;
	c->half = 0.5 * (c->t3 - c->t2);
	c->middle = 0.5 * (c->t2 + c->t3);
	c->round = c->half > 0.0 && e->roundness > 0.0 ? fmin(e->roundness, 1.0) : 0.0;
	const double edge = 1.0 - c->round;
	c->in_rate = edge / (c->t2 - c->t1);
	c->out_rate = edge / (c->t4 - c->t3);
	c->light2 = 0.5 * edge * (c->t2 - c->t1);
	c->light3 = c->light2 + 2.0 * c->half * (1.0 - c->round / 3.0);
	c->light4 = c->light3 + 0.5 * edge * (c->t4 - c->t3);
	c->longer2 = 0.5 * edge;
	c->longer3 = c->longer2 + 2.0 / 3.0 * c->round;
	c->longer4 = c->longer3 + 0.5 * edge;
	c->exposure = e->exposure_s > 0.0 ? e->exposure_s / 60.0 : 0.0;
	c->per_half = c->half > 0.0 ? 1.0 / c->half : 0.0;
	c->per_length = 1.0 / (c->t4 - c->t1);
	c->per_exposure = c->exposure > 0.0 ? 1.0 / c->exposure : 0.0;
	return isfinite(c->exposure) && isfinite(c->light4);
}

/* Missing light, its derivatives by the time and by the duration: at a moment. */
struct value {
	double light, rate, longer;
};

static struct value value_at(const struct curve *c, double x)
{
	if (x <= c->t1 || x >= c->t4)
		return (struct value){0};
	if (x < c->t2)
		return (struct value){c->in_rate * (x - c->t1), c->in_rate, 0.5 * c->in_rate};
	if (x > c->t3)
		return (struct value){c->out_rate * (c->t4 - x), -c->out_rate, 0.5 * c->out_rate};
	if (!(c->half > 0.0))
		return (struct value){1.0, 0.0, 0.0};
	const double u = (x - c->middle) * c->per_half, r = c->round * u * c->per_half;
	return (struct value){1.0 - c->round * u * u, -2.0 * r, r * u};
}

/* Integrals of the missing light and of its derivative by the duration, and the missing light itself. */
static struct value integral_to(const struct curve *c, double x)
{
	if (x <= c->t1)
		return (struct value){0};
	if (x >= c->t4)
		return (struct value){c->light4, 0.0, c->longer4};
	if (x < c->t2) {
		const double s = x - c->t1, light = c->in_rate * s;
		return (struct value){0.5 * light * s, light, 0.5 * light};
	}
	if (x > c->t3) {
		const double s = c->t4 - x, light = c->out_rate * s;
		return (struct value){c->light4 - 0.5 * light * s, light, c->longer4 - 0.5 * light};
	}
	if (!(c->half > 0.0))
		return (struct value){c->light2, 1.0, c->longer2};
	const double u = (x - c->middle) * c->per_half, third = (1.0 / 3.0) * c->round * (u * u * u + 1.0);
	return (struct value){c->light2 + (x - c->t2) - third * c->half, 1.0 - c->round * u * u,
			      c->longer2 + third};
}

/* The same as value_at, averaged over an exposure. */
static struct value averaged_at(const struct curve *c, double x)
{
	if (!(c->exposure > 0.0))
		return value_at(c, x);
	const struct value a = integral_to(c, x - 0.5 * c->exposure),
			   b = integral_to(c, x + 0.5 * c->exposure);
	const double per = c->per_exposure;
	return (struct value){(b.light - a.light) * per, (b.rate - a.rate) * per,
			      (b.longer - a.longer) * per};
}

/* Lower half of the normal matrix. */
struct fisher {
	double m[P_COUNT][P_COUNT];
};

/* Weighted products of the derivatives over a stretch; the step's are the level's after a flip and 0 before
 * it. */
struct products {
	double w, wx, wxx;	   /* level and slope */
	double d1, dx, dd;	   /* depth with level, slope, itself */
	double l1, lx, ld, ll;	   /* duration with those before, itself */
	double m1, mx, md, ml, mm; /* mid-time likewise */
};

static void add_event(struct products *p, const struct value *v, double x, double w)
{
	const double wd = w * v->light, wl = w * v->longer, wm = w * v->rate;
	p->d1 += wd;
	p->dx += wd * x;
	p->dd += wd * v->light;
	p->l1 += wl;
	p->lx += wl * x;
	p->ld += wl * v->light;
	p->ll += wl * v->longer;
	p->m1 += wm;
	p->mx += wm * x;
	p->md += wm * v->light;
	p->ml += wm * v->longer;
	p->mm += wm * v->rate;
}

static void add_products(struct fisher *f, const struct products *p, double depth, bool after_flip)
{
	const double d = depth,
		     row[P_COUNT][P_COUNT] = {
			 [P_LEVEL] = {p->w},
			 [P_SLOPE] = {p->wx, p->wxx},
			 [P_STEP] = {p->w, p->wx, p->w},
			 [P_DEPTH] = {-p->d1, -p->dx, -p->d1, p->dd},
			 [P_DURATION] = {-d * p->l1, -d * p->lx, -d * p->l1, d * p->ld, d * d * p->ll},
			 [P_MID] = {d * p->m1, d * p->mx, d * p->m1, -d * p->md, -d * d * p->ml,
				    d * d * p->mm},
		     };
	for (int r = 0; r < P_COUNT; r++)
		for (int k = 0; k <= r; k++)
			if (after_flip || (r != P_STEP && k != P_STEP))
				f->m[r][k] += row[r][k];
}

enum { POINTS = 4 };
/* A stretch without an edge inside: noise linear, light curve a polynomial. Gauss's rule. */
static void add_piece(struct products *p, const struct curve *c, const double x[2], const double noise[2])
{
	static const double node[POINTS] = {-0.86113631159405258, -0.33998104358485626, 0.33998104358485626,
					    0.86113631159405258},
			    weight[POINTS] = {0.17392742256872693, 0.32607257743127307, 0.32607257743127307,
					      0.17392742256872693};
	const double centre = 0.5 * (x[0] + x[1]), reach = 0.5 * (x[1] - x[0]);
	const double level = 0.5 * (noise[0] + noise[1]), rise = 0.5 * (noise[1] - noise[0]);
	const bool inside = centre > c->t1 - 0.5 * c->exposure && centre < c->t4 + 0.5 * c->exposure;
	for (int i = 0; i < POINTS; i++) {
		const double at = centre + reach * node[i], ppt = level + rise * node[i];
		const double w = 2.0 * reach * weight[i] / (ppt * ppt), slope = at * c->per_length;
		p->w += w;
		p->wx += w * slope;
		p->wxx += w * slope * slope;
		if (inside) {
			const struct value v = averaged_at(c, at);
			add_event(p, &v, slope, w);
		}
	}
}

/* Moments at which something changes, in order. */
struct cuts {
	int n;
	double x[TIMING_NODES_MAX + 10];
};

static void cut(struct cuts *c, double x)
{
	int i = c->n++;
	for (; i > 0 && c->x[i - 1] > x; i--)
		c->x[i] = c->x[i - 1];
	c->x[i] = x;
}

static struct cuts cuts_of(const struct timing_input *in, const struct curve *c, double mid_d)
{
	struct cuts out = {.n = 0};
	const double contact[4] = {c->t1, c->t2, c->t3, c->t4};
	for (int i = 0; i < in->n; i++)
		cut(&out, (in->node[i].t_d - mid_d) * DAY_MIN);
	if (!isnan(in->flip_d))
		cut(&out, (in->flip_d - mid_d) * DAY_MIN);
	for (int i = 0; i < 4; i++) {
		cut(&out, contact[i] - 0.5 * c->exposure);
		if (c->exposure > 0.0)
			cut(&out, contact[i] + 0.5 * c->exposure);
	}
	return out;
}

/* Noise at the ends of a stretch that has no node inside; false: no data in it. *k: the node before it, only
 * moves on. */
static bool noise_over(const struct timing_input *in, double mid_d, const double x[2], int *k,
		       double noise[2])
{
	const double centre_d = mid_d + 0.5 * (x[0] + x[1]) * MIN_D;
	while (*k + 1 < in->n && in->node[*k + 1].t_d <= centre_d)
		++*k;
	const struct noise_node *a = &in->node[*k];
	const bool outside = centre_d < a->t_d || *k + 1 == in->n;
	const struct noise_node *b = outside ? a : a + 1;
	if (!(a->minute_ppt > 0.0 && b->minute_ppt > 0.0 && isfinite(a->minute_ppt) &&
	      isfinite(b->minute_ppt)))
		return false;
	const double per = outside ? 0.0 : (b->minute_ppt - a->minute_ppt) / (b->t_d - a->t_d);
	for (int i = 0; i < 2; i++)
		noise[i] = a->minute_ppt + per * (mid_d + x[i] * MIN_D - a->t_d);
	return true;
}

static void add_data(struct fisher *f, const struct timing_input *in, const struct curve *c, double mid_d)
{
	const struct cuts cuts = cuts_of(in, c, mid_d);
	const double flip = (in->flip_d - mid_d) * DAY_MIN;
	struct products side[2] = {{0}}; /* before and after the flip */
	int node = 0, next = 0;
	for (int i = 0; i < in->usable->n; i++) {
		const double end = (in->usable->s[i].to_d - mid_d) * DAY_MIN;
		double x[2] = {(in->usable->s[i].from_d - mid_d) * DAY_MIN, 0.0}, noise[2];
		while (x[0] < end) {
			while (next < cuts.n && cuts.x[next] <= x[0])
				next++;
			x[1] = next < cuts.n ? fmin(cuts.x[next], end) : end;
			if (noise_over(in, mid_d, x, &node, noise))
				add_piece(&side[0.5 * (x[0] + x[1]) > flip], c, x, noise);
			x[0] = x[1];
		}
	}
	add_products(f, &side[0], c->depth, false);
	add_products(f, &side[1], c->depth, true);
}

/* What is known beforehand; an exactly known parameter is none. */
static void add_prior(struct fisher *f, int p, double err)
{
	if (err > 0.0)
		f->m[p][p] += 1.0 / (err * err);
	if (err == 0.0)
		for (int i = 0; i < P_COUNT; i++)
			f->m[i > p ? i : p][i > p ? p : i] = 0.0;
}

/* Information about the mid-time that the others leave, per minute^2: last pivot of Cholesky's elimination,
 * rows scaled to a unit diagonal. */
static double information_left(struct fisher *f)
{
	double scale[P_COUNT];
	for (int r = 0; r < P_COUNT; r++)
		scale[r] = f->m[r][r] > 0.0 ? 1.0 / sqrt(f->m[r][r]) : 0.0;
	for (int r = 0; r < P_COUNT; r++)
		for (int k = 0; k <= r; k++)
			f->m[r][k] *= scale[r] * scale[k];
	for (int p = 0; p < P_MID; p++) {
		if (!(f->m[p][p] > DEPENDENT))
			continue; /* a sum of those before it: it can imitate nothing more */
		for (int r = p + 1; r < P_COUNT; r++) {
			const double share = f->m[r][p] / f->m[p][p];
			for (int k = p + 1; k <= r; k++)
				f->m[r][k] -= share * f->m[k][p];
		}
	}
	const double left = f->m[P_MID][P_MID];
	return left > DEPENDENT ? left / (scale[P_MID] * scale[P_MID]) : 0.0;
}

double timing_mid_s(const struct timing_input *in, double mid_d)
{
	struct curve c;
	const struct timing_event *e = in->event;
	if (in->n < 1 || in->n > TIMING_NODES_MAX || !isfinite(mid_d) || !curve_of(e, &c) ||
	    e->duration_err_d < 0.0 || e->depth_err_ppt < 0.0 || e->slope_err_ppt_h < 0.0)
		return NAN;
	struct fisher f = {0};
	add_data(&f, in, &c, mid_d);
	const double length_min = c.t4 - c.t1;
	add_prior(&f, P_DURATION,
		  isnan(e->duration_err_d) ? TIMING_WIDE * length_min : e->duration_err_d * DAY_MIN);
	add_prior(&f, P_DEPTH, e->depth_err_ppt);
	add_prior(&f, P_SLOPE, e->slope_err_ppt_h * length_min / 60.0);
	return 60.0 / sqrt(information_left(&f));
}

double timing_whole_s(double depth_ppt, double minute_ppt, double tau_min, double exposure_s)
{
	const double e = exposure_s / 60.0, longer = fmax(tau_min, e), shorter = fmin(tau_min, e);
	return 60.0 * minute_ppt / depth_ppt * sqrt(0.5 * longer / (1.0 - shorter / (3.0 * longer)));
}
