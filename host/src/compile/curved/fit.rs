//! Rows for a weighting that is given.
//!
//! A row keeps the integral and the first two moments of its weighting, so that beyond it nothing
//! is off, and inside only the share of the third and higher powers.

use super::ExactRow;
use strake_core::part::curved::RowKind;

/// Nodes and weights of Gauss's rule of eight points on [0, 1].
pub(crate) const GAUSS: [(f64, f64); 8] = [
    (0.019_855_071_751_231_9, 0.050_614_268_145_188_1),
    (0.101_666_761_293_186_6, 0.111_190_517_226_687_2),
    (0.237_233_795_041_835_5, 0.156_853_322_938_943_6),
    (0.408_282_678_752_175_1, 0.181_341_891_689_181),
    (0.591_717_321_247_825, 0.181_341_891_689_181),
    (0.762_766_204_958_164_5, 0.156_853_322_938_943_6),
    (0.898_333_238_706_813_4, 0.111_190_517_226_687_2),
    (0.980_144_928_248_768_1, 0.050_614_268_145_188_1),
];

/// `integral from 0 to 1 of f`.
pub(super) fn unit_integral(f: impl Fn(f64) -> f64) -> f64 {
    GAUSS.iter().map(|(node, weight)| weight * f(*node)).sum()
}

/// The row from `low_m` over `length_m` with the moments `integral w u^k du`, `u` from 0 to 1.
pub(super) fn even(low_m: f64, length_m: f64, [m0, m1, m2]: [f64; 3]) -> ExactRow {
    // Legendre's polynomials on [0, 1]: 1, 2u - 1, 6u² - 6u + 1.
    let (a0, a1, a2) = (m0, 3.0 * (2.0 * m1 - m0), 5.0 * (6.0 * m2 - 6.0 * m1 + m0));
    let c = [a0 - a1 + a2, 2.0 * a1 - 6.0 * a2, 6.0 * a2];
    let straight = [a0 - a1, 2.0 * a1, 0.0];
    // Towards an end where the weighting is nothing: through zero there, two moments kept.
    let from_zero = [0.0, 6.0 * (3.0 * m0 - 4.0 * m1), 12.0 * (3.0 * m1 - 2.0 * m0)];
    let to_zero = {
        let (n0, n1) = (m0, m0 - m1);
        let (e1, e2) = (6.0 * (3.0 * n0 - 4.0 * n1), 12.0 * (3.0 * n1 - 2.0 * n0));
        [e1 + e2, -e1 - 2.0 * e2, e2]
    };
    let sound = |c: &[f64; 3]| {
        let all = [c[0], c[0] + 0.5 * c[1], c[0] + c[1] + c[2]];
        all.iter().all(|&one| one * m0 >= -1e-12 * m0 * m0)
    };
    let found = [c, from_zero, to_zero, straight].into_iter().find(sound);
    let [c0, c1, c2] = found.unwrap_or([m0, 0.0, 0.0]);
    let clean = |value: f64| if value * m0 < 0.0 { 0.0 } else { value };
    let row = [low_m, length_m, clean(c0), c1 / length_m, c2 / (length_m * length_m)];
    (RowKind::Even, settled(row))
}

/// Takes off what rounding leaves of the wrong sign at the upper end.
fn settled(mut row: [f64; 5]) -> [f64; 5] {
    let [_, length, c0, c1, c2] = row;
    let end = c0 + length * (c1 + length * c2);
    let whole = c0 + length * (0.5 * c1 + length * c2 / 3.0);
    if end * whole < 0.0 || end.abs() < 1e-6 * whole.abs() {
        // A hair more than zero, so that f32 does not fall below it.
        row[3] += (1e-6 * whole - end) / length;
    }
    row
}

/// The row of a weighting `f(t) / sqrt(t)` from its level end over `length_m`, negative to run
/// down.
pub(super) fn root(end_m: f64, length_m: f64, f: impl Fn(f64) -> f64) -> ExactRow {
    let span = length_m.abs();
    // With t = span s²: integral f(t) t^(k - 1/2) dt over span^(k + 1/2).
    let moment = |k: i32| unit_integral(|s| 2.0 * f(span * s * s) * s.powi(2 * k));
    let gram = |j: f64| 1.0 / (j + 0.5);
    let matrix = [
        [gram(0.0), gram(1.0), gram(2.0)],
        [gram(1.0), gram(2.0), gram(3.0)],
        [gram(2.0), gram(3.0), gram(4.0)],
    ];
    let [d0, d1, d2] = solved(matrix, [moment(0), moment(1), moment(2)]);
    (RowKind::Root, [end_m, length_m, d0, d1 / span, d2 / (span * span)])
}

/// Three equations by Cramer's rule.
fn solved(m: [[f64; 3]; 3], right: [f64; 3]) -> [f64; 3] {
    let determinant = |m: &[[f64; 3]; 3]| {
        m[0][0] * (m[1][1] * m[2][2] - m[1][2] * m[2][1])
            - m[0][1] * (m[1][0] * m[2][2] - m[1][2] * m[2][0])
            + m[0][2] * (m[1][0] * m[2][1] - m[1][1] * m[2][0])
    };
    let whole = determinant(&m);
    [0, 1, 2].map(|column| {
        let mut with = m;
        for (row, value) in with.iter_mut().zip(right) {
            row[column] = value;
        }
        determinant(&with) / whole
    })
}

/// `M` of rows in f64: `integral over z < h of (h - z) w dz`.
pub(super) fn prism(rows: &[ExactRow], h: f64) -> f64 {
    let one = |&(kind, [low, length, c0, c1, c2]): &ExactRow| {
        let d = h - low;
        let rooted = |x: f64, side: f64| {
            let t = x * side;
            x.sqrt()
                * (c0 * (2.0 * d + t * 2.0 / 3.0)
                    + x * (c1 * (d * 2.0 / 3.0 + t * 0.4) + x * c2 * (d * 0.4 + t * 2.0 / 7.0)))
        };
        match kind {
            RowKind::Even => {
                let x = d.clamp(0.0, length);
                x * (c0 * (d - x / 2.0)
                    + x * (c1 * (d / 2.0 - x / 3.0) + x * c2 * (d / 3.0 - x / 4.0)))
            }
            RowKind::Root if length > 0.0 => rooted(d.clamp(0.0, length), -1.0),
            RowKind::Root => rooted(-length, 1.0) - rooted((-d).clamp(0.0, -length), 1.0),
            RowKind::Disc => 0.0,
        }
    };
    rows.iter().map(one).sum()
}
