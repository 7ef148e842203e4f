//! What does a camera see, and how does it stand, in words?
//!
//! The lines of the Camera bench, which are also the text twin of the frame, and of the field card.

use super::quantity::{self, position_angle};
use crate::camera::field::{Course, Field};
use crate::camera::fit::{Fit, OVERLAP, Shortfall};
use crate::camera::turn::Hour;
use crate::camera::{Camera, Mount, turn_deg};
use crate::frame::earth_rotation::ARCSEC_RAD;
use crate::frame::half_turn;
use crate::sky::Sky;
use crate::tail::ion::Wedge;

/// Where a pole stands in the way.
pub const NO_POINTING: &str = "So near the celestial pole no pointing has this rotation at its middle and the nucleus at \
                               this place of the chip: turn the camera or move the nucleus.";

/// A quantity of the camera: its name, and what is to be said.
pub type Line = (&'static str, String);

/// How the camera stands.
pub fn standing(camera: &Camera, field: &Field) -> Vec<Line> {
    let [across, down] = field.size_rad().map(quantity::arc);
    let (up, at_nucleus) = (field.image_up_position_angle_rad(), field.image_up_at_nucleus_rad());
    let mut image_up = format!("position angle {} at the middle", position_angle(up));
    if half_turn(up - at_nucleus).abs() > 0.05_f64.to_radians() {
        image_up.push_str(&format!(", {} at the nucleus", position_angle(at_nucleus)));
    }
    let long = field.long_side_position_angle_rad();
    let long = if camera.pixels_wide == camera.pixels_high {
        "none: the chip is square".to_owned()
    } else {
        format!(
            "position angle {}, which is also {}",
            position_angle(long),
            position_angle(long + std::f64::consts::PI)
        )
    };
    let parity = if camera.mirrored {
        "mirror-reversed: with north up, east is right"
    } else {
        "as on the sky: with north up, east is left"
    };
    let [right_ascension, declination] = field.middle_rad();
    let flipped = turn_deg(camera.image_up_position_angle_deg + 180.0);
    vec![
        ("Field", format!("{across} × {down}")),
        ("Scale", format!("{} per pixel", quantity::arc(libm::atan(camera.scale_tan())))),
        ("Image up", image_up),
        ("Long side", long),
        ("Parity", parity.to_owned()),
        (
            "Rotator",
            format!(
                "reads {:.1}\u{b0}; after a meridian flip the image stands on its head, image up at {flipped:.1}\u{b0}",
                camera.rotator_reading_deg()
            ),
        ),
        ("Middle", quantity::place(right_ascension, declination)),
        ("Nucleus", nucleus(field)),
    ]
}

/// Where on the chip the nucleus lies.
fn nucleus(field: &Field) -> String {
    let [right, up] = field.nucleus_px;
    if !field.holds(field.nucleus_px) {
        return "outside the chip".to_owned();
    }
    let (left, top) = (field.half_px[0] + right, field.half_px[1] - up);
    format!("{left:.0} pixels from the left edge, {top:.0} from the upper edge")
}

/// How the directions at the nucleus lie on the sky and on the chip.
pub fn directions(field: &Field, sky: &Sky, ion: &Wedge) -> Vec<Line> {
    let zenith = sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad);
    [
        ("Antisolar", sky.antisolar_position_angle_rad),
        ("Ion axis", ion.axis.position_angle_rad),
        ("Negative velocity", sky.negative_velocity_position_angle_rad),
        ("Toward the Sun", sky.antisolar_position_angle_rad.map(|angle| angle + std::f64::consts::PI)),
        ("Sky motion", sky.motion_position_angle_rad),
        ("Zenith", zenith),
    ]
    .into_iter()
    .filter_map(|(name, angle)| {
        let angle = angle?;
        Some((name, format!("{}: {}", position_angle(angle), course(&field.course(angle)))))
    })
    .collect()
}

/// A direction in terms of the camera.
pub fn course(course: &Course) -> String {
    let angle = from_up(course.clockwise_from_up_rad);
    match &course.exit {
        Some(exit) => {
            format!("{angle}, leaves at the {}, {} out", exit.toward, quantity::arc(exit.distance_rad))
        }
        None => format!("{angle}, off the chip"),
    }
}

/// An angle from image up, the short way round.
fn from_up(clockwise_rad: f64) -> String {
    let angle = half_turn(clockwise_rad).to_degrees();
    match angle.abs() {
        a if a < 0.5 => "straight up".to_owned(),
        a if a > 179.5 => "straight down".to_owned(),
        a if angle > 0.0 => format!("{a:.0}\u{b0} clockwise from image up"),
        a => format!("{a:.0}\u{b0} counter-clockwise from image up"),
    }
}

/// One row of the night: time, altitude, turn of the field, antisolar direction, ion axis.
pub fn hour(hour: &Hour) -> [String; 5] {
    let clock = hour.time.utc_minute().get(11..16).unwrap_or_default().to_owned();
    let degrees =
        |angle: Option<f64>| angle.map_or_else(String::new, |angle| format!("{:.0}\u{b0}", angle.to_degrees()));
    let lies = |course: &Option<Course>| {
        let Some(course) = course else { return "none".to_owned() };
        let angle = format!("{:.0}\u{b0}", half_turn(course.clockwise_from_up_rad).to_degrees());
        match &course.exit {
            Some(exit) => format!("{angle}, {}", exit.toward),
            None => angle,
        }
    };
    let out = hour.field.as_ref().is_none_or(|field| !field.holds(field.nucleus_px));
    let [antisolar, ion] =
        if out { ["nucleus off the chip".to_owned(), String::new()] } else { [lies(&hour.antisolar), lies(&hour.ion)] };
    [clock, degrees(hour.altitude_rad), degrees(hour.turned_rad), antisolar, ion]
        .map(|text| text.replace('-', "\u{2212}"))
}

/// What the mount does to the field.
pub fn mount(mount: Mount) -> &'static str {
    match mount {
        Mount::Equatorial => {
            "An equatorial mount keeps the field's position angle; a meridian flip turns it by 180\u{b0}. Angles run clockwise from image up."
        }
        Mount::Altazimuth => {
            "On an altazimuth mount the field turns with the zenith; the rotation holds at the plan's time. Angles run clockwise from image up."
        }
        Mount::FixedTripod => {
            "On a fixed tripod the sky drifts through the field; the placement holds at the plan's time. Angles run clockwise from image up."
        }
    }
}

/// The outcome of a fit.
pub fn fit(found: &Fit, before: &Camera) -> String {
    match found {
        Fit::Holds { camera, margin_px } => format!(
            "Held, with {margin_px:.0} pixels to spare at the nearest edge: image up at {:.1}\u{b0}, the nucleus {:.0} pixels {} \
             and {:.0} {} the middle.",
            camera.image_up_position_angle_deg,
            camera.nucleus_right_px.abs(),
            if camera.nucleus_right_px < 0.0 { "left" } else { "right" },
            camera.nucleus_up_px.abs(),
            if camera.nucleus_up_px < 0.0 { "below" } else { "above" },
        ),
        Fit::TooLarge(short) => too_large(short, before),
        Fit::AcrossPole { .. } => {
            "A placement does, but the celestial pole lies between the nucleus and the middle of the \
             chip there: rotation and offset cannot say which way the camera points. Place the field by hand."
                .to_owned()
        }
        Fit::Hopeless => {
            "No placement does: there is nothing to hold, the margin is wider than the chip, or the tails reach \
             too far around the sky for one picture."
                .to_owned()
        }
    }
}

fn too_large(short: &Shortfall, before: &Camera) -> String {
    let lens = match short.focal_length_mm {
        Some(focal) => format!("a focal length of {} mm or less", quantity::figures(focal)),
        // Rounded up, so that it still does.
        None => {
            format!("a scale of {:.2} arcsec per pixel or more", (short.scale_tan / ARCSEC_RAD * 100.0).ceil() / 100.0)
        }
    };
    let mosaic = match short.mosaic {
        Some(mosaic) if mosaic.across * mosaic.down > 1 => format!(
            ", or a mosaic of {} \u{d7} {} panels with image up at {:.0}\u{b0} ({:.0} percent overlap)",
            mosaic.across,
            mosaic.down,
            mosaic.image_up_position_angle_deg,
            100.0 * OVERLAP
        ),
        _ => String::new(),
    };
    let lack = if short.margin_px < 0.0 {
        format!("the best cuts off {:.0} pixels", -short.margin_px)
    } else {
        format!("the best leaves {:.0} pixels", short.margin_px)
    };
    let name = if before.name.is_empty() { "this camera" } else { &before.name };
    format!("No placement of {name} does: {lack}. What would: {lens} with this chip{mosaic}.")
}
