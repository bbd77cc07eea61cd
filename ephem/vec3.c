/* SPDX-License-Identifier: MIT */
#include "ephem/vec3.h"

#include "ephem/units.h"

#include <math.h>

struct vec3 vec3_add(struct vec3 a, struct vec3 b)
{
	return (struct vec3){a.x + b.x, a.y + b.y, a.z + b.z};
}

struct vec3 vec3_sub(struct vec3 a, struct vec3 b)
{
	return (struct vec3){a.x - b.x, a.y - b.y, a.z - b.z};
}

struct vec3 vec3_scale(struct vec3 a, double f)
{
	return (struct vec3){a.x * f, a.y * f, a.z * f};
}

double vec3_dot(struct vec3 a, struct vec3 b)
{
	return a.x * b.x + a.y * b.y + a.z * b.z;
}

struct vec3 vec3_cross(struct vec3 a, struct vec3 b)
{
	return (struct vec3){a.y * b.z - a.z * b.y, a.z * b.x - a.x * b.z, a.x * b.y - a.y * b.x};
}

double vec3_norm(struct vec3 a)
{
	return sqrt(vec3_dot(a, a));
}

struct vec3 vec3_unit(struct vec3 a)
{
	double r = vec3_norm(a);
	return r > 0.0 ? vec3_scale(a, 1.0 / r) : a;
}

double vec3_angle_rad(struct vec3 a, struct vec3 b)
{
	return atan2(vec3_norm(vec3_cross(a, b)), vec3_dot(a, b));
}

struct vec3 vec3_from_angles(double lon_rad, double lat_rad)
{
	double c = cos(lat_rad);
	return (struct vec3){c * cos(lon_rad), c * sin(lon_rad), sin(lat_rad)};
}

void vec3_to_angles(struct vec3 a, double *lon_rad, double *lat_rad)
{
	double rho = sqrt(a.x * a.x + a.y * a.y);
	double lon = rho > 0.0 ? atan2(a.y, a.x) : 0.0;
	if (lon < 0.0)
		lon += TWO_PI;
	if (lon >= TWO_PI) /* a tiny negative angle rounds up to the full circle */
		lon = 0.0;
	*lon_rad = lon;
	*lat_rad = rho > 0.0 || a.z != 0.0 ? atan2(a.z, rho) : 0.0;
}

struct vec3 mat3_apply(const struct mat3 *m, struct vec3 a)
{
	return (struct vec3){m->m[0][0] * a.x + m->m[0][1] * a.y + m->m[0][2] * a.z,
			     m->m[1][0] * a.x + m->m[1][1] * a.y + m->m[1][2] * a.z,
			     m->m[2][0] * a.x + m->m[2][1] * a.y + m->m[2][2] * a.z};
}

struct vec3 mat3_apply_t(const struct mat3 *m, struct vec3 a)
{
	return (struct vec3){m->m[0][0] * a.x + m->m[1][0] * a.y + m->m[2][0] * a.z,
			     m->m[0][1] * a.x + m->m[1][1] * a.y + m->m[2][1] * a.z,
			     m->m[0][2] * a.x + m->m[1][2] * a.y + m->m[2][2] * a.z};
}

struct mat3 mat3_mul(const struct mat3 *a, const struct mat3 *b)
{
	struct mat3 p;
	for (int i = 0; i < 3; i++)
		for (int j = 0; j < 3; j++)
			p.m[i][j] =
			    a->m[i][0] * b->m[0][j] + a->m[i][1] * b->m[1][j] + a->m[i][2] * b->m[2][j];
	return p;
}

struct mat3 mat3_rot_x(double angle_rad)
{
	double c = cos(angle_rad), s = sin(angle_rad);
	return (struct mat3){{{1.0, 0.0, 0.0}, {0.0, c, s}, {0.0, -s, c}}};
}

struct mat3 mat3_rot_y(double angle_rad)
{
	double c = cos(angle_rad), s = sin(angle_rad);
	return (struct mat3){{{c, 0.0, -s}, {0.0, 1.0, 0.0}, {s, 0.0, c}}};
}

struct mat3 mat3_rot_z(double angle_rad)
{
	double c = cos(angle_rad), s = sin(angle_rad);
	return (struct mat3){{{c, s, 0.0}, {-s, c, 0.0}, {0.0, 0.0, 1.0}}};
}
