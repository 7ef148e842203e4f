//! Which controls does the Tails bench have, what do they mean, and how do typed fields become laws?
//!
//! Ranges and defaults are the plan's own ([`Tails::bounds`], [`Tails::default`]); names, units and effects stand here,
//! once for each key of the plan's `tails` section.

use crate::error::{Error, Kind, Place};
use crate::scene::quantity;
use crate::tail::law::{Outburst, Tails};
use crate::tail::size::Material;
use crate::web::typed::{Pairs, number, text_of};
use serde::Serialize;

/// Key, name, unit, effect.
type Words = (&'static str, &'static str, &'static str, &'static str);

const GAS: &[Words] = &[
    ("wind_axis_km_s", "Wind of the drawn axis", "km/s", "Slower wind bends the ion tail back along the orbit."),
    ("wind_slowest_km_s", "Slowest wind", "km/s", "One side of the ion wedge."),
    ("wind_fastest_km_s", "Fastest wind", "km/s", "The other side of the ion wedge, nearer the antisolar direction."),
];

const DUST: &[Words] = &[
    (
        "beta_least",
        "Smallest beta",
        "",
        "Radiation pressure over gravity: the largest grains, which stay near the orbit.",
    ),
    (
        "beta_greatest",
        "Greatest beta",
        "",
        "The smallest grains, driven away fastest. Above 1: submicron absorbing grains.",
    ),
    ("age_least_days", "Youngest dust", "days", "Dust released later than this is left out; 0 keeps the fresh dust."),
    ("age_greatest_days", "Oldest dust", "days", "Older dust lies farther along the orbit and makes longer tails."),
    (
        "size_exponent",
        "Size exponent",
        "",
        "Grains per radius fall as radius to this power; higher puts more light into small grains.",
    ),
    ("grain_density_g_cm3", "Grain density", "g/cm³", "Turns beta into a radius; moves no dust."),
    ("pressure_efficiency", "Pressure efficiency Qpr", "", "Turns beta into a radius; moves no dust."),
];

const ACTIVITY: &[Words] = &[
    (
        "activity_exponent",
        "Activity exponent",
        "",
        "Dust leaves as Sun distance to minus this power; higher gathers it about perihelion.",
    ),
    ("activity_cutoff_au", "Activity cut-off", "au", "Beyond this distance from the Sun nothing leaves."),
    (
        "activity_start_days",
        "Start of activity",
        "days",
        "From perihelion, negative before it: nothing leaves earlier. Empty: no start.",
    ),
    (
        "outburst.middle_days",
        "Middle of an outburst",
        "days",
        "From perihelion: dust of that date stands out along its synchrone. Empty: none.",
    ),
    ("outburst.width_days", "Width of the outburst", "days", "Full width at half of its strength."),
    ("outburst.strength", "Strength of the outburst", "", "Peak rate over the quiet rate."),
];

const EJECTION: &[Words] = &[
    (
        "ejection_speed_km_s",
        "Ejection speed",
        "km/s",
        "Mean for beta 1 at 1 au; widens the tail, and throws dust sunward.",
    ),
    ("ejection_beta_exponent", "Speed with beta", "", "Speed grows as beta to this power: small grains leave faster."),
    ("ejection_distance_exponent", "Speed with Sun distance", "", "Speed falls as distance to this power."),
    ("ejection_spread", "Spread of speeds", "", "Standard deviation over the mean; blurs the edges."),
    ("ejection_cone_deg", "Ejection cone", "deg", "Half angle about the sunward direction; 180 is every direction."),
];

const SECTOR: &[Words] = &[(
    "anti_tail_half_width_deg",
    "Half width of the sector",
    "deg",
    "Dust this near to the Sun's direction counts as an anti-tail.",
)];

const GROUPS: [(&str, &[Words]); 5] = [
    ("Gas: wind", GAS),
    ("Dust: sizes and ages", DUST),
    ("Activity", ACTIVITY),
    ("Ejection", EJECTION),
    ("Anti-tail sector", SECTOR),
];

#[derive(Serialize)]
struct Field {
    key: &'static str,
    words: &'static str,
    unit: &'static str,
    effect: &'static str,
    /// Range and default in words.
    range: String,
    /// Whether a grain radius belongs beside it.
    radius: bool,
    optional: bool,
}

#[derive(Serialize)]
pub struct Group {
    words: &'static str,
    fields: Vec<Field>,
}

/// Every control, by group.
pub fn form() -> Vec<Group> {
    let defaults = texts(&Tails::default());
    let outburst = Some(Outburst { middle_days: 0.0, width_days: 1.0, strength: 1.0 });
    let bounds = Tails { activity_start_days: Some(0.0), outburst, ..Tails::default() }.bounds();
    let range = |key: &str| {
        let (least, greatest) =
            bounds.iter().find(|bound| bound.0 == key).map_or((0.0, 0.0), |bound| (bound.2, bound.3));
        let default = match text_of(&defaults, key) {
            "" => "empty",
            set => set,
        };
        format!("{} to {}, default {default}", plain(least), plain(greatest))
    };
    let field = |&(key, words, unit, effect): &Words| Field {
        key,
        words,
        unit,
        effect,
        range: range(key),
        radius: key.starts_with("beta_"),
        optional: text_of(&defaults, key).is_empty(),
    };
    GROUPS.into_iter().map(|(words, fields)| Group { words, fields: fields.iter().map(field).collect() }).collect()
}

fn plain(value: f64) -> String {
    value.to_string().replace('-', "\u{2212}")
}

/// The laws as texts by key; what is not set has none.
pub fn texts(tails: &Tails) -> Pairs {
    tails.bounds().into_iter().map(|(key, value, _, _)| (key.to_owned(), value.to_string())).collect()
}

/// The laws that typed fields name. An empty field without a default is not set; an outburst is set as a whole.
///
/// # Errors
/// A field that is no number, by its place in the plan. Ranges are the plan's to judge.
pub fn tails(typed: &Pairs) -> Result<Tails, Error> {
    let mut laws = Vec::new();
    let mut outburst = Vec::new();
    let defaults = texts(&Tails::default());
    for (key, text) in typed {
        let place = format!("tails.{key}");
        if text.trim().is_empty() && text_of(&defaults, key).is_empty() {
            continue;
        }
        let value = number(text, &place)?;
        match key.strip_prefix("outburst.") {
            Some(part) => outburst.push(format!("\"{part}\":{value}")),
            None => laws.push(format!("\"{key}\":{value}")),
        };
    }
    if !outburst.is_empty() {
        for part in ["middle_days", "width_days", "strength"] {
            if !outburst.iter().any(|member| member.contains(part)) {
                let place = Place::Field(format!("tails.outburst.{part}"));
                return Err(Error::new(
                    Kind::Range,
                    place,
                    "nothing",
                    "a number: an outburst needs all three, or none",
                ));
            }
        }
        laws.push(format!("\"outburst\":{{{}}}", outburst.join(",")));
    }
    serde_json::from_str(&format!("{{{}}}", laws.join(","))).map_err(|error| {
        Error::new(Kind::Range, Place::Field("tails".to_owned()), error.to_string(), "the laws of the tails")
    })
}

/// The grain radius that belongs to a typed beta, in words; empty for what is no beta.
pub fn radius(beta: &str, density: &str, efficiency: &str) -> String {
    let read = |text: &str| number(text, "").ok().filter(|number| *number > 0.0);
    match (read(beta), read(density), read(efficiency)) {
        (Some(beta), Some(density_g_cm3), Some(pressure_efficiency)) => {
            Material { density_g_cm3, pressure_efficiency }.short(beta)
        }
        _ => String::new(),
    }
}

#[derive(Serialize)]
pub struct Preset {
    name: &'static str,
    about: String,
    fields: Pairs,
}

/// Sets of laws by name. They are starting points of ours, not types of comets.
pub fn presets() -> Vec<Preset> {
    let plain = Tails::default;
    let all = [
        ("plain", plain()),
        (
            "gas-rich",
            Tails { beta_least: 0.1, age_greatest_days: 30.0, size_exponent: 4.0, ejection_speed_km_s: 0.6, ..plain() },
        ),
        (
            "dusty",
            Tails { beta_least: 0.0003, beta_greatest: 1.5, age_greatest_days: 300.0, size_exponent: 3.7, ..plain() },
        ),
        (
            "old large grains",
            Tails {
                beta_least: 0.00001,
                beta_greatest: 0.003,
                age_least_days: 30.0,
                age_greatest_days: 700.0,
                size_exponent: 3.2,
                ejection_speed_km_s: 0.1,
                ..plain()
            },
        ),
        (
            "fine fresh dust",
            Tails { beta_least: 0.1, beta_greatest: 2.0, age_greatest_days: 40.0, size_exponent: 4.2, ..plain() },
        ),
    ];
    all.into_iter().map(|(name, laws)| Preset { name, about: about(&laws), fields: texts(&laws) }).collect()
}

fn about(laws: &Tails) -> String {
    let ages =
        format!("{} to {} days", quantity::figures(laws.age_least_days), quantity::figures(laws.age_greatest_days));
    format!("beta {} to {}, {ages}", laws.beta_least, laws.beta_greatest)
}
