//! Which site does an observatory code or name mean?
//!
//! The table is text, handed in by the caller, since the page carries it as a block of its own: lines of five fields
//! separated by tabs (code, east longitude in degrees, rho cos phi', rho sin phi', name); a line that begins with `#`
//! is a remark. Codes without a place on the ground (spacecraft, roving observers, the Earth's centre) are not in it.
//!
//! A place is as good as its published constants: 6 m for six decimals, 6 km for three. Its height is that of the
//! constants, and has no meaning of its own where they have fewer than five decimals. Source: the Minor Planet
//! Center's list of observatory codes; tests/truth/ephemeris/make_site_codes.py makes the table.

use super::ellipsoid::from_parallax_constants;
use super::observer::Site;
use crate::decimal;

/// The table, for shells that carry it in their own binary.
#[cfg(not(target_arch = "wasm32"))]
pub const SITE_CODES: &str = include_str!("site_codes.txt");

/// An observatory of the table.
#[derive(Clone, Debug, PartialEq)]
pub struct Coded {
    pub code: String,
    pub site: Site,
}

/// The site with exactly this code (capitals matter; space around it does not).
pub fn find(table: &str, code: &str) -> Option<Site> {
    let code = code.trim();
    let row = rows(table).find(|row| row.code == code)?;
    row.coded().map(|coded| coded.site)
}

/// Up to `limit` observatories, in the order of the table, whose name holds every word of `words`, in any case.
/// No word gives no observatory.
pub fn search(table: &str, words: &str, limit: usize) -> Vec<Coded> {
    let words: Vec<String> = words.split_whitespace().map(str::to_ascii_lowercase).collect();
    if words.is_empty() {
        return Vec::new();
    }
    rows(table)
        .filter(|row| {
            let name = row.name.to_ascii_lowercase();
            words.iter().all(|word| name.contains(word.as_str()))
        })
        .filter_map(|row| row.coded())
        .take(limit)
        .collect()
}

/// One line of the table, as text.
struct Row<'a> {
    code: &'a str,
    longitude_deg: &'a str,
    rho_cos: &'a str,
    rho_sin: &'a str,
    name: &'a str,
}

/// The lines that have five fields.
fn rows(table: &str) -> impl Iterator<Item = Row<'_>> {
    table.lines().filter(|line| !line.starts_with('#')).filter_map(|line| {
        let mut fields = line.split('\t');
        Some(Row {
            code: fields.next()?,
            longitude_deg: fields.next()?,
            rho_cos: fields.next()?,
            rho_sin: fields.next()?,
            name: fields.next()?,
        })
    })
}

impl Row<'_> {
    /// None if a number cannot be read. Rounded to 0.1 m, finer than any row is published.
    fn coded(&self) -> Option<Coded> {
        let longitude_deg: f64 = decimal::read(self.longitude_deg)?;
        let place = from_parallax_constants(
            longitude_deg.to_radians(),
            decimal::read(self.rho_cos)?,
            decimal::read(self.rho_sin)?,
        );
        Some(Coded {
            code: self.code.to_owned(),
            site: Site {
                name: self.name.to_owned(),
                longitude_deg,
                latitude_deg: (place.latitude_rad.to_degrees() * 1e6).round() / 1e6,
                height_m: (place.height_m * 10.0).round() / 10.0,
            },
        })
    }
}
