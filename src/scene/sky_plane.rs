//! How does the sky around the nucleus look: directions, tails, sunward half, scale?
//!
//! Painting order: ground or dust picture, hatch of the sunward half, what [`super::tail_plane`] lays under the ring,
//! ring, wedge, hands, nucleus, marks, leaders, notes, labels, letters, numbers. The ring keeps its size on the
//! page at every zoom: it shows directions, not distances. Texts are placed by rank before anything is drawn: notes
//! keep to the edges, letters to the ring, labels of hands find room, labels of curves take what is left, numbers are
//! left out where anything else stands; then every curve makes room for every text.

use super::camera_field::{self, Frame};
use super::label::{Placed, Room, Wish};
use super::layer::TailLayers;
use super::lettering::{ABOVE, Anchor, BELOW, LINE, Rect, Text, width_px};
use super::note::{MARGIN, Notes};
use super::sheet::TowardSun;
use super::spot::PageCurve;
use super::vane::Vane;
use super::view::{Facing, SkyView};
use super::{Direction, Node, Point, Role, Scene, Shape, Slope, mark, quantity, spot, tail_plane};
use crate::camera::field::Field;
use crate::caution::Caution;
use crate::plan::Plan;
use crate::sky::Sky;

/// Order of labels: the first keep the better places.
const RANK: [Direction; 6] = [
    Direction::Antisolar,
    Direction::IonAxis,
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
    /// Where the direction lies almost along the line of sight.
    uncertainty_deg: Option<f64>,
    /// The directions that a wedge spans, in words.
    range: Option<String>,
    /// Unit step away from the nucleus.
    step: Point,
    /// Centre of the end mark.
    end: Point,
}

/// The drawing of `sky` with its `tails` for the comet of `plan`, as `view` asks.
pub fn compose(plan: &Plan, sky: &Sky, tails: &TailLayers, view: &SkyView) -> Scene {
    let mut scene = Scene::new(view.width_px, view.height_px);
    let facing = view.facing(sky);
    let vane = Vane::of(&scene, &facing);
    let page = page(&scene);
    let toward_sun = toward_sun(sky, tails, &facing, &page, scene.unit_px);
    let field = plan.camera.as_ref().and_then(|camera| Field::of(camera, &sky.axes.sight));
    let frame = field.as_ref().and_then(|field| Frame::of(field, &sky.axes, &facing, &page, scene.unit_px));
    let mut legend = tail_plane::legend(tails, &toward_sun);
    legend.extend(plan.camera.iter().map(|camera| camera_field::legend(camera, field.as_ref())));
    let notes = Notes::of(&scene, plan, sky, view, &facing, &legend);
    let hands = if vane.is_in_sight(&scene) { hands(sky, tails, &facing, &vane) } else { Vec::new() };
    let mut curves = tail_plane::curves(tails, &facing, &page);
    tail_plane::part(&mut curves, vane.center, vane.radius_px, scene.unit_px);
    let wedge_px = vane.radius_px * mark::reach(Direction::IonAxis);
    let wedge = tail_plane::wedge_ends(tails, &facing, vane.center, wedge_px);
    let lines = Lines { vane: &vane, hands: &hands, wedge: &wedge, curves: &curves, frame: frame.as_ref() };
    let writing = Writing::of(&scene, &facing, notes, &lines);

    if let Some(image) = &tails.picture {
        let node = Node { role: Role::DustPicture, shape: Shape::Image(image.clone()) };
        // A picture that covers the page spares the ground.
        if image.covers(scene.width_px, scene.height_px) {
            scene.nodes[0] = node;
        } else {
            scene.nodes.push(node);
        }
    }
    hatch_sunward_half(&mut scene, sky, &facing);
    tail_plane::draw(&mut scene, tails, toward_sun, &curves, &writing.areas());
    if let Some(frame) = &frame {
        frame.draw(&mut scene, &writing.areas());
    }
    if vane.is_in_sight(&scene) {
        vane.draw(&mut scene, &facing);
        tail_plane::draw_wedge(&mut scene, tails, &facing, vane.center, wedge_px);
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
    writing.draw(&mut scene);
    scene
}

fn page(scene: &Scene) -> Rect {
    Rect { left: 0.0, top: 0.0, right: scene.width_px, bottom: scene.height_px }
}

/// The dust of the sheet in the anti-tail sector; none where there is no such sector, or its layer is off.
fn toward_sun(sky: &Sky, tails: &TailLayers, facing: &Facing, page: &Rect, unit_px: f64) -> TowardSun {
    match (&tails.sheet, sunward_rad(sky)) {
        (Some(sheet), Some(sunward)) => {
            sheet.toward_sun(facing, sunward, tails.anti_tail_half_width_rad, page, unit_px)
        }
        _ => TowardSun::default(),
    }
}

/// The directions that exist for `sky`.
fn hands(sky: &Sky, tails: &TailLayers, facing: &Facing, vane: &Vane) -> Vec<Hand> {
    let angle = |direction| match direction {
        Direction::Antisolar => sky.antisolar_position_angle_rad,
        Direction::IonAxis => tail_plane::wedge_rad(tails).map(|(axis, _)| axis),
        Direction::Sunward => sunward_rad(sky),
        Direction::NegativeVelocity => sky.negative_velocity_position_angle_rad,
        Direction::SkyMotion => sky.motion_position_angle_rad,
        Direction::Zenith => sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad),
    };
    RANK.into_iter()
        .filter_map(|direction| {
            let position_angle_rad = angle(direction)?;
            let step = facing.direction(position_angle_rad);
            Some(Hand {
                direction,
                position_angle_rad,
                uncertainty_deg: uncertainty_deg(sky, direction),
                range: match direction {
                    Direction::IonAxis => {
                        tail_plane::wedge_rad(tails).map(|(axis, reach)| tail_plane::wedge_range(axis, reach))
                    }
                    _ => None,
                },
                step,
                end: vane.point(step, mark::reach(direction)),
            })
        })
        .collect()
}

/// How loose a position angle is, where the sky cautions about it and a drawing can show it.
fn uncertainty_deg(sky: &Sky, direction: Direction) -> Option<f64> {
    let named = match direction {
        Direction::Antisolar | Direction::Sunward => "antisolar direction",
        Direction::NegativeVelocity => "negative velocity",
        Direction::IonAxis | Direction::SkyMotion | Direction::Zenith => return None,
    };
    sky.cautions.iter().find_map(|caution| match caution {
        Caution::AngleLoose { quantity, uncertainty_deg } if *quantity == named && *uncertainty_deg >= 0.1 => {
            Some(uncertainty_deg.min(180.0))
        }
        _ => None,
    })
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
        let gap_px = HATCH_GAP * scene.unit_px;
        scene.add(Role::SunwardHalf, Shape::Hatch { outlines: vec![outline], gap_px, slope: Slope::Rising });
    }
    if edge.len() == 2 {
        scene.add(Role::SunwardEdge, Shape::Polyline(edge));
    }
}

/// What texts belong to, and keep clear of.
struct Lines<'a> {
    vane: &'a Vane,
    hands: &'a [Hand],
    /// Where the edges of the ion wedge end.
    wedge: &'a [Point],
    curves: &'a [PageCurve],
    frame: Option<&'a Frame>,
}

/// Every text of a drawing, placed, and the leaders of labels.
struct Writing {
    notes: Notes,
    leaders: Vec<(Role, Vec<Point>)>,
    /// Labels of hands and curves, letters, numbers.
    texts: Vec<(Role, Text)>,
}

impl Writing {
    fn of(scene: &Scene, facing: &Facing, notes: Notes, lines: &Lines) -> Self {
        let Lines { vane, hands, wedge, curves, frame } = *lines;
        let unit = scene.unit_px;
        let page = page(scene);
        let mut room = Room::new(page.grown(-0.5 * MARGIN * unit), vane.center, vane.radius_px, unit);
        room.taken.extend(notes.areas());
        room.taken.extend(frame.iter().flat_map(|frame| frame.areas(unit)));
        let in_sight = vane.is_in_sight(scene);
        let letters: Vec<Text> = if in_sight { vane.letters(scene, facing) } else { Vec::new() };
        let free = |letter: &Text| {
            page.contains(&letter.area()) && !room.taken.iter().any(|area| area.overlaps(&letter.area()))
        };
        let letters: Vec<Text> = letters.into_iter().filter(free).collect();
        room.taken.extend(letters.iter().map(Text::area));
        room.taken.extend(hands.iter().map(|hand| mark::area(hand.end, unit)));
        room.taken.push(Rect::around(vane.center, 8.0 * unit, 8.0 * unit));
        room.hands.extend(hands.iter().map(|hand| [vane.center, hand.end]));
        room.hands.extend(wedge.iter().map(|&edge| [vane.center, edge]));

        let mut writing = Writing { notes, leaders: Vec::new(), texts: Vec::new() };
        // A direction whose mark is off the page keeps its place in the table only.
        let hands: Vec<&Hand> = hands.iter().filter(|hand| page.grown(-4.0).holds(hand.end)).collect();
        let wishes: Vec<Wish> = hands.iter().map(|hand| wish(hand, vane, &page, unit)).collect();
        let placed = room.place(&wishes);
        for ((hand, wish), placed) in hands.iter().zip(&wishes).zip(placed) {
            let Some(placed) = placed else { continue };
            writing.texts.extend(lines_of(hand, &placed, unit));
            let leader = leader(hand, wish, &placed, unit);
            writing.leaders.extend(leader.map(|line| (Role::Leader(hand.direction), line)));
        }
        let label = frame.and_then(|frame| frame.label(&mut room));
        writing.texts.extend(label.map(|text| (Role::CameraLabel, text)));
        let spots = spot::find(&mut room, curves);
        writing.texts.extend(tail_plane::labels(curves, &spots, unit));
        writing.texts.extend(letters.into_iter().map(|letter| (Role::Cardinal, letter)));
        let numbers: Vec<Text> = if in_sight { vane.numbers(scene, facing) } else { Vec::new() };
        for number in numbers {
            let area = number.area().grown(2.0 * unit);
            let lines = writing.leaders.iter().flat_map(|(_, line)| line.windows(2));
            let crossed = lines.into_iter().any(|ends| area.cuts(ends[0], ends[1]));
            if page.contains(&area) && !crossed && !room.taken.iter().any(|taken| taken.overlaps(&area)) {
                writing.texts.push((Role::DialNumber, number));
            }
        }
        writing
    }

    /// The boxes that lines keep clear of.
    fn areas(&self) -> Vec<Rect> {
        let texts = self.texts.iter().map(|(_, text)| text.area().grown(2.0));
        self.notes.areas().map(|area| area.grown(2.0)).chain(texts).collect()
    }

    fn draw(self, scene: &mut Scene) {
        self.notes.draw(scene);
        for (role, line) in self.leaders {
            scene.add(role, Shape::Polyline(line));
        }
        for (role, text) in self.texts {
            scene.add(role, Shape::Text(text));
        }
    }
}

/// The label of a hand on one line, and in two parts.
fn words(hand: &Hand) -> (String, [String; 2]) {
    let name = mark::words(hand.direction);
    if let Some(range) = &hand.range {
        let named = format!("{name} {}", quantity::whole_position_angle(hand.position_angle_rad));
        return (format!("{named} ({range})"), [named, range.clone()]);
    }
    let mut angle = quantity::position_angle(hand.position_angle_rad);
    if let Some(uncertainty_deg) = hand.uncertainty_deg {
        let decimals = if uncertainty_deg < 0.95 { 1 } else { 0 };
        angle.push_str(&format!("\u{a0}±\u{a0}{uncertainty_deg:.decimals$}°"));
    }
    (format!("{name} {angle}"), [name.to_string(), angle])
}

/// The room that a hand's label asks for, and where its leader starts.
fn wish(hand: &Hand, vane: &Vane, page: &Rect, unit: f64) -> Wish {
    let size = LABEL_SIZE * unit;
    let (whole, parts) = words(hand);
    let width = |words: &str| width_px(words, size, false);
    let outside = vane.outside(hand.step, unit);
    // Where the ring is off the page there, the leader starts at the mark itself.
    let from = if page.grown(-4.0).holds(outside) { outside } else { hand.end };
    Wish {
        from,
        outward: hand.step,
        one_line: [width(&whole), size * (ABOVE + BELOW)],
        two_lines: [width(&parts[0]).max(width(&parts[1])), size * (ABOVE + BELOW + LINE)],
    }
}

/// The texts of a placed label.
fn lines_of(hand: &Hand, placed: &Placed, unit: f64) -> Vec<(Role, Text)> {
    let size = LABEL_SIZE * unit;
    let (whole, parts) = words(hand);
    let rows = if placed.lines == 1 { vec![whole] } else { parts.to_vec() };
    rows.into_iter()
        .enumerate()
        .map(|(row, words)| {
            let at = [placed.area.center()[0], placed.area.top + (ABOVE + LINE * row as f64) * size];
            (Role::Label(hand.direction), Text { words, at, anchor: Anchor::Middle, size_px: size, strong: false })
        })
        .collect()
}

/// From the mark straight out across the ring, so that the hand can be read on the dial, then to the label.
fn leader(hand: &Hand, wish: &Wish, placed: &Placed, unit: f64) -> Option<Vec<Point>> {
    let to_label = placed.leader.map(|[_, end]| end);
    if wish.from == hand.end || hand.direction == Direction::Sunward {
        return to_label.map(|end| vec![wish.from, end]);
    }
    let start = 8.0 * unit;
    let mut line = vec![[hand.end[0] + hand.step[0] * start, hand.end[1] + hand.step[1] * start], wish.from];
    line.extend(to_label);
    Some(line)
}
