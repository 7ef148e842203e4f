//! Through how much air does one look, and how far does it lift what is seen?

/// Refraction of a true (airless) altitude, degrees, at 1010 hPa and 10 C, by Saemundsson (1986, Sky & Telescope 72, 70);
/// within 0.1 arcmin of Bennett's formula. Not for altitudes below -1 degree.
pub fn refraction_deg(true_altitude_deg: f64) -> f64 {
    let angle_deg = true_altitude_deg + 10.3 / (true_altitude_deg + 5.11);
    1.02 / 60.0 / libm::tan(angle_deg.to_radians())
}

/// Relative optical air mass of a true (airless) altitude: Kasten & Young (1989, Applied Optics 28, 4735) with the
/// altitude as lifted by [`refraction_deg`]. None where the place is seen below the horizon.
pub fn air_mass(true_altitude_deg: f64) -> Option<f64> {
    if true_altitude_deg < -1.0 {
        return None;
    }
    let apparent_deg = true_altitude_deg + refraction_deg(true_altitude_deg);
    // Past the zenith lies nothing: the formula of refraction leaves a rest of 0.002 degrees there.
    (apparent_deg >= 0.0).then(|| of_apparent(apparent_deg.min(90.0)))
}

fn of_apparent(altitude_deg: f64) -> f64 {
    // Their form takes the zenith angle: 96.07995 - z.
    let slant = 0.50572 * libm::pow(altitude_deg + 6.07995, -1.6364);
    1.0 / (libm::sin(altitude_deg.to_radians()) + slant)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Source: pvlib 0.16.1, its Kasten-Young model, apparent zenith angles in degrees.
    #[test]
    fn air_mass_agrees_with_a_published_implementation() {
        for (zenith_deg, expected) in [
            (0.0, 0.99971),
            (30.0, 1.15399),
            (60.0, 1.99429),
            (75.0, 3.81291),
            (80.0, 5.58604),
            (85.0, 10.30579),
            (88.0, 19.4332),
            (90.0, 37.9196),
        ] {
            let found = of_apparent(90.0 - zenith_deg);
            assert!((found / expected - 1.0).abs() < 1e-5, "{zenith_deg}: {found}");
        }
    }

    /// Source: the formula as run with PyMeeus, arcmin.
    #[test]
    fn refraction_agrees_with_a_published_implementation() {
        for (altitude_deg, arcmin) in [(0.0, 28.982), (10.0, 5.408), (45.0, 1.013)] {
            assert!((refraction_deg(altitude_deg) * 60.0 - arcmin).abs() < 0.001, "{altitude_deg}");
        }
    }

    #[test]
    fn what_is_seen_below_the_horizon_has_no_air_mass() {
        assert_eq!(air_mass(-1.5), None);
        assert_eq!(air_mass(-0.8), None);
        // Refraction lifts it over the horizon.
        assert!(air_mass(-0.5).unwrap() > 30.0);
        assert!((air_mass(90.0).unwrap() - 0.99971).abs() < 1e-5);
        let rising: Vec<f64> = (0..=90).map(|altitude| air_mass(f64::from(altitude)).unwrap()).collect();
        assert!(rising.windows(2).all(|pair| pair[0] > pair[1]));
    }
}
