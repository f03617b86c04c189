//! Meshes: cut at a height, each triangle gives a chord; its area grows with the height by the
//! chord over the sine of the slope.

use super::curved::Swept;
use crate::mesh::{Mesh, Point, Triangle};

/// A triangle no higher than this lies level, m.
const LEVEL_M: f64 = 1e-5;
/// Stretches of the height by which the triangles at a height are found.
const SHELVES: usize = 256;

/// A triangle with its unit normal out of the liquid.
struct Facet {
    corners: Triangle,
    normal: Point,
    area_m2: f64,
}

impl Facet {
    fn of(triangle: &Triangle) -> Self {
        let mut corners = *triangle;
        corners.sort_by(|a, b| a[2].total_cmp(&b[2]));
        let into = crate::mesh::normal(triangle);
        let twice = into.iter().map(|one| one * one).sum::<f64>().sqrt();
        let normal = into.map(|one| if twice > 0.0 { -one / twice } else { 0.0 });
        Self { corners, normal, area_m2: 0.5 * twice }
    }

    fn is_level(&self) -> bool {
        self.corners[2][2] - self.corners[0][2] < LEVEL_M
    }

    /// Length of the level line across it at a height.
    fn chord_m(&self, z_m: f64) -> f64 {
        let [low, middle, high] = self.corners;
        let on = |a: Point, b: Point| {
            let share = (z_m - a[2]) / (b[2] - a[2]);
            [a[0] + share * (b[0] - a[0]), a[1] + share * (b[1] - a[1])]
        };
        if z_m <= low[2] || z_m >= high[2] {
            return 0.0;
        }
        let short = if z_m < middle[2] { on(low, middle) } else { on(middle, high) };
        let long = on(low, high);
        (short[0] - long[0]).hypot(short[1] - long[1])
    }

    /// Growth of its projections along x and up.
    fn growth(&self, z_m: f64) -> [f64; 2] {
        let [x, y, z] = self.normal;
        let per_m = self.chord_m(z_m) / x.hypot(y);
        [x * per_m, z * per_m]
    }
}

/// The triangles, to be found by height.
struct Shelves {
    low_m: f64,
    step_m: f64,
    facets: Vec<Facet>,
    lists: Vec<Vec<usize>>,
}

impl Shelves {
    fn of(mesh: &Mesh) -> Self {
        let [low_m, high_m] = mesh.heights_m();
        #[expect(clippy::cast_precision_loss, reason = "a small constant")]
        let step_m = (high_m - low_m) / SHELVES as f64;
        let facets = mesh.triangles.iter().map(Facet::of).filter(|one| !one.is_level()).collect();
        let mut found = Self { low_m, step_m, facets, lists: vec![Vec::new(); SHELVES] };
        for (index, facet) in found.facets.iter().enumerate() {
            let [first, last] = [0, 2].map(|corner| found.shelf(facet.corners[corner][2]));
            found.lists[first..=last].iter_mut().for_each(|list| list.push(index));
        }
        found
    }

    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "the cast saturates at both ends"
    )]
    fn shelf(&self, z_m: f64) -> usize {
        (((z_m - self.low_m) / self.step_m) as usize).min(SHELVES - 1)
    }

    fn growth(&self, z_m: f64) -> [f64; 2] {
        let list = &self.lists[self.shelf(z_m)];
        let all = list.iter().map(|&index| self.facets[index].growth(z_m));
        all.fold([0.0; 2], |[x, z], [dx, dz]| [x + dx, z + dz])
    }
}

/// The mesh by its height.
pub(super) fn swept(mesh: &Mesh) -> Swept {
    let shelves = Shelves::of(mesh);
    let mut ends: Vec<f64> = mesh.triangles.iter().flatten().map(|corner| corner[2]).collect();
    ends.sort_by(f64::total_cmp);
    ends.dedup();
    let turns: Vec<f64> = ends.windows(2).flat_map(|pair| turns(&shelves, pair)).collect();
    ends.extend(turns);
    ends.sort_by(f64::total_cmp);
    let all = mesh.triangles.iter().map(Facet::of);
    let level = all.filter(Facet::is_level).map(|one| {
        let height_m = one.corners.iter().map(|corner| corner[2]).sum::<f64>() / 3.0;
        (height_m, [one.area_m2 * one.normal[0], one.area_m2 * one.normal[2]])
    });
    let level = level.collect();
    Swept { ends, at: Box::new(move |z_m| (z_m, shelves.growth(z_m))), level }
}

/// Heights between two corners at which a projection stops growing and shrinks.
fn turns(shelves: &Shelves, pair: &[f64]) -> Vec<f64> {
    let (from, long) = (pair[0], pair[1] - pair[0]);
    // Straight in between, so two places tell.
    let [one, other] = [0.25, 0.75].map(|share| shelves.growth(from + share * long));
    let places = [0, 1].map(|axis| {
        let slope = 2.0 * (other[axis] - one[axis]);
        0.25 - one[axis] / slope
    });
    places.into_iter().filter(|at| (0.0..1.0).contains(at)).map(|at| from + at * long).collect()
}
