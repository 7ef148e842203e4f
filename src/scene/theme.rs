//! What does a role look like?
//!
//! The only place that names a colour: the drawings and the page's style sheet both take theirs from here.
//! Line pattern, line width and end mark belong to the role and are the same in every theme, so that no
//! meaning hangs on colour alone. Dark is the default; red emits only red light, for dark-adapted eyes, and
//! writes every text in full red; paper is white, for day and for print.
//!
//! Contrast (tested): every text at least 4.5:1 and every control border at least 3:1 on its ground, by
//! WCAG 2.2 relative luminance.

mod season;

use super::{Body, Direction, Family, Role};

/// A colour scheme.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Theme {
    Dark,
    Red,
    Paper,
}

/// A colour of the sRGB space.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Color {
    pub red: u8,
    pub green: u8,
    pub blue: u8,
}

/// How a line is drawn. Lengths are in drawing units.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Pen {
    pub color: Color,
    pub width: f64,
    /// Lengths of dashes and gaps in turn; empty for a solid line.
    pub dashes: &'static [f64],
}

/// The look of a role: what fills it, what outlines it, and what lies behind its letters.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Look {
    pub fill: Option<Color>,
    /// How much the fill covers what lies under it, 0 to 1.
    pub fill_opacity: f64,
    pub pen: Option<Pen>,
    /// Outline behind a text that keeps it readable on lines.
    pub halo: Option<Pen>,
}

/// Nothing at all.
const BARE: Look = Look { fill: None, fill_opacity: 1.0, pen: None, halo: None };

fn pattern(color: Color, width: f64, dashes: &'static [f64]) -> Look {
    Look { pen: Some(Pen { color, width, dashes }), ..BARE }
}

fn line(color: Color, width: f64) -> Look {
    pattern(color, width, &[])
}

fn fill(color: Color, fill_opacity: f64) -> Look {
    Look { fill: Some(color), fill_opacity, ..BARE }
}

/// Letters that keep clear of what lies under them by a rim of the ground.
fn written(color: Color, ground: Color) -> Look {
    Look { fill: Some(color), halo: Some(Pen { color: ground, width: 4.0, dashes: &[] }), ..BARE }
}

/// A colour of the tone map, and the brightness from 0 to 1 that it stands for; in between runs a straight line.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stop {
    pub at: f64,
    pub color: Color,
}

/// Steps of brightness that a cell of a map may have ([`Role::Tone`]).
pub const TONES: u8 = 12;
/// Steps of the light of the sky ([`Role::SkyLight`]): night, three twilights, day.
pub const LIGHTS: u8 = 5;
/// How much one step of light changes the ground.
const LIGHT_STEP: f64 = 0.09;
/// Cells of a map use the tone map up to here, so that a hatch stands out on the brightest.
const BRIGHTEST_CELL: f64 = 0.62;

/// Every colour of a theme. Names say what a colour is for.
struct Palette {
    ground: Color,
    panel: Color,
    rule: Color,
    border: Color,
    text: Color,
    quiet: Color,
    caution: Color,
    focus: Color,
    dial: Color,
    hatch: Color,
    antisolar: Color,
    negative_velocity: Color,
    sky_motion: Color,
    zenith: Color,
    sunward: Color,
    ion: Color,
    syndyne: Color,
    synchrone: Color,
    neck_line: Color,
    isophote: Color,
    /// Shading of dust toward the Sun, and its hatch.
    toward_sun: Color,
    /// The dust sheet in the orbit view.
    sheet: Color,
    /// Curves of the season ribbon that are no direction.
    phase_angle: Color,
    elongation: Color,
    sun_distance: Color,
    observer_distance: Color,
    magnitude: Color,
    /// Bands of the season ribbon.
    dark_hours: Color,
    near_sun: Color,
    dust: [Stop; 5],
}

const fn stop(at: f64, hex: u32) -> Stop {
    Stop { at, color: rgb(hex) }
}

const fn rgb(hex: u32) -> Color {
    let [_, red, green, blue] = hex.to_be_bytes();
    Color { red, green, blue }
}

const DARK: Palette = Palette {
    ground: rgb(0x0a0d12),
    panel: rgb(0x131824),
    rule: rgb(0x273042),
    border: rgb(0x5b6880),
    text: rgb(0xe8ebf1),
    quiet: rgb(0x9aa5b8),
    caution: rgb(0xff7a66),
    focus: rgb(0xa8c7ff),
    dial: rgb(0x6d7a92),
    hatch: rgb(0x3b3836),
    antisolar: rgb(0xf2b544),
    negative_velocity: rgb(0x4cc2b0),
    sky_motion: rgb(0x98a2b3),
    zenith: rgb(0xb9d36c),
    sunward: rgb(0xc4b6a6),
    ion: rgb(0x8ea6ff),
    syndyne: rgb(0xd9b38c),
    synchrone: rgb(0xd98ca0),
    neck_line: rgb(0xe4e6da),
    isophote: rgb(0x8a7660),
    toward_sun: rgb(0xe0a860),
    sheet: rgb(0xd9b38c),
    phase_angle: rgb(0xd58fd8),
    elongation: rgb(0x86c5ea),
    sun_distance: rgb(0xd8a08a),
    observer_distance: rgb(0xb4bccb),
    magnitude: rgb(0xc9d77e),
    dark_hours: rgb(0x7186c9),
    near_sun: rgb(0xc07a58),
    // The first stop is the ground: a sky without dust stays dark.
    dust: [stop(0.0, 0x0a0d12), stop(0.1, 0x1a130d), stop(0.45, 0x5e452e), stop(0.8, 0xcba478), stop(1.0, 0xfff1d6)],
};

const RED: Palette = Palette {
    ground: rgb(0x000000),
    panel: rgb(0x140000),
    rule: rgb(0x4a0000),
    border: rgb(0xc40000),
    text: rgb(0xff0000),
    quiet: rgb(0xff0000),
    caution: rgb(0xff0000),
    focus: rgb(0xff0000),
    dial: rgb(0xb80000),
    hatch: rgb(0x5a0000),
    antisolar: rgb(0xff0000),
    negative_velocity: rgb(0xff0000),
    sky_motion: rgb(0xff0000),
    zenith: rgb(0xff0000),
    sunward: rgb(0xff0000),
    ion: rgb(0xff0000),
    syndyne: rgb(0xff0000),
    synchrone: rgb(0xff0000),
    neck_line: rgb(0xff0000),
    isophote: rgb(0x8c0000),
    toward_sun: rgb(0xd00000),
    sheet: rgb(0xff0000),
    phase_angle: rgb(0xff0000),
    elongation: rgb(0xff0000),
    sun_distance: rgb(0xff0000),
    observer_distance: rgb(0xff0000),
    magnitude: rgb(0xff0000),
    dark_hours: rgb(0xc40000),
    near_sun: rgb(0xc40000),
    dust: [stop(0.0, 0x000000), stop(0.1, 0x140000), stop(0.45, 0x4c0000), stop(0.8, 0xa60000), stop(1.0, 0xff0000)],
};

const PAPER: Palette = Palette {
    ground: rgb(0xffffff),
    panel: rgb(0xf3f5f8),
    rule: rgb(0xd3d8e0),
    border: rgb(0x76808f),
    text: rgb(0x12161d),
    quiet: rgb(0x4a5464),
    caution: rgb(0xb3261e),
    focus: rgb(0x0b57d0),
    dial: rgb(0x5b6675),
    hatch: rgb(0xcfc7bb),
    antisolar: rgb(0x8a5800),
    negative_velocity: rgb(0x00695c),
    sky_motion: rgb(0x4f5866),
    zenith: rgb(0x4b6200),
    sunward: rgb(0x6b5a48),
    ion: rgb(0x2f4bc0),
    syndyne: rgb(0x7a5222),
    synchrone: rgb(0x9c3550),
    neck_line: rgb(0x2e3440),
    isophote: rgb(0xa08a6c),
    toward_sun: rgb(0xa86a1c),
    sheet: rgb(0x9a7040),
    phase_angle: rgb(0x8a2f8f),
    elongation: rgb(0x0b5f8f),
    sun_distance: rgb(0x8a3f22),
    observer_distance: rgb(0x4b5566),
    magnitude: rgb(0x55620a),
    dark_hours: rgb(0x5a6fb8),
    near_sun: rgb(0xa4532c),
    dust: [stop(0.0, 0xffffff), stop(0.1, 0xf8f2e8), stop(0.45, 0xe3cfae), stop(0.8, 0xb28a5a), stop(1.0, 0x6e4d26)],
};

impl Color {
    /// As CSS and SVG write it: `#rrggbb`.
    pub fn css(self) -> String {
        format!("#{:02x}{:02x}{:02x}", self.red, self.green, self.blue)
    }
}

/// Line pattern of a direction's hand, in drawing units. With round ends, a dash of almost no length is a dot.
const fn dashes(direction: Direction) -> &'static [f64] {
    match direction {
        Direction::Antisolar | Direction::Sunward => &[],
        // The thin line in the middle of the wedge.
        Direction::IonAxis => &[],
        Direction::NegativeVelocity => &[13.0, 7.0],
        Direction::SkyMotion => &[0.1, 5.5],
        Direction::Zenith => &[8.0, 5.0, 0.1, 5.0],
    }
}

/// Line pattern of a curve of dust.
const fn curve_dashes(family: Family) -> &'static [f64] {
    match family {
        Family::Syndyne => &[],
        Family::Synchrone => &[4.5, 4.0],
        Family::NeckLine => &[9.0, 4.0, 0.1, 4.0, 0.1, 4.0],
    }
}

impl Theme {
    pub const ALL: [Theme; 3] = [Theme::Dark, Theme::Red, Theme::Paper];

    /// The name that plans, links and the page use.
    pub fn name(self) -> &'static str {
        match self {
            Theme::Dark => "dark",
            Theme::Red => "red",
            Theme::Paper => "paper",
        }
    }

    /// The theme of a name; None for any other word.
    pub fn named(name: &str) -> Option<Theme> {
        Self::ALL.into_iter().find(|theme| theme.name() == name)
    }

    fn palette(self) -> &'static Palette {
        match self {
            Theme::Dark => &DARK,
            Theme::Red => &RED,
            Theme::Paper => &PAPER,
        }
    }

    /// Every colour the page's style sheet uses, as custom properties; `color-scheme` among them as a word.
    pub fn css_variables(self) -> Vec<(&'static str, String)> {
        let p = self.palette();
        let mut variables: Vec<(&'static str, String)> = [
            ("--ground", p.ground),
            ("--panel", p.panel),
            ("--rule", p.rule),
            ("--border", p.border),
            ("--text", p.text),
            ("--quiet", p.quiet),
            ("--caution", p.caution),
            ("--focus", p.focus),
            ("--accent", p.antisolar),
            // Letters on an accent-coloured control.
            ("--on-accent", p.ground),
            ("--dial", p.dial),
            ("--antisolar", p.antisolar),
            ("--negative-velocity", p.negative_velocity),
            ("--sky-motion", p.sky_motion),
            ("--zenith", p.zenith),
            ("--sunward", p.sunward),
            ("--ion", p.ion),
            ("--syndyne", p.syndyne),
            ("--synchrone", p.synchrone),
            ("--neck-line", p.neck_line),
            ("--toward-sun", p.toward_sun),
        ]
        .map(|(name, color)| (name, color.css()))
        .to_vec();
        let scheme = if self == Theme::Paper { "light" } else { "dark" };
        variables.push(("--color-scheme", scheme.to_string()));
        variables
    }

    fn direction(self, direction: Direction) -> Color {
        let p = self.palette();
        match direction {
            Direction::Antisolar => p.antisolar,
            Direction::NegativeVelocity => p.negative_velocity,
            Direction::SkyMotion => p.sky_motion,
            Direction::Zenith => p.zenith,
            Direction::Sunward => p.sunward,
            Direction::IonAxis => p.ion,
        }
    }

    fn curve(self, family: Family) -> Color {
        let p = self.palette();
        match family {
            Family::Syndyne => p.syndyne,
            Family::Synchrone => p.synchrone,
            Family::NeckLine => p.neck_line,
        }
    }

    /// The colours of surface density, from none (the ground) to the brightest, in rising order.
    pub fn dust_stops(self) -> [Stop; 5] {
        self.palette().dust
    }

    /// The colour of a brightness from 0 to 1 by [`Self::dust_stops`].
    pub fn dust_color(self, brightness: f64) -> Color {
        let stops = self.dust_stops();
        let after = stops.iter().position(|stop| stop.at >= brightness).unwrap_or(stops.len() - 1).max(1);
        let (a, b) = (stops[after - 1], stops[after]);
        let share = ((brightness - a.at) / (b.at - a.at)).clamp(0.0, 1.0);
        let mix = |a: u8, b: u8| (f64::from(a) + (f64::from(b) - f64::from(a)) * share).round() as u8;
        Color {
            red: mix(a.color.red, b.color.red),
            green: mix(a.color.green, b.color.green),
            blue: mix(a.color.blue, b.color.blue),
        }
    }

    /// The look of a role.
    pub fn look(self, role: Role) -> Look {
        let p = self.palette();
        let letters = |color| written(color, p.ground);
        match role {
            Role::Ground => fill(p.ground, 1.0),
            // Its pixels have their colours already.
            Role::DustPicture => BARE,
            Role::Isophote => line(p.isophote, 0.9),
            Role::SunwardHalf => line(p.hatch, 1.0),
            Role::SunwardEdge => line(p.hatch, 1.4),
            Role::Nucleus => Look { fill: Some(p.text), ..line(p.ground, 2.0) },
            Role::Ring => line(p.dial, 1.0),
            Role::TickShort => line(p.dial, 1.0),
            Role::TickLong => line(p.dial, 1.6),
            Role::DialNumber => letters(p.quiet),
            Role::Cardinal => letters(p.text),
            Role::Hand(direction) => {
                let width = match direction {
                    Direction::SkyMotion => 2.4,
                    Direction::IonAxis => 0.9,
                    _ => 1.8,
                };
                pattern(self.direction(direction), width, dashes(direction))
            }
            // The ground shows inside an open mark, so that a ring stays a ring on any line.
            Role::Mark(direction) => Look { fill: Some(p.ground), ..line(self.direction(direction), 2.0) },
            Role::MarkFill(direction) => fill(self.direction(direction), 1.0),
            Role::Leader(direction) => line(self.direction(direction), 0.8),
            Role::Label(direction) => letters(self.direction(direction)),
            Role::Wedge => fill(p.ion, 0.16),
            Role::WedgeEdge => line(p.ion, 1.5),
            Role::Curve(family) => {
                let width = if family == Family::NeckLine { 1.8 } else { 1.1 };
                pattern(self.curve(family), width, curve_dashes(family))
            }
            Role::CurveLabel(family) => letters(self.curve(family)),
            Role::TowardSun => fill(p.toward_sun, 0.16),
            Role::TowardSunLine => line(p.toward_sun, 3.4),
            Role::TowardSunHatch => line(p.toward_sun, 0.7),
            Role::OrbitPath => line(p.dial, 1.4),
            Role::OrbitArrow => fill(p.text, 1.0),
            Role::PlaneLine => line(p.dial, 1.4),
            Role::SightLine => pattern(p.text, 1.2, &[7.0, 4.0]),
            Role::Guide => pattern(p.dial, 1.0, &[2.0, 4.0]),
            Role::Angle => line(p.text, 1.2),
            Role::Sheet => fill(p.sheet, 0.2),
            Role::SheetRim => line(p.sheet, 1.0),
            Role::SheetEdgeOn => line(p.sheet, 4.0),
            Role::Observer => Look { fill: Some(p.ground), ..line(p.text, 1.8) },
            Role::PlaceLabel => letters(p.text),
            Role::CameraFrame => line(p.text, 1.0),
            Role::CameraCorner => line(p.text, 2.6),
            Role::CameraHandle => Look { fill: Some(p.ground), ..line(p.text, 1.8) },
            Role::CameraLabel => letters(p.text),
            Role::Tone(level) => {
                let share = f64::from(level.min(TONES - 1)) / f64::from(TONES - 1);
                fill(self.dust_color(BRIGHTEST_CELL * share), 1.0)
            }
            Role::MapHatch => line(p.text, 1.0),
            Role::Axis => line(p.dial, 1.0),
            Role::ScaleBar => line(p.text, 1.4),
            Role::SeasonCurve(_)
            | Role::CurveLeader(_)
            | Role::CurveName(_)
            | Role::CurveNumber(_)
            | Role::TrackEdge
            | Role::TrackZero
            | Role::LaneRule
            | Role::LaneName(_)
            | Role::Band(_)
            | Role::BandRim(_)
            | Role::BandHatch(_)
            | Role::EventMark
            | Role::EventStroke
            | Role::EventGuide
            | Role::EventName
            | Role::Handle
            | Role::HandleGrip
            | Role::HandleRidge => season::look(self, role),
            Role::SkyLight(level) => {
                // On paper day is the white of the page, elsewhere night is the ground.
                let steps = if self == Theme::Paper { LIGHTS - 1 - level.min(LIGHTS - 1) } else { level };
                fill(p.border, LIGHT_STEP * f64::from(steps))
            }
            Role::BelowHorizon => fill(p.panel, 0.75),
            Role::Horizon => line(p.text, 1.4),
            Role::Course(Body::Comet) => line(p.text, 2.4),
            Role::Course(Body::Moon) => pattern(p.quiet, 1.6, &[7.0, 5.0]),
            Role::Course(Body::Sun) => pattern(p.antisolar, 2.2, &[0.1, 5.0]),
            Role::CourseLabel(Body::Comet) => letters(p.text),
            Role::CourseLabel(Body::Moon) => letters(p.quiet),
            Role::CourseLabel(Body::Sun) => letters(p.antisolar),
            Role::DarkTime => Look { fill: Some(p.panel), ..line(p.border, 1.2) },
            Role::BestTime => fill(p.zenith, 1.0),
            Role::Now => line(p.focus, 1.6),
            Role::Title => letters(p.text),
            Role::CardText => Look { fill: Some(p.text), ..BARE },
            Role::CardRule => line(p.rule, 1.0),
            Role::Note => letters(p.quiet),
            Role::Caution => letters(p.caution),
        }
    }
}
