//! A writer of HTML and SVG that keeps texts apart from markup.
//!
//! Tags and names of attributes are words of the program, texts and values are escaped where they
//! are written, and every open element is closed: whatever a tank file says stays text.

/// Markup in the making.
#[derive(Debug, Default)]
pub(super) struct Html {
    text: String,
    open: Vec<&'static str>,
}

/// Attributes of an element.
pub(super) type Attributes<'a> = &'a [(&'static str, &'a str)];

/// One letter as it may stand in a text or in the value of an attribute.
fn escape(out: &mut String, text: &str) {
    for letter in text.chars() {
        match letter {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            '\n' | '\t' => out.push(letter),
            // Marks that turn the direction of writing could show another number than is there.
            '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' => out.push('\u{fffd}'),
            _ if letter.is_control() => out.push('\u{fffd}'),
            _ => out.push(letter),
        }
    }
}

impl Html {
    /// The text; everything that is open is closed.
    pub(super) fn into_text(mut self) -> String {
        while !self.open.is_empty() {
            self.close();
        }
        self.text
    }

    /// Opens an element.
    pub(super) fn open(&mut self, tag: &'static str, attributes: Attributes<'_>) {
        self.begin(tag, attributes);
        self.text.push('>');
        self.open.push(tag);
    }

    /// Closes the element opened last.
    pub(super) fn close(&mut self) {
        if let Some(tag) = self.open.pop() {
            self.text.push_str("</");
            self.text.push_str(tag);
            self.text.push('>');
            if !INLINE.contains(&tag) {
                self.text.push('\n');
            }
        }
    }

    /// An element without content.
    pub(super) fn empty(&mut self, tag: &'static str, attributes: Attributes<'_>) {
        self.begin(tag, attributes);
        self.text.push_str("/>");
    }

    /// A text.
    pub(super) fn text(&mut self, text: &str) {
        escape(&mut self.text, text);
    }

    /// An element with a text.
    pub(super) fn element(&mut self, tag: &'static str, attributes: Attributes<'_>, text: &str) {
        self.open(tag, attributes);
        self.text(text);
        self.close();
    }

    /// Markup that another writer of this kind made.
    pub(super) fn made(&mut self, markup: &str) {
        self.text.push_str(markup);
    }

    fn begin(&mut self, tag: &'static str, attributes: Attributes<'_>) {
        self.text.push('<');
        self.text.push_str(tag);
        for (name, value) in attributes {
            self.text.push(' ');
            self.text.push_str(name);
            self.text.push_str("=\"");
            escape(&mut self.text, value);
            self.text.push('"');
        }
    }
}

/// Elements behind which no new line is begun.
const INLINE: &[&str] = &["sub", "sup", "b", "i", "span", "tspan", "td", "th"];

#[cfg(test)]
mod tests {
    use super::Html;

    #[test]
    fn what_a_file_says_stays_text() {
        let mut html = Html::default();
        html.open("p", &[("title", "\" onload='x' <")]);
        html.text("<script>&\u{0}\u{202e}");
        html.empty("br", &[]);
        let text = html.into_text();
        let title = "<p title=\"&quot; onload=&#39;x&#39; &lt;\">";
        assert_eq!(text, format!("{title}&lt;script&gt;&amp;\u{fffd}\u{fffd}<br/></p>\n"));
    }
}
