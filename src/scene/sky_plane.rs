//! How does the sky around the nucleus look: directions, sunward half, scale?
//!
//! Painting order: ground, hatch of the sunward half, ring, hands, nucleus, marks, leaders, notes, labels,
//! letters, numbers. The ring keeps its size on the page at every zoom: it shows directions, not distances.
//! Texts are placed by rank: notes keep to the edges, letters to the ring, labels find room, numbers are
//! left out where anything else stands.

use super::label::{Placed, Room, Wish};
use super::lettering::{ABOVE, Anchor, LINE, Rect, Text, width_px};
use super::note::{MARGIN, Notes};
use super::vane::Vane;
use super::view::{Facing, SkyView};
use super::{Direction, Point, Role, Scene, Shape, mark, quantity};
use crate::plan::Plan;
use crate::sky::Sky;

/// Order of labels: the first keep the better places.
const RANK: [Direction; 5] = [
    Direction::Antisolar,
    Direction::NegativeVelocity,
    Direction::Sunward,
    Direction::SkyMotion,
    Direction::Zenith,
];
const LABEL_SIZE: f64 = 13.5;
/// Between the diagonals of the sunward half, in drawing units.
const HATCH_GAP: f64 = 9.0;
/// A hand starts this far from the nucleus, in drawing units.
const HAND_START: f64 = 9.0;

/// A direction that exists, resolved on the page.
struct Hand {
    direction: Direction,
    position_angle_rad: f64,
    /// Unit step away from the nucleus.
    step: Point,
    /// Centre of the end mark.
    end: Point,
}

/// The drawing of `sky` for the comet of `plan`, as `view` asks.
pub fn compose(plan: &Plan, sky: &Sky, view: &SkyView) -> Scene {
    let mut scene = Scene::new(view.width_px, view.height_px);
    let facing = view.facing(sky);
    let vane = Vane::of(&scene, &facing);
    let notes = Notes::of(&scene, plan, sky, view, &facing);
    let hands = if vane.is_in_sight(&scene) { hands(sky, &facing, &vane) } else { Vec::new() };

    hatch_sunward_half(&mut scene, sky, &facing);
    if vane.is_in_sight(&scene) {
        vane.draw(&mut scene, &facing);
    }
    // The shorter hands come last: where two fall together, each pattern shows from its own length inward.
    for hand in hands.iter().filter(|hand| hand.direction != Direction::Sunward) {
        let start = HAND_START * scene.unit_px / vane.radius_px;
        let line = vec![vane.point(hand.step, start), hand.end];
        scene.add(Role::Hand(hand.direction), Shape::Polyline(line));
    }
    let radius_px = 3.2 * scene.unit_px;
    scene.add(Role::Nucleus, Shape::Circle { center: vane.center, radius_px });
    for hand in &hands {
        mark::draw(&mut scene, hand.direction, hand.end, hand.step);
    }
    write(&mut scene, &facing, &vane, notes, &hands);
    scene
}

/// The directions that exist for `sky`.
fn hands(sky: &Sky, facing: &Facing, vane: &Vane) -> Vec<Hand> {
    let angle = |direction| match direction {
        Direction::Antisolar => sky.antisolar_position_angle_rad,
        Direction::Sunward => sunward_rad(sky),
        Direction::NegativeVelocity => sky.negative_velocity_position_angle_rad,
        Direction::SkyMotion => sky.motion_position_angle_rad,
        Direction::Zenith => sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad),
    };
    RANK.into_iter()
        .filter_map(|direction| {
            let position_angle_rad = angle(direction)?;
            let step = facing.direction(position_angle_rad);
            Some(Hand { direction, position_angle_rad, step, end: vane.point(step, mark::reach(direction)) })
        })
        .collect()
}

/// Position angle toward the Sun: opposite to the antisolar direction.
fn sunward_rad(sky: &Sky) -> Option<f64> {
    sky.antisolar_position_angle_rad.map(|angle| angle + std::f64::consts::PI)
}

/// Hatches the half of the sky within 90 degrees of the Sun's direction, where it is on the page.
fn hatch_sunward_half(scene: &mut Scene, sky: &Sky, facing: &Facing) {
    let Some(angle) = sunward_rad(sky) else { return };
    let step = facing.direction(angle);
    let nucleus = facing.nucleus();
    let sunward = |p: Point| (p[0] - nucleus[0]) * step[0] + (p[1] - nucleus[1]) * step[1];
    let (w, h) = (scene.width_px, scene.height_px);
    let corners = [[0.0, 0.0], [w, 0.0], [w, h], [0.0, h]];
    let mut outline = Vec::new();
    let mut edge = Vec::new();
    for (i, &here) in corners.iter().enumerate() {
        let next = corners[(i + 1) % 4];
        let (a, b) = (sunward(here), sunward(next));
        if a >= 0.0 {
            outline.push(here);
        }
        if (a >= 0.0) != (b >= 0.0) {
            let share = a / (a - b);
            let cut = [here[0] + (next[0] - here[0]) * share, here[1] + (next[1] - here[1]) * share];
            outline.push(cut);
            edge.push(cut);
        }
    }
    if outline.len() >= 3 {
        scene.add(Role::SunwardHalf, Shape::Hatch { outline, gap_px: HATCH_GAP * scene.unit_px });
    }
    if edge.len() == 2 {
        scene.add(Role::SunwardEdge, Shape::Polyline(edge));
    }
}

/// Places and writes every text: notes, labels with their leaders, letters, numbers.
fn write(scene: &mut Scene, facing: &Facing, vane: &Vane, notes: Notes, hands: &[Hand]) {
    let unit = scene.unit_px;
    let page = Rect { left: 0.0, top: 0.0, right: scene.width_px, bottom: scene.height_px };
    let mut room = Room::new(page.grown(-0.5 * MARGIN * unit), vane.center, vane.radius_px, unit);
    room.taken.extend(notes.areas());
    let in_sight = vane.is_in_sight(scene);
    let letters: Vec<Text> = if in_sight { vane.letters(scene, facing) } else { Vec::new() };
    let letters: Vec<Text> = letters
        .into_iter()
        .filter(|letter| page.contains(&letter.area()) && !room.taken.iter().any(|area| area.overlaps(&letter.area())))
        .collect();
    room.taken.extend(letters.iter().map(Text::area));
    room.taken.extend(hands.iter().map(|hand| mark::area(hand.end, unit)));
    room.taken.push(Rect::around(vane.center, 8.0 * unit, 8.0 * unit));
    room.hands.extend(hands.iter().map(|hand| [vane.center, hand.end]));

    notes.draw(scene);
    let mut labels = Vec::new();
    let mut leaders = Vec::new();
    for hand in hands.iter().filter(|hand| page.grown(-4.0).holds(hand.end)) {
        let (lines, leader) = label(&mut room, vane, hand, &page, unit);
        labels.extend(lines);
        leaders.extend(leader);
    }
    for (role, line) in &leaders {
        scene.add(*role, Shape::Polyline(line.clone()));
    }
    for (role, text) in labels {
        scene.add(role, Shape::Text(text));
    }
    for text in letters {
        scene.add(Role::Cardinal, Shape::Text(text));
    }
    let numbers: Vec<Text> = if in_sight { vane.numbers(scene, facing) } else { Vec::new() };
    for number in numbers {
        let area = number.area().grown(2.0 * unit);
        let crossed = leaders.iter().any(|(_, line)| line.windows(2).any(|ends| area.cuts(ends[0], ends[1])));
        if page.contains(&area) && !crossed && !room.taken.iter().any(|taken| taken.overlaps(&area)) {
            scene.add(Role::DialNumber, Shape::Text(number));
        }
    }
}

/// The label of a hand, line by line, and the leader that ties it to its mark; nothing if the page is full.
fn label(
    room: &mut Room,
    vane: &Vane,
    hand: &Hand,
    page: &Rect,
    unit: f64,
) -> (Vec<(Role, Text)>, Option<(Role, Vec<Point>)>) {
    let size = LABEL_SIZE * unit;
    let angle = quantity::position_angle(hand.position_angle_rad);
    let words = mark::words(hand.direction);
    let whole = format!("{words} {angle}");
    let width = |words: &str| width_px(words, size, false);
    let outside = vane.outside(hand.step, unit);
    // Off the page, the ring gives way to the mark itself.
    let from = if page.grown(-4.0).holds(outside) { outside } else { hand.end };
    let wish = Wish {
        from,
        outward: hand.step,
        one_line: [width(&whole), size * (ABOVE + super::lettering::BELOW)],
        two_lines: [width(words).max(width(&angle)), size * (ABOVE + super::lettering::BELOW + LINE)],
    };
    let Some(Placed { area, lines, leader }) = room.place(&wish) else { return (Vec::new(), None) };
    let role = Role::Label(hand.direction);
    let center = area.center()[0];
    let line = |words: String, row: f64| {
        let at = [center, area.top + (ABOVE + LINE * row) * size];
        (role, Text { words, at, anchor: Anchor::Middle, size_px: size, strong: false })
    };
    let texts = if lines == 1 { vec![line(whole, 0.0)] } else { vec![line(words.to_string(), 0.0), line(angle, 1.0)] };
    // From the mark straight out to the ring, so that each hand can be read on the dial, then to the label.
    let mut path = vec![hand.end];
    if from != hand.end {
        path = vec![[hand.end[0] + hand.step[0] * 8.0 * unit, hand.end[1] + hand.step[1] * 8.0 * unit], from];
    }
    path.extend(leader.map(|[_, end]| end));
    (texts, (path.len() > 1).then_some((Role::Leader(hand.direction), path)))
}
