//! Sound files in both forms, and every way to be none.

use super::{Closed, Fault, Mesh, Point, Reading, Side, TRIANGLES_MAX, Triangle};

const VESSEL: Reading =
    Reading { unit_m: 1.0, origin_m: 0.0, side: Side::Front, closed: Some(Closed::Vessel) };
const OPEN: Reading = Reading { closed: None, ..VESSEL };

/// A tetrahedron wetted inside: the normals point into it.
const CORNERS: [Point; 4] = [[0.0, 0.0, 0.0], [1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]];
const FACES: [[usize; 3]; 4] = [[0, 1, 2], [0, 3, 1], [0, 2, 3], [1, 3, 2]];

fn tetrahedron() -> Vec<Triangle> {
    FACES.iter().map(|face| face.map(|corner| CORNERS[corner])).collect()
}

fn text(triangles: &[Triangle]) -> String {
    let vertex = |[x, y, z]: &Point| format!("vertex {x} {y} {z}\n");
    let facet = |triangle: &Triangle| {
        let corners: String = triangle.iter().map(vertex).collect();
        format!("facet normal 0 0 0\nouter loop\n{corners}endloop\nendfacet\n")
    };
    let facets: String = triangles.iter().map(facet).collect();
    format!("solid made of four\n{facets}endsolid made of four\n")
}

fn binary(triangles: &[Triangle]) -> Vec<u8> {
    // A head as some programs write it.
    let mut bytes = b"solid ".to_vec();
    bytes.resize(80, b' ');
    bytes.extend(u32::try_from(triangles.len()).unwrap().to_le_bytes());
    for triangle in triangles {
        bytes.extend([0; 12]);
        for value in triangle.as_flattened() {
            #[expect(clippy::cast_possible_truncation, reason = "as the file holds it")]
            bytes.extend((*value as f32).to_le_bytes());
        }
        bytes.extend([7; 2]);
    }
    bytes
}

fn mesh(triangles: &[Triangle], reading: Reading) -> Result<Mesh, Fault> {
    Mesh::of_bytes("made.stl", text(triangles).as_bytes(), reading)
}

/// The fault of a file, whose text and hint say the words.
#[track_caller]
fn refused(bytes: &[u8], reading: Reading, words: &str) -> Fault {
    let fault = Mesh::of_bytes("made.stl", bytes, reading).expect_err(words);
    let said = format!("{fault}; {}", fault.hint());
    assert!(said.contains(words), "{said}");
    fault
}

#[test]
fn both_forms_say_the_same() {
    let sound = tetrahedron();
    let of_text = mesh(&sound, VESSEL).unwrap();
    let of_binary = Mesh::of_bytes("made.stl", &binary(&sound), VESSEL).unwrap();
    assert_eq!(of_text.triangles, of_binary.triangles);
    assert_eq!((of_text.triangles.len(), of_text.rims), (4, 0));
    let upper = text(&sound).to_uppercase().replace("SOLID MADE OF FOUR", "SOLID");
    assert_eq!(Mesh::of_bytes("made.stl", upper.as_bytes(), VESSEL).unwrap().rims, 0);
}

#[test]
fn unit_origin_and_side_place_the_surface() {
    let reading = Reading { unit_m: 0.0254, origin_m: 2.0, side: Side::Back, closed: None };
    let found = mesh(&tetrahedron()[1..], reading).unwrap();
    let [low, high] = found.heights_m();
    assert!((low - 2.0).abs() < 1e-15 && (high - 2.0254).abs() < 1e-15);
    assert_eq!(found.rims, 1);
    // Wetted on the back, the first triangle runs the other way.
    let [x, y, z] = found.triangles[0][1];
    assert!((x - 0.0254).abs() + y.abs() + (z - 2.0).abs() < 1e-15);
    // A tube has two rims.
    let ring = |z: f64| [[0.0, 0.0, z], [1.0, 0.0, z], [0.0, 1.0, z]];
    let (low, high) = (ring(0.0), ring(1.0));
    let sides = [0, 1, 2].map(|i| {
        let next = (i + 1) % 3;
        [[low[i], high[next], low[next]], [low[i], high[i], high[next]]]
    });
    assert_eq!(mesh(sides.as_flattened(), OPEN).unwrap().rims, 2);
}

#[test]
fn the_wetted_side_of_a_closed_surface_is_checked() {
    let sound = tetrahedron();
    let body = Some(Closed::Body);
    assert!(mesh(&sound, Reading { side: Side::Back, closed: body, ..VESSEL }).is_ok());
    for (side, closed) in [(Side::Back, Some(Closed::Vessel)), (Side::Front, body)] {
        let bytes = text(&sound);
        refused(bytes.as_bytes(), Reading { side, closed, ..VESSEL }, "change `normals`");
    }
}

#[test]
fn triangles_that_make_no_surface_are_refused() {
    let mut flipped = tetrahedron();
    flipped[2].swap(0, 1);
    let fault = refused(text(&flipped).as_bytes(), OPEN, "one of them is flipped");
    assert!(matches!(fault, Fault::Flipped { one: 1, other: 3, .. }), "{fault:?}");
    refused(text(&tetrahedron()[1..]).as_bytes(), VESSEL, "is open along 3 edges");
    let mut shared = tetrahedron();
    shared.push([CORNERS[0], CORNERS[1], [0.5, -1.0, 0.3]]);
    refused(text(&shared).as_bytes(), OPEN, "3 triangles share the edge at (0 0 0), two can");
    let mut apart = tetrahedron();
    apart.extend(tetrahedron().iter().map(|one| one.map(|[x, y, z]| [x + 5.0, y, z])));
    let fault = refused(text(&apart).as_bytes(), VESSEL, "2 pieces");
    assert!(matches!(fault, Fault::Pieces { triangle: 5, .. }), "{fault:?}");
    // The first face is level and runs counter-clockwise: its normal is up.
    let against = text(&tetrahedron()).replacen("normal 0 0 0", "normal 0 0 -1", 1);
    refused(against.as_bytes(), OPEN, "triangle 1: its normal points against");
    let with = text(&tetrahedron()).replacen("normal 0 0 0", "normal 0 0 1", 1);
    assert!(Mesh::of_bytes("made.stl", with.as_bytes(), VESSEL).is_ok());
    let level = [tetrahedron()[0]];
    refused(text(&level).as_bytes(), OPEN, "[[panel]]");
    let nothing = [[CORNERS[0], CORNERS[1], CORNERS[1]]];
    refused(text(&nothing).as_bytes(), OPEN, "no triangle with an area");
    refused(text(&[]).as_bytes(), OPEN, "no triangle with an area");
}

#[test]
fn numbers_that_are_none_or_far_are_refused() {
    let sound = text(&tetrahedron());
    for (number, words) in [("NaN", "is NaN"), ("inf", "is inf"), ("1e300", "within 200 of this")] {
        let broken = sound.replacen("vertex 0 0 1", &format!("vertex 0 0 {number}"), 1);
        refused(broken.as_bytes(), OPEN, words);
    }
    let mut bytes = binary(&tetrahedron());
    bytes[84 + 12..84 + 16].copy_from_slice(&f32::NAN.to_le_bytes());
    refused(&bytes, OPEN, "triangle 1: a coordinate is NaN");
    let millimetres = Reading { unit_m: 1e-3, ..OPEN };
    refused(
        sound.replacen("vertex 0 0 1", "vertex 0 0 200001", 1).as_bytes(),
        millimetres,
        "within 200000 of this unit",
    );
}

#[test]
fn files_that_were_cut_or_are_something_else_are_refused() {
    let sound = text(&tetrahedron());
    let bytes = binary(&tetrahedron());
    refused(&bytes[..bytes.len() - 1], OPEN, "says 4 triangles, which take 284 bytes, and has 283");
    refused(&bytes[..40], OPEN, "ends at line 1");
    refused(b"", OPEN, "no STL file");
    refused(b"PK\x03\x04", OPEN, "no STL file");
    refused(b"solid x\nfacet normal 0 0 zero\n", OPEN, "line 2: `zero` stands where a number");
    refused(format!("{sound}{sound}").as_bytes(), OPEN, "line 31: something follows");
    // Whatever is cut off, there is an error and no panic.
    for end in 0..sound.len() - 1 {
        let cut = &sound.as_bytes()[..end];
        if !sound[..end].trim_end().ends_with("endsolid") && !sound[..end].contains("endsolid") {
            assert!(Mesh::of_bytes("made.stl", cut, OPEN).is_err(), "{end}");
        }
    }
    for end in 0..bytes.len() {
        assert!(Mesh::of_bytes("made.stl", &bytes[..end], OPEN).is_err(), "{end}");
    }
}

#[test]
fn a_mesh_too_large_is_refused() {
    let many = vec![tetrahedron()[0]; TRIANGLES_MAX + 1];
    refused(&binary(&many), OPEN, "has 50001 triangles, the limit is 50000");
    refused(text(&many).as_bytes(), OPEN, "has 50001 triangles");
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("large.stl");
    std::fs::File::create(&path).unwrap().set_len(super::BYTES_MAX + 1).unwrap();
    let fault = Mesh::read(folder.path(), "large.stl", OPEN).unwrap_err();
    assert!(fault.to_string().contains("16777217 bytes, the limit is 16777216"), "{fault}");
    let fault = Mesh::read(folder.path(), "none.stl", OPEN).unwrap_err();
    assert!(fault.to_string().starts_with("cannot be read"), "{fault}");
    let fault = Mesh::read(folder.path(), ".", OPEN).unwrap_err();
    assert!(fault.to_string().contains("not a file"), "{fault}");
}

/// Bytes changed at random: an error or a surface, never a panic.
#[test]
fn damaged_files_are_told_or_read() {
    let (sound, mut state, mut read) = (tetrahedron(), 7_u64, 0);
    let files = [binary(&sound), text(&sound).into_bytes()];
    let mut next = |below: usize| {
        state =
            state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        usize::try_from(state >> 33).unwrap() % below
    };
    for turn in 0..4_000 {
        let mut bytes = files[turn % 2].clone();
        for _ in 0..=next(3) {
            let at = next(bytes.len());
            match next(3) {
                0 => bytes[at] = bytes[at].wrapping_add(1 << next(8)),
                1 => drop(bytes.remove(at)),
                _ => bytes.insert(at, b"0-.e \n"[next(6)]),
            }
        }
        for reading in [OPEN, VESSEL] {
            if let Ok(mesh) = Mesh::of_bytes("made.stl", &bytes, reading) {
                read += 1;
                let table = crate::compile::curved::mesh(&mesh);
                assert!(table.error.is_finite() && table.rise_m >= super::RISE_MIN_M);
            }
        }
    }
    assert!(read > 100, "{read} of the damaged files could be read");
}
