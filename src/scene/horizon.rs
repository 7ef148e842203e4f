//! How do comet and tails stand over the horizon?
//!
//! As one sees it: zenith up, azimuth growing to the right, the comet over the middle. One scale for altitude and for
//! azimuth times the cosine of the comet's altitude, so that angles at the comet are true. The hands give the
//! directions of the tails and not their lengths. Sun and Moon stand at their places, or an arrow at the edge says where.

use super::label::{Room, Wish};
use super::lettering::{ABOVE, Anchor, BELOW, LINE, Rect, Text, width_px};
use super::note::{MARGIN, shortened};
use super::{Body, Direction, Point, Role, Scene, Shape, mark};
use crate::frame::half_turn;
use crate::night::moment::Moment;
use crate::say::night::compass;

const SIZE: f64 = 11.0;
/// Least and greatest length of a hand, as shares of the smaller side of the picture.
const HAND_SHARES: [f64; 2] = [0.2, 0.34];
/// Altitudes shown: at least so far below the horizon, so far about the comet, and up to here.
const BELOW_DEG: f64 = 7.0;
const ABOUT_COMET_DEG: f64 = 22.0;
const LEAST_TOP_DEG: f64 = 45.0;

/// Where azimuths and altitudes lie on the page.
struct Plane {
    area: Rect,
    px_per_deg: f64,
    low_deg: f64,
    /// Of the comet; the south in the zenith.
    azimuth_deg: f64,
    squeeze: f64,
}

impl Plane {
    fn to_page(&self, azimuth_deg: f64, altitude_deg: f64) -> Point {
        let off = half_turn((azimuth_deg - self.azimuth_deg).to_radians()).to_degrees();
        [
            self.area.center()[0] + off * self.squeeze * self.px_per_deg,
            self.area.bottom - (altitude_deg - self.low_deg) * self.px_per_deg,
        ]
    }
}

/// The picture of a moment of a site.
pub fn compose(moment: &Moment, wide_px: f64, height_px: f64) -> Scene {
    let mut scene = Scene::new(wide_px, height_px);
    let unit = scene.unit_px;
    let size_px = SIZE * unit;
    let margin = MARGIN * unit;
    let row = LINE * size_px;
    let area = Rect {
        left: margin + 26.0 * unit,
        top: margin + 1.3 * row,
        right: wide_px - margin,
        bottom: height_px - margin - 1.2 * row,
    };
    if area.width() < 40.0 || area.height() < 40.0 {
        return scene;
    }
    let altitude_deg = moment.altitude_rad.to_degrees();
    let low_deg = (-BELOW_DEG).min(altitude_deg - ABOUT_COMET_DEG);
    let top_deg = LEAST_TOP_DEG.max(altitude_deg + ABOUT_COMET_DEG);
    let plane = Plane {
        area,
        px_per_deg: area.height() / (top_deg - low_deg),
        low_deg,
        azimuth_deg: moment.azimuth_rad.map_or(180.0, f64::to_degrees),
        squeeze: libm::cos(moment.altitude_rad).max(0.02),
    };
    let comet = plane.to_page(plane.azimuth_deg, altitude_deg);
    let level = plane.to_page(0.0, 0.0)[1];
    let ground = Rect { top: level, ..area };
    scene.add(
        Role::BelowHorizon,
        Shape::Polygon(vec![
            [ground.left, ground.top],
            [ground.right, ground.top],
            [ground.right, ground.bottom],
            [ground.left, ground.bottom],
        ]),
    );
    let mut room = Room::new(area, comet, 0.0, unit);
    room.taken.push(mark::area(comet, unit));
    draw_scales(&mut scene, &plane, level, size_px, top_deg, moment);
    scene.add(Role::Horizon, Shape::Polyline(vec![[area.left, level], [area.right, level]]));

    let mut wishes: Vec<Wish> = Vec::new();
    let mut names: Vec<(Role, &'static str)> = Vec::new();
    let mut wish = |from: Point, outward: Point, role: Role, words: &'static str| {
        let line = [width_px(words, size_px, false), (ABOVE + BELOW) * size_px];
        wishes.push(Wish { from, outward, one_line: line, two_lines: line });
        names.push((role, words));
    };
    draw_bodies(&mut scene, &plane, moment, &mut room, &mut wish);
    draw_hands(&mut scene, moment, comet, &area, &mut room, &mut wish);
    scene.add(Role::Nucleus, Shape::Circle { center: comet, radius_px: 3.5 * unit });
    for (place, (role, words)) in room.place(&wishes).into_iter().zip(names) {
        let Some(place) = place else { continue };
        if let Some(leader) = place.leader {
            scene.add(Role::Guide, Shape::Polyline(leader.to_vec()));
        }
        scene.add(role, Shape::Text(Text::centered(words, place.area.center(), size_px, false)));
    }
    scene
}

/// Altitudes at the left, points of the compass at the foot, and the title.
fn draw_scales(scene: &mut Scene, plane: &Plane, level: f64, size_px: f64, top_deg: f64, moment: &Moment) {
    let unit = scene.unit_px;
    let area = &plane.area;
    let margin = MARGIN * unit;
    let mut texts: Vec<(Role, Text)> = Vec::new();
    let mut text = |role: Role, words: String, at: Point, anchor: Anchor, strong: bool| {
        texts.push((role, Text { words, at, anchor, size_px, strong }));
    };
    let title = format!("Zenith up, {}", moment.sky.time.utc_minute());
    let title = shortened(title, scene.width_px - 2.0 * margin, size_px);
    text(Role::Title, title, [margin, margin + ABOVE * size_px], Anchor::Start, true);
    let mut axis = vec![vec![[area.left, area.top], [area.left, area.bottom]]];
    let step = if 10.0 * plane.px_per_deg >= 1.8 * size_px { 10.0 } else { 30.0 };
    let mut altitude = (plane.low_deg / step).ceil() * step;
    while altitude <= top_deg.min(90.0) {
        let y = plane.to_page(0.0, altitude)[1];
        axis.push(vec![[area.left - 4.0 * unit, y], [area.left, y]]);
        // Adding zero takes the sign off a zero.
        let words = format!("{:.0}\u{b0}", altitude + 0.0).replace('-', "\u{2212}");
        text(Role::Note, words, [area.left - 7.0 * unit, y + (ABOVE - BELOW) / 2.0 * size_px], Anchor::End, false);
        altitude += step;
    }
    let foot = scene.height_px - margin - BELOW * size_px;
    // The nearest point of the compass first, so that it keeps its name where there is no room for all.
    let nearest = (plane.azimuth_deg / 22.5).round() as i32;
    for number in (0..8).flat_map(|away| if away == 0 { vec![nearest] } else { vec![nearest + away, nearest - away] }) {
        let azimuth_deg = f64::from(number) * 22.5;
        let x = plane.to_page(azimuth_deg, 0.0)[0];
        if x > area.left && x < area.right {
            axis.push(vec![[x, level], [x, level + 5.0 * unit]]);
            let words = compass(azimuth_deg.rem_euclid(360.0).to_radians());
            text(Role::Note, words.to_owned(), [x, foot], Anchor::Middle, false);
        }
    }
    scene.add(Role::Axis, Shape::Lines(axis));
    scene.write_apart(texts);
}

/// Sun and Moon at their places, or as arrows at the edge; the Moon only while it is up.
fn draw_bodies(
    scene: &mut Scene,
    plane: &Plane,
    moment: &Moment,
    room: &mut Room,
    wish: &mut impl FnMut(Point, Point, Role, &'static str),
) {
    let unit = scene.unit_px;
    let inner = plane.area.grown(-9.0 * unit);
    for (body, name, altitude, azimuth) in [
        (Body::Sun, "Sun", moment.sun_altitude_rad, moment.sun_azimuth_rad),
        (Body::Moon, "Moon", moment.moon_altitude_rad, moment.moon_azimuth_rad),
    ] {
        if body == Body::Moon && altitude < 0.0 {
            continue;
        }
        let place = plane.to_page(azimuth.map_or(180.0, f64::to_degrees), altitude.to_degrees());
        let at = inner.nearest(place);
        let off = [place[0] - at[0], place[1] - at[1]];
        let length = libm::hypot(off[0], off[1]);
        let inside = length < 1e-9;
        let outward = if inside { [0.0, -1.0] } else { [off[0] / length, off[1] / length] };
        if !inside {
            // An arrow that points to where the body is.
            let across = [-outward[1], outward[0]];
            let point = |along: f64, aside: f64| {
                [0, 1].map(|axis| at[axis] + unit * (along * outward[axis] + aside * across[axis]))
            };
            let role = if body == Body::Sun { Role::Mark(Direction::Sunward) } else { Role::Observer };
            scene.add(role, Shape::Polyline(vec![point(-4.0, -4.5), point(5.0, 0.0), point(-4.0, 4.5)]));
        } else if body == Body::Sun {
            mark::draw(scene, Direction::Sunward, at, outward);
        } else {
            scene.add(Role::Observer, Shape::Circle { center: at, radius_px: 6.0 * unit });
        }
        room.taken.push(mark::area(at, unit));
        let inward = [-outward[0], -outward[1]];
        wish(at, if inside { outward } else { inward }, Role::CourseLabel(body), name);
    }
}

/// The directions of the tails, as hands of different length.
fn draw_hands(
    scene: &mut Scene,
    moment: &Moment,
    comet: Point,
    area: &Rect,
    room: &mut Room,
    wish: &mut impl FnMut(Point, Point, Role, &'static str),
) {
    let unit = scene.unit_px;
    let side = area.width().min(area.height());
    let hands = [
        (Direction::Antisolar, moment.sky.antisolar_position_angle_rad),
        (Direction::IonAxis, moment.ion_position_angle_rad),
        (Direction::NegativeVelocity, moment.sky.negative_velocity_position_angle_rad),
    ];
    let mut ends = Vec::new();
    for (number, (direction, angle)) in hands.into_iter().enumerate() {
        let Some(angle) = moment.from_vertical_rad(angle) else { continue };
        let (left, up) = libm::sincos(angle);
        let outward = [-left, -up];
        let share = HAND_SHARES[1] - (HAND_SHARES[1] - HAND_SHARES[0]) * number as f64 / 2.0;
        // No farther than the end mark stays on the picture.
        let inner = area.grown(-10.0 * unit);
        let room_px = |axis: usize, low: f64, high: f64| match outward[axis] {
            step if step > 1e-9 => (high - comet[axis]) / step,
            step if step < -1e-9 => (low - comet[axis]) / step,
            _ => f64::INFINITY,
        };
        let edge = room_px(0, inner.left, inner.right).min(room_px(1, inner.top, inner.bottom));
        // Shortened alike, so that marks of directions that fall together do not meet.
        let length = (side * share).min(edge * share / HAND_SHARES[1]);
        let end = [comet[0] + outward[0] * length, comet[1] + outward[1] * length];
        scene.add(Role::Hand(direction), Shape::Polyline(vec![comet, end]));
        room.hands.push([comet, end]);
        room.taken.push(mark::area(end, unit));
        ends.push((direction, end, outward));
    }
    for (direction, end, outward) in ends {
        mark::draw(scene, direction, end, outward);
        wish(end, outward, Role::Label(direction), mark::words(direction));
    }
}
