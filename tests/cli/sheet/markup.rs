//! A small strict reader of the sheet: every element is closed in its order, every attribute has
//! its quotes, and there is no mark that is not one of the five known.

/// One piece of the page.
#[derive(Clone, Debug)]
enum Piece {
    Open(String, String),
    Close(String),
    Text(String),
}

/// The page in its pieces.
pub(crate) struct Page {
    source: String,
    pieces: Vec<Piece>,
}

/// A row: its cells, each with its lines.
type Row = Vec<Vec<String>>;

impl Page {
    /// Reads a page.
    pub(crate) fn read(source: &str) -> Self {
        let rest = source.strip_prefix("<!DOCTYPE html>\n").expect("it says what it is");
        let mut pieces = Vec::new();
        let mut open: Vec<String> = Vec::new();
        let mut rest = rest;
        while let Some(at) = rest.find('<') {
            pieces.push(Piece::Text(unescaped(&rest[..at], open.last())));
            let end = at + end_of_tag(&rest[at..]);
            let tag = &rest[at + 1..end];
            rest = &rest[end + 1..];
            if let Some(name) = tag.strip_prefix('/') {
                assert_eq!(open.pop().as_deref(), Some(name), "closed in order");
                pieces.push(Piece::Close(name.to_owned()));
                continue;
            }
            let inside = tag.strip_suffix('/').unwrap_or(tag);
            let (name, attributes) = inside.split_once(' ').unwrap_or((inside, ""));
            assert!(name.bytes().all(|byte| byte.is_ascii_alphanumeric()), "{tag}");
            check_attributes(attributes);
            pieces.push(Piece::Open(name.to_owned(), attributes.to_owned()));
            if tag.ends_with('/') {
                pieces.push(Piece::Close(name.to_owned()));
            } else {
                open.push(name.to_owned());
            }
        }
        assert!(open.is_empty() && rest.trim().is_empty(), "all is closed: {open:?} {rest}");
        Self { source: source.to_owned(), pieces }
    }

    /// As it was written.
    pub(crate) fn source(&self) -> &str {
        &self.source
    }

    /// All text but the style, blanks made one.
    pub(crate) fn text(&self) -> String {
        let mut style = false;
        let mut text = String::new();
        for piece in &self.pieces {
            match piece {
                Piece::Open(name, _) => style |= name == "style",
                Piece::Close(name) => {
                    style &= name != "style";
                    if !["sub", "sup", "b", "span"].contains(&name.as_str()) {
                        text.push(' ');
                    }
                }
                Piece::Text(one) if !style => text.push_str(one),
                Piece::Text(_) => {}
            }
        }
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    }

    /// The text of each paragraph.
    pub(crate) fn paragraphs(&self) -> Vec<String> {
        let mut found: Vec<String> = Vec::new();
        let mut inside = false;
        for piece in &self.pieces {
            match piece {
                Piece::Open(name, _) if name == "p" => {
                    inside = true;
                    found.push(String::new());
                }
                Piece::Close(name) if name == "p" => inside = false,
                Piece::Text(text) if inside => last(&mut found).push_str(text),
                _ => {}
            }
        }
        found
    }

    /// How often an element stands in it.
    pub(crate) fn count(&self, tag: &str) -> usize {
        self.pieces.iter().filter(|one| matches!(one, Piece::Open(name, _) if name == tag)).count()
    }

    /// What follows each heading of a kind, up to the next of its kind or a higher one.
    pub(crate) fn sections(&self, heading: &str) -> Vec<Self> {
        let mut found: Vec<Self> = Vec::new();
        let mut inside = false;
        for piece in &self.pieces {
            if let Piece::Open(name, _) = piece {
                if name == heading {
                    inside = true;
                    found.push(Self { source: String::new(), pieces: Vec::new() });
                } else if name == "h2" || name == "h1" {
                    inside = false;
                }
            }
            if let Some(last) = found.last_mut().filter(|_| inside) {
                last.pieces.push(piece.clone());
            }
        }
        found
    }

    /// The rows with that mark.
    pub(crate) fn rows(&self, mark: &str) -> Vec<Row> {
        let wanted = format!("data-load=\"{mark}\"");
        self.marked_rows(|attributes| attributes == wanted)
    }

    /// All rows.
    pub(crate) fn all_rows(&self) -> impl Iterator<Item = Row> {
        self.marked_rows(|_| true).into_iter()
    }

    fn marked_rows(&self, wanted: impl Fn(&str) -> bool) -> Vec<Row> {
        let mut found: Vec<Row> = Vec::new();
        let mut inside = false;
        for piece in &self.pieces {
            match piece {
                Piece::Open(name, attributes) if name == "tr" => {
                    inside = wanted(attributes);
                    if inside {
                        found.push(Vec::new());
                    }
                }
                Piece::Close(name) if name == "tr" => inside = false,
                _ if !inside => {}
                Piece::Open(name, _) if name == "td" || name == "th" => {
                    last(&mut found).push(vec![String::new()]);
                }
                Piece::Open(name, _) if name == "br" => {
                    if let Some(cell) = last(&mut found).last_mut() {
                        cell.push(String::new());
                    }
                }
                Piece::Text(text) => {
                    if let Some(cell) = last(&mut found).last_mut() {
                        last(cell).push_str(text);
                    }
                }
                Piece::Open(..) | Piece::Close(_) => {}
            }
        }
        found
    }
}

fn last<T>(list: &mut [T]) -> &mut T {
    list.last_mut().expect("one is open")
}

/// Place of the `>` that ends a tag: none inside quotes.
fn end_of_tag(text: &str) -> usize {
    let mut quoted = false;
    for (at, letter) in text.char_indices() {
        match letter {
            '"' => quoted = !quoted,
            '>' if !quoted => return at,
            '<' if at > 0 => panic!("a tag in a tag: {text:.60}"),
            _ => {}
        }
    }
    panic!("a tag without an end: {text:.60}");
}

/// `name="value"`, separated by one blank.
fn check_attributes(text: &str) {
    let mut rest = text;
    while !rest.is_empty() {
        let (name, behind) = rest.split_once("=\"").expect("a value in quotes");
        let sound = name.bytes().all(|byte| byte.is_ascii_alphanumeric() || byte == b'-');
        assert!(sound && !name.starts_with("on"), "{text}");
        let (value, behind) = behind.split_once('"').expect("quotes are closed");
        assert!(!value.contains('<'), "{text}");
        rest = behind.strip_prefix(' ').unwrap_or(behind);
    }
}

/// Text with its five marks resolved; any other mark is refused. A style has none.
fn unescaped(text: &str, inside: Option<&String>) -> String {
    assert!(!text.contains('>') || inside.is_some_and(|name| name == "style"), "{text:.80}");
    if inside.is_some_and(|name| name == "style") {
        return text.to_owned();
    }
    let mut out = String::new();
    let mut rest = text;
    while let Some((before, behind)) = rest.split_once('&') {
        out.push_str(before);
        let (mark, behind) = behind.split_once(';').expect("a mark has an end");
        out.push(match mark {
            "amp" => '&',
            "lt" => '<',
            "gt" => '>',
            "quot" => '"',
            "#39" => '\'',
            other => panic!("an unknown mark: {other}"),
        });
        rest = behind;
    }
    out.push_str(rest);
    out
}
