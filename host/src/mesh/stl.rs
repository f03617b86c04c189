//! The two forms of STL.
//!
//! Binary: 80 bytes of anything, the number of triangles u32, and 50 bytes for each: the normal and
//! three corners of three f32, two bytes of anything; little endian. Text: `solid`, facets of
//! words, `endsolid`. A binary file may begin with `solid` as well, so its length decides first.

use super::{Fault, Point, TRIANGLES_MAX};
use std::iter::Peekable;
use std::str::SplitWhitespace;

const HEAD: usize = 84;
const FACET: usize = 50;

/// A triangle of the file, in its unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Facet {
    /// The stated normal; may be nothing.
    pub(super) normal: Point,
    /// Its corners.
    pub(super) corners: [Point; 3],
}

/// The facets of a file.
pub(super) fn facets(bytes: &[u8]) -> Result<Vec<Facet>, Fault> {
    let said = bytes.get(80..HEAD).and_then(|count| count.try_into().ok()).map(u32::from_le_bytes);
    let due = |count: u32| HEAD as u64 + FACET as u64 * u64::from(count);
    if let Some(count) = said
        && due(count) == bytes.len() as u64
    {
        return binary(bytes);
    }
    let text = std::str::from_utf8(bytes).ok();
    match (text.filter(|text| is_text(text)), said) {
        (Some(text), _) => Words::of(text).facets(),
        (None, Some(triangles)) => {
            Err(Fault::Length { triangles, due: due(triangles), bytes: bytes.len() })
        }
        (None, None) => Err(Fault::NotStl),
    }
}

fn is_text(text: &str) -> bool {
    let first = text.split_whitespace().next();
    first.is_some_and(|word| word.eq_ignore_ascii_case("solid")) && !text.contains('\0')
}

fn binary(bytes: &[u8]) -> Result<Vec<Facet>, Fault> {
    let (rows, _) = bytes.get(HEAD..).unwrap_or(&[]).as_chunks::<FACET>();
    if rows.len() > TRIANGLES_MAX {
        return Err(Fault::TooMany { triangles: rows.len() });
    }
    let facet = |row: &[u8; FACET]| {
        let (numbers, _) = row.as_chunks::<4>();
        let at = |place: usize| f64::from(f32::from_le_bytes(numbers[place]));
        let point = |place: usize| [at(place), at(place + 1), at(place + 2)];
        Facet { normal: point(0), corners: [point(3), point(6), point(9)] }
    };
    Ok(rows.iter().map(facet).collect())
}

/// The words of a text file with their lines.
struct Words<'a> {
    lines: Peekable<std::iter::Enumerate<std::str::Lines<'a>>>,
    rest: SplitWhitespace<'a>,
    line: usize,
}

impl<'a> Words<'a> {
    fn of(text: &'a str) -> Self {
        Self { lines: text.lines().enumerate().peekable(), rest: "".split_whitespace(), line: 1 }
    }

    fn next(&mut self) -> Option<&'a str> {
        loop {
            if let Some(word) = self.rest.next() {
                return Some(word);
            }
            let (index, line) = self.lines.next()?;
            self.line = index + 1;
            self.rest = line.split_whitespace();
        }
    }

    fn need(&mut self, wanted: &'static str) -> Result<&'a str, Fault> {
        let word = self.next();
        word.ok_or(Fault::Ends { line: self.line, wanted })
    }

    fn expect(&mut self, word: &str, wanted: &'static str) -> Result<(), Fault> {
        let found = self.need(wanted)?;
        if found.eq_ignore_ascii_case(word) { Ok(()) } else { Err(self.other(found, wanted)) }
    }

    fn other(&self, found: &str, wanted: &'static str) -> Fault {
        let found = found.chars().take(40).collect();
        Fault::Word { line: self.line, found, wanted }
    }

    fn point(&mut self) -> Result<Point, Fault> {
        let mut point = [0.0; 3];
        for value in &mut point {
            let word = self.need("a number")?;
            *value = word.parse().map_err(|_| self.other(word, "a number"))?;
        }
        Ok(point)
    }

    fn facets(mut self) -> Result<Vec<Facet>, Fault> {
        self.expect("solid", "`solid`")?;
        // Its name, up to the end of the line.
        self.rest = "".split_whitespace();
        let mut facets = Vec::new();
        loop {
            let word = self.need("`facet` or `endsolid`")?;
            if word.eq_ignore_ascii_case("endsolid") {
                break;
            }
            if !word.eq_ignore_ascii_case("facet") {
                return Err(self.other(word, "`facet` or `endsolid`"));
            }
            if facets.len() == TRIANGLES_MAX {
                return Err(Fault::TooMany { triangles: TRIANGLES_MAX + 1 });
            }
            facets.push(self.facet()?);
        }
        self.rest = "".split_whitespace();
        match self.next() {
            Some(_) => Err(Fault::Second { line: self.line }),
            None => Ok(facets),
        }
    }

    fn facet(&mut self) -> Result<Facet, Fault> {
        self.expect("normal", "`normal`")?;
        let normal = self.point()?;
        self.expect("outer", "`outer loop`")?;
        self.expect("loop", "`outer loop`")?;
        let mut corners = [[0.0; 3]; 3];
        for corner in &mut corners {
            self.expect("vertex", "`vertex`")?;
            *corner = self.point()?;
        }
        self.expect("endloop", "`endloop`")?;
        self.expect("endfacet", "`endfacet`")?;
        Ok(Facet { normal, corners })
    }
}
