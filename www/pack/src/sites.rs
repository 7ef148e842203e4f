//! How does the table of sites travel?
//!
//! Column by column, which packs smaller than line by line: codes and names as text, the numbers apart as whole
//! numbers in planes of bytes. A site lies near the surface of the Earth, so of its distance from the plane of the equator only
//! what differs from the surface below is written. `linesOf` in www/core.js puts the lines together again, with the same
//! numbers; remarks are left out.

use std::fs;
use std::path::Path;

/// The table in two halves.
#[derive(Debug)]
pub struct Sites {
    /// The codes on the first line, the names on the second, separated by tabs.
    pub words: String,
    /// Per site a count of 0.00001 degrees of east longitude, one of 0.000001 of rho cos phi', and what [`left`] says; first
    /// the lowest bytes of all longitudes, then the next ones, up to the highest of four; then the same of the others.
    pub numbers: Vec<u8>,
}

const LONGITUDE_UNITS: f64 = 1e5;
const RHO_UNITS: f64 = 1e6;
/// The square of the ratio of the Earth's polar to its equatorial radius (WGS84).
const SQUARED_RATIO: f64 = 0.993_305_62;

/// The table of the project.
///
/// # Errors
/// A table that cannot be read, or that holds more digits than the halves do.
pub fn read(root: &Path) -> Result<Sites, String> {
    let path = root.join("src/body/site_codes.txt");
    let table = fs::read_to_string(&path).map_err(|e| format!("{}: {e}", path.display()))?;
    halves(&table)
}

fn halves(table: &str) -> Result<Sites, String> {
    let (mut codes, mut names, mut columns) = (Vec::new(), Vec::new(), [const { Vec::new() }; 3]);
    for line in table.lines().filter(|line| !line.is_empty() && !line.starts_with('#')) {
        let wrong = || format!("the site table: {line:?} is not a code, three numbers and a name");
        let [code, longitude_deg, rho_cos, rho_sin, name] =
            line.split('\t').collect::<Vec<_>>().try_into().map_err(|_| wrong())?;
        let whole = |text: &str, units: f64| {
            let number: f64 = text.parse().ok()?;
            let count = (number * units).round();
            // The page divides again, and must find the very number.
            (count / units == number && count.abs() < 1e9).then_some(count)
        };
        let longitude = whole(longitude_deg, LONGITUDE_UNITS).filter(|count| *count >= 0.0).ok_or_else(wrong)?;
        let along = whole(rho_cos, RHO_UNITS).filter(|count| *count >= 0.0).ok_or_else(wrong)?;
        let across = whole(rho_sin, RHO_UNITS).ok_or_else(wrong)?;
        columns[0].push(longitude as u32);
        columns[1].push(along as u32);
        columns[2].push(left(along, across));
        codes.push(code);
        names.push(name);
    }
    let plane = |column: &[u32], byte: usize| column.iter().map(|count| count.to_le_bytes()[byte]).collect::<Vec<u8>>();
    let numbers = columns.iter().flat_map(|column| (0..4).flat_map(|byte| plane(column, byte))).collect();
    Ok(Sites { words: format!("{}\n{}", codes.join("\t"), names.join("\t")), numbers })
}

/// What is written of the distance from the plane of the equator: in the lowest bit whether it is southward; above, by how
/// much it is beyond (0, 2, 4 ... for 0, 1, 2 ...) or within (1, 3 ... for 1, 2 ...) the surface at this distance from the axis.
fn left(along: f64, across: f64) -> u32 {
    let share = along / RHO_UNITS;
    let surface = ((1.0 - share * share).max(0.0) * SQUARED_RATIO).sqrt();
    let beyond = (across.abs() - (surface * RHO_UNITS + 0.5).floor()) as i32;
    let size = if beyond < 0 { -2 * beyond - 1 } else { 2 * beyond } as u32;
    2 * size + u32::from(across < 0.0)
}

#[cfg(test)]
mod tests {
    use super::{halves, left};

    #[test]
    fn a_table_is_written_in_columns() {
        let sites =
            halves("# remark\n000\t0\t.62411\t.77873\tGreenwich\nX01\t300.00256\t.6\t-.798\tInvented\n").unwrap();
        assert_eq!(sites.words, "000\tX01\nGreenwich\tInvented");
        assert_eq!(sites.numbers.len(), 2 * 3 * 4);
        assert_eq!([1, 3, 5, 7].map(|at| sites.numbers[at]), 30_000_256_u32.to_le_bytes());
    }

    #[test]
    fn a_distance_is_written_by_what_the_surface_does_not_foretell() {
        // At the pole the surface lies at 0.996647 equatorial radii.
        assert_eq!(left(0.0, 996_647.0), 0);
        assert_eq!(left(0.0, 996_650.0), 2 * 6);
        assert_eq!(left(0.0, -996_645.0), 2 * 3 + 1);
    }

    #[test]
    fn more_digits_than_are_kept_are_refused() {
        assert!(halves("000\t0.000001\t.6\t.8\tToo fine\n").is_err());
        assert!(halves("000\t0\t.6\tNowhere\n").is_err());
    }
}
