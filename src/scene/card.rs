//! What goes out to the telescope on one sheet?
//!
//! The field card: the sky as the camera sees it, then in words when, who, with what, where each direction lies on the sky
//! and on the chip, and what to mind. Its proportions fit both A4 and letter paper. Long text is wrapped, and what does not
//! fit is said to be left out: nothing runs off the sheet.

use super::camera_words::{self, Line};
use super::lettering::{Anchor, LINE, Text, wrapped};
use super::{Role, Scene, Shape};
use crate::body::observer::Observer;
use crate::camera::field::Field;
use crate::caution::{Caution, Weight};
use crate::plan::Plan;
use crate::sky::Sky;
use crate::tail::ion::Wedge;

/// Size of a card: inside the printable area of A4 and of letter paper, 96 pixels to the inch.
pub const SIZE_PX: [f64; 2] = [700.0, 940.0];
/// Height of the drawing at its top.
pub const DRAWING_PX: [f64; 2] = [700.0, 440.0];

const MARGIN: f64 = 14.0;
const SIZE: f64 = 10.5;
const NAMES_WIDTH: f64 = 130.0;
const ENTRY_GAP: f64 = 2.0;

/// All that a card says beside its drawing.
pub struct Card<'a> {
    pub plan: &'a Plan,
    pub sky: &'a Sky,
    pub ion: &'a Wedge,
    pub cautions: &'a [Caution],
    pub headline: &'a str,
    pub when_up: Option<&'a str>,
}

/// The card, with `drawing` (of [`DRAWING_PX`]) at its top.
pub fn compose(card: &Card, drawing: Scene) -> Scene {
    let [width_px, height_px] = SIZE_PX;
    let mut scene = Scene { width_px, height_px, unit_px: drawing.unit_px, nodes: drawing.nodes };
    // The empty sheet under all, and over whatever of the drawing reaches below its edge.
    scene.nodes.insert(0, super::Node { role: Role::Ground, shape: Shape::Fill });
    let top = DRAWING_PX[1];
    let below = vec![[0.0, top], [width_px, top], [width_px, height_px], [0.0, height_px]];
    scene.add(Role::Ground, Shape::Polygon(below));
    let mut pen = Pen { scene, y: top };
    pen.rule();
    for (words, strong) in heading(card) {
        pen.paragraph(&words, strong);
    }
    // Danger first: it is never what does not fit.
    for caution in card.cautions.iter().filter(|caution| caution.weight() == Weight::Danger) {
        pen.paragraph(&caution.sentence(), true);
    }
    let field = card.plan.camera.as_ref().and_then(|camera| Field::of(camera, &card.sky.axes.sight));
    if let (Some(camera), Some(field)) = (&card.plan.camera, &field) {
        pen.rule();
        let name = if camera.name.is_empty() { "own camera" } else { &camera.name };
        pen.entry(&("Camera", format!("{name}, {} × {} pixels", camera.pixels_wide, camera.pixels_high)));
        camera_words::standing(camera, field).iter().for_each(|line| pen.entry(line));
        pen.rule();
        camera_words::directions(field, card.sky, card.ion).iter().for_each(|line| pen.entry(line));
    } else {
        pen.rule();
        pen.paragraph("No camera, so directions are given on the sky only.", false);
    }
    pen.rule();
    for caution in card.cautions.iter().filter(|caution| caution.weight() != Weight::Danger) {
        pen.paragraph(&caution.sentence(), false);
    }
    pen.paragraph(
        "Position angles are J2000, north through east. The picture is a model, relative. A direction is a prediction for gas or \
         dust that leaves as assumed; it is not an observation.",
        false,
    );
    pen.scene
}

/// Who and when: comet, time in both forms, observer, headline, when the comet is up.
fn heading(card: &Card) -> Vec<(String, bool)> {
    let time = card.sky.time;
    let iso = time.utc_iso_ms().replace(".000Z", "Z");
    let site = match &card.plan.observer {
        Observer::Geocentre => "seen from the centre of the Earth".to_owned(),
        Observer::Site(site) => format!(
            "{}, longitude {}°, latitude {}°, {} m",
            if site.name.is_empty() { "own site" } else { &site.name },
            site.longitude_deg,
            site.latitude_deg,
            site.height_m
        ),
    };
    let altitude = card.sky.site.as_ref().map_or_else(String::new, |site| {
        format!("; altitude {:.0}°, Sun at {:.0}°", site.altitude_rad.to_degrees(), site.sun_altitude_rad.to_degrees())
            .replace('-', "−")
    });
    let mut lines = vec![
        (format!("{} · {} · {iso}", card.plan.comet.name, time.ut_decimal_day(2)), true),
        (format!("{site}{altitude}."), false),
        (card.headline.to_owned(), false),
    ];
    lines.extend(card.when_up.map(|words| (words.to_owned(), false)));
    lines
}

/// Writes down the sheet, line by line.
struct Pen {
    scene: Scene,
    y: f64,
}

impl Pen {
    fn rule(&mut self) {
        let y = self.y + 5.0;
        let right = self.scene.width_px - MARGIN;
        self.scene.add(Role::CardRule, Shape::Polyline(vec![[MARGIN, y], [right, y]]));
        self.y += 7.0;
    }

    fn paragraph(&mut self, words: &str, strong: bool) {
        self.block(words, MARGIN, strong);
        self.y += ENTRY_GAP;
    }

    /// A name, and beside it what there is to say.
    fn entry(&mut self, (name, words): &Line) {
        let from = self.y;
        self.block(name, MARGIN, true);
        self.y = from;
        self.block(words, MARGIN + NAMES_WIDTH, false);
        self.y += ENTRY_GAP;
    }

    fn block(&mut self, words: &str, left: f64, strong: bool) {
        for line in wrapped(words, self.scene.width_px - MARGIN - left, SIZE, strong) {
            self.y += LINE * SIZE;
            if self.y > self.scene.height_px - 0.5 * MARGIN {
                self.end();
                return;
            }
            let text = Text { words: line, at: [left, self.y], anchor: Anchor::Start, size_px: SIZE, strong };
            self.scene.add(Role::CardText, Shape::Text(text));
        }
    }

    /// The sheet is full: its last line gives way to a note that says so.
    fn end(&mut self) {
        const FULL: &str = "More did not fit: see the page.";
        let is_text = |node: &super::Node| matches!(&node.shape, Shape::Text(text) if text.words == FULL);
        if self.scene.nodes.iter().any(is_text) {
            return;
        }
        let floor = self.scene.height_px - 0.5 * MARGIN - LINE * SIZE;
        self.scene.nodes.retain(|node| {
            !(node.role == Role::CardText && matches!(&node.shape, Shape::Text(text) if text.at[1] > floor))
        });
        let at = [MARGIN, self.scene.height_px - 0.5 * MARGIN];
        let text = Text { words: FULL.to_owned(), at, anchor: Anchor::Start, size_px: SIZE, strong: true };
        self.scene.add(Role::CardText, Shape::Text(text));
    }
}
