//! Places of grains against 80 digits (tests/truth/make_grain.py), and what is said of grains that cannot be.

use crate::rows::{Row, table};
use crate::{elements, instant, row_elements};
use nalgebra::Vector3;
use tailvane::body::sun::RADIUS_AU;
use tailvane::caution::Caution;
use tailvane::frame::{Axes, ecliptic_to_equatorial, equatorial_to_ecliptic};
use tailvane::orbit::conic::Orbit;
use tailvane::tail::grain::{Grain, Vista};
use tailvane::time::Instant;

/// What is done wrong on purpose.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Fault {
    None,
    /// beta off by 1e-9 of itself.
    Beta,
    /// Age off by five seconds.
    Age,
    /// The ejection's transverse and normal parts exchanged.
    EjectionAxes,
    /// The ejection's radial part counted toward the Sun.
    EjectionSign,
    /// Full gravity for dust.
    NoPressure,
    /// East and west exchanged.
    Mirror,
}

/// The worst miss of a row as a multiple of its bar: place, then offset.
fn misses(row: &Row, fault: Fault) -> [f64; 2] {
    let perihelion = format!("JD {} TT", 2_451_545.0 + row.number("perihelion_tt_days"));
    let orbit = Orbit::new(&row_elements(row, &perihelion)).expect("a sound orbit");
    let seen = Instant::from_tdb_days(row.number("seen_tt_days"));
    let [x, y, z] = row.numbers(["observer_x_au", "observer_y_au", "observer_z_au"]);
    let observer_au = ecliptic_to_equatorial(&Vector3::new(x, y, z));
    let nucleus = orbit.place_at(seen).state;
    let axes = Axes::at(&(nucleus.position_au - observer_au));
    let vista = Vista { orbit: &orbit, seen, nucleus, observer_au, axes };

    let [radial, transverse, normal] = row.numbers(["radial_km_s", "transverse_km_s", "normal_km_s"]);
    let mut grain = Grain {
        beta: row.number("beta"),
        age_days: row.number("age_days"),
        ejection_km_s: [radial, transverse, normal],
    };
    match fault {
        Fault::Beta => grain.beta *= 1.0 + 1e-9,
        Fault::Age => grain.age_days += 5.0 / 86_400.0,
        Fault::EjectionAxes => grain.ejection_km_s = [radial, normal, transverse],
        Fault::EjectionSign => grain.ejection_km_s[0] = -radial,
        Fault::NoPressure => grain.beta = 0.0,
        Fault::None | Fault::Mirror => {}
    }
    let place = vista.grain(&grain).position_au;
    let [x, y, z] = row.numbers(["x_au", "y_au", "z_au"]);
    let bar_au = 1e-10_f64.max(10.0 * row.number("conditioning_au"));
    let place_miss = (equatorial_to_ecliptic(&place) - Vector3::new(x, y, z)).norm() / bar_au;

    let offset = vista.offset(&place);
    let wanted = row.number_if_any("xi_deg").zip(row.number_if_any("eta_deg"));
    let offset_miss = match (offset, wanted) {
        (Some([xi, eta]), Some((wanted_xi, wanted_eta))) => {
            let xi = if fault == Fault::Mirror { -xi } else { xi };
            // Far out the tangent stretches what the bar of place allows; so does a grain near the observer.
            let stretch = 1.0 + (wanted_xi * wanted_xi + wanted_eta * wanted_eta).to_radians().to_radians();
            let bar_deg = 1e-6 * stretch.max(bar_au / 1e-10);
            (xi.to_degrees() - wanted_xi).hypot(eta.to_degrees() - wanted_eta) / bar_deg
        }
        (None, None) => 0.0,
        _ => f64::INFINITY,
    };
    // A number that is not one is the worst miss of all.
    [place_miss, offset_miss].map(|miss| if miss.is_nan() { f64::INFINITY } else { miss })
}

#[test]
fn places_of_grains_equal_eighty_digits() {
    let rows = table("grain.csv");
    let mut worst = [0.0_f64; 2];
    for row in &rows {
        let misses = misses(row, Fault::None);
        worst = [worst[0].max(misses[0]), worst[1].max(misses[1])];
        assert!(misses[0] <= 1.0 && misses[1] <= 1.0, "{misses:?} of the bar: {row:?}");
    }
    let loose = rows.iter().filter(|row| row.number("conditioning_au") > 1e-11).count();
    println!("grain.csv: {} grains, worst {worst:?} of the bars; bar wider than 1e-10 au for {loose}", rows.len());
    assert!(loose * 20 < rows.len(), "too many rows with a wide bar: {loose}");
}

#[test]
fn every_planted_fault_of_a_grain_is_seen() {
    let rows = table("grain.csv");
    // Rows in which a fault can show at all.
    let shows = |row: &Row, fault: Fault| {
        let [beta, age, radial, transverse, normal] =
            row.numbers(["beta", "age_days", "radial_km_s", "transverse_km_s", "normal_km_s"]);
        let sharp = row.number("conditioning_au") < 1e-13 && age > 100.0;
        sharp
            && match fault {
                Fault::Beta => beta > 0.5,
                Fault::NoPressure => beta > 0.0,
                Fault::EjectionAxes => transverse != normal,
                Fault::EjectionSign => radial != 0.0,
                Fault::Mirror => row.number_if_any("xi_deg").is_some_and(|xi| xi != 0.0),
                // Undisturbed, beta 0 is the comet itself, whatever its age.
                Fault::Age => beta > 0.0 || [radial, transverse, normal] != [0.0; 3],
                Fault::None => true,
            }
    };
    for fault in [Fault::Beta, Fault::Age, Fault::EjectionAxes, Fault::EjectionSign, Fault::NoPressure, Fault::Mirror] {
        let able: Vec<&Row> = rows.iter().filter(|row| shows(row, fault)).collect();
        let seen = able.iter().filter(|row| misses(row, fault).iter().any(|miss| *miss > 1.0)).count();
        assert!(able.len() > 50 && seen * 100 >= able.len() * 95, "{fault:?}: seen in {seen} of {}", able.len());
    }
}

/// The vista of a row of grain.csv needs no observer for what happens on the way.
fn fate(row: &Row) -> (Vec<Caution>, f64, f64) {
    let perihelion = format!("JD {} TT", 2_451_545.0 + row.number("perihelion_tt_days"));
    let orbit = Orbit::new(&row_elements(row, &perihelion)).expect("a sound orbit");
    let seen = Instant::from_tdb_days(row.number("seen_tt_days"));
    let nucleus = orbit.place_at(seen).state;
    let vista = Vista { orbit: &orbit, seen, nucleus, observer_au: Vector3::z(), axes: Axes::at(&nucleus.position_au) };
    let ejection_km_s = row.numbers(["radial_km_s", "transverse_km_s", "normal_km_s"]);
    let grain = Grain { beta: row.number("beta"), age_days: row.number("age_days"), ejection_km_s };
    let path = vista.path(&grain);
    (vista.fate(&grain).1, path.least_distance_au, path.revolutions)
}

#[test]
fn the_way_of_a_grain_equals_the_classical_elements_and_is_said_where_it_ends_in_the_sun() {
    let mut said = [0; 3];
    for row in table("grain.csv") {
        let (cautions, least_au, revolutions) = fate(&row);
        let [wanted_least, wanted_turns] = row.numbers(["least_distance_au", "revolutions"]);
        assert!((least_au - wanted_least).abs() < 1e-9 * wanted_least, "{least_au}: {row:?}");
        assert!((revolutions - wanted_turns).abs() < 1e-7 * (1.0 + wanted_turns), "{revolutions}: {row:?}");
        let met =
            cautions.iter().any(|caution| matches!(caution, Caution::GrainInSun { .. } | Caution::GrainStartsInSun));
        let turned = cautions.iter().any(|caution| matches!(caution, Caution::GrainRevolved { .. }));
        assert_eq!(met, wanted_least < RADIUS_AU, "{cautions:?}: {row:?}");
        assert_eq!(turned, wanted_turns > 1.0, "{cautions:?}: {row:?}");
        said[0] += usize::from(met);
        said[1] += usize::from(turned);
        said[2] += usize::from(cautions.is_empty());
    }
    assert!(said.iter().all(|count| *count > 5), "met the Sun, turned, neither: {said:?}");
}

#[test]
fn dust_that_was_to_leave_inside_the_sun_says_so_and_gives_numbers() {
    let orbit = Orbit::new(&elements(0.002, 1.0, [30.0, 40.0, 50.0], "2031-03-04.5 TT")).expect("an orbit");
    let seen = instant("2031-03-10.5 TT");
    let nucleus = orbit.place_at(seen).state;
    let observer_au = Vector3::new(1.0, 0.1, 0.0);
    let vista =
        Vista { orbit: &orbit, seen, nucleus, observer_au, axes: Axes::at(&(nucleus.position_au - observer_au)) };
    for (age_days, inside) in [(6.0, true), (1.0, false)] {
        let (end, cautions) = vista.fate(&Grain::released(0.4, age_days));
        assert_eq!(cautions.contains(&Caution::GrainStartsInSun), inside, "{cautions:?}");
        assert!(end.position_au.iter().all(|part| part.is_finite()));
    }
    // It goes through the Sun on its way in.
    let (_, cautions) = vista.fate(&Grain::released(0.4, 30.0));
    assert!(matches!(cautions[..], [Caution::GrainInSun { .. }]), "{cautions:?}");
    assert!(vista.survivor(0.4, &vista.release(30.0), 30.0).is_none());
}

#[test]
fn regression_lengths_and_angles_of_old_dust_are_as_before() {
    for row in table("../snapshots/grain_regression.csv") {
        let mut engine = crate::engine(row_elements(&row, row.text("perihelion_time")));
        let sky = engine.sky_at(instant(row.text("time"))).expect("within the span");
        let vista = engine.vista(&sky);
        let place = vista.grain(&Grain::released(row.number("beta"), row.number("age_days"))).position_au;
        let [xi, eta] = vista.offset(&place).expect("in sight");
        let (separation, angle) = (xi.hypot(eta).atan().to_degrees(), xi.atan2(eta).to_degrees());
        let [wanted, wanted_angle] = row.numbers(["separation_deg", "position_angle_deg"]);
        assert!((separation - wanted).abs() < (0.01 * wanted).max(5e-5), "{separation}: {row:?}");
        assert!(crate::apart_deg(angle, wanted_angle) < 0.1, "{angle}: {row:?}");
    }
}

#[test]
fn beta_and_radius_belong_together_as_published() {
    // Burns, Lamy & Soter 1979, eq. 19, with the nominal solar luminosity: beta of 1, 10, 1000 um at 1 g/cm3, 0.5 um at 3.
    use tailvane::tail::size::Material;
    for (density_g_cm3, radius_um, beta) in
        [(1.0, 1.0, 0.57424), (1.0, 10.0, 0.057424), (1.0, 1000.0, 5.7424e-4), (3.0, 0.5, 0.38282)]
    {
        let material = Material { density_g_cm3, pressure_efficiency: 1.0 };
        // Five printed digits.
        assert!((material.beta(radius_um) / beta - 1.0).abs() < 1.5e-5, "{}", material.beta(radius_um));
        let back = material.radius_um(beta).expect("a size");
        assert!((back / radius_um - 1.0).abs() < 1.5e-5);
        let half = Material { pressure_efficiency: 0.5, ..material };
        assert!((half.beta(radius_um) / beta - 0.5).abs() < 1e-5);
    }
}
