//! From blocks to one HTML page that needs nothing else: no script, no font, no picture from
//! outside.

use super::html::Html;
use super::model::{Block, Cell, Frame, Row, Run, Side, Table, Words};

const STYLE: &str = include_str!("style.css");

/// What stands on every printed page.
pub(super) struct Foot<'a> {
    /// Letters and digits of the program's own only.
    pub(super) left: &'a str,
}

/// The page.
pub(super) fn page(title: &str, foot: &Foot<'_>, blocks: &[Block]) -> String {
    let mut html = Html::default();
    html.open("html", &[("lang", "en")]);
    html.open("head", &[]);
    html.empty("meta", &[("charset", "utf-8")]);
    html.empty("meta", &[("name", "viewport"), ("content", "width=device-width")]);
    html.element("title", &[], title);
    html.open("style", &[]);
    html.made(STYLE);
    html.made(&format!("@page {{ @bottom-left {{ content: \"{}\"; }} }}\n", foot.left));
    html.close();
    html.close();
    html.open("body", &[]);
    html.element("h1", &[], title);
    for block in blocks {
        self::block(&mut html, block);
    }
    format!("<!DOCTYPE html>\n{}", html.into_text())
}

fn block(html: &mut Html, block: &Block) {
    match block {
        Block::Section(title) => html.element("h2", &[], title),
        Block::Part(title) => html.element("h3", &[], title),
        Block::Minor(title) => {
            html.open("h4", &[]);
            words(html, title);
            html.close();
        }
        Block::Text(text) => {
            html.open("p", &[]);
            words(html, text);
            html.close();
        }
        Block::List(items) => {
            html.open("ul", &[]);
            for item in items {
                html.open("li", &[]);
                words(html, item);
                html.close();
            }
            html.close();
        }
        Block::Table(table) => self::table(html, table),
        Block::Formula(lines) => {
            html.open("div", &[("class", "formula")]);
            for line in lines {
                html.open("p", &[]);
                words(html, line);
                html.close();
            }
            html.close();
        }
        Block::Figure { svg, caption } => {
            html.open("figure", &[]);
            html.made(svg);
            html.open("figcaption", &[]);
            words(html, caption);
            html.close();
            html.close();
        }
        Block::Framed { frame, title, blocks } => {
            let class = match frame {
                Frame::Warning => "frame warning",
                Frame::Result => "frame result",
            };
            html.open("section", &[("class", class)]);
            html.element("h4", &[], title);
            all(html, blocks);
            html.close();
        }
        Block::Checks(items) => checks(html, items),
        Block::Signatures(roles) => signatures(html, roles),
        Block::Together(blocks) => {
            html.open("div", &[("class", "together")]);
            all(html, blocks);
            html.close();
        }
    }
}

fn all(html: &mut Html, blocks: &[Block]) {
    for one in blocks {
        block(html, one);
    }
}

fn words(html: &mut Html, words: &Words) {
    for run in &words.0 {
        match run {
            Run::Plain(text) => html.text(text),
            Run::Low(text) => html.element("sub", &[], text),
            Run::High(text) => html.element("sup", &[], text),
            Run::Strong(text) => html.element("b", &[], text),
        }
    }
}

fn table(html: &mut Html, table: &Table) {
    html.open("table", &[("class", table.look)]);
    if table.head.iter().any(|(title, _)| !title.0.is_empty()) {
        html.open("thead", &[]);
        html.open("tr", &[]);
        for (title, side) in &table.head {
            html.open("th", &[("class", class(*side))]);
            words(html, title);
            html.close();
        }
        html.close();
        html.close();
    }
    html.open("tbody", &[]);
    for row in &table.rows {
        self::row(html, table, row);
    }
    html.close();
    html.close();
}

const fn class(side: Side) -> &'static str {
    match side {
        Side::Left => "l",
        Side::Right => "r",
    }
}

fn row(html: &mut Html, table: &Table, row: &Row) {
    match row.mark {
        Some(mark) => html.open("tr", &[("data-load", mark)]),
        None => html.open("tr", &[]),
    }
    if row.group {
        let columns = table.head.len().to_string();
        html.open("th", &[("class", "group"), ("colspan", &columns)]);
        row.cells.iter().for_each(|cell| lines(html, cell));
        html.close();
    } else {
        for (cell, (_, side)) in row.cells.iter().zip(&table.head) {
            html.open("td", &[("class", class(*side))]);
            lines(html, cell);
            html.close();
        }
    }
    html.close();
}

fn lines(html: &mut Html, Cell(lines): &Cell) {
    for (number, line) in lines.iter().enumerate() {
        if number > 0 {
            html.empty("br", &[]);
            html.open("span", &[("class", "below")]);
        }
        words(html, line);
        if number > 0 {
            html.close();
        }
    }
}

fn checks(html: &mut Html, items: &[String]) {
    html.open("table", &[("class", "wide checks")]);
    html.open("thead", &[]);
    html.open("tr", &[]);
    for (title, class) in
        [("condition", "l"), ("done", "box"), ("not done", "box"), ("by, date", "hand")]
    {
        html.element("th", &[("class", class)], title);
    }
    html.close();
    html.close();
    html.open("tbody", &[]);
    for item in items {
        html.open("tr", &[]);
        html.element("td", &[("class", "l")], item);
        for _ in 0..2 {
            html.open("td", &[("class", "box")]);
            html.element("span", &[("class", "tick")], "");
            html.close();
        }
        html.element("td", &[("class", "hand")], "");
        html.close();
    }
    html.close();
    html.close();
}

fn signatures(html: &mut Html, roles: &[&'static str]) {
    html.open("table", &[("class", "wide signatures")]);
    html.open("thead", &[]);
    html.open("tr", &[]);
    for title in ["", "name", "signature", "date"] {
        html.element("th", &[("class", "l")], title);
    }
    html.close();
    html.close();
    html.open("tbody", &[]);
    for role in roles {
        html.open("tr", &[]);
        html.element("td", &[("class", "l")], role);
        for _ in 0..3 {
            html.element("td", &[("class", "hand")], "");
        }
        html.close();
    }
    html.close();
    html.close();
}
