//! Which quantities of a sky are shown, under which name, in words, with which unit and digits?
//!
//! One list serves the command line's columns and the page's table, so that the two cannot differ.

use super::Sky;

/// A quantity of the sky table.
pub struct Column {
    /// Fixed machine name with its unit suffix, such as `phase_angle_deg`.
    pub key: &'static str,
    /// The name in words, such as "Phase angle".
    pub words: &'static str,
    /// One sentence that says what it is, for the reader who asks.
    pub meaning: &'static str,
    /// Unit as printed for people, such as "deg"; empty for none.
    pub unit: &'static str,
    /// Digits after the point for people.
    pub decimals: usize,
    /// Shown only for a site.
    pub site_only: bool,
    /// The value in the unit of the key.
    pub value: fn(&Sky) -> Value,
}

/// A value of the sky table.
#[derive(Clone, Debug, PartialEq)]
pub enum Value {
    Number(f64),
    Text(String),
    /// The quantity does not exist for this sky.
    Absent,
}
