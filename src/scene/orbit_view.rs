//! Why does the tail project as it does: where do Sun, observer, comet and dust stand to each other?
//!
//! Two small drawings of the same moment, each to scale. From the pole of the orbit plane, the side from which the comet
//! runs counter-clockwise, perihelion to the right of the Sun; the observer is projected onto the plane. Along the
//! orbit plane, so that the plane is a line and the line of sight lies in the page with its true angle. The dust is
//! that of [`super::sheet`]: in the plane, since it leaves without a speed of its own. The comet stands where its
//! light left it, the observer where it is now. Side by side where there is room, else one above the other.

use super::label::{Placed, Room, Wish};
use super::lettering::{ABOVE, Anchor, BELOW, LINE, Rect, Text, width_px, wrapped};
use super::panel::Panel;
use super::sheet::Sheet;
use super::{Direction, Family, Point, Role, Scene, Shape, mark, note, quantity};
use crate::frame::norm;
use crate::orbit::conic::SUN_GM_AU3_D2;
use crate::plan::Plan;
use crate::sky::Sky;
use crate::tail::grain::Vista;
use crate::tail::ion::Axis;
use nalgebra::Vector3;

/// Narrower than this, the drawings stand one above the other, in drawing units.
const SIDE_BY_SIDE: f64 = 560.0;
const LABEL_SIZE: f64 = 12.0;
const TITLE_SIZE: f64 = 13.0;
/// Between a drawing's edge and what its scale is fitted to, in drawing units.
const INSET: f64 = 52.0;
/// Length of the short hands at the comet, in drawing units, at most.
const HAND: f64 = 72.0;
/// Points of the orbit.
const ORBIT_STEPS: usize = 240;
/// The scale is fitted to dust no farther from the comet than this times the farther of Sun and observer.
const DUST_REACH: f64 = 0.6;

/// The comet, its Sun and its observer in axes of the orbit plane, au, and its dust.
struct Stage<'a> {
    vista: &'a Vista<'a>,
    /// Toward perihelion, a quarter turn on in the sense of motion, and the pole.
    axes: [Vector3<f64>; 3],
    sheet: Sheet,
    /// The ion tail's axis, a unit vector.
    ion: Vector3<f64>,
    from_plane_rad: f64,
}

/// A place that is named: where its leader starts, which way its label had better lie, and the words.
struct Name {
    from: Point,
    outward: Point,
    words: String,
    role: Role,
}

/// The drawing of a moment of the comet of `plan`.
pub fn compose(plan: &Plan, sky: &Sky, vista: &Vista, width_px: f64, height_px: f64) -> Scene {
    let mut scene = Scene::new(width_px, height_px);
    let unit = scene.unit_px;
    let margin = note::MARGIN * unit;
    let size_px = TITLE_SIZE * unit;
    let mut baseline = margin + ABOVE * size_px;
    for (role, words, strong) in
        [(Role::Title, plan.comet.name.clone(), true), (Role::Note, sky.time.utc_minute(), false)]
    {
        let words = note::shortened(words, width_px - 2.0 * margin, size_px);
        let at = [margin, baseline];
        scene.add(role, Shape::Text(Text { words, at, anchor: Anchor::Start, size_px, strong }));
        baseline += LINE * size_px;
    }
    let top = baseline - ABOVE * size_px + 4.0 * unit;
    let whole = Rect { left: 0.0, top, right: width_px, bottom: height_px };
    let stage = Stage::of(plan, sky, vista);
    let (first, second) = halves(&whole, width_px >= SIDE_BY_SIDE * unit);
    draw_from_pole(&mut scene, &stage, first);
    draw_along_plane(&mut scene, &stage, second);
    scene
}

fn halves(whole: &Rect, side_by_side: bool) -> (Rect, Rect) {
    let [x, y] = whole.center();
    if side_by_side {
        (Rect { right: x, ..*whole }, Rect { left: x, ..*whole })
    } else {
        // The drawing along the plane is wide and low.
        let y = y + 0.06 * whole.height();
        (Rect { bottom: y, ..*whole }, Rect { top: y, ..*whole })
    }
}

impl<'a> Stage<'a> {
    fn of(plan: &Plan, sky: &Sky, vista: &'a Vista<'a>) -> Self {
        let pole = vista.orbit.normal();
        let (r, v) = (vista.nucleus.position_au, vista.nucleus.velocity_au_d);
        // The eccentricity vector points at perihelion; a circle has none, and any direction serves.
        let eccentricity = v.cross(&r.cross(&v)) / SUN_GM_AU3_D2 - r.normalize();
        let toward = if eccentricity.norm() > 1e-6 { eccentricity } else { r };
        let toward = (toward - pole * toward.dot(&pole)).normalize();
        Stage {
            vista,
            axes: [toward, pole.cross(&toward), pole],
            sheet: Sheet::of(vista, &plan.tails),
            ion: Axis::of(vista, plan.tails.wind_axis_km_s).direction,
            from_plane_rad: sky.observer_from_orbit_plane_rad,
        }
    }

    fn comet(&self) -> Vector3<f64> {
        self.vista.nucleus.position_au
    }

    fn observer(&self) -> Vector3<f64> {
        self.vista.observer_au
    }

    /// Places of dust near enough to be worth the room.
    fn near_dust(&self) -> impl Iterator<Item = Vector3<f64>> + '_ {
        let reach = DUST_REACH * self.comet().norm().max((self.observer() - self.comet()).norm());
        self.sheet.places_au.iter().flatten().copied().filter(move |place| (place - self.comet()).norm() < reach)
    }

    /// Points of the orbit as far as `farthest_au` from the Sun, in the order of motion, in the plane's own axes.
    fn orbit(&self, farthest_au: f64) -> Vec<Point> {
        let (r, v) = (self.comet(), self.vista.nucleus.velocity_au_d);
        let parameter = r.cross(&v).norm_squared() / SUN_GM_AU3_D2;
        let e = (v.cross(&r.cross(&v)) / SUN_GM_AU3_D2 - r.normalize()).norm();
        // r = p / (1 + e cos nu) is the farthest allowed where cos nu is this.
        let limit = (parameter / farthest_au - 1.0) / e.max(1e-12);
        let last = if limit <= -1.0 { std::f64::consts::PI } else { libm::acos(limit.min(1.0)) };
        (0..=ORBIT_STEPS)
            .map(|i| {
                let anomaly = last * (2.0 * i as f64 / ORBIT_STEPS as f64 - 1.0);
                let (sine, cosine) = libm::sincos(anomaly);
                let distance = parameter / (1.0 + e * cosine);
                [distance * cosine, distance * sine]
            })
            .collect()
    }
}

/// The drawing from the pole.
fn draw_from_pole(scene: &mut Scene, stage: &Stage, area: Rect) {
    let unit = scene.unit_px;
    let flat = |place: Vector3<f64>| [place.dot(&stage.axes[0]), place.dot(&stage.axes[1])];
    let caption = "from the pole of the orbit plane";
    let mut fitted = vec![[0.0, 0.0], flat(stage.comet()), flat(stage.observer())];
    fitted.extend(stage.near_dust().map(flat));
    let panel = Panel::fitted(area, caption, &fitted, INSET * unit, unit);
    let page = |place: Vector3<f64>| panel.to_page(flat(place));
    let [sun, comet, observer] = [Vector3::zeros(), stage.comet(), stage.observer()].map(page);

    let sheet: Vec<Option<Point>> = stage.sheet.places_au.iter().map(|place| place.map(page)).collect();
    panel.fill(scene, Role::Sheet, stage.sheet.cells(&sheet));
    for line in few_syndynes(&stage.sheet, &sheet) {
        panel.line(scene, Role::SheetRim, &line);
    }
    let path: Vec<Point> = stage.orbit(panel.farthest_au()).into_iter().map(|p| panel.to_page(p)).collect();
    panel.line(scene, Role::OrbitPath, &path);
    panel.line(scene, Role::Guide, &[sun, comet]);
    let beyond = panel.beyond(observer, comet);
    panel.line(scene, Role::SightLine, &[observer, beyond]);
    let motion = unit_step(comet, page(stage.comet() + stage.vista.nucleus.velocity_au_d * 1e-3));
    arrow(scene, &path, comet, motion, unit);
    let hand_px = HAND.min(0.2 * area.width() / unit) * unit;
    let ends = [(Direction::Antisolar, stage.comet().normalize(), 1.0), (Direction::IonAxis, stage.ion, 0.72)].map(
        |(direction, along, share)| {
            let step = unit_step(comet, page(stage.comet() + along * 1e-3));
            let end = [comet[0] + step[0] * hand_px * share, comet[1] + step[1] * hand_px * share];
            panel.line(scene, Role::Hand(direction), &[comet, end]);
            mark::draw(scene, direction, end, step);
            (direction, step, end)
        },
    );
    places(scene, sun, comet, observer);

    let mut names = common_names(stage, sun, comet, observer);
    for (direction, step, end) in ends {
        names.push(Name {
            from: end,
            outward: step,
            words: mark::words(direction).into(),
            role: Role::Label(direction),
        });
    }
    names.extend(dust_name(&panel, &sheet, comet));
    let mut lines = vec![[observer, beyond], [sun, comet]];
    lines.extend(ends.map(|(_, _, end)| [comet, end]));
    lines.extend(path.windows(2).step_by(6).map(|pair| [pair[0], pair[1]]));
    let marks = ends.map(|(_, _, end)| end);
    write(scene, &panel, &names, &lines, &marks);
}

/// The drawing along the orbit plane.
fn draw_along_plane(scene: &mut Scene, stage: &Stage, area: Rect) {
    let unit = scene.unit_px;
    let pole = stage.axes[2];
    let sight = stage.observer() - stage.comet();
    let level = sight - pole * sight.dot(&pole);
    // Straight over the pole every direction in the plane serves; the Sun's is the one to see.
    let level = if level.norm() > 1e-6 * sight.norm() { level.normalize() } else { -stage.comet().normalize() };
    let flat = |place: Vector3<f64>| [(place - stage.comet()).dot(&level), place.dot(&pole)];
    let mut fitted = vec![flat(Vector3::zeros()), [0.0, 0.0], flat(stage.observer())];
    fitted.extend(stage.near_dust().map(|place| [flat(place)[0], 0.0]));
    let panel = Panel::fitted(area, "along the orbit plane", &fitted, INSET * unit, unit);
    let page = |place: Vector3<f64>| panel.to_page(flat(place));
    let [sun, comet, observer] = [Vector3::zeros(), stage.comet(), stage.observer()].map(page);

    let ground = [[area.left, comet[1]], [area.right, comet[1]]];
    panel.line(scene, Role::PlaneLine, &ground);
    let across: Vec<f64> = stage.sheet.places_au.iter().flatten().map(|&place| page(place)[0]).collect();
    let reach = [
        across.iter().copied().fold(comet[0], f64::min).max(area.left),
        across.iter().copied().fold(comet[0], f64::max).min(area.right),
    ];
    panel.line(scene, Role::SheetEdgeOn, &[[reach[0], comet[1]], [reach[1], comet[1]]]);
    panel.line(scene, Role::Guide, &[observer, [observer[0], comet[1]]]);
    let beyond = panel.beyond(observer, comet);
    panel.line(scene, Role::SightLine, &[observer, beyond]);
    let away = norm([observer[0] - comet[0], observer[1] - comet[1]]);
    let radius = (0.5 * away).min(44.0 * unit);
    let arc: Vec<Point> = (0..=24)
        .map(|i| {
            let (sine, cosine) = libm::sincos(stage.from_plane_rad * f64::from(i) / 24.0);
            [comet[0] + radius * cosine, comet[1] - radius * sine]
        })
        .collect();
    panel.line(scene, Role::Angle, &arc);
    places(scene, sun, comet, observer);

    let mut names = common_names(stage, sun, comet, observer);
    let side = if stage.from_plane_rad < 0.0 { -1.0 } else { 1.0 };
    let angle = Name {
        from: arc[12],
        outward: [0.8, -0.6 * side],
        words: plane_angle(stage.from_plane_rad),
        role: Role::PlaceLabel,
    };
    names.push(angle);
    if reach[1] - reach[0] > 12.0 * unit {
        // The half that lies farther from the comet.
        let end = if reach[1] - comet[0] > comet[0] - reach[0] { reach[1] } else { reach[0] };
        let from = [0.5 * (end + comet[0]), comet[1]];
        let words = "dust".to_string();
        names.push(Name { from, outward: [0.0, side], words, role: Role::CurveLabel(Family::Syndyne) });
    }
    let from =
        [if observer[0] > area.center()[0] { area.left + 30.0 * unit } else { area.right - 30.0 * unit }, comet[1]];
    names.push(Name { from, outward: [0.0, side], words: "orbit plane".into(), role: Role::Note });
    write(scene, &panel, &names, &[[observer, beyond], ground], &[]);
}

/// The least, a middle and the greatest beta of the sheet, and its oldest dust, as lines on the page.
fn few_syndynes(sheet: &Sheet, nodes: &[Option<Point>]) -> Vec<Vec<Point>> {
    let (columns, rows) = (sheet.betas.len(), sheet.ages_days.len());
    let mut lines = Vec::new();
    for column in [0, columns / 3, 2 * columns / 3, columns - 1] {
        lines.extend(unbroken((0..rows).map(|row| nodes[row * columns + column])));
    }
    lines.extend(unbroken(nodes[(rows - 1) * columns..].iter().copied()));
    lines
}

/// Runs of points without a gap.
fn unbroken(points: impl Iterator<Item = Option<Point>>) -> Vec<Vec<Point>> {
    let mut runs: Vec<Vec<Point>> = vec![Vec::new()];
    for point in points {
        match point {
            Some(point) => runs.last_mut().expect("at least one run").push(point),
            None => runs.push(Vec::new()),
        }
    }
    runs.retain(|run| run.len() > 1);
    runs
}

/// Sun, comet and observer.
fn places(scene: &mut Scene, sun: Point, comet: Point, observer: Point) {
    let unit = scene.unit_px;
    mark::draw(scene, Direction::Sunward, sun, [1.0, 0.0]);
    scene.add(Role::Observer, Shape::Circle { center: observer, radius_px: 4.5 * unit });
    scene.add(Role::Nucleus, Shape::Circle { center: comet, radius_px: 4.0 * unit });
}

/// The names that both drawings share.
fn common_names(stage: &Stage, sun: Point, comet: Point, observer: Point) -> Vec<Name> {
    let height_au = stage.observer().dot(&stage.axes[2]);
    let side = if height_au < 0.0 { "below" } else { "above" };
    let observer_words =
        format!("observer, {}\u{a0}au {side}\u{a0}the\u{a0}plane", quantity::figures(round2(height_au.abs())));
    let name = |from, other, words: &str| Name {
        from,
        outward: unit_step(other, from),
        words: words.into(),
        role: Role::PlaceLabel,
    };
    vec![name(comet, sun, "comet"), name(sun, comet, "Sun"), name(observer, comet, &observer_words)]
}

/// A height to two figures.
fn round2(value: f64) -> f64 {
    if value == 0.0 {
        return 0.0;
    }
    let step = libm::pow(10.0, libm::floor(libm::log10(value)) - 1.0);
    (value / step).round() * step
}

/// The observer's angle from the orbit plane in words.
fn plane_angle(angle_rad: f64) -> String {
    let degrees = angle_rad.abs().to_degrees();
    let side = if angle_rad < 0.0 { "below" } else { "above" };
    let decimals = if degrees < 0.95 { 2 } else { 1 };
    format!("{degrees:.decimals$}° {side} the\u{a0}plane")
}

/// The name of the dust, at the part of the sheet that is seen farthest from the comet.
fn dust_name(panel: &Panel, nodes: &[Option<Point>], comet: Point) -> Option<Name> {
    let away = |p: &Point| norm([p[0] - comet[0], p[1] - comet[1]]);
    let inside = panel.area.grown(-30.0);
    let seen = nodes.iter().flatten().copied().filter(|p| inside.holds(*p));
    let from = seen.max_by(|a, b| away(a).total_cmp(&away(b)))?;
    (away(&from) > 20.0).then(|| Name {
        from,
        outward: unit_step(comet, from),
        words: "dust sheet".into(),
        role: Role::CurveLabel(Family::Syndyne),
    })
}

/// Unit step from one point toward another; to the right where they are one.
fn unit_step(from: Point, to: Point) -> Point {
    let step = [to[0] - from[0], to[1] - from[1]];
    let long = norm(step);
    if long > 0.0 { [step[0] / long, step[1] / long] } else { [1.0, 0.0] }
}

/// A filled arrow head on the path, a little ahead of the comet.
fn arrow(scene: &mut Scene, path: &[Point], comet: Point, motion: Point, unit: f64) {
    let ahead = |p: &Point| (p[0] - comet[0]) * motion[0] + (p[1] - comet[1]) * motion[1];
    let away = |p: &Point| norm([p[0] - comet[0], p[1] - comet[1]]);
    let wished = 30.0 * unit;
    let tip = path
        .iter()
        .copied()
        .filter(|p| ahead(p) > 0.5 * away(p))
        .min_by(|a, b| (away(a) - wished).abs().total_cmp(&(away(b) - wished).abs()));
    let Some(tip) = tip.filter(|tip| (away(tip) - wished).abs() < wished) else { return };
    let step = unit_step(comet, tip);
    let across = [-step[1], step[0]];
    let point = |along: f64, aside: f64| {
        [tip[0] + unit * (along * step[0] + aside * across[0]), tip[1] + unit * (along * step[1] + aside * across[1])]
    };
    scene.add(Role::OrbitArrow, Shape::Polygon(vec![point(5.0, 0.0), point(-5.0, 4.5), point(-5.0, -4.5)]));
}

/// Writes caption, scale bar and names, none on another.
fn write(scene: &mut Scene, panel: &Panel, names: &[Name], lines: &[[Point; 2]], marks: &[Point]) {
    let unit = scene.unit_px;
    let mut room = Room::new(panel.area.grown(-6.0 * unit), panel.area.center(), -1.0, unit);
    room.taken.extend(panel.write_edges(scene));
    room.taken
        .extend(names.iter().filter(|name| name.role == Role::PlaceLabel).map(|name| mark::area(name.from, unit)));
    room.taken.extend(marks.iter().map(|&at| mark::area(at, unit)));
    room.hands.extend(lines);
    let size_px = LABEL_SIZE * unit;
    let limit = 0.62 * panel.area.width();
    let rows: Vec<Vec<String>> = names.iter().map(|name| wrapped(&name.words, limit, size_px, false)).collect();
    for (name, rows) in names.iter().zip(&rows) {
        let two = two_rows(&name.words, rows);
        let width = |rows: &[String]| rows.iter().map(|row| width_px(row, size_px, false)).fold(0.0, f64::max);
        let height = |rows: &[String]| size_px * (ABOVE + BELOW + LINE * (rows.len() as f64 - 1.0));
        let wish = Wish {
            from: name.from,
            outward: name.outward,
            one_line: [width(rows), height(rows)],
            two_lines: [width(&two), height(&two)],
        };
        let Some(placed) = room.place(&[wish])[0] else { continue };
        put(scene, name, if placed.lines == 1 { rows } else { &two }, &placed, size_px);
    }
}

/// The words broken where they may be, for a place that is narrow.
fn two_rows(words: &str, rows: &[String]) -> Vec<String> {
    match words.split_once(", ") {
        Some((first, second)) => vec![first.to_string(), second.to_string()],
        None => rows.to_vec(),
    }
}

fn put(scene: &mut Scene, name: &Name, rows: &[String], placed: &Placed, size_px: f64) {
    // A label that stands beside its mark needs no leader; a longer one starts outside the mark.
    if let Some([from, to]) = placed.leader {
        let (step, long) = (unit_step(from, to), norm([to[0] - from[0], to[1] - from[1]]));
        if long > 2.2 * size_px {
            let start = 0.8 * size_px;
            let line = vec![[from[0] + step[0] * start, from[1] + step[1] * start], to];
            scene.add(Role::Guide, Shape::Polyline(line));
        }
    }
    for (row, words) in rows.iter().enumerate() {
        let at = [placed.area.center()[0], placed.area.top + (ABOVE + LINE * row as f64) * size_px];
        scene.add(
            name.role,
            Shape::Text(Text { words: words.clone(), at, anchor: Anchor::Middle, size_px, strong: false }),
        );
    }
}
