//! Reads the tables of tests/truth: comment lines, one line of column names, rows.

use std::collections::BTreeMap;
use std::path::Path;

/// One row of a table, by column name.
#[derive(Clone, Debug)]
pub struct Row {
    fields: BTreeMap<String, String>,
}

impl Row {
    /// The text of a field.
    pub fn text(&self, key: &str) -> &str {
        self.fields.get(key).unwrap_or_else(|| panic!("no column {key}"))
    }

    /// A number, None for an empty field.
    pub fn number_if_any(&self, key: &str) -> Option<f64> {
        let text = self.text(key);
        (!text.is_empty()).then(|| text.parse().unwrap_or_else(|_| panic!("{key}: {text} is not a number")))
    }

    /// A number that must be there.
    pub fn number(&self, key: &str) -> f64 {
        self.number_if_any(key).unwrap_or_else(|| panic!("{key} is empty"))
    }

    /// Several numbers, such as the components of a vector.
    pub fn numbers<const N: usize>(&self, keys: [&str; N]) -> [f64; N] {
        keys.map(|key| self.number(key))
    }
}

/// The rows of `tests/truth/{name}`; panics with the name if there is no such table or it has no rows.
pub fn table(name: &str) -> Vec<Row> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/truth").join(name);
    let text = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    let mut lines = text.lines().filter(|line| !line.starts_with('#'));
    let columns: Vec<&str> = lines.next().expect("a line of column names").split(',').collect();
    let rows: Vec<Row> = lines
        .map(|line| {
            let fields: Vec<&str> = line.split(',').collect();
            assert_eq!(fields.len(), columns.len(), "{name}: {line}");
            Row {
                fields: columns.iter().zip(fields).map(|(key, field)| (key.to_string(), field.to_string())).collect(),
            }
        })
        .collect();
    assert!(!rows.is_empty(), "{name} has no rows");
    rows
}
