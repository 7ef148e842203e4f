//! How does a table travel: as CSV, or as text for a mail or a wiki?
//!
//! Names come from anywhere, so a text cell never becomes markup, a formula or a link, whatever stands in it: control
//! characters become blanks, signs that turn the direction of writing are dropped, and each form escapes what it
//! would read as its own. CSV is RFC 4180; a text that a spreadsheet would take for a formula gets an apostrophe in
//! front. Markdown is the one with tables (GitHub's); wiki markup is MediaWiki's.
//!
//! Left out: numbers are written as they come and must be numbers.

/// One field.
#[derive(Clone, Debug, PartialEq)]
pub enum Cell {
    /// Digits, sign, point, exponent; empty where there is none.
    Number(String),
    Text(String),
}

/// Rows below a header.
#[derive(Clone, Debug, PartialEq)]
pub struct Table {
    /// What the table shows; CSV leaves it out.
    pub caption: String,
    pub columns: Vec<String>,
    pub rows: Vec<Vec<Cell>>,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    Csv,
    /// Columns lined up by blanks.
    Plain,
    Markdown,
    Wiki,
    Html,
}

impl Form {
    pub const ALL: [(&'static str, Form); 5] = [
        ("csv", Form::Csv),
        ("plain", Form::Plain),
        ("markdown", Form::Markdown),
        ("wiki", Form::Wiki),
        ("html", Form::Html),
    ];

    /// The form of this name.
    pub fn named(name: &str) -> Option<Form> {
        Form::ALL.into_iter().find(|(own, _)| *own == name).map(|(_, form)| form)
    }

    /// `words` as they read in this form, unable to be anything but words.
    pub fn safe(self, words: &str) -> String {
        let plain = clean(words);
        match self {
            Form::Csv => csv(&plain),
            Form::Plain => plain,
            Form::Markdown => markdown(&plain),
            Form::Wiki => wiki(&plain),
            Form::Html => html(&plain),
        }
    }
}

impl Table {
    /// The table in a form, with a line end.
    pub fn write(&self, form: Form) -> String {
        let cell = |cell: &Cell| match cell {
            Cell::Number(number) => number.clone(),
            Cell::Text(words) => form.safe(words),
        };
        let head: Vec<String> = self.columns.iter().map(|words| form.safe(words)).collect();
        let rows: Vec<Vec<String>> = self.rows.iter().map(|row| row.iter().map(cell).collect()).collect();
        let caption = form.safe(&self.caption);
        let mut out = String::new();
        match form {
            Form::Csv => {
                for row in std::iter::once(&head).chain(&rows) {
                    out.push_str(&row.join(","));
                    out.push_str("\r\n");
                }
            }
            Form::Plain => {
                let wide = |column: usize| {
                    std::iter::once(&head)
                        .chain(&rows)
                        .filter_map(|row| row.get(column))
                        .map(|c| c.chars().count())
                        .max()
                };
                out.push_str(&caption);
                out.push_str("\n\n");
                for row in std::iter::once(&head).chain(&rows) {
                    let mut line = String::new();
                    for (column, words) in row.iter().enumerate() {
                        let room = wide(column).unwrap_or(0) - words.chars().count();
                        line.push_str(words);
                        line.extend(std::iter::repeat_n(' ', room + 2));
                    }
                    out.push_str(line.trim_end());
                    out.push('\n');
                }
            }
            Form::Markdown => {
                let rule: Vec<String> = head.iter().map(|_| "---".to_owned()).collect();
                out.push_str(&caption);
                out.push_str("\n\n");
                for row in [&head, &rule].into_iter().chain(&rows) {
                    out.push_str("| ");
                    out.push_str(&row.join(" | "));
                    out.push_str(" |\n");
                }
            }
            Form::Wiki => {
                out.push_str("{| class=\"wikitable\"\n|+ ");
                out.push_str(&caption);
                out.push_str("\n! ");
                out.push_str(&head.join(" !! "));
                for row in &rows {
                    out.push_str("\n|-\n| ");
                    out.push_str(&row.join(" || "));
                }
                out.push_str("\n|}\n");
            }
            Form::Html => {
                out.push_str("<table>\n<caption>");
                out.push_str(&caption);
                out.push_str("</caption>\n<tr><th>");
                out.push_str(&head.join("</th><th>"));
                out.push_str("</th></tr>\n");
                for row in &rows {
                    out.push_str("<tr><td>");
                    out.push_str(&row.join("</td><td>"));
                    out.push_str("</td></tr>\n");
                }
                out.push_str("</table>\n");
            }
        }
        out
    }
}

/// One line without signs that control a terminal or turn the direction of writing (Unicode UAX 9).
fn clean(words: &str) -> String {
    words
        .chars()
        .filter(|c| !matches!(c, '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' | '\u{feff}'))
        .map(|c| if c.is_control() || matches!(c, '\u{2028}' | '\u{2029}') { ' ' } else { c })
        .collect()
}

fn csv(words: &str) -> String {
    // Full-width twins are taken for the same signs by some spreadsheets.
    let formula = words
        .trim_start()
        .starts_with(['=', '+', '-', '@', '\u{2212}', '\u{ff1d}', '\u{ff0b}', '\u{ff0d}', '\u{ff20}']);
    let guarded = if formula { format!("'{words}") } else { words.to_owned() };
    if guarded.contains(['"', ',', ';']) || guarded.trim() != guarded {
        format!("\"{}\"", guarded.replace('"', "\"\""))
    } else {
        guarded
    }
}

/// Keeps what looks like an address or a mention from turning into a link: an invisible sign that joins words.
fn unlinked(words: &str, out: &mut String, mut put: impl FnMut(char, &mut String)) {
    const JOINER: char = '\u{2060}';
    let mut before = ' ';
    let mut letters = words.chars().peekable();
    while let Some(letter) = letters.next() {
        put(letter, out);
        let next = letters.peek().copied().unwrap_or(' ');
        let breaks = match letter {
            '@' | '#' => true,
            ':' => next == '/',
            '.' => before.is_alphabetic() && next.is_alphabetic(),
            _ => false,
        };
        if breaks {
            out.push(JOINER);
        }
        before = letter;
    }
}

/// Every ASCII sign that CommonMark could read as markup behind a backslash, which it takes away.
fn markdown(words: &str) -> String {
    let mut out = String::new();
    unlinked(words.trim(), &mut out, |letter, out| {
        if matches!(
            letter,
            '\\' | '`' | '*' | '_' | '{' | '}' | '[' | ']' | '<' | '>' | '#' | '|' | '~' | '!' | '&' | '$' | '@'
        ) {
            out.push('\\');
        }
        out.push(letter);
    });
    // At the start of a line these would begin a list, a rule, or after a number a numbered list.
    let first = out.find(|c: char| !c.is_ascii_digit()).unwrap_or(out.len());
    if out[first..].starts_with(if first == 0 { &['+', '-', '='][..] } else { &['.', ')'][..] }) {
        out.insert(first, '\\');
    }
    out
}

fn wiki(words: &str) -> String {
    let plain =
        words.chars().all(|c| c.is_alphanumeric() || matches!(c, ' ' | ',' | '(' | ')' | '/' | '.' | '%' | '°'));
    if plain && !words.starts_with(' ') {
        return words.to_owned();
    }
    format!("<nowiki>{}</nowiki>", html(words))
}

fn html(words: &str) -> String {
    let mut out = String::new();
    for letter in words.chars() {
        match letter {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            other => out.push(other),
        }
    }
    out
}
