//! `tailvane camera`: how does the plan's camera stand, and where on its chip do the tails lie, time by time?
//!
//! The camera is set up at the plan's time, or at the first time asked for; from then on the mount carries it.

use super::table::{self, Cell, Row};
use super::{Call, Stop};
use tailvane::camera::turn::Hour;
use tailvane::engine::Engine;
use tailvane::error::{Error, Kind, Place};
use tailvane::sky::column::whole_turn_deg;
use tailvane::time::Stamp;

const KEYS: [&str; 13] = [
    "time",
    "image_up_position_angle_deg",
    "long_side_position_angle_deg",
    "field_width_deg",
    "field_height_deg",
    "middle_right_ascension_deg",
    "middle_declination_deg",
    "nucleus_right_px",
    "nucleus_up_px",
    "turned_deg",
    "antisolar_clockwise_from_up_deg",
    "ion_axis_clockwise_from_up_deg",
    "altitude_deg",
];

pub fn run(arguments: lexopt::Parser) -> Result<(), Stop> {
    let call = Call::read("camera", arguments, |_, _| Ok(false))?;
    let plan = call.read_plan()?;
    let refuse = |found: &str, allowed: &str| {
        Stop::Refused(Error::new(Kind::Range, Place::Field("camera".to_owned()), found, allowed))
    };
    if plan.camera.is_none() {
        return Err(refuse("no camera in the plan", "a plan with a camera"));
    }
    let times = call.times(&plan)?;
    let start = plan.time.as_ref().map(Stamp::instant).or_else(|| times.first().copied());
    let mut engine = Engine::new(plan)?;
    for &time in times.iter().chain(&start) {
        engine.check_span(time)?;
    }
    let hours = start.and_then(|start| engine.camera_hours(start, &times));
    let Some(hours) = hours else {
        return Err(refuse("a mount that turns with the horizon, seen from the geocentre", "an observer on a site"));
    };
    table::write(call.json, &KEYS, hours.iter().map(|hour| Ok(row(hour))))
}

fn row(hour: &Hour) -> Row {
    let of_field = |value: fn(&tailvane::camera::field::Field) -> f64| Cell::from(hour.field.as_ref().map(value));
    let from_up = |course: &Option<tailvane::camera::field::Course>| {
        Cell::from(course.as_ref().map(|course| whole_turn_deg(course.clockwise_from_up_rad)))
    };
    let cells = vec![
        Cell::Text(hour.time.utc_iso_ms()),
        of_field(|field| whole_turn_deg(field.image_up_position_angle_rad())),
        of_field(|field| field.long_side_position_angle_rad().to_degrees()),
        of_field(|field| field.size_rad()[0].to_degrees()),
        of_field(|field| field.size_rad()[1].to_degrees()),
        of_field(|field| whole_turn_deg(field.middle_rad()[0])),
        of_field(|field| field.middle_rad()[1].to_degrees()),
        of_field(|field| field.nucleus_px[0]),
        of_field(|field| field.nucleus_px[1]),
        hour.turned_rad.map(f64::to_degrees).into(),
        from_up(&hour.antisolar),
        from_up(&hour.ion),
        hour.altitude_rad.map(f64::to_degrees).into(),
    ];
    let out_of_reach =
        "The nucleus is out of the picture's half of the sky, or no pointing has this rotation so near the pole.";
    let cautions = if hour.field.is_none() { vec![out_of_reach.to_owned()] } else { Vec::new() };
    Row { cells, cautions }
}
