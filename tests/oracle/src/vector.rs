//! Vectors of three numbers, as far as statics needs them.

/// A vector or point: x and y level, z up.
pub type Vec3 = [f64; 3];

/// a + k b.
#[must_use]
pub fn add_scaled(a: Vec3, k: f64, b: Vec3) -> Vec3 {
    [a[0] + k * b[0], a[1] + k * b[1], a[2] + k * b[2]]
}

/// The vector product a x b.
#[must_use]
pub fn cross(a: Vec3, b: Vec3) -> Vec3 {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}

/// The scalar product.
#[must_use]
pub fn dot(a: Vec3, b: Vec3) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// The length.
#[must_use]
pub fn norm(a: Vec3) -> f64 {
    dot(a, a).sqrt()
}
