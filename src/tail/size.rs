//! How large is a grain of a given beta?
//!
//! ```text
//! beta = 3 L Q / (16 pi G M c rho s)      s the radius, rho the density, Q the efficiency of radiation pressure
//! ```
//!
//! for a compact sphere much larger than the wavelength. Below a micrometre Q falls with the size and beta turns
//! over, so that one beta belongs to two sizes or to none: such grains are called submicron and get no figure.
//! Sources: Burns, Lamy & Soter 1979, Icarus 40, 1, eq. 19; solar luminosity IAU 2015 resolution B3.

use crate::tail::law::Tails;
use std::f64::consts::PI;

/// Nominal solar luminosity, W (IAU 2015 B3).
const LUMINOSITY_W: f64 = 3.828e26;
/// Nominal GM of the Sun, m3/s2 (IAU 2015 B3).
const GM_M3_S2: f64 = 1.327_124_4e20;
const LIGHT_M_S: f64 = 299_792_458.0;

/// beta times radius times density over Q, kg/m2: 5.7424e-4.
pub const BETA_RADIUS_DENSITY_KG_M2: f64 = 3.0 * LUMINOSITY_W / (16.0 * PI * GM_M3_S2 * LIGHT_M_S);

/// Below this radius beta does not fix the size, micrometres.
pub const SUBMICRON_UM: f64 = 1.0;

/// What the grains are made of, as far as pressure feels it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Material {
    pub density_g_cm3: f64,
    /// Efficiency of radiation pressure, 1 for a large dark sphere.
    pub pressure_efficiency: f64,
}

impl Material {
    /// The material that a plan assumes.
    pub fn of(laws: &Tails) -> Self {
        Material { density_g_cm3: laws.grain_density_g_cm3, pressure_efficiency: laws.pressure_efficiency }
    }

    /// Radius by the formula, micrometres, whether or not it holds so far down; None without pressure (beta 0).
    pub fn radius_um(&self, beta: f64) -> Option<f64> {
        (beta > 0.0).then(|| self.beta_of_1_um() / beta)
    }

    /// beta of a radius in micrometres, by the formula.
    pub fn beta(&self, radius_um: f64) -> f64 {
        self.beta_of_1_um() / radius_um
    }

    fn beta_of_1_um(&self) -> f64 {
        // kg/m2 over g/cm3 times um: 1e3 * 1e-6.
        BETA_RADIUS_DENSITY_KG_M2 * 1e3 * self.pressure_efficiency / self.density_g_cm3
    }

    /// The radius in short honest words, for a label: `6 µm`, `0.6 mm`, `2 cm`, `submicron`, `any large body`.
    pub fn short(&self, beta: f64) -> String {
        match self.radius_um(beta) {
            None => "any large body".to_owned(),
            Some(radius_um) if radius_um < SUBMICRON_UM => "submicron".to_owned(),
            Some(radius_um) => metric(radius_um),
        }
    }

    /// The radius in words with what was assumed: `about 6 µm (density 1 g/cm³, Qpr 1)`.
    pub fn words(&self, beta: f64) -> String {
        let assumed = format!("density {} g/cm³, Qpr {}", self.density_g_cm3, self.pressure_efficiency);
        match self.radius_um(beta) {
            None => "no radiation pressure: any large body".to_owned(),
            Some(radius_um) if radius_um < SUBMICRON_UM => {
                format!("submicron, where beta no longer fixes the size ({assumed})")
            }
            Some(radius_um) => format!("about {} ({assumed})", metric(radius_um)),
        }
    }
}

/// A length in the unit that fits it. One figure, two where the first is a 1: the density alone is not known better.
fn metric(radius_um: f64) -> String {
    let figures = |value: f64| {
        let step = libm::pow(10.0, libm::floor(libm::log10(value)));
        let step = if value / step < 1.95 { step / 10.0 } else { step };
        (value / step).round() * step
    };
    let (value, unit) = match figures(radius_um) {
        um if um < 99.5 => (um, "µm"),
        um if um < 9_950.0 => (um / 1e3, "mm"),
        um if um < 995_000.0 => (um / 1e4, "cm"),
        um => (um / 1e6, "m"),
    };
    let decimals = if value < 0.195 {
        2
    } else if value < 1.95 {
        1
    } else {
        0
    };
    let text = format!("{value:.decimals$}");
    let text = if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.') } else { &text };
    format!("{text}\u{a0}{unit}")
}

#[cfg(test)]
mod tests {
    use super::*;

    const PLAIN: Material = Material { density_g_cm3: 1.0, pressure_efficiency: 1.0 };

    #[test]
    fn a_length_has_the_figures_that_the_density_allows() {
        let words: Vec<String> = [1.04, 5.74, 57.4, 96.0, 143.0, 574.0, 999.0, 1_432.0, 5_742.0, 57_424.0, 2.3e6]
            .map(|um| metric(um).replace('\u{a0}', " "))
            .to_vec();
        let wanted = ["1 µm", "6 µm", "60 µm", "0.1 mm", "0.14 mm", "0.6 mm", "1 mm", "1.4 mm", "6 mm", "6 cm", "2 m"];
        assert_eq!(words, wanted);
    }

    #[test]
    fn what_beta_cannot_tell_is_not_given_a_figure() {
        assert_eq!(PLAIN.short(1.0), "submicron");
        assert!(PLAIN.words(2.5).contains("no longer fixes the size"));
        assert_eq!(PLAIN.short(0.0), "any large body");
        assert_eq!(PLAIN.words(0.1).replace('\u{a0}', " "), "about 6 µm (density 1 g/cm³, Qpr 1)");
    }
}
