//! Which bands run under the curves: dust toward the Sun, dark hours, nearness to the Sun?
//!
//! | lane | height of its band | look |
//! | --- | --- | --- |
//! | dust toward the Sun | the grade: faint, possible, strong | filled and hatched by perspective, an outline by ejection alone |
//! | dark, comet up | hours of the night, up to [`FULL_HOURS`]; the windows themselves where there is room | filled |
//! | near the Sun | none | hatched the other way |

use super::super::lettering::Rect;
use super::super::{Lane, Point, Role, Shape, Slope};
use super::{DarkNight, Ribbon, Strip, frame};
use crate::season::sunward::{Origin, Window};
use crate::tail::perspective::Grade;
use crate::time::Instant;

/// The lanes from the top, and their names.
pub const NAMES: [(Lane, &str); 3] =
    [(Lane::SunwardDust, "dust toward the Sun"), (Lane::DarkHours, "dark, comet up"), (Lane::NearSun, "near the Sun")];
/// A night of so many dark hours with the comet up fills its lane.
pub const FULL_HOURS: f64 = 8.0;
/// Nights wider than this show their windows, in drawing units.
const WINDOW_PX: f64 = 7.0;
/// From one line of a hatch to the next, in drawing units.
const HATCH: f64 = 5.0;
/// A band is drawn no narrower than this, in drawing units, so that a short window is seen.
const LEAST_PX: f64 = 2.0;

/// What is said instead of a band.
const NEEDS_SITE: &str = "needs a site";

/// Draws the lanes with their names.
pub fn draw(ribbon: &mut Ribbon, strip: &Strip) {
    let frame = ribbon.frame;
    let unit = ribbon.scene.unit_px;
    let plot = frame.plot;
    for (number, &(lane, name)) in NAMES.iter().enumerate().take(frame.lanes) {
        let bottom = frame.lanes_top
            + frame.lane_step * number as f64
            + if frame.beside { frame.band_px } else { frame.lane_step - 2.0 * unit };
        let area = Rect { left: plot.left, top: bottom - frame.band_px, right: plot.right, bottom };
        let rule = vec![[area.left, area.bottom], [area.right, area.bottom]];
        ribbon.scene.add(Role::LaneRule, Shape::Polyline(rule));
        let absent = lane == Lane::DarkHours && strip.nights.is_none();
        let name_role = Role::LaneName(lane);
        if frame.beside {
            let text = frame::from_right(name, [plot.left - 8.0 * unit, area.center()[1]], frame.size_px);
            ribbon.scene.add(name_role, Shape::Text(text));
            if absent {
                let text = frame::from_left(NEEDS_SITE, [plot.left + 6.0 * unit, area.center()[1]], frame.size_px);
                ribbon.scene.add(Role::Note, Shape::Text(text));
            }
        } else {
            let words = if absent { format!("{name}: {NEEDS_SITE}") } else { name.to_owned() };
            let middle = area.top - 0.56 * frame.size_px;
            ribbon.scene.add(name_role, Shape::Text(frame::from_left(words, [plot.left, middle], frame.size_px)));
        }
        match lane {
            Lane::SunwardDust => sunward(ribbon, strip, area),
            Lane::DarkHours => dark(ribbon, strip.nights.unwrap_or_default(), area),
            Lane::NearSun => near_sun(ribbon, strip, area),
        }
    }
}

/// How high the band of a grade stands, as a share of its lane.
fn height(grade: Grade) -> f64 {
    match grade {
        Grade::None => 0.0,
        Grade::Faint => 0.34,
        Grade::Possible => 0.67,
        Grade::Strong => 1.0,
    }
}

fn sunward(ribbon: &mut Ribbon, strip: &Strip, area: Rect) {
    for window in &strip.season.sunward {
        let Some([left, right]) = span(ribbon, window.begin, window.end, &area) else { continue };
        let rise = |share: f64| area.bottom - share * area.height();
        let mut profile: Vec<Point> = vec![[left, area.bottom]];
        let inside = strip.season.strengths.iter().filter(|one| window.begin <= one.time && one.time <= window.end);
        let mut heights: Vec<Point> = inside
            .filter(|one| one.origin == Some(window.origin))
            .map(|one| [ribbon.x_of(one.time).clamp(left, right), rise(height(one.grade))])
            .collect();
        if heights.is_empty() {
            heights.push([left, rise(height(window.best.grade))]);
        }
        profile.push([left, heights[0][1]]);
        profile.extend(heights.iter().copied());
        profile.push([right, heights[heights.len() - 1][1]]);
        profile.push([right, area.bottom]);
        if window.origin == Origin::Perspective {
            ribbon.scene.add(Role::Band(Lane::SunwardDust), Shape::Polygon(profile.clone()));
            // A profile is no convex outline; its slices are.
            let slices: Vec<Vec<Point>> = profile[1..profile.len() - 1]
                .windows(2)
                .filter(|pair| pair[1][0] > pair[0][0])
                .map(|pair| vec![pair[0], pair[1], [pair[1][0], area.bottom], [pair[0][0], area.bottom]])
                .collect();
            let hatch = Shape::Hatch { outlines: slices, gap_px: HATCH * ribbon.scene.unit_px, slope: Slope::Rising };
            ribbon.scene.add(Role::BandHatch(Lane::SunwardDust), hatch);
        }
        ribbon.scene.add(Role::BandRim(Lane::SunwardDust), Shape::Polyline(profile));
    }
}

fn near_sun(ribbon: &mut Ribbon, strip: &Strip, area: Rect) {
    for &[begin, end] in &strip.season.near_sun {
        let Some([left, right]) = span(ribbon, begin, end, &area) else { continue };
        let outline = vec![[left, area.top], [right, area.top], [right, area.bottom], [left, area.bottom]];
        let hatch = Shape::Hatch {
            outlines: vec![outline.clone()],
            gap_px: HATCH * ribbon.scene.unit_px,
            slope: Slope::Falling,
        };
        ribbon.scene.add(Role::BandHatch(Lane::NearSun), hatch);
        let rim = outline.into_iter().chain([[left, area.top]]).collect();
        ribbon.scene.add(Role::BandRim(Lane::NearSun), Shape::Polyline(rim));
    }
}

fn dark(ribbon: &mut Ribbon, nights: &[DarkNight], area: Rect) {
    let px_per_day = area.width() / ribbon.stretch.days();
    let role = Role::Band(Lane::DarkHours);
    let box_of =
        |left: f64, right: f64, top: f64| vec![[left, area.bottom], [left, top], [right, top], [right, area.bottom]];
    if px_per_day >= WINDOW_PX * ribbon.scene.unit_px {
        let spans = nights.iter().flat_map(|night| &night.windows);
        let boxes = spans.filter_map(|&[begin, end]| span(ribbon, begin, end, &area));
        let boxes: Vec<Vec<Point>> = boxes.map(|[left, right]| box_of(left, right, area.top)).collect();
        ribbon.scene.add(role, Shape::Patches(boxes));
        return;
    }
    // Hours of the nights as a profile, no finer than the page shows.
    let mut runs: Vec<Vec<Point>> = Vec::new();
    let mut open = false;
    let mut column = f64::NEG_INFINITY;
    for night in nights {
        let x = ribbon.x_of(night.middle);
        if x < area.left - px_per_day || x > area.right + px_per_day {
            continue;
        }
        let top = area.bottom - (hours(night) / FULL_HOURS).min(1.0) * area.height();
        let [left, right] = [x - 0.5 * px_per_day, x + 0.5 * px_per_day].map(|x| x.clamp(area.left, area.right));
        if top >= area.bottom {
            open = false;
        } else if !open {
            runs.push(vec![[left, area.bottom], [left, top], [right, top], [right, area.bottom]]);
            open = true;
            column = x;
        } else if let Some(run) = runs.last_mut() {
            run.pop();
            if x - column >= 1.0 {
                run.push([x.clamp(area.left, area.right), top]);
                column = x;
            }
            run.push([right, area.bottom]);
        }
    }
    ribbon.scene.add(role, Shape::Patches(runs));
}

/// Dark hours with the comet up in a night.
pub fn hours(night: &DarkNight) -> f64 {
    night.windows.iter().map(|[begin, end]| (end.tdb_days() - begin.tdb_days()) * 24.0).sum()
}

/// The part of a span of time that lies on the track; None where it lies beside it.
fn span(ribbon: &Ribbon, begin: Instant, end: Instant, area: &Rect) -> Option<[f64; 2]> {
    let (left, right) = (ribbon.x_of(begin), ribbon.x_of(end));
    if right < area.left || left > area.right {
        return None;
    }
    let least = LEAST_PX * ribbon.scene.unit_px;
    let left = left.clamp(area.left, area.right - least);
    Some([left, right.clamp(left + least, area.right)])
}

/// A piece of a band, as a key beside its words.
pub fn words(window: &Window) -> &'static str {
    match window.origin {
        Origin::Perspective => "dust toward the Sun by perspective",
        Origin::Ejection => "dust toward the Sun only if thrown there",
    }
}

/// A grade in words.
pub fn grade(grade: Grade) -> &'static str {
    match grade {
        Grade::None => "none",
        Grade::Faint => "faint",
        Grade::Possible => "possible",
        Grade::Strong => "strong",
    }
}
