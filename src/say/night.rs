//! What does a night hold, in words?

use super::{clock, figure, minus, rule};
use crate::night::best::{AIR_MASS_SPREAD, Absence, Best, FAR_MOON_DEG, Moonlight, THIN_MOON};
use crate::night::course::Course;
use crate::night::law::NightLaw;
use crate::night::moment::{Moment, SUNSET_DEG};

/// What a night lacks, as sentences: sunset, darkness, dark time with the comet up. Empty for a night that lacks nothing.
pub fn absences(course: &Course, law: &NightLaw) -> Vec<String> {
    let mut found = Vec::new();
    let sun = course.sun_lowest_deg;
    if course.twilights[0].evening.is_none() && course.twilights[0].morning.is_none() {
        found.push(if sun < SUNSET_DEG {
            "The Sun does not rise.".to_owned()
        } else {
            "The Sun does not set: there is no night.".to_owned()
        });
    }
    if (-18.0..SUNSET_DEG).contains(&sun) {
        found.push(format!("The Sun does not go below {} deg: no full darkness.", degree(sun)));
    }
    if let Err(absence) = course.best {
        found.push(why_not(absence, course, law));
    }
    found
}

fn why_not(absence: Absence, course: &Course, law: &NightLaw) -> String {
    let highest = course.comet_highest_deg;
    match absence {
        Absence::NoDarkness => format!(
            "No dark time: the Sun goes down to {} deg only, and dark time begins below {} deg.",
            degree(course.sun_lowest_deg),
            minus(law.sun_below_deg)
        ),
        Absence::CometTooLow if highest < 0.0 => "The comet does not come up.".to_owned(),
        Absence::CometTooLow => {
            format!("The comet comes up to {} deg only, not above {} deg.", degree(highest), minus(law.comet_above_deg))
        }
        Absence::NotTogether => {
            format!(
                "The comet is not up in a dark sky ({}): it is up only by day or in bright twilight.",
                rule(&law.limits())
            )
        }
    }
}

/// One degree of place; a value that rounds to zero has no sign.
fn degree(value: f64) -> String {
    let text = format!("{value:.1}");
    minus_text(if text == "-0.0" { "0.0" } else { &text })
}

fn minus_text(text: &str) -> String {
    text.replace('-', "\u{2212}")
}

/// When to observe, and by what criterion.
pub fn best(course: &Course, law: &NightLaw) -> String {
    let Ok(best) = &course.best else { return absences(course, law).join(" ") };
    format!(
        "Best from {} to {} UTC: the comet stands highest at {}, {:.0}\u{b0} up, air mass {:.1}; {}.",
        clock(&best.begin.utc_minute()),
        clock(&best.end.utc_minute()),
        clock(&best.highest_at.utc_minute()),
        best.highest_deg,
        best.least_air_mass,
        moon(best)
    )
}

fn moon(best: &Best) -> &'static str {
    match best.moonlight {
        Moonlight::Down => "the Moon is down",
        Moonlight::Thin => "the Moon is up but thin",
        Moonlight::Far => "the Moon is up but far away",
        Moonlight::InTheWay => "the Moon is in the way all of the dark time",
    }
}

/// The criterion behind [`best`].
pub fn criterion(law: &NightLaw) -> String {
    format!(
        "Dark time: {}. In it first the Moon out of the way, if it ever is (down, less than {:.0} percent lit, or more than {FAR_MOON_DEG}\u{b0} \
         away); then the comet as high as it comes; for as long as its air mass is within {AIR_MASS_SPREAD} of the least. \
         Altitudes without refraction.",
        rule(&law.limits()),
        THIN_MOON * 100.0
    )
}

/// The night drawing in words: twilights, comet, Moon, dark time.
pub fn course(course: &Course, law: &NightLaw) -> String {
    let mut parts = vec![format!("Night that begins on the evening of {} (local mean time).", course.evening.date)];
    let happens: Vec<String> = course
        .events
        .iter()
        .map(|event| format!("{} {}", event.kind.words(), clock(&event.time.utc_minute())))
        .collect();
    parts.push(format!("In UTC: {}.", happens.join(", ")));
    parts.extend(absences(course, law));
    parts.join(" ")
}

/// The picture of the comet over the horizon in words.
pub fn horizon(moment: &Moment) -> String {
    let altitude = moment.altitude_rad.to_degrees();
    let direction =
        moment.azimuth_rad.map_or("in the zenith".to_owned(), |azimuth| format!("in the {}", compass(azimuth)));
    let place = if altitude < 0.0 {
        format!("The comet is {:.0}\u{b0} below the horizon, {direction}", -altitude)
    } else {
        format!("The comet stands {altitude:.0}\u{b0} up {direction}")
    };
    let sun = moment.sun_altitude_rad.to_degrees();
    let sun = format!("the Sun is {:.0}\u{b0} {} the horizon", sun.abs(), if sun < 0.0 { "below" } else { "above" });
    let tails: Vec<String> = [
        ("antisolar direction", moment.sky.antisolar_position_angle_rad),
        ("ion axis", moment.ion_position_angle_rad),
        ("negative velocity", moment.sky.negative_velocity_position_angle_rad),
    ]
    .into_iter()
    .filter_map(|(name, angle)| Some(format!("{name} {}", leaning(moment.from_vertical_rad(angle)?))))
    .collect();
    format!("{place}; {sun}. Seen with the zenith up: {}.", tails.join(", "))
}

/// An angle from the vertical as a direction: `straight up`, `30° left of straight up`, `20° right of straight down`.
fn leaning(from_vertical_rad: f64) -> String {
    let degrees = from_vertical_rad.to_degrees();
    let side = if degrees > 0.0 { "left" } else { "right" };
    let (angle, base) = if degrees.abs() <= 90.0 { (degrees.abs(), "up") } else { (180.0 - degrees.abs(), "down") };
    if angle < 0.5 { format!("straight {base}") } else { format!("{angle:.0}\u{b0} {side} of straight {base}") }
}

const COMPASS: [&str; 16] = [
    "north",
    "north-north-east",
    "north-east",
    "east-north-east",
    "east",
    "east-south-east",
    "south-east",
    "south-south-east",
    "south",
    "south-south-west",
    "south-west",
    "west-south-west",
    "west",
    "west-north-west",
    "north-west",
    "north-north-west",
];

/// An azimuth as one of sixteen points of the compass.
pub fn compass(azimuth_rad: f64) -> &'static str {
    COMPASS[(azimuth_rad.to_degrees() / 22.5).round() as usize % 16]
}

/// The longest exposure in words; empty where none is known.
pub fn exposure(moment: &Moment, law: &NightLaw) -> String {
    let rate = moment.sky.motion_rad_d.to_degrees() * 3600.0 / 1440.0;
    let toward = moment
        .sky
        .motion_position_angle_rad
        .map_or(String::new(), |angle| format!(" toward position angle {}", figure::whole(angle)));
    let moves = format!("The comet moves {rate:.2}\u{2033} a minute among the stars{toward}.");
    match (law.pixel_scale_arcsec, moment.longest_exposure_s) {
        (Some(scale), Some(seconds)) => format!(
            "{moves} At {scale}\u{2033} a pixel it moves {} px in {}: longer exposures that follow the stars smear the \
             comet by more, and those that follow the comet smear the stars.",
            law.longest_trail_px,
            span(seconds)
        ),
        _ => moves,
    }
}

/// Seconds as people set them.
fn span(seconds: f64) -> String {
    match seconds {
        s if s < 10.0 => format!("{s:.1} s"),
        s if s < 120.0 => format!("{s:.0} s"),
        s if s < 5400.0 => format!("{:.0} min", s / 60.0),
        s => format!("{:.1} h", s / 3600.0),
    }
}
