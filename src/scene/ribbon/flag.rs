//! How are events named on a crowded ribbon?
//!
//! Every event in the stretch has a mark at the head of the plot; the weightier ones try for a name above it, in rows,
//! beside or straight over their mark, with a leader. A name is set only where it covers no other name and no
//! leader, and where its own leader runs through no name; the others keep their mark, and the full list is the
//! ribbon's text twin.

use super::super::label::cross;
use super::super::lettering::{Rect, width_px};
use super::super::{Point, Role, Shape};
use super::{Ribbon, Strip, frame};
use crate::season::event::{Event, EventKind};
use crate::season::sunward::Origin;

/// Events of this rank or heavier have a diamond, the others a stroke.
pub const WEIGHTY: u8 = 2;
/// A name may stand this far aside from its mark, in letter sizes.
const FAR_ASIDE: f64 = 6.0;
/// Clear space beside a name and above it, in drawing units.
const CLEAR: [f64; 2] = [9.0, 1.5];
/// The lightest events are named only where a day has this many drawing units.
const ROOMY: f64 = 20.0;

/// How much an event matters to who plans a night, the weightiest first.
pub fn rank(kind: EventKind) -> u8 {
    match kind {
        EventKind::OrbitPlaneCrossing { .. } => 0,
        EventKind::Perihelion => 1,
        EventKind::LeastDistance => 2,
        EventKind::SunwardDustBegins(Origin::Perspective) | EventKind::SunwardDustEnds(Origin::Perspective) => 3,
        EventKind::Opposition | EventKind::Conjunction => 4,
        EventKind::GreatestElongation | EventKind::LeastElongation => 5,
        EventKind::NearSunBegins | EventKind::NearSunEnds => 6,
        EventKind::GreatestPhaseAngle | EventKind::LeastPhaseAngle | EventKind::FastestMotion => 7,
        EventKind::SunwardDustBegins(Origin::Ejection) | EventKind::SunwardDustEnds(Origin::Ejection) => 8,
        EventKind::MoonNearest => 9,
    }
}

/// The name on the ribbon where there is room, and where there is less.
fn names(kind: EventKind) -> [&'static str; 2] {
    let short = match kind {
        EventKind::OrbitPlaneCrossing { .. } => "plane crossing",
        EventKind::SunwardDustBegins(_) => "sunward dust begins",
        EventKind::SunwardDustEnds(_) => "sunward dust ends",
        EventKind::Conjunction => "conjunction",
        kind => kind.words(),
    };
    [kind.words(), short]
}

/// A name that was set.
struct Flag {
    area: Rect,
    leader: [Point; 2],
}

/// Draws marks and names of the events in the stretch.
pub fn draw(ribbon: &mut Ribbon, strip: &Strip) {
    let frame = ribbon.frame;
    let unit = ribbon.scene.unit_px;
    let head = frame.plot.top;
    let mut events: Vec<&Event> = strip.season.events.iter().filter(|event| ribbon.stretch.holds(event.time)).collect();
    crate::order::by_rank(&mut events, |event| rank(event.kind).into());
    let roomy = frame.plot.width() / ribbon.stretch.days() >= ROOMY * unit;
    let mut flags: Vec<Flag> = Vec::new();
    let mut texts = Vec::new();
    let (mut strokes, mut diamonds, mut guides) = (Vec::new(), Vec::new(), Vec::new());
    for event in &events {
        let x = ribbon.x_of(event.time);
        let rank = rank(event.kind);
        if rank <= WEIGHTY {
            let half = 4.0 * unit;
            let middle = head - half;
            diamonds.push(vec![[x, middle - half], [x + half, middle], [x, head], [x - half, middle]]);
        } else {
            strokes.push(vec![[x, head], [x, head - 6.0 * unit]]);
        }
        if rank > rank_limit(roomy) {
            continue;
        }
        let from = [x, head - 8.0 * unit];
        let wished = names(event.kind).into_iter().find_map(|words| Some((words, place(ribbon, from, words, &flags)?)));
        if let Some((words, flag)) = wished {
            texts.push(frame::from_left(words, [flag.area.left, flag.area.center()[1]], frame.size_px));
            guides.push(vec![[x, head], [x, frame.plot.bottom]]);
            flags.push(flag);
        }
    }
    let leaders = flags.iter().map(|flag| flag.leader.to_vec()).collect();
    ribbon.scene.add(Role::EventGuide, Shape::Lines(guides));
    ribbon.scene.add(Role::EventStroke, Shape::Lines(leaders));
    ribbon.scene.add(Role::EventStroke, Shape::Lines(strokes));
    ribbon.scene.add(Role::EventMark, Shape::Patches(diamonds));
    for text in texts {
        ribbon.scene.add(Role::EventName, Shape::Text(text));
    }
}

fn rank_limit(roomy: bool) -> u8 {
    if roomy { u8::MAX } else { 8 }
}

/// Where the name of a mark can stand, nearest rows and places first.
fn place(ribbon: &Ribbon, from: Point, words: &str, flags: &[Flag]) -> Option<Flag> {
    let frame = &ribbon.frame;
    let unit = ribbon.scene.unit_px;
    let size = frame.size_px;
    let (half_width, half_height) = (0.5 * width_px(words, size, false), 0.5 * 1.01 * size);
    let page = Rect { left: 2.0, top: 0.0, right: ribbon.scene.width_px - 2.0, bottom: from[1] };
    let far = half_width + FAR_ASIDE * size;
    for row in 0..frame.flag_rows {
        let y = from[1] - half_height - frame::ROW * size * row as f64;
        for aside in [0.0, -0.5, 0.5, -1.0, 1.0] {
            let shift = if aside == 0.0 { 0.0 } else { aside * half_width };
            if let Some(flag) = free(from, [from[0] + shift, y], [half_width, half_height], &page, flags, unit) {
                return Some(flag);
            }
        }
        for aside in [-1.0, 1.0] {
            if let Some(flag) = free(from, [from[0] + aside * far, y], [half_width, half_height], &page, flags, unit) {
                return Some(flag);
            }
        }
    }
    None
}

/// A name of half the given size about `center`, if nothing stands in its way; it is moved into the page first.
fn free(from: Point, center: Point, half: [f64; 2], page: &Rect, flags: &[Flag], unit: f64) -> Option<Flag> {
    let area = Rect::around(center, half[0], half[1]).kept_in(page);
    if !page.contains(&area) {
        return None;
    }
    let leader = [from, [from[0].clamp(area.left + 2.0, area.right - 2.0), area.bottom]];
    let roomy = near(&area, unit);
    let hindered = flags.iter().any(|other| {
        roomy.overlaps(&other.area)
            || roomy.cuts(other.leader[0], other.leader[1])
            || near(&other.area, unit).cuts(leader[0], leader[1])
            || cross(&leader, &other.leader)
    });
    (!hindered).then_some(Flag { area, leader })
}

/// A name's box with the clear space about it.
fn near(area: &Rect, unit: f64) -> Rect {
    let [across, down] = CLEAR.map(|clear| clear * unit);
    Rect { left: area.left - across, top: area.top - down, right: area.right + across, bottom: area.bottom + down }
}
