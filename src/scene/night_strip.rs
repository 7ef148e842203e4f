//! How high do comet, Sun and Moon stand through a night?
//!
//! Time runs to the right from before sunset to after sunrise (from noon to noon where one of them is missing), altitude
//! upward from 20 degrees below the horizon. The light of the sky lies behind the curves in five steps, with their
//! names at the top; dark time with the comet up, and the best of it, are bars at the foot. On the right the air mass
//! that belongs to an altitude. Each body has its own line pattern.

use super::clip::line_inside;
use super::lettering::{ABOVE, Anchor, BELOW, LINE, Rect, Text};
use super::note::{MARGIN, shortened};
use super::{Body, Point, Role, Scene, Shape};
use crate::night::course::{Course, Sample};
use crate::night::moment::{SUNSET_DEG, TWILIGHTS_DEG};
use crate::time::Instant;

const SIZE: f64 = 11.0;
/// Room before sunset and after sunrise, days: 45 minutes.
const MARGIN_DAYS: f64 = 0.75 / 24.0;
/// Lowest and highest altitude drawn, degrees.
const ALTITUDES_DEG: [f64; 2] = [-20.0, 90.0];
/// Altitudes by air mass, Kasten & Young (1989): where the scale at the right has its ticks.
const AIR_MASSES: [(&str, f64); 5] = [("1", 90.0), ("1.5", 41.7), ("2", 29.9), ("3", 19.3), ("5", 11.3)];
/// Hours between the named times, the first for which the names have room.
const HOURS: [f64; 5] = [1.0, 2.0, 3.0, 4.0, 6.0];
/// Room of a named time, in drawing units.
const TIME_ROOM: f64 = 46.0;

/// Where times and altitudes lie on the page.
struct Plane {
    area: Rect,
    from: Instant,
    days: f64,
}

impl Plane {
    fn of(course: &Course, width_px: f64, height_px: f64, unit: f64) -> Plane {
        let [set, rise] = course.sun_down();
        let evening = &course.evening;
        let from = set.tdb_days() - MARGIN_DAYS;
        let to = rise.tdb_days() + MARGIN_DAYS;
        let from = from.max(evening.from.tdb_days());
        let days = to.min(evening.to.tdb_days()) - from;
        let row = LINE * SIZE * unit;
        let margin = MARGIN * unit;
        let area = Rect {
            left: margin + 26.0 * unit,
            top: margin + 2.2 * row,
            right: width_px - margin - 24.0 * unit,
            bottom: height_px - margin - 1.2 * row - BARS * unit,
        };
        Plane { area, from: Instant::from_tdb_days(from), days }
    }

    fn x(&self, time: Instant) -> f64 {
        self.area.left + self.area.width() * (time.tdb_days() - self.from.tdb_days()) / self.days
    }

    fn y(&self, altitude_deg: f64) -> f64 {
        let [low, high] = ALTITUDES_DEG;
        self.area.bottom - self.area.height() * (altitude_deg - low) / (high - low)
    }
}

/// Height of the two bars under the plot with the gaps about them, in drawing units.
const BARS: f64 = 18.0;

/// The time under a place on the page of a strip of this size.
pub fn time_at(course: &Course, width_px: f64, height_px: f64, x_px: f64) -> Instant {
    let unit = Scene::new(width_px, height_px).unit_px;
    let plane = Plane::of(course, width_px, height_px, unit);
    let share = ((x_px - plane.area.left) / plane.area.width()).clamp(0.0, 1.0);
    plane.from.plus_days(share * plane.days)
}

/// The strip of a night with a mark at `now`, where that lies in it.
pub fn compose(course: &Course, site: &str, now: Instant, width_px: f64, height_px: f64) -> Scene {
    let mut scene = Scene::new(width_px, height_px);
    let unit = scene.unit_px;
    let plane = Plane::of(course, width_px, height_px, unit);
    let area = plane.area;
    if area.width() < 40.0 || area.height() < 40.0 {
        return scene;
    }
    let size_px = SIZE * unit;
    let mut texts: Vec<(Role, Text)> = Vec::new();
    let mut text = |role: Role, words: String, at: Point, anchor: Anchor, strong: bool| {
        texts.push((role, Text { words, at, anchor, size_px, strong }));
    };
    let margin = MARGIN * unit;
    let from = if site.is_empty() { String::new() } else { format!(", {site}") };
    let title = shortened(format!("Night of {}{from}", course.evening.date), width_px - 2.0 * margin, size_px);
    text(Role::Title, title, [margin, margin + ABOVE * size_px], Anchor::Start, true);

    draw_light(&mut scene, course, &plane, &mut text);
    let below = Rect { top: plane.y(0.0), ..area };
    scene.add(Role::BelowHorizon, Shape::Polygon(corners(&below)));
    let mut axis = vec![
        vec![[area.left, area.top], [area.left, area.bottom]],
        vec![[area.right, area.top], [area.right, area.bottom]],
    ];
    for altitude in [90.0, 60.0, 30.0, 0.0] {
        let y = plane.y(altitude);
        axis.push(vec![[area.left - 4.0 * unit, y], [area.left, y]]);
        let at = [area.left - 7.0 * unit, y + (ABOVE - BELOW) / 2.0 * size_px];
        text(Role::Note, format!("{altitude}\u{b0}"), at, Anchor::End, false);
    }
    for (words, altitude) in AIR_MASSES {
        let y = plane.y(altitude);
        axis.push(vec![[area.right, y], [area.right + 4.0 * unit, y]]);
        let at = [area.right + 7.0 * unit, y + (ABOVE - BELOW) / 2.0 * size_px];
        text(Role::Note, words.to_owned(), at, Anchor::Start, false);
    }
    text(Role::Note, "air mass".to_owned(), [width_px - margin, margin + ABOVE * size_px], Anchor::End, false);
    let foot = height_px - margin - BELOW * size_px;
    text(Role::Note, "UTC".to_owned(), [margin, foot], Anchor::Start, false);
    for (time, words) in hours(&plane, unit) {
        let x = plane.x(time);
        axis.push(vec![[x, area.bottom], [x, area.bottom + 4.0 * unit]]);
        text(Role::Note, words, [x, foot], Anchor::Middle, false);
    }
    scene.add(Role::Axis, Shape::Lines(axis));
    scene.add(Role::Horizon, Shape::Polyline(vec![[area.left, plane.y(0.0)], [area.right, plane.y(0.0)]]));

    draw_bars(&mut scene, course, &plane);
    if plane.from <= now && now.tdb_days() <= plane.from.tdb_days() + plane.days {
        let x = plane.x(now);
        scene.add(Role::Now, Shape::Polyline(vec![[x, area.top], [x, area.bottom + BARS * unit]]));
    }
    let curves = [
        (Body::Sun, "Sun", (|sample| sample.sun_deg) as fn(&Sample) -> f64),
        (Body::Moon, "Moon", |sample| sample.moon_deg),
        (Body::Comet, "comet", |sample| sample.comet_deg),
    ];
    let mut lines: Vec<(Body, &str, Vec<Vec<Point>>)> = Vec::new();
    for (body, name, altitude) in curves {
        let points: Vec<Point> =
            course.samples.iter().map(|sample| [plane.x(sample.time), plane.y(altitude(sample))]).collect();
        let pieces = line_inside(&points, &area);
        if !pieces.is_empty() {
            scene.add(Role::Course(body), Shape::Lines(pieces.clone()));
        }
        lines.push((body, name, pieces));
    }
    write(&mut scene, texts, &lines, &area, size_px);
    scene
}

/// Behind everything the light of the sky, and at the top its names.
fn draw_light(
    scene: &mut Scene,
    course: &Course,
    plane: &Plane,
    text: &mut impl FnMut(Role, String, Point, Anchor, bool),
) {
    let unit = scene.unit_px;
    let area = &plane.area;
    // Edges between parts, in order; the Sun's altitude in the middle of a part says which it is.
    let mut edges = vec![plane.from, plane.from.plus_days(plane.days)];
    edges.extend(course.twilights.iter().flat_map(|twilight| [twilight.evening, twilight.morning]).flatten());
    edges.retain(|time| (0.0..=plane.days).contains(&(time.tdb_days() - plane.from.tdb_days())));
    crate::order::by_number(&mut edges, |edge| edge.tdb_days());
    for pair in edges.windows(2) {
        let middle = 0.5 * (pair[0].tdb_days() + pair[1].tdb_days());
        let level = light(sun_at(course, middle));
        let band = Rect { left: plane.x(pair[0]), right: plane.x(pair[1]), ..*area };
        scene.add(Role::SkyLight(level), Shape::Polygon(corners(&band)));
        let size_px = SIZE * unit;
        for name in LIGHT_NAMES[usize::from(level)] {
            if super::lettering::width_px(name, size_px, false) + 4.0 * unit <= band.width() {
                let at = [band.center()[0], area.top - 4.0 * unit - BELOW * size_px];
                text(Role::Note, (*name).to_owned(), at, Anchor::Middle, false);
                break;
            }
        }
    }
}

/// Names of the steps of light, long before short.
const LIGHT_NAMES: [&[&str]; 5] = [
    &["night"],
    &["astronomical twilight", "astronomical", "astr."],
    &["nautical twilight", "nautical", "naut."],
    &["civil twilight", "civil"],
    &["day"],
];

fn light(sun_deg: f64) -> u8 {
    let limits = [TWILIGHTS_DEG[2], TWILIGHTS_DEG[1], TWILIGHTS_DEG[0], SUNSET_DEG];
    limits.iter().filter(|limit| sun_deg >= **limit).count() as u8
}

/// The Sun's altitude at a time between two samples.
fn sun_at(course: &Course, tdb_days: f64) -> f64 {
    let after = course.samples.iter().position(|sample| sample.time.tdb_days() >= tdb_days).unwrap_or(0).max(1);
    0.5 * (course.samples[after - 1].sun_deg + course.samples[after].sun_deg)
}

/// Under the plot: dark time with the comet up as frames, the best of it as a full bar.
fn draw_bars(scene: &mut Scene, course: &Course, plane: &Plane) {
    let unit = scene.unit_px;
    let bar = |begin: Instant, end: Instant, inset: f64| {
        let area = &plane.area;
        let [left, right] = [begin, end].map(|time| plane.x(time).clamp(area.left, area.right));
        let top = area.bottom + 6.0 * unit;
        corners(&Rect { left, right: right.max(left + 1.0), top: top + inset, bottom: top + 10.0 * unit - inset })
    };
    for dark in &course.dark {
        scene.add(Role::DarkTime, Shape::Polygon(bar(dark.begin, dark.end, 0.0)));
    }
    if let Ok(best) = &course.best {
        scene.add(Role::BestTime, Shape::Polygon(bar(best.begin, best.end, 2.5 * unit)));
    }
}

/// Whole hours of UTC with their names.
fn hours(plane: &Plane, unit: f64) -> Vec<(Instant, String)> {
    let hour_px = plane.area.width() / (plane.days * 24.0);
    let step = HOURS.into_iter().find(|step| step * hour_px >= TIME_ROOM * unit).unwrap_or(12.0) / 24.0;
    // Days of UT1 begin at noon: half a day makes whole steps fall on midnight.
    let first = ((plane.from.ut1_days() + 0.5) / step).ceil();
    let count = (plane.days / step) as usize + 1;
    (0..count)
        .map(|number| Instant::from_ut1_days((first + number as f64) * step - 0.5))
        .filter(|time| time.tdb_days() <= plane.from.tdb_days() + plane.days)
        .map(|time| (time, time.utc_minute().get(11..16).unwrap_or_default().to_owned()))
        .collect()
}

/// Writes the texts that have room, then the names of the curves where each runs alone.
fn write(
    scene: &mut Scene,
    texts: Vec<(Role, Text)>,
    lines: &[(Body, &str, Vec<Vec<Point>>)],
    area: &Rect,
    size_px: f64,
) {
    let unit = scene.unit_px;
    let mut taken = scene.write_apart(texts);
    for (body, name, pieces) in lines {
        let points: Vec<Point> = pieces.iter().flatten().copied().collect();
        let spot = [0.5, 0.4, 0.6, 0.3, 0.7, 0.2, 0.8, 0.12, 0.88]
            .into_iter()
            .flat_map(|share| [[0.0, -1.0], [0.0, 1.0], [1.0, -0.4], [-1.0, -0.4]].map(|side| (share, side)))
            .filter_map(|(share, [aside, along])| {
                let at = *points.get((points.len() as f64 * share) as usize)?;
                let half = 0.5 * super::lettering::width_px(name, size_px, true) + 8.0 * unit;
                let center = [at[0] + aside * half, at[1] + along * 12.0 * unit];
                let text = Text::centered(*name, center, size_px, true);
                let clear = text.area().grown(2.0 * unit);
                let cut = lines.iter().any(|(_, _, pieces)| {
                    pieces.iter().any(|piece| piece.windows(2).any(|pair| clear.cuts(pair[0], pair[1])))
                });
                (!cut && area.contains(&clear) && !taken.iter().any(|other| other.overlaps(&clear))).then_some(text)
            })
            .next();
        if let Some(text) = spot {
            taken.push(text.area());
            scene.add(Role::CourseLabel(*body), Shape::Text(text));
        }
    }
}

fn corners(area: &Rect) -> Vec<Point> {
    vec![[area.left, area.top], [area.right, area.top], [area.right, area.bottom], [area.left, area.bottom]]
}
