//! The sheet as data: blocks that hold texts, tables and drawings. What is in them is worked out
//! before a letter of markup is written.

/// A piece of text.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Run {
    /// As it is.
    Plain(String),
    /// Set low.
    Low(String),
    /// Set high.
    High(String),
    /// Standing out.
    Strong(String),
}

/// A text of several pieces.
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Words(pub(super) Vec<Run>);

impl From<String> for Words {
    fn from(text: String) -> Self {
        Self(vec![Run::Plain(text)])
    }
}

impl From<&str> for Words {
    fn from(text: &str) -> Self {
        Self::from(text.to_owned())
    }
}

/// A text that stands out.
pub(super) fn strong(text: impl Into<String>) -> Words {
    Words(vec![Run::Strong(text.into())])
}

/// A formula of the program's own: behind `_` the word stands low, behind `^` high; `{..}` takes
/// several words. Never made of what a file says.
pub(super) fn math(text: &str) -> Words {
    let mut runs = Vec::new();
    let mut plain = String::new();
    let mut letters = text.chars().peekable();
    while let Some(letter) = letters.next() {
        if letter != '_' && letter != '^' {
            plain.push(letter);
            continue;
        }
        let mut word = String::new();
        if letters.next_if_eq(&'{').is_some() {
            word.extend(letters.by_ref().take_while(|one| *one != '}'));
        } else {
            while let Some(one) = letters.next_if(|one| one.is_alphanumeric()) {
                word.push(one);
            }
        }
        runs.push(Run::Plain(std::mem::take(&mut plain)));
        runs.push(if letter == '_' { Run::Low(word) } else { Run::High(word) });
    }
    runs.push(Run::Plain(plain));
    runs.retain(|run| *run != Run::Plain(String::new()));
    Words(runs)
}

/// One cell: the first line, and lines below it that are set smaller.
#[derive(Clone, Debug, Default)]
pub(super) struct Cell(pub(super) Vec<Words>);

impl<T: Into<Words>> From<T> for Cell {
    fn from(words: T) -> Self {
        Self(vec![words.into()])
    }
}

/// One row.
#[derive(Clone, Debug)]
pub(super) struct Row {
    pub(super) cells: Vec<Cell>,
    /// What stands in it, for programs: a load by its name in the documents.
    pub(super) mark: Option<&'static str>,
    /// A heading inside the table, over all columns.
    pub(super) group: bool,
}

impl Row {
    pub(super) fn new(cells: Vec<Cell>) -> Self {
        Self { cells, mark: None, group: false }
    }

    pub(super) fn group(title: impl Into<Cell>) -> Self {
        Self { cells: vec![title.into()], mark: None, group: true }
    }

    pub(super) fn marked(self, mark: &'static str) -> Self {
        Self { mark: Some(mark), ..self }
    }
}

/// Where a column stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Side {
    Left,
    Right,
}

/// A table.
#[derive(Clone, Debug)]
pub(super) struct Table {
    pub(super) head: Vec<(Words, Side)>,
    pub(super) rows: Vec<Row>,
    /// Its class in the style: as wide as the page, as wide as it needs, or its own.
    pub(super) look: &'static str,
}

impl Table {
    /// A table by the titles of its columns; `l` or `r` for each says where it stands.
    pub(super) fn new(sides: &str, titles: &[&str]) -> Self {
        let sides = sides.chars().map(|side| if side == 'r' { Side::Right } else { Side::Left });
        let head = titles.iter().map(|title| math(title)).zip(sides).collect();
        Self { head, rows: Vec::new(), look: "wide" }
    }

    /// The same, as wide as it needs.
    pub(super) fn narrow(sides: &str, titles: &[&str]) -> Self {
        Self { look: "narrow", ..Self::new(sides, titles) }
    }

    pub(super) fn row(&mut self, cells: Vec<Cell>) {
        self.rows.push(Row::new(cells));
    }
}

/// How a frame looks.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Frame {
    /// What has to be seen first.
    Warning,
    /// The result.
    Result,
}

/// A piece of the sheet.
#[derive(Clone, Debug)]
pub(super) enum Block {
    /// A numbered section.
    Section(String),
    /// One part, with its number and name.
    Part(String),
    /// A small heading.
    Minor(Words),
    Text(Words),
    List(Vec<Words>),
    Table(Table),
    /// Lines of a calculation.
    Formula(Vec<Words>),
    /// A drawing, made by [`super::html::Html`].
    Figure {
        svg: String,
        caption: Words,
    },
    Framed {
        frame: Frame,
        title: String,
        blocks: Vec<Self>,
    },
    /// To be ticked by hand.
    Checks(Vec<String>),
    /// To be filled in by hand.
    Signatures(Vec<&'static str>),
    /// What a page does not cut.
    Together(Vec<Self>),
}

impl Block {
    pub(super) fn text(text: impl Into<Words>) -> Self {
        Self::Text(text.into())
    }
}

#[cfg(test)]
mod tests {
    use super::{Run, math};

    #[test]
    fn low_and_high() {
        let words = math("p_g W^2 + x_{i+1}");
        let runs = [
            Run::Plain("p".to_owned()),
            Run::Low("g".to_owned()),
            Run::Plain(" W".to_owned()),
            Run::High("2".to_owned()),
            Run::Plain(" + x".to_owned()),
            Run::Low("i+1".to_owned()),
        ];
        assert_eq!(words.0, runs);
    }
}
