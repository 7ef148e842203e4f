//! How does the field stand to the tails through a night?
//!
//! The plan's rotation and offset hold at the plan's time. Afterwards
//!
//! | mount | what stays | what changes |
//! | --- | --- | --- |
//! | equatorial | position angle of image up | nothing but the tails themselves |
//! | altazimuth | angle of image up to the vertical at the middle | the position angle, as the zenith goes round |
//! | fixed tripod | the place of the chip against the ground | the nucleus drifts through the field, and the field turns |
//!
//! The first two keep the nucleus on its pixel. Horizon and zenith are those of [`crate::frame::horizon`]. Left out:
//! refraction, and a rotator that turns back.

use super::field::{Course, Field};
use super::{Camera, Mount};
use crate::frame::horizon::Horizon;
use crate::frame::{Axes, half_turn, position_angle_rad};
use crate::sky::Sky;
use crate::sky::watch::Watch;
use crate::tail::grain::Vista;
use crate::tail::ion::Axis;
use crate::tail::law::Tails;
use crate::time::Instant;

/// Rounds in which rotation and pointing of an altazimuth camera settle; each leaves a small share of the last.
const ROUNDS: usize = 12;

/// The field at one time of a night.
#[derive(Clone, Debug, PartialEq)]
pub struct Hour {
    pub time: Instant,
    /// None from the geocentre.
    pub altitude_rad: Option<f64>,
    pub sun_altitude_rad: Option<f64>,
    /// None where the nucleus is out of the picture's half of the sky, or the camera cannot stand so.
    pub field: Option<Field>,
    /// From the plan's time on, how far the field has turned, north through east, (-pi, pi].
    pub turned_rad: Option<f64>,
    pub antisolar: Option<Course>,
    pub ion: Option<Course>,
}

/// The field of a valid camera at `times`, set up at `start`. None where the mount needs a site and there is none.
pub fn through(
    watch: &mut Watch,
    camera: &Camera,
    laws: &Tails,
    start: Instant,
    times: &[Instant],
) -> Option<Vec<Hour>> {
    let set_up = watch.sky_at(start).ok()?;
    let field = Field::of(camera, &set_up.axes.sight);
    let ground = horizon(watch, start);
    if camera.mount != Mount::Equatorial && ground.is_none() {
        return None;
    }
    let first = First { camera, field: field.as_ref(), ground };
    let hours = times.iter().filter_map(|&time| {
        let sky = watch.sky_at(time).ok()?;
        let field = first.field_at(&sky, horizon(watch, time));
        Some(hour(watch, laws, &sky, field, first.field))
    });
    Some(hours.collect())
}

fn horizon(watch: &mut Watch, time: Instant) -> Option<Horizon> {
    Some(watch.viewpoint(time).ok()?.ground?.horizon)
}

fn hour(watch: &Watch, laws: &Tails, sky: &Sky, field: Option<Field>, first: Option<&Field>) -> Hour {
    let vista = Vista::of(watch.orbit(), sky);
    let ion = Axis::of(&vista, laws.wind_axis_km_s).position_angle_rad;
    let course = |angle: Option<f64>| Some(field.as_ref()?.course(angle?));
    let up = |field: &Field| field.image_up_position_angle_rad();
    Hour {
        time: sky.time,
        altitude_rad: sky.site.as_ref().map(|site| site.altitude_rad),
        sun_altitude_rad: sky.site.as_ref().map(|site| site.sun_altitude_rad),
        turned_rad: field.as_ref().zip(first).map(|(now, then)| half_turn(up(now) - up(then))),
        antisolar: course(sky.antisolar_position_angle_rad),
        ion: course(ion),
        field,
    }
}

/// The camera as it was set up.
struct First<'a> {
    camera: &'a Camera,
    field: Option<&'a Field>,
    ground: Option<Horizon>,
}

impl First<'_> {
    fn field_at(&self, sky: &Sky, ground: Option<Horizon>) -> Option<Field> {
        let field = self.field?;
        let nucleus = &sky.axes.sight;
        match self.camera.mount {
            Mount::Equatorial => Field::of(self.camera, nucleus),
            Mount::Altazimuth => {
                let (then, now) = (self.ground.as_ref()?, ground?);
                let to_zenith =
                    |field: &Field, ground: &Horizon| position_angle_rad(&ground.up, &Axes::at(&field.sight));
                let kept = field.image_up_position_angle_rad() - to_zenith(field, then)?;
                let mut camera = self.camera.clone();
                let mut found = Field::of(&camera, nucleus)?;
                for _ in 0..ROUNDS {
                    camera.image_up_position_angle_deg = (to_zenith(&found, &now)? + kept).to_degrees();
                    found = Field::of(&camera, nucleus)?;
                }
                Some(found)
            }
            Mount::FixedTripod => {
                let (then, now) = (self.ground.as_ref()?, ground?);
                let carry = |v: &nalgebra::Vector3<f64>| {
                    now.east * v.dot(&then.east) + now.north * v.dot(&then.north) + now.up * v.dot(&then.up)
                };
                field.carried(carry, nucleus)
            }
        }
    }
}
