//! Surfaces of triangles, read from STL files.
//!
//! A mesh is one connected surface whose triangles agree on their two sides. [`Mesh::read`] checks
//! that, and, where the file claims it, that the surface closes and on which side its liquid is.
//! That a surface does not cut through itself is not checked.

mod fault;
mod stl;
mod surface;

pub use fault::Fault;
pub(crate) use surface::normal;

use std::io::Read;
use std::path::Path;

/// A point, m; z above the tank's datum.
pub type Point = [f64; 3];
/// Three corners that run counter-clockwise as seen from the liquid.
pub type Triangle = [Point; 3];

/// Largest file read, bytes.
pub const BYTES_MAX: u64 = 16 << 20;
/// Most triangles of a surface.
pub const TRIANGLES_MAX: usize = 50_000;
/// Farthest coordinate, m: as far as a plan reaches.
pub const REACH_M: f64 = 200.0;
/// Least height of a surface, m.
pub const RISE_MIN_M: f64 = 1e-3;

/// Which side of the triangles the liquid wets.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    /// The one that their normals point to.
    Front,
    /// The other one.
    Back,
}

/// What a closed surface separates.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Closed {
    /// The liquid stands inside.
    Vessel,
    /// The liquid stands around it.
    Body,
}

/// How the coordinates of the file are meant.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reading {
    /// One unit of the file, m.
    pub unit_m: f64,
    /// Height of the file's z = 0 above the datum, m.
    pub origin_m: f64,
    /// The wetted side.
    pub side: Side,
    /// Claimed to close; none for an open surface.
    pub closed: Option<Closed>,
}

/// A checked surface in its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Mesh {
    /// Path of the file as the tank file writes it.
    pub file: String,
    /// CRC-32 of the file, to tell one version from another.
    pub check: u32,
    /// How it was read.
    pub reading: Reading,
    /// The triangles.
    pub triangles: Vec<Triangle>,
    /// Loops of edges that belong to one triangle alone.
    pub rims: usize,
}

impl Mesh {
    /// Reads the STL file `file`, text or binary, in `folder`.
    ///
    /// # Errors
    ///
    /// A [`Fault`] when the file cannot be read, is larger than [`BYTES_MAX`], is damaged, or is no
    /// surface as described at the head of this module.
    pub fn read(folder: &Path, file: &str, reading: Reading) -> Result<Self, Fault> {
        let bytes = bytes_of(&folder.join(file))?;
        Self::of_bytes(file, &bytes, reading)
    }

    /// The same of a file's bytes.
    ///
    /// # Errors
    ///
    /// As [`Mesh::read`].
    pub fn of_bytes(file: &str, bytes: &[u8], reading: Reading) -> Result<Self, Fault> {
        let facets = stl::facets(bytes)?;
        let surface::Found { rims } = surface::check(&facets, &reading)?;
        let placed = |[x, y, z]: Point| {
            let m = reading.unit_m;
            [x * m, y * m, z * m + reading.origin_m]
        };
        let triangles = facets.iter().map(|facet| {
            let [a, b, c] = facet.corners.map(placed);
            if reading.side == Side::Front { [a, b, c] } else { [a, c, b] }
        });
        let check = crc::Crc::<u32>::new(&crc::CRC_32_ISO_HDLC).checksum(bytes);
        let triangles: Vec<Triangle> = triangles.collect();
        let mesh = Self { file: file.to_owned(), check, reading, triangles, rims };
        let [low_m, high_m] = mesh.heights_m();
        if high_m - low_m < RISE_MIN_M {
            return Err(Fault::Level { rise_m: high_m - low_m });
        }
        Ok(mesh)
    }

    /// Heights of its lowest and highest points, m above the datum.
    #[must_use]
    pub fn heights_m(&self) -> [f64; 2] {
        let heights = self.triangles.iter().flatten().map(|corner| corner[2]);
        heights.fold([f64::INFINITY, f64::NEG_INFINITY], |[low, high], z| [low.min(z), high.max(z)])
    }
}

/// A regular file of a size that a mesh has.
fn bytes_of(path: &Path) -> Result<Vec<u8>, Fault> {
    let unreadable = |why: std::io::Error| Fault::Unreadable { why: why.kind().to_string() };
    let found = std::fs::metadata(path).map_err(unreadable)?;
    if !found.is_file() {
        return Err(Fault::Unreadable { why: "not a file".to_owned() });
    }
    if found.len() > BYTES_MAX {
        return Err(Fault::TooLarge { bytes: found.len() });
    }
    let mut bytes = Vec::new();
    let file = std::fs::File::open(path).map_err(unreadable)?;
    // One more than allowed, should it grow meanwhile.
    file.take(BYTES_MAX + 1).read_to_end(&mut bytes).map_err(unreadable)?;
    if bytes.len() as u64 > BYTES_MAX {
        return Err(Fault::TooLarge { bytes: bytes.len() as u64 });
    }
    Ok(bytes)
}

#[cfg(test)]
mod tests;
