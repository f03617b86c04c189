//! Whether triangles make one surface with two sides.

use super::stl::Facet;
use super::{Closed, Fault, Point, REACH_M, Reading, Side};
use std::collections::HashMap;

/// A normal counts as stated when its angle to the plane of the corners is told by this share.
const TELLS: f64 = 1e-3;

/// What the check found.
pub(super) struct Found {
    /// Loops of open edges.
    pub(super) rims: usize,
}

/// An edge and the triangles at it.
#[derive(Default)]
struct Edge {
    /// Triangles that run from the lesser to the greater corner, and back.
    ways: [usize; 2],
    /// The first two of them.
    first: [Option<usize>; 2],
}

/// Checks the facets, in the file's unit.
pub(super) fn check(facets: &[Facet], reading: &Reading) -> Result<Found, Fault> {
    reach(facets, reading)?;
    for (index, facet) in facets.iter().enumerate() {
        let normal = normal(&facet.corners);
        let sizes = norm(normal) * norm(facet.normal);
        if dot(normal, facet.normal) < -TELLS * sizes {
            return Err(Fault::Normal { triangle: index + 1 });
        }
    }
    // One facet without an area is a slip of rounding; all of them are no surface.
    if !facets.iter().any(|facet| norm(normal(&facet.corners)) > 0.0) {
        return Err(Fault::Empty);
    }
    let corners = merged(facets);
    let edges = edges(&corners);
    sides(facets, &corners, &edges)?;
    in_one_piece(&corners, &edges)?;
    let open = open_edges(&corners, &edges);
    if let (Some(_), Some(&[from, _])) = (reading.closed, open.first()) {
        return Err(Fault::Open { edges: open.len(), at: place(facets, &corners, from) });
    }
    if let Some(closed) = reading.closed {
        let volume = volume(facets);
        let inward = (volume < 0.0) == (reading.side == Side::Front);
        if inward != (closed == Closed::Vessel) {
            return Err(Fault::InsideOut { closed });
        }
    }
    Ok(Found { rims: groups(open.iter().copied(), corners.len() * 3) })
}

/// Every coordinate a number within the reach of a plan.
fn reach(facets: &[Facet], reading: &Reading) -> Result<(), Fault> {
    let limit = REACH_M / reading.unit_m;
    for (index, facet) in facets.iter().enumerate() {
        let numbers = facet.corners.iter().chain([&facet.normal]).flatten();
        let broken = |value: &&f64| !value.is_finite();
        let far = facet.corners.iter().flatten().find(|value| value.abs() > limit);
        if let Some(&value) = numbers.clone().find(broken).or(far) {
            return Err(Fault::Coordinate { triangle: index + 1, value, limit });
        }
    }
    Ok(())
}

/// Corners by number; those at the very same place are one. A facet with two corners at one place
/// is no triangle and gets none.
fn merged(facets: &[Facet]) -> Vec<Option<[usize; 3]>> {
    let mut known: HashMap<[u64; 3], usize> = HashMap::new();
    let mut number = |corner: &Point| {
        // Zero has one sign here.
        let key = corner.map(|value| (value + 0.0).to_bits());
        let next = known.len();
        *known.entry(key).or_insert(next)
    };
    let numbered = facets.iter().map(|facet| {
        let [a, b, c] = [0, 1, 2].map(|corner| number(&facet.corners[corner]));
        (a != b && b != c && c != a).then_some([a, b, c])
    });
    numbered.collect()
}

fn around([a, b, c]: [usize; 3]) -> [[usize; 2]; 3] {
    [[a, b], [b, c], [c, a]]
}

fn key([a, b]: [usize; 2]) -> (usize, usize) {
    (a.min(b), a.max(b))
}

fn edges(corners: &[Option<[usize; 3]>]) -> HashMap<(usize, usize), Edge> {
    let mut edges: HashMap<_, Edge> = HashMap::new();
    for (index, triangle) in corners.iter().enumerate() {
        for way in triangle.map(around).into_iter().flatten() {
            let edge = edges.entry(key(way)).or_default();
            edge.ways[usize::from(way[0] > way[1])] += 1;
            let free = edge.first.iter_mut().find(|place| place.is_none());
            if let Some(place) = free {
                *place = Some(index);
            }
        }
    }
    edges
}

/// Two triangles at each edge at most, and these in opposite ways.
fn sides(
    facets: &[Facet],
    corners: &[Option<[usize; 3]>],
    edges: &HashMap<(usize, usize), Edge>,
) -> Result<(), Fault> {
    for way in corners.iter().flatten().flat_map(|triangle| around(*triangle)) {
        let Some(edge) = edges.get(&key(way)) else { continue };
        let at = || place(facets, corners, way[0]);
        let [there, back] = edge.ways;
        if there + back > 2 {
            return Err(Fault::Shared { triangles: there + back, at: at() });
        }
        if let [Some(one), Some(other)] = edge.first
            && there != back
        {
            return Err(Fault::Flipped { one: one + 1, other: other + 1, at: at() });
        }
    }
    Ok(())
}

fn in_one_piece(
    corners: &[Option<[usize; 3]>],
    edges: &HashMap<(usize, usize), Edge>,
) -> Result<(), Fault> {
    let pairs = edges.values().filter_map(|edge| match edge.first {
        [Some(one), Some(other)] => Some([one, other]),
        _ => None,
    });
    let mut union = Union::of(corners.len());
    pairs.for_each(|pair| union.join(pair));
    let triangles: Vec<usize> = (0..corners.len()).filter(|&i| corners[i].is_some()).collect();
    let mut roots: Vec<usize> = triangles.iter().map(|&i| union.root(i)).collect();
    let Some(&first) = roots.first() else { return Err(Fault::Empty) };
    let stray = triangles.iter().find(|&&i| union.root(i) != first);
    let Some(&stray) = stray else { return Ok(()) };
    roots.sort_unstable();
    roots.dedup();
    Err(Fault::Pieces { pieces: roots.len(), triangle: stray + 1 })
}

/// Edges of one triangle alone, in the order of the file.
fn open_edges(
    corners: &[Option<[usize; 3]>],
    edges: &HashMap<(usize, usize), Edge>,
) -> Vec<[usize; 2]> {
    let all = corners.iter().flatten().flat_map(|triangle| around(*triangle));
    all.filter(|way| edges.get(&key(*way)).is_some_and(|edge| edge.first[1].is_none())).collect()
}

/// How many groups edges make that meet at corners.
fn groups(edges: impl Iterator<Item = [usize; 2]> + Clone, corners: usize) -> usize {
    let mut union = Union::of(corners);
    edges.clone().for_each(|edge| union.join(edge));
    let mut roots: Vec<usize> = edges.map(|[from, _]| union.root(from)).collect();
    roots.sort_unstable();
    roots.dedup();
    roots.len()
}

/// Where a corner lies.
fn place(facets: &[Facet], corners: &[Option<[usize; 3]>], number: usize) -> Point {
    let of = facets.iter().zip(corners).find_map(|(facet, numbers)| {
        let at = numbers.as_ref()?.iter().position(|one| *one == number)?;
        Some(facet.corners[at])
    });
    of.unwrap_or_default()
}

/// Groups that grow together.
struct Union(Vec<usize>);

impl Union {
    fn of(count: usize) -> Self {
        Self((0..count).collect())
    }

    fn root(&mut self, mut one: usize) -> usize {
        while self.0[one] != one {
            self.0[one] = self.0[self.0[one]];
            one = self.0[one];
        }
        one
    }

    fn join(&mut self, [one, other]: [usize; 2]) {
        let (one, other) = (self.root(one), self.root(other));
        self.0[one.max(other)] = one.min(other);
    }
}

/// Six times the volume inside, positive when the order of the corners shows them outward.
fn volume(facets: &[Facet]) -> f64 {
    let from = facets.first().map_or([0.0; 3], |facet| facet.corners[0]);
    let part = |facet: &Facet| {
        let [a, b, c] = facet.corners.map(|corner| less(corner, from));
        dot(a, cross(b, c))
    };
    facets.iter().map(part).sum()
}

/// Twice the area along the normal by the order of the corners.
pub(crate) fn normal([a, b, c]: &[Point; 3]) -> Point {
    cross(less(*b, *a), less(*c, *a))
}

fn less(a: Point, b: Point) -> Point {
    [a[0] - b[0], a[1] - b[1], a[2] - b[2]]
}

fn cross(a: Point, b: Point) -> Point {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}

fn dot(a: Point, b: Point) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

fn norm(a: Point) -> f64 {
    dot(a, a).sqrt()
}
