//! What does a stretch of time look like, so that the track of the time control shows what one scrubs through?
//!
//! From top to bottom: the events in words with leaders to their marks, the curves, the lanes (dust toward the Sun, dark
//! hours, nearness to the Sun), the dates. Each curve has a line pattern, an end label with its scale, and its own
//! scale unless it is compared with another. On a wide ribbon the labels stand beside the curves and lanes, on a
//! narrow one in rows of their own; no label lies on a curve or a band.
//!
//! [`compose`] draws what stays while one scrubs, [`Ribbon::handle`] the present time on it: the page keeps the first
//! on a canvas and repaints only the second.
//!
//! - [`scale`]: which values lie where. [`dates`]: ticks. [`flag`]: names of events. [`lane`]: bands.
//! - [`ending`]: names of curves. [`under`]: what lies under the pointer, in words.

pub mod dates;
mod ending;
pub mod flag;
mod frame;
pub mod lane;
pub mod scale;
pub mod under;

use super::{Point, Role, Scene, Shape};
use crate::season::search::Season;
use crate::season::series::{Curve, Series};
use crate::season::stretch::Stretch;
use crate::time::Instant;
use frame::Frame;
use scale::Scale;

/// A night's dark time with the comet up.
#[derive(Clone, Debug, PartialEq)]
pub struct DarkNight {
    /// Some moment of the night.
    pub middle: Instant,
    /// In order of time; none where the comet stays down or the sky bright.
    pub windows: Vec<[Instant; 2]>,
}

/// What is drawn.
#[derive(Clone, Copy, Debug)]
pub struct Strip<'a> {
    pub stretch: Stretch,
    /// Curves over this stretch, in the order in which they are drawn.
    pub series: &'a Series,
    /// What was found, of this stretch or a longer one.
    pub season: &'a Season,
    /// The nights of this stretch; None for the geocentre, which has none.
    pub nights: Option<&'a [DarkNight]>,
}

/// A ribbon, drawn but for its handle.
#[derive(Clone, Debug, PartialEq)]
pub struct Ribbon {
    pub scene: Scene,
    frame: Frame,
    stretch: Stretch,
    scales: Vec<(Curve, Scale)>,
}

/// Letters and lines grow gently with the width.
fn unit_px(width_px: f64) -> f64 {
    (0.9 + 0.1 * width_px / 1300.0).clamp(1.0, 1.25)
}

/// The height at which a ribbon of this width shows everything.
pub fn natural_height_px(strip: &Strip, width_px: f64) -> f64 {
    Frame::natural_height_px(strip, width_px, unit_px(width_px))
}

/// Draws a strip over a width and height, all but the present time.
pub fn compose(strip: &Strip, width_px: f64, height_px: f64) -> Ribbon {
    let mut series = strip.series.clone();
    scale::brought_near(&mut series.columns);
    let scales: Vec<(Curve, Scale)> =
        series.columns.iter().map(|column| (column.curve, Scale::of(column.curve, &series.columns))).collect();
    let unit = unit_px(width_px);
    let frame = Frame::of(strip, &scales, width_px, height_px, unit);
    let mut scene = Scene::new(width_px, height_px);
    scene.unit_px = unit;
    let mut ribbon = Ribbon { scene, frame, stretch: strip.stretch, scales };
    ribbon.draw_frame();
    lane::draw(&mut ribbon, strip);
    ribbon.draw_dates();
    flag::draw(&mut ribbon, strip);
    ribbon.draw_curves(&series);
    ending::draw(&mut ribbon, &series);
    ribbon
}

impl Ribbon {
    /// The span of the track: the x of the first and the last moment, and the y of its head and foot. The track is
    /// what one drags along.
    pub fn track_px(&self) -> [f64; 4] {
        let plot = &self.frame.plot;
        [plot.left, plot.right, plot.top, self.frame.foot]
    }

    /// Where a time stands, within the stretch or beyond.
    pub fn x_of(&self, time: Instant) -> f64 {
        let plot = &self.frame.plot;
        let share = (time.tdb_days() - self.stretch.from().tdb_days()) / self.stretch.days();
        plot.left + share * plot.width()
    }

    /// The time that stands at `x`, kept within the stretch.
    pub fn time_at(&self, x_px: f64) -> Instant {
        let plot = &self.frame.plot;
        let share = ((x_px - plot.left) / plot.width()).clamp(0.0, 1.0);
        self.stretch.from().plus_days(share * self.stretch.days())
    }

    /// The mark of the present time, to be painted over the ribbon; `pointer_x` adds a thin line under the pointer.
    /// Nothing but the line where the time lies outside the stretch.
    pub fn handle(&self, time: Instant, pointer_x: Option<f64>) -> Scene {
        let Scene { width_px, height_px, unit_px, .. } = self.scene;
        let mut scene = Scene { width_px, height_px, unit_px, nodes: Vec::new() };
        let plot = &self.frame.plot;
        if let Some(x) = pointer_x.filter(|x| (plot.left..=plot.right).contains(x)) {
            scene.add(Role::Guide, Shape::Polyline(vec![[x, plot.top], [x, self.frame.foot]]));
        }
        let x = self.x_of(time);
        // A time typed or scrubbed to an end is rounded to a second.
        if (plot.left - 0.5..=plot.right + 0.5).contains(&x) {
            scene.add(Role::Handle, Shape::Polyline(vec![[x, plot.top], [x, self.frame.foot]]));
            let (half, tall) = (5.0 * unit_px, 9.0 * unit_px);
            let top = plot.bottom - 2.0 * tall - 2.0 * unit_px;
            let corner = |side: f64, down: f64| [x + side * half, top + down];
            let grip = vec![corner(-1.0, 0.0), corner(1.0, 0.0), corner(1.0, 2.0 * tall), corner(-1.0, 2.0 * tall)];
            scene.add(Role::HandleGrip, Shape::Polygon(grip));
            let ridge = |side: f64| vec![[x + side, top + 0.6 * tall], [x + side, top + 1.4 * tall]];
            scene.add(Role::HandleRidge, Shape::Lines(vec![ridge(-1.6 * unit_px), ridge(1.6 * unit_px)]));
        }
        scene
    }

    /// The whole picture with the present time on it.
    pub fn with_handle(&self, time: Instant) -> Scene {
        let mut scene = self.scene.clone();
        scene.nodes.extend(self.handle(time, None).nodes);
        scene
    }

    fn place(&self, curve: Curve, time: Instant, value: f64) -> Option<Point> {
        let scale = self.scales.iter().find(|(known, _)| *known == curve)?.1;
        let plot = &self.frame.plot;
        let share = scale.share(curve, value);
        share.is_finite().then(|| [self.x_of(time), plot.bottom - share * plot.height()])
    }

    /// Edges of the plot, its zero line, and the numbers of the first curve's scale.
    fn draw_frame(&mut self) {
        let Frame { plot, size_px, .. } = self.frame;
        let level = |y: f64| vec![[plot.left, y], [plot.right, y]];
        self.scene.add(Role::TrackEdge, Shape::Lines(vec![level(plot.top), level(plot.bottom)]));
        let Some(&(first, scale)) = self.scales.first() else { return };
        if !scale.has_values() {
            return;
        }
        if first == Curve::OrbitPlane && scale.has_zero_in_the_middle() {
            self.scene.add(Role::TrackZero, Shape::Polyline(level(0.5 * (plot.top + plot.bottom))));
        }
        let numbers = scale.numbers(first);
        let size_px = 0.92 * size_px;
        for (words, at) in numbers.into_iter().zip([0.0, 0.5, 1.0]) {
            // The ends stand inside the edges, so that they meet neither lanes nor events.
            let shift = (0.5 - at) * 0.9 * size_px;
            let middle = plot.bottom - at * plot.height() - shift;
            let center = [plot.left - 11.0 * self.scene.unit_px, middle];
            if at == 0.5 && plot.height() < 3.4 * size_px {
                continue;
            }
            let text = frame::from_right(words, center, size_px);
            self.scene.add(Role::CurveNumber(first), Shape::Text(text));
        }
    }

    fn draw_dates(&mut self) {
        let Frame { plot, size_px, foot, dates, .. } = self.frame;
        if !dates {
            return;
        }
        let unit = self.scene.unit_px;
        let ticks = dates::ticks(self.stretch.from(), self.stretch.to(), plot.width(), size_px);
        let (mut short, mut long) = (Vec::new(), Vec::new());
        let mut names = Vec::new();
        for tick in ticks {
            let x = self.x_of(Instant::from_tdb_days(tick.days));
            if tick.words.is_empty() {
                short.push(vec![[x, foot], [x, foot + 4.0 * unit]]);
            } else {
                long.push(vec![[x, foot], [x, foot + 7.0 * unit]]);
                names.push(frame::from_left(tick.words, [x + 0.3 * size_px, foot + 0.95 * size_px], size_px));
            }
        }
        self.scene.add(Role::TickShort, Shape::Lines(short));
        self.scene.add(Role::TickLong, Shape::Lines(long));
        for name in names {
            self.scene.add(Role::Note, Shape::Text(name));
        }
    }

    /// The curves, the first on top.
    fn draw_curves(&mut self, series: &Series) {
        for column in series.columns.iter().rev() {
            let mut runs: Vec<Vec<Point>> = vec![Vec::new()];
            for (&time, &value) in series.times.iter().zip(&column.values) {
                match self.place(column.curve, time, value) {
                    Some(point) => runs.last_mut().expect("at least one run").push(point),
                    None => runs.push(Vec::new()),
                }
            }
            runs.retain(|run| run.len() > 1);
            self.scene.add(Role::SeasonCurve(column.curve), Shape::Lines(runs));
        }
    }
}
