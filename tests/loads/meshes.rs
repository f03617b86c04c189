//! Meshes made for tests, and the bytes of an STL file of them.

use strake::mesh::{Closed, Fault, Mesh, Point, Reading, Side, Triangle};
use strake_oracle::random::Random;

/// Coordinates in metres from the datum, normals into the liquid.
pub(crate) const AS_IT_IS: Reading =
    Reading { unit_m: 1.0, origin_m: 0.0, side: Side::Front, closed: None };
/// The same of a closed vessel.
pub(crate) const VESSEL: Reading = Reading { closed: Some(Closed::Vessel), ..AS_IT_IS };

/// A binary STL file.
pub(crate) fn binary(triangles: &[Triangle]) -> Vec<u8> {
    let mut bytes = vec![0; 80];
    bytes.extend(u32::try_from(triangles.len()).unwrap().to_le_bytes());
    for triangle in triangles {
        bytes.extend([0; 12]);
        for value in triangle.as_flattened() {
            bytes.extend(crate::core_engine::narrow(*value).to_le_bytes());
        }
        bytes.extend([0; 2]);
    }
    bytes
}

/// Through the bytes of a file, which hold f32.
pub(crate) fn read(triangles: &[Triangle], reading: Reading) -> Result<Mesh, Fault> {
    Mesh::of_bytes("made.stl", &binary(triangles), reading)
}

/// Corners in a grid of rings and sectors; normals of the triangles point to the left of a walk
/// along a ring seen from below.
fn woven(rings: usize, sectors: usize, at: impl Fn(usize, usize) -> Point) -> Vec<Triangle> {
    let mut triangles = Vec::new();
    for ring in 0..rings {
        for sector in 0..sectors {
            let next = (sector + 1) % sectors;
            let [a, b] = [at(ring, sector), at(ring, next)];
            let [c, d] = [at(ring + 1, next), at(ring + 1, sector)];
            // At a pole two corners are one.
            triangles.extend([[a, c, b], [a, d, c]].into_iter().filter(has_three_corners));
        }
    }
    triangles
}

fn has_three_corners(triangle: &Triangle) -> bool {
    let [a, b, c] =
        triangle.map(|corner| corner.map(|one| (crate::core_engine::narrow(one) + 0.0).to_bits()));
    a != b && b != c && c != a
}

#[expect(clippy::cast_precision_loss, reason = "a few hundred")]
fn share(part: usize, of: usize) -> f64 {
    part as f64 / of as f64
}

/// A closed vessel of revolution about z by its meridian, from the axis up to the axis.
fn turned(meridian: &[[f64; 2]], sectors: usize) -> Vec<Triangle> {
    woven(meridian.len() - 1, sectors, |ring, sector| {
        let [r, z] = meridian[ring];
        let angle = std::f64::consts::TAU * share(sector, sectors);
        [r * angle.cos(), r * angle.sin(), z]
    })
}

/// A sphere about the origin, wetted inside.
pub(crate) fn sphere(radius: f64, rings: usize) -> Vec<Triangle> {
    let meridian = (0..=rings).map(|ring| {
        let angle = std::f64::consts::PI * (share(ring, rings) - 0.5);
        let r = if ring == 0 || ring == rings { 0.0 } else { radius * angle.cos() };
        [r, radius * angle.sin()]
    });
    turned(&meridian.collect::<Vec<_>>(), 2 * rings)
}

/// An upright cylinder from z = 0 with floor and roof, wetted inside.
pub(crate) fn cylinder(radius: f64, height: f64, sectors: usize) -> Vec<Triangle> {
    turned(&[[0.0, 0.0], [radius, 0.0], [radius, height], [0.0, height]], sectors)
}

/// A cone on its tip at z = 0 under a level roof, wetted inside.
pub(crate) fn cone(radius: f64, height: f64, sectors: usize) -> Vec<Triangle> {
    turned(&[[0.0, 0.0], [radius, height], [0.0, height]], sectors)
}

/// A box with a corner at the origin, wetted inside.
pub(crate) fn case([x, y, z]: Point) -> Vec<Triangle> {
    let corner = |level: usize, place: usize| {
        let height = if level < 2 { 0.0 } else { z };
        if level == 0 || level == 3 {
            return [0.5 * x, 0.5 * y, height];
        }
        let [i, j] = [[0.0, 0.0], [x, 0.0], [x, y], [0.0, y]][place];
        [i, j, height]
    };
    woven(3, 4, corner)
}

/// Turned about a random axis and moved.
pub(crate) fn tumbled(triangles: &[Triangle], random: &mut Random) -> Vec<Triangle> {
    let [a, b, c] = [0; 3].map(|_: i32| random.between(0.0, std::f64::consts::TAU));
    let by = [0; 3].map(|_: i32| random.between(-2.0, 2.0));
    let turn = |angle: f64, [x, y]: [f64; 2]| {
        [x * angle.cos() - y * angle.sin(), x * angle.sin() + y * angle.cos()]
    };
    let moved = |[x, y, z]: Point| {
        let [x, y] = turn(a, [x, y]);
        let [x, z] = turn(b, [x, z]);
        let [y, z] = turn(c, [y, z]);
        [x + by[0], y + by[1], z + by[2]]
    };
    triangles.iter().map(|triangle| triangle.map(moved)).collect()
}

/// Volume inside, of a surface wetted inside.
pub(crate) fn volume_m3(mesh: &Mesh) -> f64 {
    let part = |[a, b, c]: &Triangle| {
        let across =
            [b[1] * c[2] - b[2] * c[1], b[2] * c[0] - b[0] * c[2], b[0] * c[1] - b[1] * c[0]];
        -(a[0] * across[0] + a[1] * across[1] + a[2] * across[2]) / 6.0
    };
    mesh.triangles.iter().map(part).sum()
}
