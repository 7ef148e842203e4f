//! What does a role look like?
//!
//! The only place that names a colour: the drawings and the page's style sheet both take theirs from here.
//! Line pattern, line width and end mark belong to the role and are the same in every theme, so that no
//! meaning hangs on colour alone. Dark is the default; red emits only red light, for dark-adapted eyes, and
//! writes every text in full red; paper is white, for day and for print.
//!
//! Contrast (tested): every text at least 4.5:1 and every control border at least 3:1 on its ground, by
//! WCAG 2.2 relative luminance.

use super::{Direction, Role};

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
    pub pen: Option<Pen>,
    /// Outline behind a text that keeps it readable on lines.
    pub halo: Option<Pen>,
}

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
        Direction::NegativeVelocity => &[13.0, 7.0],
        Direction::SkyMotion => &[0.1, 5.5],
        Direction::Zenith => &[8.0, 5.0, 0.1, 5.0],
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
        }
    }

    /// The look of a role.
    pub fn look(self, role: Role) -> Look {
        let p = self.palette();
        let line = |color, width| Look { fill: None, pen: Some(Pen { color, width, dashes: &[] }), halo: None };
        let letters =
            |color| Look { fill: Some(color), pen: None, halo: Some(Pen { color: p.ground, width: 4.0, dashes: &[] }) };
        match role {
            Role::Ground => Look { fill: Some(p.ground), pen: None, halo: None },
            Role::SunwardHalf => line(p.hatch, 1.0),
            Role::SunwardEdge => line(p.hatch, 1.4),
            Role::Nucleus => {
                Look { fill: Some(p.text), pen: Some(Pen { color: p.ground, width: 2.0, dashes: &[] }), halo: None }
            }
            Role::Ring => line(p.dial, 1.0),
            Role::TickShort => line(p.dial, 1.0),
            Role::TickLong => line(p.dial, 1.6),
            Role::DialNumber => letters(p.quiet),
            Role::Cardinal => letters(p.text),
            Role::Hand(direction) => Look {
                fill: None,
                pen: Some(Pen {
                    color: self.direction(direction),
                    width: if direction == Direction::SkyMotion { 2.4 } else { 1.8 },
                    dashes: dashes(direction),
                }),
                halo: None,
            },
            // The ground shows inside an open mark, so that a ring stays a ring on any line.
            Role::Mark(direction) => Look { fill: Some(p.ground), ..line(self.direction(direction), 2.0) },
            Role::MarkFill(direction) => Look { fill: Some(self.direction(direction)), pen: None, halo: None },
            Role::Leader(direction) => line(self.direction(direction), 0.8),
            Role::Label(direction) => letters(self.direction(direction)),
            Role::ScaleBar => line(p.text, 1.4),
            Role::Title => letters(p.text),
            Role::Note => letters(p.quiet),
            Role::Caution => letters(p.caution),
        }
    }
}
