//! Which rotation and offset hold the chosen tails on the chip?
//!
//! The points to be held are brought down to their convex hull, which is exact in a gnomonic picture. For each rotation in
//! steps of a quarter of a degree the chip is moved until the box around the hull stands in its middle; the camera's axes
//! move along great circles, so the picture is exact at every step and not that of the first pointing. The best
//! rotations are then searched finely, all three angles at once. The margin of a placement is the least distance of a
//! point from an edge; the placement with the greatest margin is the one that the smallest chip would do for.
//!
//! ```text
//!   +--------------------+
//!   |  margin            |      w/2 = greatest |right|, h/2 = greatest |up| of the hull
//!   |   +------------+   |      margin = min(W/2 - w/2, H/2 - h/2)
//!   |   | hull       |   |
//!   +--------------------+
//! ```
//!
//! Measured against 10,000 random placements on each of 200 random geometries: tests/camera.rs.

use super::field::Field;
use super::hull::hull;
use super::{Camera, turn_deg};
use crate::frame::{Axes, half_turn, position_angle_rad, tangent};
use nalgebra::{Rotation3, Unit, Vector3};
use std::f64::consts::PI;

/// What is to be held, and how well.
#[derive(Clone, Debug, PartialEq)]
pub struct Task {
    /// Offsets from the nucleus (xi east, eta north, tangent values).
    pub points: Vec<[f64; 2]>,
    /// From every point to the nearest edge, at least, pixels.
    pub margin_px: f64,
    /// Whether the nucleus is to be held too.
    pub with_nucleus: bool,
}

/// What a search for a placement found.
#[derive(Clone, Debug, PartialEq)]
pub enum Fit {
    /// The camera, turned and moved; the margin it leaves, pixels.
    Holds { camera: Camera, margin_px: f64 },
    /// No placement does.
    TooLarge(Shortfall),
    /// Placements do, but each has a celestial pole between the nucleus and the middle of the chip, where rotation and offset
    /// do not say which way the camera points.
    AcrossPole { margin_px: f64 },
    /// The tails reach too far around the sky for one picture (70 degrees from the nucleus), or there is nothing to hold.
    Hopeless,
}

/// What would hold what this camera cannot.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Shortfall {
    /// Margin of the best placement, pixels; below the one asked for, negative where points are cut off.
    pub margin_px: f64,
    /// Scale at which this chip does, tangent units per pixel.
    pub scale_tan: f64,
    /// Its focal length, where the camera has one, mm.
    pub focal_length_mm: Option<f64>,
    pub mosaic: Option<Mosaic>,
}

/// Panels side by side.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Mosaic {
    pub across: u32,
    pub down: u32,
    /// Position angle of image up, whole degrees.
    pub image_up_position_angle_deg: f64,
}

/// Steps of the rotation: a quarter of a degree over half a turn, since a chip turned by half a turn covers the same.
const STEPS: usize = 720;
const STEP_RAD: f64 = PI / STEPS as f64;
/// Rotations that are searched finely.
const FINALISTS: usize = 6;
/// Moves that bring a box to the middle; each leaves a small share of what was left.
const MOVES: usize = 8;
/// Rounds of the fine search; each halves the steps where nothing is gained.
const ROUNDS: usize = 120;
/// Points farther from the nucleus than this are hopeless, tangent of 70 degrees.
const FARTHEST_TAN: f64 = 2.747_477_419_454_622;
/// Panels of a mosaic overlap by this share of a side.
pub const OVERLAP: f64 = 0.1;
const MOST_PANELS: u32 = 20;

/// Axes of a camera: image right as on the sky, image up, line of sight.
#[derive(Clone, Copy)]
struct Stand {
    right: Vector3<f64>,
    up: Vector3<f64>,
    sight: Vector3<f64>,
}

impl Stand {
    /// Looking straight at the nucleus.
    fn at(axes: &Axes, position_angle_rad: f64) -> Stand {
        let (sine, cosine) = libm::sincos(position_angle_rad);
        let up = axes.north * cosine + axes.east * sine;
        Stand { right: axes.north * sine - axes.east * cosine, up, sight: axes.sight }
    }

    fn turned(&self, about: &Vector3<f64>, angle_rad: f64) -> Stand {
        let turn = turn_about(about, angle_rad);
        Stand { right: turn * self.right, up: turn * self.up, sight: turn * self.sight }
    }

    /// Looking along another direction, the axes carried along the great circle.
    fn moved(&self, x: f64, y: f64) -> Stand {
        let radius = libm::hypot(x, y);
        if radius == 0.0 {
            return *self;
        }
        let about = self.right * (-y / radius) + self.up * (x / radius);
        // The axes as on the sky are left-handed, so that this turn carries the sight toward right x + up y.
        self.turned(&about, -libm::atan(radius))
    }

    /// Least and greatest picture coordinates of the directions, right and up, tangent values; None where one has none.
    fn span(&self, directions: &[Vector3<f64>]) -> Option<[[f64; 2]; 2]> {
        let mut span = [[f64::INFINITY, f64::NEG_INFINITY]; 2];
        let axes = Axes { sight: self.sight, east: self.right, north: self.up };
        for direction in directions {
            let at = tangent::project(direction, &axes)?;
            for (span, at) in span.iter_mut().zip(at) {
                *span = [span[0].min(at), span[1].max(at)];
            }
        }
        Some(span)
    }

    /// Greatest distance from the middle, right and up, tangent values.
    fn reach(&self, directions: &[Vector3<f64>]) -> Option<[f64; 2]> {
        Some(self.span(directions)?.map(|[least, most]| (-least).max(most)))
    }

    /// Moved until the directions stand evenly about the middle.
    fn centred(&self, directions: &[Vector3<f64>]) -> Option<Stand> {
        let mut stand = *self;
        for _ in 0..MOVES {
            let [x, y] = stand.span(directions)?.map(|[least, most]| 0.5 * (least + most));
            if libm::hypot(x, y) < 1e-13 {
                break;
            }
            stand = stand.moved(x, y);
        }
        Some(stand)
    }
}

/// The rotation about a unit vector (its matrix by Rodrigues's formula).
fn turn_about(about: &Vector3<f64>, angle_rad: f64) -> Rotation3<f64> {
    let (sine, cosine) = libm::sincos(angle_rad);
    let axis = Unit::new_unchecked(*about);
    let (x, y, z) = (axis.x, axis.y, axis.z);
    let rest = 1.0 - cosine;
    Rotation3::from_matrix_unchecked(nalgebra::Matrix3::new(
        cosine + x * x * rest,
        x * y * rest - z * sine,
        x * z * rest + y * sine,
        y * x * rest + z * sine,
        cosine + y * y * rest,
        y * z * rest - x * sine,
        z * x * rest - y * sine,
        z * y * rest + x * sine,
        cosine + z * z * rest,
    ))
}

/// The placement of a valid camera, for a nucleus at `axes`, that holds the task's points best.
pub fn fit(camera: &Camera, axes: &Axes, task: &Task) -> Fit {
    let mut points = task.points.clone();
    if task.with_nucleus {
        points.push([0.0, 0.0]);
    }
    let corners = hull(&points);
    if corners.is_empty() || corners.iter().any(|p| libm::hypot(p[0], p[1]) > FARTHEST_TAN) {
        return Fit::Hopeless;
    }
    let directions: Vec<Vector3<f64>> = corners.iter().map(|&[xi, eta]| tangent::unproject(xi, eta, axes)).collect();
    let scale = camera.scale_tan();
    let half = camera.half_px();
    let room = |stand: &Stand| {
        let reach = stand.reach(&directions)?;
        Some((half[0] - reach[0] / scale).min(half[1] - reach[1] / scale))
    };
    let rotations = rotations(axes, &directions, &room);
    let mut placements = best(&rotations, &directions, &room);
    let margin_px = placements.first().map_or(f64::NEG_INFINITY, |placement| placement.0);
    // The finest first; near a pole any other that can be said.
    placements.extend(rotations.into_iter().flatten());
    let good = placements.iter().filter(|(margin_px, _)| *margin_px >= task.margin_px);
    if let Some(found) =
        good.into_iter().find_map(|(_, stand)| settled(camera, axes, stand, &directions, task.margin_px))
    {
        return found;
    }
    if margin_px >= task.margin_px {
        return Fit::AcrossPole { margin_px };
    }
    match shortfall(camera, axes, &directions, task.margin_px, margin_px) {
        Some(shortfall) => Fit::TooLarge(shortfall),
        None => Fit::Hopeless,
    }
}

/// What a stand is worth.
type Worth<'a> = &'a dyn Fn(&Stand) -> Option<f64>;

/// Every rotation of the grid, the chip in the best place for it.
fn rotations(axes: &Axes, directions: &[Vector3<f64>], worth: Worth) -> Vec<Option<(f64, Stand)>> {
    let judged = |stand: Stand| Some((worth(&stand)?, stand));
    (0..STEPS).map(|step| judged(Stand::at(axes, step as f64 * STEP_RAD).centred(directions)?)).collect()
}

/// The best of the rotations, each searched finely; the best first.
fn best(all: &[Option<(f64, Stand)>], directions: &[Vector3<f64>], worth: Worth) -> Vec<(f64, Stand)> {
    let value = |step: usize| all[step % STEPS].map_or(f64::NEG_INFINITY, |found| found.0);
    // Rotations better than both neighbours, the best of them first.
    let peaks = (0..STEPS)
        .filter(|&step| value(step) >= value(step + 1) && value(step) >= value(step + STEPS - 1))
        .filter_map(|step| all[step])
        .collect();
    let fine = best_first(peaks).into_iter().take(FINALISTS).map(|peak| polished(peak, directions, worth)).collect();
    best_first(fine)
}

/// A few stands in the order of their worth; for so few a plain search does, and is the smallest code.
fn best_first(mut stands: Vec<(f64, Stand)>) -> Vec<(f64, Stand)> {
    for at in 0..stands.len() {
        for other in at + 1..stands.len() {
            if stands[other].0 > stands[at].0 {
                stands.swap(at, other);
            }
        }
    }
    stands
}

/// A stand turned and moved as long as that makes it worth more.
fn polished(from: (f64, Stand), directions: &[Vector3<f64>], worth: Worth) -> (f64, Stand) {
    let (mut value, mut stand) = from;
    let mut step_rad = 0.5 * STEP_RAD;
    for _ in 0..ROUNDS {
        // Turned and centred anew, then only moved or turned a little.
        let centred = [step_rad, -step_rad].map(|turn| stand.turned(&stand.sight, turn).centred(directions));
        let moved = [(stand.sight, 0.2), (stand.up, 0.2), (stand.right, 0.2)]
            .into_iter()
            .flat_map(|(about, share)| [share, -share].map(|sign| Some(stand.turned(&about, sign * step_rad))));
        let better = centred
            .into_iter()
            .chain(moved)
            .flatten()
            .filter_map(|stand| Some((worth(&stand)?, stand)))
            .max_by(|a, b| a.0.total_cmp(&b.0));
        match better {
            Some((worth, better)) if worth > value => (value, stand) = (worth, better),
            _ => step_rad *= 0.5,
        }
    }
    (value, stand)
}

/// The camera of a stand, in round numbers where these hold too; None where a pole lies between nucleus and middle, so that
/// rotation and offset name another stand.
fn settled(camera: &Camera, axes: &Axes, stand: &Stand, directions: &[Vector3<f64>], margin_px: f64) -> Option<Fit> {
    let upright = position_angle_rad(&stand.up, &Axes::at(&stand.sight))?;
    let seen = tangent::project(&axes.sight, &Axes { sight: stand.sight, east: stand.right, north: stand.up })?;
    let across = if camera.mirrored { -1.0 } else { 1.0 };
    // Of the two ways round, the one nearer to how the camera stands now.
    let away = half_turn(upright - camera.image_up_position_angle_deg.to_radians()).abs();
    let over = if away > 0.5 * PI { -1.0 } else { 1.0 };
    let turned_deg = turn_deg(upright.to_degrees() + if over < 0.0 { 180.0 } else { 0.0 });
    let scale = camera.scale_tan();
    let exact = Camera {
        image_up_position_angle_deg: turned_deg,
        nucleus_right_px: over * across * seen[0] / scale,
        nucleus_up_px: over * seen[1] / scale,
        ..camera.clone()
    };
    let round = Camera {
        image_up_position_angle_deg: turn_deg((turned_deg * 100.0).round() / 100.0),
        nucleus_right_px: exact.nucleus_right_px.round(),
        nucleus_up_px: exact.nucleus_up_px.round(),
        ..camera.clone()
    };
    [round, exact].into_iter().find_map(|camera| {
        camera.validate("camera").ok()?;
        let margin = margin_of(&Field::of(&camera, &axes.sight)?, directions)?;
        // The exact numbers lose the last digits on their way through degrees and pixels.
        (margin >= margin_px - 1e-6).then_some(Fit::Holds { camera, margin_px: margin })
    })
}

/// The least distance of a direction from an edge, pixels, negative outside; None where one is not in the picture at all.
pub fn margin_of(field: &Field, directions: &[Vector3<f64>]) -> Option<f64> {
    let mut margin = f64::INFINITY;
    for direction in directions {
        let [x, y] = field.pixel(direction)?;
        margin = margin.min(field.half_px[0] - x.abs()).min(field.half_px[1] - y.abs());
    }
    Some(margin)
}

fn shortfall(
    camera: &Camera,
    axes: &Axes,
    directions: &[Vector3<f64>],
    asked_px: f64,
    margin_px: f64,
) -> Option<Shortfall> {
    let free = camera.half_px().map(|half| half - asked_px);
    if free[0] <= 0.0 || free[1] <= 0.0 {
        return None;
    }
    let scale_of = |stand: &Stand| {
        let reach = stand.reach(directions)?;
        Some(-(reach[0] / free[0]).max(reach[1] / free[1]))
    };
    let needed = -best(&rotations(axes, directions, &scale_of), directions, &scale_of).first()?.0;
    let focal = camera.pixel_size_um.map(|size_um| floor_to_figures(size_um / (1000.0 * needed)));
    Some(Shortfall {
        margin_px,
        scale_tan: needed,
        focal_length_mm: focal,
        mosaic: mosaic(camera, axes, directions, asked_px),
    })
}

/// Rounded down to three figures, so that it still does.
fn floor_to_figures(value: f64) -> f64 {
    let mut step = 1e-6;
    while value / step >= 1000.0 {
        step *= 10.0;
    }
    (value / step).floor() * step
}

/// The fewest panels, by whole degrees of rotation; as planned on one plane, which the overlap makes good.
fn mosaic(camera: &Camera, axes: &Axes, directions: &[Vector3<f64>], asked_px: f64) -> Option<Mosaic> {
    let scale = camera.scale_tan();
    let side = camera.half_px().map(|half| 2.0 * half);
    let panels = |span_px: f64, side: f64| {
        let overlap = OVERLAP * side;
        ((span_px + 2.0 * asked_px - overlap) / (side - overlap)).ceil().clamp(1.0, 1000.0) as u32
    };
    let mut found: Option<(u32, f64, Mosaic)> = None;
    for degree in 0..180 {
        let stand = Stand::at(axes, f64::from(degree).to_radians()).centred(directions)?;
        let reach = stand.reach(directions)?;
        let [across, down] = [0, 1].map(|axis| panels(2.0 * reach[axis] / scale, side[axis]));
        let filled = f64::max(reach[0] / side[0] / f64::from(across), reach[1] / side[1] / f64::from(down));
        let count = across * down;
        if found.as_ref().is_none_or(|(fewest, fullest, _)| (count, filled) < (*fewest, *fullest)) {
            let upright = position_angle_rad(&stand.up, &Axes::at(&stand.sight))?;
            let image_up_position_angle_deg = turn_deg(upright.to_degrees().round());
            found = Some((count, filled, Mosaic { across, down, image_up_position_angle_deg }));
        }
    }
    found.filter(|(count, ..)| *count <= MOST_PANELS).map(|(.., mosaic)| mosaic)
}
