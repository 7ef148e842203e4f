//! Random dates, comets and plans that are valid, for property tests.
#![allow(dead_code, reason = "each test binary uses its part")]

use proptest::prelude::*;
use tailvane::body::observer::{Observer, Site};
use tailvane::night::law::NightLaw;
use tailvane::orbit::elements::{Brightness, Comet, Elements, Nongravitational};
use tailvane::plan::Plan;
use tailvane::time::Stamp;
use tailvane::time::civil::{Date, month_length};

prop_compose! {
    pub fn dates()(year in -4712..=9999_i32, month in 1..=12_u32, part in 0.0..1.0_f64) -> Date {
        let day = 1 + (part * f64::from(month_length(year, month))) as u32;
        Date::new(year, month, day).unwrap()
    }
}

/// Texts of every form, as the plan prints them.
pub fn stamp_texts() -> impl Strategy<Value = String> {
    let scale = prop::sample::select(vec!["UTC", "TT", "TDB"]);
    let decimals = prop_oneof![Just(String::new()), "\\.[0-9]{1,18}"];
    prop_oneof![
        (dates(), 0..24, 0..60, prop::option::of((0..60, decimals.clone()))).prop_map(
            |(date, hour, minute, second)| {
                let second = second.map(|(second, decimals)| format!(":{second:02}{decimals}")).unwrap_or_default();
                format!("{date}T{hour:02}:{minute:02}{second}Z")
            }
        ),
        Just("2016-12-31T23:59:60.5Z".to_string()),
        (dates(), decimals.clone(), scale.clone())
            .prop_map(|(date, decimals, scale)| format!("{date}{decimals} {scale}")),
        (40..5_373_484_i32, decimals, scale).prop_map(|(day, decimals, scale)| format!("JD {day}{decimals} {scale}")),
    ]
}

pub fn stamps() -> impl Strategy<Value = Stamp> {
    stamp_texts().prop_map(|text| text.parse().unwrap())
}

/// Names with letters of any script, signs and inner blanks, but none around.
pub fn names() -> impl Strategy<Value = String> {
    prop_oneof!["[CPDXI]/20[0-9]{2} [A-Y][1-9] \\([A-Z][a-z]{3,9}\\)", "\\PC{1,30}"]
        .prop_filter("blanks around", |name| {
            !name.is_empty() && name.trim() == name && !name.chars().any(char::is_control)
        })
}

/// Numbers with few digits and with all of them.
fn numbers(least: f64, most: f64) -> impl Strategy<Value = f64> {
    prop_oneof![least..most, (least..most).prop_map(move |number| ((number * 1e4).round() / 1e4).clamp(least, most))]
}

prop_compose! {
    fn pushes()(a1_au_d2 in -9e-5..9e-5_f64, a2_au_d2 in -1e-8..1e-8_f64, a3_au_d2 in prop_oneof![Just(0.0), -1e-9..1e-9_f64],
                delay_days in numbers(-100.0, 100.0)) -> Nongravitational {
        Nongravitational { a1_au_d2, a2_au_d2, a3_au_d2, delay_days }
    }
}

prop_compose! {
    pub fn elements()(
        perihelion_distance_au in prop_oneof![numbers(0.2, 50.0), 0.2..1e4_f64],
        eccentricity in prop_oneof![Just(0.0), Just(1.0), numbers(0.0, 10.0), 0.99999..1.00001_f64],
        inclination_deg in numbers(0.0, 180.0),
        ascending_node_deg in numbers(-360.0, 360.0),
        argument_of_perihelion_deg in numbers(-360.0, 360.0),
        perihelion_time in stamps(),
        epoch in prop::option::of(stamps()),
        nongravitational in prop::option::of(pushes()),
    ) -> Elements {
        Elements {
            perihelion_distance_au, eccentricity, inclination_deg, ascending_node_deg, argument_of_perihelion_deg,
            perihelion_time, epoch, nongravitational,
        }
    }
}

prop_compose! {
    fn branches()(absolute_magnitude in numbers(-9.0, 25.0), n in numbers(-5.0, 20.0), as_slope in any::<bool>(),
                  dust_over_gas_at_90_deg in prop::option::of(numbers(0.0, 20.0)),
                  from in prop::option::of(stamps()), to in prop::option::of(stamps())) -> Brightness {
        let (from, to) = match (from, to) {
            (Some(from), Some(to)) if from.instant() > to.instant() => (Some(to), Some(from)),
            span => span,
        };
        let (photometric_index_n, slope_2_5n) = if as_slope { (None, Some(n)) } else { (Some(n), None) };
        Brightness { absolute_magnitude, photometric_index_n, slope_2_5n, dust_over_gas_at_90_deg, from, to }
    }
}

prop_compose! {
    pub fn comets()(name in names(), elements in elements(), brightness in prop::collection::vec(branches(), 0..3)) -> Comet {
        Comet { name, elements, brightness }
    }
}

prop_compose! {
    fn sites()(name in names(), longitude_deg in -180.0..=360.0_f64, latitude_deg in -90.0..=90.0_f64, height_m in numbers(-500.0, 9000.0)) -> Site {
        Site { name, longitude_deg, latitude_deg, height_m }
    }
}

prop_compose! {
    pub fn nights()(sun_below_deg in -20.0..0.0, comet_above_deg in 0.0..40.0, pixel_scale_arcsec in prop::option::of(0.1..50.0), longest_trail_px in 0.1..9.0) -> NightLaw {
        NightLaw { sun_below_deg, comet_above_deg, pixel_scale_arcsec, longest_trail_px }
    }
}

prop_compose! {
    pub fn plans()(comet in comets(), comets in prop::collection::vec(comets(), 0..3), observer in prop::option::of(sites()), sites in prop::collection::vec(sites(), 0..3), time in prop::option::of(stamps()), night in nights()) -> Plan {
        Plan { comets, observer: observer.map_or(Observer::Geocentre, Observer::Site), sites, time, night, ..Plan::from(comet) }
    }
}
