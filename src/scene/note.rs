//! What is written at the edges of a sky drawing?
//!
//! Upper left: whose sky it is, and what is absent. Upper right: the field. Lower left: the scale bar, in
//! arc units and in km at the comet. Lower right: what is up. Notes keep to the edges, so labels and
//! letters give way to them.

use super::lettering::{ABOVE, Anchor, BELOW, LINE, Rect, Text, width_px, wrapped};
use super::quantity;
use super::view::{Facing, SkyView, Up};
use super::{Point, Role, Scene, Shape};
use crate::body::observer::Observer;
use crate::plan::Plan;
use crate::sky::Sky;

const TITLE_SIZE: f64 = 13.0;
const SIZE: f64 = 12.0;
/// From the edge of the drawing to its notes, in drawing units.
pub const MARGIN: f64 = 12.0;
/// Longest line of a caution, in drawing units.
const LONGEST: f64 = 460.0;
/// Most lines a long comet name takes.
const TITLE_LINES: usize = 2;

/// The texts at the edges and the scale bar, placed.
pub struct Notes {
    pub texts: Vec<(Role, Text)>,
    pub bar: Vec<Vec<Point>>,
}

impl Notes {
    /// `legend` says what else is drawn, a line each.
    pub fn of(scene: &Scene, plan: &Plan, sky: &Sky, view: &SkyView, facing: &Facing, legend: &[String]) -> Self {
        let mut notes = Notes { texts: Vec::new(), bar: Vec::new() };
        notes.write_top(scene, plan, sky, view, legend);
        notes.write_bottom(scene, sky, view, facing);
        notes
    }

    /// The boxes that labels keep clear of.
    pub fn areas(&self) -> impl Iterator<Item = Rect> {
        let bars = self.bar.iter().flatten().map(|&end| Rect::around(end, 2.0, 2.0));
        self.texts.iter().map(|(_, text)| text.area()).chain(bars)
    }

    /// Draws the bar and writes the texts.
    pub fn draw(self, scene: &mut Scene) {
        for line in self.bar {
            scene.add(Role::ScaleBar, Shape::Polyline(line));
        }
        for (role, text) in self.texts {
            scene.add(role, Shape::Text(text));
        }
    }

    fn write_top(&mut self, scene: &Scene, plan: &Plan, sky: &Sky, view: &SkyView, legend: &[String]) {
        let unit = scene.unit_px;
        let (margin, size, title_size) = (MARGIN * unit, SIZE * unit, TITLE_SIZE * unit);
        let [across, down] = view.field_rad();
        let field = format!("field {} × {}", quantity::arc(across), quantity::arc(down));
        let at = [scene.width_px - margin, margin + ABOVE * title_size];
        let field = Text { words: field, at, anchor: Anchor::End, size_px: size, strong: false };

        let mut corner = vec![field];
        if sky.antisolar_position_angle_rad.is_some() {
            let at = [at[0], at[1] + LINE * size];
            corner.push(Text { words: "hatched: sunward half".to_string(), at, ..corner[0].clone() });
        }
        for words in legend {
            let at = [at[0], at[1] + LINE * size * corner.len() as f64];
            corner.push(Text { words: words.clone(), at, ..corner[0].clone() });
        }
        let corner_left = corner.iter().map(|text| text.area().left).fold(scene.width_px, f64::min);
        let title_limit = corner_left - 2.0 * margin;
        let below_corner = margin + ABOVE * title_size + LINE * size * corner.len() as f64;
        self.texts.extend(corner.into_iter().map(|text| (Role::Note, text)));

        let mut lines = wrapped(&plan.comet.name, title_limit, title_size, true);
        if lines.len() > TITLE_LINES {
            lines.truncate(TITLE_LINES);
            lines[TITLE_LINES - 1].push('…');
        }
        let mut baseline = margin + ABOVE * title_size;
        for words in lines {
            let words = shortened(words, title_limit, title_size);
            self.put(Role::Title, words, [margin, baseline], title_size, true);
            baseline += LINE * title_size;
        }
        // On a narrow page these lines stay left of the dial's uppermost letter.
        let short = (scene.width_px / 2.0 - margin - 14.0 * unit).max(0.0);
        for words in wrapped(&when_and_where(plan, sky), short, size, false) {
            self.put(Role::Note, words, [margin, baseline], size, false);
            baseline += LINE * size;
        }

        let limit = (LONGEST * unit).min(scene.width_px - 2.0 * margin);
        // Where a long line would reach under the corner, it stands below it.
        if margin + limit > corner_left - margin {
            baseline = baseline.max(below_corner);
        }
        for (role, words) in absences(sky, view) {
            for line in wrapped(&words, limit, size, false) {
                self.put(role, line, [margin, baseline], size, false);
                baseline += LINE * size;
            }
        }
    }

    fn write_bottom(&mut self, scene: &Scene, sky: &Sky, view: &SkyView, facing: &Facing) {
        let unit = scene.unit_px;
        let (margin, size) = (MARGIN * unit, SIZE * unit);
        let foot = scene.height_px - margin;
        let baseline = foot - BELOW * size - 8.0 * unit;
        let longest_px = (0.16 * scene.width_px).clamp(84.0, 220.0);
        let to_px = |angle_rad: f64| libm::tan(angle_rad) / view.pixel_scale_rad;
        if let Some(arc) = quantity::round_arcs().rev().find(|arc| to_px(arc.angle_rad) <= longest_px) {
            let km = sky.observer_distance_au * quantity::KM_PER_AU * libm::tan(arc.angle_rad);
            let words = format!("{} = {} at the comet", arc.words, quantity::length(km));
            self.put(Role::Note, words, [margin, baseline], size, false);
            let (left, right, half) = (margin, margin + to_px(arc.angle_rad), 3.5 * unit);
            let level = foot - half;
            self.bar.push(vec![[left, level], [right, level]]);
            self.bar.push(vec![[left, level - half], [left, level + half]]);
            self.bar.push(vec![[right, level - half], [right, level + half]]);
        }
        let words = match (view.up, zenith_angle(sky)) {
            (Up::Zenith, Some(_)) => {
                format!("zenith up, at {}", quantity::position_angle(facing.up_position_angle_rad))
            }
            (Up::Zenith, None) => "no zenith here: north up, east left".to_string(),
            (Up::Camera { mirrored, .. }, _) => {
                let up = quantity::position_angle(facing.up_position_angle_rad);
                format!("camera up, at {up}{}", if mirrored { ", mirror-reversed" } else { "" })
            }
            (Up::North, _) => "north up, east left".to_string(),
        };
        let at = [scene.width_px - margin, foot - BELOW * size];
        let mut text = Text { words, at, anchor: Anchor::End, size_px: size, strong: false };
        while self.areas().any(|area| area.overlaps(&text.area().grown(3.0))) && text.at[1] > 0.0 {
            text.at[1] -= LINE * size;
        }
        self.texts.push((Role::Note, text));
    }

    fn put(&mut self, role: Role, words: String, at: Point, size_px: f64, strong: bool) {
        self.texts.push((role, Text { words, at, anchor: Anchor::Start, size_px, strong }));
    }
}

/// A line cut to a width, with an ellipsis where letters are lost.
pub fn shortened(words: String, limit_px: f64, size_px: f64) -> String {
    if width_px(&words, size_px, true) <= limit_px {
        return words;
    }
    let mut kept: Vec<char> = words.chars().collect();
    while !kept.is_empty() {
        kept.pop();
        let line = format!("{}…", kept.iter().collect::<String>().trim_end());
        if width_px(&line, size_px, true) <= limit_px {
            return line;
        }
    }
    String::new()
}

/// Time and observer of a sky.
fn when_and_where(plan: &Plan, sky: &Sky) -> String {
    let time = sky.time.utc_minute();
    match &plan.observer {
        Observer::Geocentre => format!("{time}, geocentre"),
        Observer::Site(site) if site.name.is_empty() => format!("{time}, own site"),
        Observer::Site(site) => format!("{time}, {}", site.name),
    }
}

fn zenith_angle(sky: &Sky) -> Option<f64> {
    sky.site.as_ref().and_then(|site| site.zenith_position_angle_rad)
}

/// What a person would look for in the drawing and not find, each with its reason.
fn absences(sky: &Sky, view: &SkyView) -> Vec<(Role, String)> {
    let mut found = Vec::new();
    let mut note = |absent: bool, words: &str| {
        if absent {
            found.push((Role::Caution, words.to_string()));
        }
    };
    note(sky.antisolar_position_angle_rad.is_none(), "no antisolar direction: comet, Sun and observer in line");
    note(
        sky.negative_velocity_position_angle_rad.is_none(),
        "no negative velocity direction: it lies along the line of sight",
    );
    note(sky.motion_position_angle_rad.is_none(), "no sky motion: the comet stands still");
    note(sky.site.is_some() && zenith_angle(sky).is_none(), "no zenith direction: comet in the zenith or nadir");
    if let Some(side) = side_of_nucleus(view) {
        found.push((Role::Note, format!("the nucleus lies outside the drawing, {side}")));
    }
    found
}

/// Where the nucleus lies when it is not on the page.
fn side_of_nucleus(view: &SkyView) -> Option<String> {
    let [x, y] = view.nucleus();
    let side = if x < 0.0 {
        "left"
    } else if x > view.width_px {
        "right"
    } else {
        ""
    };
    let level = if y < 0.0 {
        "above"
    } else if y > view.height_px {
        "below"
    } else {
        ""
    };
    match (level, side) {
        ("", "") => None,
        ("", side) => Some(format!("to the {side}")),
        (level, "") => Some(level.to_string()),
        (level, side) => Some(format!("{level} and to the {side}")),
    }
}
