//! Which element does a printed symbol or word name?
//!
//! Symbols are the trade's, and case tells some apart: `q` and `Q`, `P` and `p`, `Omega` (node) and `omega`
//! (argument of perihelion). Words are read in any case, with `_` or blanks between them, with or without the unit
//! at their end, so that the plan's own key names serve too.

/// What a label names.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(super) enum Label {
    Name,
    PerihelionTime,
    PerihelionDistance,
    Eccentricity,
    ArgumentOfPerihelion,
    AscendingNode,
    Inclination,
    Epoch,
    SemimajorAxis,
    /// z = 1/a.
    InverseAxis,
    MeanMotion,
    Period,
    AbsoluteMagnitude,
    PhotometricIndex,
    /// K = 2.5 n.
    MagnitudeSlope,
    /// `n`: mean motion in circulars, photometric index beside H.
    MeanMotionOrIndex,
    A1,
    A2,
    A3,
    Delay,
    Equinox,
    Brightness,
}

/// Labels that an orbit cannot do without, in the order in which they are asked for.
pub(super) const REQUIRED: [Label; 6] = [
    Label::PerihelionTime,
    Label::PerihelionDistance,
    Label::Eccentricity,
    Label::ArgumentOfPerihelion,
    Label::AscendingNode,
    Label::Inclination,
];

impl Label {
    /// The symbol and words by which messages name it.
    pub(super) fn words(self) -> &'static str {
        match self {
            Label::Name => "the name",
            Label::PerihelionTime => "T (time of perihelion)",
            Label::PerihelionDistance => "q (perihelion distance)",
            Label::Eccentricity => "e (eccentricity)",
            Label::ArgumentOfPerihelion => "Peri. (argument of perihelion)",
            Label::AscendingNode => "Node (longitude of the ascending node)",
            Label::Inclination => "Incl. (inclination)",
            Label::Epoch => "Epoch",
            Label::SemimajorAxis => "a (semimajor axis)",
            Label::InverseAxis => "z (1/a)",
            Label::MeanMotion => "n (mean motion)",
            Label::Period => "P (period)",
            Label::AbsoluteMagnitude => "H (absolute magnitude)",
            Label::PhotometricIndex => "photometric index n",
            Label::MagnitudeSlope => "K1 (magnitude slope)",
            Label::MeanMotionOrIndex => "n",
            Label::A1 => "A1",
            Label::A2 => "A2",
            Label::A3 => "A3",
            Label::Delay => "delay",
            Label::Equinox => "equinox",
            Label::Brightness => "brightness",
        }
    }

    pub(super) fn is_angle(self) -> bool {
        matches!(self, Label::ArgumentOfPerihelion | Label::AscendingNode | Label::Inclination)
    }

    pub(super) fn is_date(self) -> bool {
        matches!(self, Label::PerihelionTime | Label::Epoch)
    }

    /// Units that may follow its value, in small letters.
    pub(super) fn units(self) -> &'static [&'static str] {
        match self {
            Label::PerihelionDistance | Label::SemimajorAxis => &["au", "a.u", "a.u."],
            Label::InverseAxis => &["/au", "au^-1", "1/au", "au-1", "au**-1"],
            label if label.is_angle() => &["deg", "deg.", "degrees", "degree", "\u{b0}"],
            Label::MeanMotion | Label::MeanMotionOrIndex => {
                &["deg/day", "deg/d", "degrees/day", "\u{b0}", "/day", "/d"]
            }
            Label::Period => &["years", "year", "yr", "yr.", "yrs", "y"],
            Label::AbsoluteMagnitude => &["mag", "mag."],
            Label::A1 | Label::A2 | Label::A3 => &["au/d^2", "au/day^2", "au/d**2", "au/day**2", "au/d2", "au/day2"],
            Label::Delay => &["days", "day", "d"],
            _ => &[],
        }
    }
}

/// Units that would change the value, whichever it is; refused by name.
pub(super) const OTHER_UNITS: [&str; 14] =
    ["km", "m", "rad", "radian", "radians", "arcsec", "arcmin", "gon", "hours", "ly", "pc", "days", "d", "10^-8"];

/// The label that a symbol names where no `=` follows, as in printed blocks.
pub(super) fn bare(word: &str) -> Option<Label> {
    Some(match word {
        "T" | "Tp" => Label::PerihelionTime,
        "q" => Label::PerihelionDistance,
        "e" => Label::Eccentricity,
        "i" => Label::Inclination,
        "z" => Label::InverseAxis,
        "a" => Label::SemimajorAxis,
        "n" => Label::MeanMotionOrIndex,
        "P" => Label::Period,
        "H" => Label::AbsoluteMagnitude,
        "A1" => Label::A1,
        "A2" => Label::A2,
        "A3" => Label::A3,
        "\u{3c9}" => Label::ArgumentOfPerihelion,
        "\u{3a9}" | "\u{2126}" => Label::AscendingNode,
        word if word.len() > 6 => return None,
        word => match word.to_ascii_lowercase().trim_end_matches('.') {
            "epoch" => Label::Epoch,
            "peri" => Label::ArgumentOfPerihelion,
            "node" => Label::AscendingNode,
            "incl" | "inc" => Label::Inclination,
            _ => return None,
        },
    })
}

/// The label that words before a `=` name; `words` are joined by single blanks.
pub(super) fn named(words: &str) -> Option<Label> {
    if let Some(label) = bare(words) {
        return Some(label);
    }
    match words {
        "Omega" | "OMEGA" => return Some(Label::AscendingNode),
        "omega" => return Some(Label::ArgumentOfPerihelion),
        _ if words.len() > 60 => return None,
        _ => {}
    }
    let plain = words.to_ascii_lowercase().replace(['_', '-'], " ").replace('.', "");
    let plain =
        plain.trim_end_matches(" deg").trim_end_matches(" au").trim_end_matches(" au d2").trim_end_matches(" days");
    Some(match plain {
        "name" | "comet" | "object" | "designation" => Label::Name,
        "tp"
        | "t0"
        | "perihelion time"
        | "time of perihelion"
        | "perihelion date"
        | "date of perihelion"
        | "perihelion passage"
        | "time of perihelion passage"
        | "perihelion time t" => Label::PerihelionTime,
        "perihelion distance" | "perihelion distance q" => Label::PerihelionDistance,
        "ecc" | "eccentricity" | "eccentricity e" => Label::Eccentricity,
        "w"
        | "arg peri"
        | "arg of peri"
        | "argument of perihelion"
        | "perihelion argument"
        | "arg perihelion"
        | "arg of perihelion" => Label::ArgumentOfPerihelion,
        "om"
        | "asc node"
        | "ascending node"
        | "longitude of node"
        | "longitude of the node"
        | "longitude of ascending node"
        | "longitude of the ascending node"
        | "long of node"
        | "long asc node"
        | "long of asc node" => Label::AscendingNode,
        "inclination" | "inclination i" => Label::Inclination,
        "epoch of osculation" | "osculation epoch" | "epoch of elements" => Label::Epoch,
        "semimajor axis" | "semi major axis" | "semimajor axis a" => Label::SemimajorAxis,
        "1/a" => Label::InverseAxis,
        "mean motion" | "mean daily motion" | "mean motion n" => Label::MeanMotion,
        "period" | "orbital period" => Label::Period,
        "h0" | "m1" if words.starts_with(['H', 'M']) => Label::AbsoluteMagnitude,
        "absolute magnitude" | "absolute magnitude h" => Label::AbsoluteMagnitude,
        "photometric index" | "photometric index n" => Label::PhotometricIndex,
        "k1" => Label::MagnitudeSlope,
        "a1" => Label::A1,
        "a2" => Label::A2,
        "a3" => Label::A3,
        "delay" | "dt" => Label::Delay,
        "equinox" | "ecliptic and equinox" | "equinox and ecliptic" => Label::Equinox,
        "brightness" => Label::Brightness,
        _ => return None,
    })
}
