//! Do tables carry words and numbers whole, and can no name become markup, a formula or a link in any form?
//!
//! Readers from outside judge: the csv crate, a CommonMark parser with tables, an XML parser.

use proptest::prelude::*;
use pulldown_cmark::{Event, Options, Parser, Tag};
use tailvane::say::table::{Cell, Form, Table};

/// Names that have broken pages, sheets and wikis.
const HOSTILE: [&str; 26] = [
    "<script>alert(1)</script>",
    "<img src=x onerror=alert(1)>",
    "=HYPERLINK(\"http://e.example\",\"x\")",
    "+1+cmd|' /C calc'!A0",
    "-2+3",
    "@SUM(A1)",
    "\t=1+1",
    " =1+1",
    "\u{ff1d}1+1",
    "[x](javascript:alert(1))",
    "![x](http://e.example/x.png)",
    "`code` *strong* _soft_ ~gone~ #1 @all",
    "https://e.example and www.e.example and a@e.example",
    "a | b || c",
    "|-\n| planted",
    "\n|}\n== Head ==",
    "[[File:x.png]] {{template}} '''bold''' </nowiki> ~~~~",
    "-{zh-cn:a}- &lt;b&gt; &amp;",
    "right\u{202e}tfel\u{2066}x",
    "nul\u{0}bell\u{7}line\u{2028}",
    "\"quoted\", comma; semicolon",
    "\r\n\r\n<h1>",
    "- item",
    "1. item",
    "12) item",
    "$x^2$ \\(y\\)",
];

fn table(words: &str) -> Table {
    Table {
        caption: words.to_owned(),
        columns: vec!["Name".into(), "Value".into()],
        rows: vec![
            vec![Cell::Text(words.to_owned()), Cell::Number("-1.5e-3".into())],
            vec![Cell::Text("plain".into()), Cell::Number(String::new())],
        ],
    }
}

/// Words as a line: what every form makes of control characters and of signs that turn the writing.
fn line(words: &str) -> String {
    words
        .chars()
        .filter(|c| {
            !('\u{202a}'..='\u{202e}').contains(c) && !('\u{2066}'..='\u{2069}').contains(c) && *c != '\u{feff}'
        })
        .map(|c| if c.is_control() || c == '\u{2028}' || c == '\u{2029}' { ' ' } else { c })
        .collect()
}

/// Faults of the CSV, as sentences.
fn csv_faults(words: &str, text: &str) -> Vec<String> {
    let mut rows = csv::Reader::from_reader(text.as_bytes());
    let found: Vec<csv::StringRecord> = rows.records().map(|row| row.expect("a row")).collect();
    let mut faults = Vec::new();
    if found.len() != 2 || found[0].len() != 2 || &found[0][1] != "-1.5e-3" || !found[1][1].is_empty() {
        faults.push(format!("rows differ: {found:?}"));
    }
    let name = &found[0][0];
    if name.trim_start().starts_with(['=', '+', '-', '@', '\t', '\r']) {
        faults.push(format!("a formula: {name}"));
    }
    if name.trim_start_matches('\'') != line(words).trim_start_matches('\'') {
        faults.push(format!("{name} is not {words}"));
    }
    faults
}

/// Faults of the Markdown: anything in it but a paragraph, a table and texts; a number of fields that differs.
fn markdown_faults(text: &str) -> Vec<String> {
    let mut faults = Vec::new();
    let mut cells = 0;
    for event in Parser::new_ext(text, Options::ENABLE_TABLES | Options::ENABLE_STRIKETHROUGH | Options::ENABLE_MATH) {
        match event {
            Event::Start(Tag::TableCell) => cells += 1,
            Event::Start(Tag::Paragraph | Tag::Table(_) | Tag::TableHead | Tag::TableRow) | Event::End(_) => {}
            Event::Text(_) | Event::SoftBreak => {}
            other => faults.push(format!("{other:?}")),
        }
    }
    if cells != 6 {
        faults.push(format!("{cells} fields"));
    }
    for planted in ["://", "www.e", "a@e"] {
        if text.contains(planted) {
            faults.push(format!("an address: {planted}"));
        }
    }
    faults
}

fn html_faults(words: &str, text: &str) -> Vec<String> {
    let document = roxmltree::Document::parse(text).expect("well-formed");
    let named = |name: &str| document.descendants().filter(|node| node.has_tag_name(name)).collect::<Vec<_>>();
    let elements = document.descendants().filter(|node| node.is_element()).count();
    let mut faults = Vec::new();
    if elements != 1 + 1 + 3 + 2 + 4 || named("td").len() != 4 {
        faults.push(format!("{elements} elements"));
    }
    if named("td")[0].text().unwrap_or_default() != line(words) {
        faults.push("the words differ".into());
    }
    faults
}

/// Faults of the wiki markup: signs of markup outside `nowiki`, a line that does not belong to the table.
fn wiki_faults(text: &str) -> Vec<String> {
    let mut faults = Vec::new();
    let mut bare = String::new();
    for (at, part) in text.split("<nowiki>").enumerate() {
        match (at, part.split_once("</nowiki>")) {
            (0, _) => bare.push_str(part),
            (_, Some((inside, after))) => {
                if inside.contains(['<', '>', '\n']) {
                    faults.push(format!("markup inside: {inside}"));
                }
                bare.push('.');
                bare.push_str(after);
            }
            (_, None) => faults.push("nowiki without its end".into()),
        }
    }
    let wanted = ["{| class=\"wikitable\"", "|+ ", "! ", "|-", "| ", "|-", "| ", "|}"];
    let lines: Vec<&str> = bare.trim_end().split('\n').collect();
    if lines.len() != wanted.len() || lines.iter().zip(wanted).any(|(line, start)| !line.starts_with(start)) {
        faults.push(format!("lines: {lines:?}"));
    }
    for line in lines.iter().filter(|line| line.starts_with("| ")) {
        if line.contains(['[', '{', '<', '\'', '~', '=', '&']) || line.split("||").count() != 2 {
            faults.push(format!("markup: {line}"));
        }
    }
    faults
}

fn faults(words: &str) -> Vec<String> {
    let table = table(words);
    let mut found = csv_faults(words, &table.write(Form::Csv));
    found.extend(markdown_faults(&table.write(Form::Markdown)));
    found.extend(html_faults(words, &table.write(Form::Html)));
    found.extend(wiki_faults(&table.write(Form::Wiki)));
    if table.write(Form::Plain).lines().count() != 5 {
        found.push("plain text has other lines".into());
    }
    found
}

#[test]
fn no_hostile_name_becomes_markup_a_formula_or_a_link() {
    for words in HOSTILE {
        assert_eq!(faults(words), Vec::<String>::new(), "{words:?}");
    }
}

#[test]
fn planted_faults_are_found() {
    assert!(!csv_faults("=1", "Name,Value\r\n=1,-1.5e-3\r\nplain,\r\n").is_empty());
    let bare = |name: &str| format!("{name}\n\n| Name | Value |\n| --- | --- |\n| {name} | -1.5e-3 |\n| plain |  |\n");
    for name in ["[x](y)", "<b>", "*a*", "https://e.example", "`c`"] {
        assert!(!markdown_faults(&bare(name)).is_empty(), "{name}");
    }
    assert!(markdown_faults(&bare("plain")).is_empty());
    assert!(!wiki_faults("{| class=\"wikitable\"\n|+ x\n! a !! b\n|-\n| [[x]] || 1\n|-\n| y || \n|}\n").is_empty());
}

#[test]
fn plain_names_stay_as_they_are() {
    let table = table("C/2031 A1 (Invented)");
    for form in [Form::Csv, Form::Plain, Form::Wiki, Form::Html, Form::Markdown] {
        assert!(table.write(form).contains("C/2031 A1 (Invented)"), "{form:?}");
    }
    for (name, form) in Form::ALL {
        assert_eq!(Form::named(name), Some(form));
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 3000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn no_random_name_becomes_markup(words in "[\\PC\n\t<>&|\\[\\]{}'*`~=+@#_!-]{0,24}") {
        prop_assert_eq!(faults(&words), Vec::<String>::new());
    }
}
