//! Comma-separated text with quoted fields (RFC 4180), as much as the case files use.

/// Records of `text` without the header line. A quoted field may hold commas and doubled quotes.
pub(super) fn records(text: &str) -> Vec<Vec<String>> {
    text.lines().skip(1).filter(|line| !line.trim().is_empty()).map(fields).collect()
}

fn fields(line: &str) -> Vec<String> {
    let mut fields = vec![String::new()];
    let mut quoted = false;
    let mut chars = line.chars().peekable();
    while let Some(c) = chars.next() {
        let field = fields.last_mut().expect("one field from the start");
        match c {
            '"' if quoted && chars.peek() == Some(&'"') => {
                chars.next();
                field.push('"');
            }
            '"' => quoted = !quoted,
            ',' if !quoted => fields.push(String::new()),
            _ => field.push(c),
        }
    }
    fields
}

#[cfg(test)]
mod tests {
    use super::records;

    #[test]
    fn quotes_hold_commas_and_quotes() {
        let text = "id,b\nx,\"1, \"\"two\"\"\"\n\n y ,\n";
        assert_eq!(records(text), [vec!["x", "1, \"two\""], vec![" y ", ""]]);
    }
}
