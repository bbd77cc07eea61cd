/* SPDX-License-Identifier: MIT
 * Three-vectors and 3x3 matrices (row-major), the few operations that the engine needs. */
#ifndef WANE_EPHEM_VEC3_H
#define WANE_EPHEM_VEC3_H

struct vec3 {
	double x, y, z;
};
struct mat3 {
	double m[3][3];
};

struct vec3 vec3_add(struct vec3 a, struct vec3 b);
struct vec3 vec3_sub(struct vec3 a, struct vec3 b);
struct vec3 vec3_scale(struct vec3 a, double f);
double vec3_dot(struct vec3 a, struct vec3 b);
struct vec3 vec3_cross(struct vec3 a, struct vec3 b);
double vec3_norm(struct vec3 a);
/* a / |a|; the zero vector stays zero. */
struct vec3 vec3_unit(struct vec3 a);
/* Angle between two directions [rad, 0..pi]; atan2 form, exact for small and for near-pi angles. */
double vec3_angle_rad(struct vec3 a, struct vec3 b);
/* Unit vector of a longitude-like and a latitude-like angle [rad]. */
struct vec3 vec3_from_angles(double lon_rad, double lat_rad);
/* Inverse: lon in [0, 2 pi), lat in [-pi/2, pi/2]. The zero vector gives 0, 0. */
void vec3_to_angles(struct vec3 a, double *lon_rad, double *lat_rad);
struct vec3 mat3_apply(const struct mat3 *m, struct vec3 a);
/* Transposed matrix times vector (the inverse of a rotation). */
struct vec3 mat3_apply_t(const struct mat3 *m, struct vec3 a);
struct mat3 mat3_mul(const struct mat3 *a, const struct mat3 *b);
/* Frame rotations about axis 1, 2, 3 by angle [rad], sense as in IAU SOFA/ERFA rx, ry, rz. */
struct mat3 mat3_rot_x(double angle_rad);
struct mat3 mat3_rot_y(double angle_rad);
struct mat3 mat3_rot_z(double angle_rad);

#endif
