//! Invented records in every notation, and what their reading must say.
#![allow(dead_code, reason = "each test binary uses its part")]

use tailvane::error::{Error, Place};
use tailvane::orbit::elements::Comet;
use tailvane::orbit::notation::{self, Reading};

/// Invented; columns 1-168.
pub const ONE_LINE: &str = "    CK31A010  2031 03 04.5173  0.520000  1.000300   33.4000  201.9000   61.2000  20310220   6.5  4.0  C/2031 A1 (Invented)                                     INV 12345";
pub const PERIODIC: &str = "0412P         2033 11 21.0815  1.353211  0.612304  187.0121    9.5022    4.0810  20331125  10.0  6.0  412P/Invented                                            INV 12345";

pub const BLOCK: &str = "C/2031 A1 (Invented)
    Epoch 2031 Feb. 20.0 TT = JDT 2462917.5
T 2031 Mar. 4.51732 TT                                  Invented
q   0.5200000            (2000.0)            P               Q
z  -0.0005769      Peri.   33.40000     +0.12345678     -0.98765432
 +/-0.0000012      Node   201.90000     -0.87654321     +0.12345678
e   1.0003000      Incl.   61.20000     +0.46567890     +0.09876543
From 123 observations 2030 Oct. 1-2031 Jan. 5, mean residual 0\".5.
";

pub const PAIRS: &str = "name = C/2031 A1 (Invented)
q = 0.5200000 AU
e = 1.0003000
i = 61.20000\u{b0}
Omega = 201.90000 deg
omega = 33.40000 deg
T = 2031-03-04.51732 TT
epoch = 2031-02-20.0 TT
H = 6.5
n = 4.0
A1 = 1.2e-8 au/d^2
A2 = \u{2212}3e-10
";

pub fn show(reading: &Reading) -> String {
    let errors: Vec<String> = reading.errors.iter().map(Error::to_string).collect();
    format!("{} comets\n{}", reading.comets.len(), errors.join("\n"))
}

pub fn comets_of(text: &str) -> Vec<Comet> {
    let reading = notation::read(text);
    assert!(reading.errors.is_empty(), "{text}\n{}", show(&reading));
    reading.comets.into_iter().map(|entry| entry.comet).collect()
}

pub fn comet(text: &str) -> Comet {
    let mut comets = comets_of(text);
    assert_eq!(comets.len(), 1, "{text}");
    comets.remove(0)
}

/// Refuses all of `text`, with an error at `line` and `column` (0: any) that says every one of `parts`.
pub fn refuses(text: &str, line: usize, column: usize, parts: &[&str]) {
    let reading = notation::read(text);
    assert!(reading.comets.is_empty(), "{text}\nread as {:?}", reading.comets);
    let fits = |error: &&Error| {
        let there = match error.place {
            Place::Line { line: l, column: c } => l == line && (column == 0 || c == column),
            _ => false,
        };
        there && parts.iter().all(|part| error.to_string().contains(part))
    };
    assert!(
        reading.errors.iter().any(|error| fits(&error)),
        "{text}\n{}\nwanted {line}:{column} {parts:?}",
        show(&reading)
    );
}

pub fn assert_invented(comet: &Comet) {
    let elements = &comet.elements;
    assert_eq!(comet.name, "C/2031 A1 (Invented)");
    assert_eq!(elements.perihelion_distance_au, 0.52);
    assert_eq!(elements.eccentricity, 1.0003);
    assert_eq!(elements.argument_of_perihelion_deg, 33.4);
    assert_eq!(elements.ascending_node_deg, 201.9);
    assert_eq!(elements.inclination_deg, 61.2);
    assert!(elements.perihelion_time.to_string().starts_with("2031-03-04.5173"));
    assert!(elements.perihelion_time.to_string().ends_with(" TT"));
    assert_eq!(
        elements.epoch.as_ref().unwrap().instant(),
        "2031-02-20.0 TT".parse::<tailvane::time::Stamp>().unwrap().instant()
    );
}
