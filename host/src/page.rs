//! A page of text for a terminal or a file: headings, aligned lines, wrapped paragraphs.

/// Columns of a page.
pub const WIDTH: usize = 100;

/// Text in the making.
#[derive(Debug)]
pub struct Page {
    text: String,
    coloured: bool,
    width: usize,
}

impl Page {
    /// An empty page.
    #[must_use]
    pub const fn new(coloured: bool) -> Self {
        Self { text: String::new(), coloured, width: WIDTH }
    }

    /// An empty page whose paragraphs keep to 80 columns.
    #[must_use]
    pub const fn narrow(coloured: bool) -> Self {
        Self { text: String::new(), coloured, width: 80 }
    }

    /// The text; every line ends with a line's end, none with a blank.
    #[must_use]
    pub fn into_text(self) -> String {
        self.text
    }

    /// A line as it is.
    pub fn line(&mut self, line: &str) {
        self.text.push_str(line.trim_end());
        self.text.push('\n');
    }

    /// An empty line.
    pub fn blank(&mut self) {
        self.text.push('\n');
    }

    /// A line that stands out.
    pub fn heading(&mut self, line: &str) {
        let line = line.trim_end();
        if self.coloured {
            self.line(&format!("\u{1b}[1m{line}\u{1b}[0m"));
        } else {
            self.line(line);
        }
    }

    /// A paragraph: the first line behind `first`, the others behind as many blanks.
    pub fn paragraph(&mut self, first: &str, text: &str) {
        let indent = first.chars().count();
        for (index, piece) in wrap(text, self.width.saturating_sub(indent)).iter().enumerate() {
            if index == 0 {
                self.line(&format!("{first}{piece}"));
            } else {
                self.line(&format!("{:indent$}{piece}", ""));
            }
        }
    }
}

/// A number of things: `1 sector`, `2 sectors`, `2 hashes`.
#[must_use]
pub fn counted(count: impl Into<u64>, thing: &str) -> String {
    let count = count.into();
    let ending = match count {
        1 => "",
        _ if thing.ends_with("sh") => "es",
        _ => "s",
    };
    format!("{count} {thing}{ending}")
}

/// Breaks a text at blanks into lines of at most `width` characters; a longer word stands alone.
#[must_use]
pub fn wrap(text: &str, width: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    let mut line = String::new();
    for word in text.split_whitespace() {
        let longer = line.chars().count() + 1 + word.chars().count();
        if !line.is_empty() && longer > width {
            lines.push(std::mem::take(&mut line));
        }
        if !line.is_empty() {
            line.push(' ');
        }
        line.push_str(word);
    }
    lines.push(line);
    lines
}

#[cfg(test)]
mod tests {
    use super::{Page, counted, wrap};

    #[test]
    fn lines_keep_to_their_width() {
        assert_eq!(wrap("one two three", 7), ["one two", "three"]);
        assert_eq!(wrap("incomprehensible it is", 5), ["incomprehensible", "it is"]);
        assert_eq!(wrap("", 5), [""]);
    }

    #[test]
    fn one_thing_stands_alone() {
        let shown = [0_u32, 1, 2].map(|count| counted(count, "sector"));
        assert_eq!(shown, ["0 sectors", "1 sector", "2 sectors"]);
    }

    #[test]
    fn a_paragraph_hangs() {
        let mut page = Page::new(false);
        page.paragraph("  - ", &"word ".repeat(30));
        let text = page.into_text();
        assert!(text.starts_with("  - word word"));
        assert!(text.lines().nth(1).is_some_and(|line| line.starts_with("    word")));
        assert!(text.lines().all(|line| line.len() <= 100 && !line.ends_with(' ')));
    }
}
