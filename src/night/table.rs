//! How is a night written as rows?
//!
//! One list of columns serves the command, the page's table and the saved file.

use super::course::{Course, EventKind};
use super::moment::Moment;
use crate::sky::column::{Value, arcsec_per_minute, degrees, position_angle};
use crate::time::Instant;

/// A row: a plain step of the clock, or something that happens.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    pub event: Option<EventKind>,
    pub moment: Moment,
    /// Cautions as sentences.
    pub cautions: Vec<String>,
}

/// One column of the rows; the time goes before them.
pub struct Column {
    /// Fixed machine name with its unit suffix.
    pub key: &'static str,
    /// The name in words, short, for the head of a narrow column.
    pub words: &'static str,
    /// Unit as printed for people; empty for none.
    pub unit: &'static str,
    /// Digits after the point for people.
    pub decimals: usize,
    pub value: fn(&Row) -> Value,
}

fn maybe(number: Option<f64>) -> Value {
    number.map_or(Value::Absent, Value::Number)
}

fn from_vertical(moment: &Moment, position_angle_rad: Option<f64>) -> Value {
    maybe(moment.from_vertical_rad(position_angle_rad).map(f64::to_degrees))
}

/// The columns in their order.
pub const COLUMNS: &[Column] = &[
    Column {
        key: "event",
        words: "Event",
        unit: "",
        decimals: 0,
        value: |row| row.event.map_or(Value::Absent, |event| Value::Text(event.words())),
    },
    Column {
        key: "part_of_night",
        words: "Part of night",
        unit: "",
        decimals: 0,
        value: |row| Value::Text(row.moment.part.words()),
    },
    Column {
        key: "altitude_deg",
        words: "Altitude",
        unit: "deg",
        decimals: 1,
        value: |row| degrees(row.moment.altitude_rad),
    },
    Column {
        key: "azimuth_deg",
        words: "Azimuth",
        unit: "deg",
        decimals: 1,
        value: |row| position_angle(row.moment.azimuth_rad),
    },
    Column { key: "air_mass", words: "Air mass", unit: "", decimals: 2, value: |row| maybe(row.moment.air_mass) },
    Column {
        key: "sun_altitude_deg",
        words: "Sun",
        unit: "deg",
        decimals: 1,
        value: |row| degrees(row.moment.sun_altitude_rad),
    },
    Column {
        key: "moon_altitude_deg",
        words: "Moon",
        unit: "deg",
        decimals: 1,
        value: |row| degrees(row.moment.moon_altitude_rad),
    },
    Column {
        key: "moon_separation_deg",
        words: "Moon from comet",
        unit: "deg",
        decimals: 1,
        value: |row| degrees(row.moment.moon_separation_rad),
    },
    Column {
        key: "moon_lit_fraction",
        words: "Moon lit",
        unit: "",
        decimals: 2,
        value: |row| Value::Number(row.moment.moon_lit_fraction),
    },
    Column {
        key: "zenith_position_angle_deg",
        words: "Position angle, zenith",
        unit: "deg",
        decimals: 1,
        value: |row| position_angle(row.moment.zenith_position_angle_rad),
    },
    Column {
        key: "antisolar_from_vertical_deg",
        words: "Antisolar from vertical",
        unit: "deg",
        decimals: 1,
        value: |row| from_vertical(&row.moment, row.moment.sky.antisolar_position_angle_rad),
    },
    Column {
        key: "ion_axis_from_vertical_deg",
        words: "Ion axis from vertical",
        unit: "deg",
        decimals: 1,
        value: |row| from_vertical(&row.moment, row.moment.ion_position_angle_rad),
    },
    Column {
        key: "negative_velocity_from_vertical_deg",
        words: "Negative velocity from vertical",
        unit: "deg",
        decimals: 1,
        value: |row| from_vertical(&row.moment, row.moment.sky.negative_velocity_position_angle_rad),
    },
    Column {
        key: "motion_arcsec_per_minute",
        words: "Sky motion",
        unit: "arcsec/min",
        decimals: 3,
        value: |row| arcsec_per_minute(row.moment.sky.motion_rad_d),
    },
    Column {
        key: "motion_position_angle_deg",
        words: "Position angle, sky motion",
        unit: "deg",
        decimals: 1,
        value: |row| position_angle(row.moment.sky.motion_position_angle_rad),
    },
    Column {
        key: "longest_exposure_s",
        words: "Longest exposure",
        unit: "s",
        decimals: 0,
        value: |row| maybe(row.moment.longest_exposure_s),
    },
    Column {
        key: "total_magnitude",
        words: "Predicted total magnitude",
        unit: "mag",
        decimals: 1,
        value: |row| maybe(row.moment.total_magnitude),
    },
];

/// When the rows of a night stand: whole steps of UTC while the Sun is down, and every event. Where the Sun does not go
/// down, or does not come up, all of the time from noon to noon.
pub fn times(course: &Course, step_days: f64) -> Vec<(Instant, Option<EventKind>)> {
    let [from, to] = course.sun_down();
    let first = (from.ut1_days() / step_days).ceil() as i64;
    let last = (to.ut1_days() / step_days).floor() as i64;
    let mut times: Vec<(Instant, Option<EventKind>)> =
        (first..=last).map(|number| (Instant::from_ut1_days(number as f64 * step_days), None)).collect();
    times.extend(course.events.iter().map(|event| (event.time, Some(event.kind))));
    crate::order::by_number(&mut times, |time| time.0.tdb_days());
    times
}
