//! Do the labelled values of one comet make an orbit?
//!
//! Collects them, names what is missing, twice or out of range, and holds a, z, n and P against q and e: they must agree
//! within the rounding of all printed figures (and, for n and P, 5e-5 of themselves, since P is printed as a to the
//! power 3/2 or in Julian years). They are not kept.

use super::label::{Label, REQUIRED};
use super::labelled::{Event, Value, What};
use super::token::Number;
use super::{Entry, refusal};
use crate::error::Error;
use crate::orbit::elements::{Brightness, Comet, Elements, LARGEST_NONGRAVITATIONAL_AU_D2, Nongravitational};
use crate::time::Stamp;

/// Mean daily motion at a = 1 au, degrees: the Gaussian constant 0.01720209895 in degrees (IAU 1976).
const MOTION_DEG_D: f64 = 0.985_607_668_601_425;
/// Period at a = 1 au in Julian years: 360 / MOTION_DEG_D / 365.25.
const PERIOD_YEARS: f64 = 1.000_018_88;

/// Whether a value, beside the largest non-gravitational parameter, is in range.
type Holds = fn(f64, f64) -> bool;

/// Errors of one comet beyond this many are dropped: the rest follow from them.
const MOST_ERRORS_OF_ONE: usize = 50;

/// The labelled values of one comet.
pub(super) struct Draft<'a> {
    values: Vec<(Label, &'a Value, &'a Event)>,
    line: usize,
}

/// The name that the events of a comet give it: `name =`, a designation, else the short line before the first label.
pub(super) fn name(events: &[Event]) -> Option<String> {
    let mut before = None;
    for event in events {
        match &event.what {
            What::Value(Label::Name, Ok(Value::Text(name))) => return Some(name.clone()),
            What::Title(name) => return Some(name.clone()),
            What::Value(..) => break,
            What::Other(text) => {
                let sentence = text.ends_with(['.', ':', ';']) || text.to_ascii_lowercase().contains("element");
                before = (!sentence && text.chars().count() <= 60 && !text.starts_with('#')).then(|| text.clone());
            }
            What::Blank | What::Unknown(_) => {}
        }
    }
    before
}

impl<'a> Draft<'a> {
    /// The values among `events`; None if no element of an orbit is among them and no name was given by `name =`.
    ///
    /// # Errors
    /// Whatever could not be read, is twice, or is missing.
    pub(super) fn collect(events: &'a [Event]) -> Result<Option<Draft<'a>>, Vec<Error>> {
        let mut values: Vec<(Label, &Value, &Event)> = Vec::new();
        let mut errors = Vec::new();
        let mut present = Vec::new();
        for event in events {
            if errors.len() >= MOST_ERRORS_OF_ONE {
                return Err(errors);
            }
            let What::Value(label, value) = &event.what else { continue };
            present.push(*label);
            let value = match value {
                Ok(value) => value,
                Err(error) => {
                    errors.push(error.clone());
                    continue;
                }
            };
            let first = values
                .iter()
                .find(|(other, ..)| other == label && !matches!(label, Label::Brightness | Label::Equinox));
            match first {
                Some((_, same, _)) if *same == value => {}
                Some((_, _, first)) => {
                    let found = format!("{} twice", label.words());
                    let allowed = format!("it once; it also stands in line {}, column {}", first.line, first.column);
                    errors.push(refusal(event.line, event.column, found, allowed));
                }
                None => values.push((*label, value, event)),
            }
        }
        let line = events.iter().find(|event| matches!(event.what, What::Value(..))).map_or(1, |event| event.line);
        if !REQUIRED.iter().any(|label| present.contains(label)) && !present.contains(&Label::Name) && errors.is_empty()
        {
            return Ok(None);
        }
        let missing: Vec<&str> =
            REQUIRED.iter().filter(|label| !present.contains(label)).map(|label| label.words()).collect();
        if !missing.is_empty() {
            let found = format!("elements without {}", missing.join(", "));
            errors.insert(0, refusal(line, 1, found, "T, q, e, Peri., Node and Incl. for each comet"));
        }
        if errors.is_empty() { Ok(Some(Draft { values, line })) } else { Err(errors) }
    }

    fn find(&self, label: Label) -> Option<(&'a Value, &'a Event)> {
        self.values.iter().find(|(other, ..)| *other == label).map(|&(_, value, event)| (value, event))
    }

    fn number(&self, label: Label) -> Option<(Number, &'a Event)> {
        match self.find(label) {
            Some((Value::Number(number), event)) => Some((*number, event)),
            _ => None,
        }
    }

    fn value(&self, label: Label) -> f64 {
        self.number(label).map_or(0.0, |(number, _)| number.value)
    }

    fn date(&self, label: Label) -> Option<Stamp> {
        match self.find(label) {
            Some((Value::Date(stamp), _)) => Some(stamp.clone()),
            _ => None,
        }
    }

    /// The comet. `name` serves if the values name none.
    ///
    /// # Errors
    /// Values out of range, or that disagree.
    pub(super) fn comet(&self, name: &Option<String>, notices: &mut Vec<(usize, String)>) -> Result<Entry, Vec<Error>> {
        let mut errors = self.out_of_range();
        if errors.is_empty() {
            errors = self.disagreements();
        }
        let brightness = self.brightness(notices).unwrap_or_else(|error| {
            errors.push(error);
            Vec::new()
        });
        // Collected drafts have every required label, so this only guards.
        let Some(perihelion_time) = self.date(Label::PerihelionTime) else { return Err(errors) };
        let pushes = [Label::A1, Label::A2, Label::A3, Label::Delay];
        let nongravitational = pushes.iter().any(|&label| self.find(label).is_some()).then(|| Nongravitational {
            a1_au_d2: self.value(Label::A1),
            a2_au_d2: self.value(Label::A2),
            a3_au_d2: self.value(Label::A3),
            delay_days: self.value(Label::Delay),
        });
        let elements = Elements {
            perihelion_distance_au: self.value(Label::PerihelionDistance),
            eccentricity: self.value(Label::Eccentricity),
            inclination_deg: self.value(Label::Inclination),
            ascending_node_deg: self.value(Label::AscendingNode),
            argument_of_perihelion_deg: self.value(Label::ArgumentOfPerihelion),
            perihelion_time,
            epoch: self.date(Label::Epoch),
            nongravitational,
        };
        let name = name.clone().unwrap_or_else(|| "Comet without a name".into());
        let comet = Comet { name, elements, brightness };
        if errors.is_empty()
            && let Err(error) = comet.validate()
        {
            errors.push(refusal(
                self.line,
                1,
                format!("{} at {}", error.found, error.place).trim_end_matches([':', ' ']),
                error.allowed,
            ));
        }
        if errors.is_empty() { Ok(Entry { line: self.line, comet }) } else { Err(errors) }
    }

    fn out_of_range(&self) -> Vec<Error> {
        let limit = LARGEST_NONGRAVITATIONAL_AU_D2;
        let push = "below 1e-4 au/day^2 in size; circulars print it in units of 1e-8 au/day^2, so write the power too";
        let checks: [(Label, Holds, &str); 9] = [
            (Label::PerihelionDistance, |q, _| q > 0.0, "above 0 au"),
            (Label::Eccentricity, |e, _| e >= 0.0, "of 0 or more"),
            (Label::Inclination, |i, _| (0.0..=180.0).contains(&i), "from 0 to 180 degrees"),
            (Label::AscendingNode, |angle, _| angle.abs() <= 360.0, "from -360 to 360 degrees"),
            (Label::ArgumentOfPerihelion, |angle, _| angle.abs() <= 360.0, "from -360 to 360 degrees"),
            (Label::A1, |a, limit| a.abs() < limit, push),
            (Label::A2, |a, limit| a.abs() < limit, push),
            (Label::A3, |a, limit| a.abs() < limit, push),
            (Label::Delay, |delay, _| delay.abs() <= 1000.0, "from -1000 to 1000 days"),
        ];
        let refused = checks.iter().filter_map(|(label, holds, allowed)| {
            let (number, event) = self.number(*label).filter(|(number, _)| !holds(number.value, limit))?;
            Some(refusal(
                event.line,
                event.column,
                format!("{} {}", label.words(), number.value),
                format!("it {allowed}"),
            ))
        });
        refused.collect()
    }

    /// What of a, z, n and P disagrees with q and e.
    fn disagreements(&self) -> Vec<Error> {
        let axis: fn(f64, f64) -> f64 = |q, e| q / (1.0 - e);
        let inverse: fn(f64, f64) -> f64 = |q, e| (1.0 - e) / q;
        let period: fn(f64, f64) -> f64 = |q, e| PERIOD_YEARS * libm::pow(q / (1.0 - e), 1.5);
        let checks = [
            (Label::SemimajorAxis, axis, 0.0),
            (Label::InverseAxis, inverse, 0.0),
            (Label::MeanMotion, mean_motion_deg_d, 5e-5),
            (Label::Period, period, 5e-5),
        ];
        let refused = checks.iter().filter_map(|&(label, derived, slack)| {
            let (given, event) = self.number(label)?;
            self.disagreement(label, given, event, derived, slack)
        });
        refused.collect()
    }

    /// The refusal of `given`, unless `derived` of q and e gives it within all roundings.
    fn disagreement(
        &self,
        label: Label,
        given: Number,
        event: &Event,
        derived: fn(f64, f64) -> f64,
        slack: f64,
    ) -> Option<Error> {
        let (q, _) = self.number(Label::PerihelionDistance)?;
        let (e, _) = self.number(Label::Eccentricity)?;
        let words = label.words();
        let both = format!("q {} and e {}", q.value, e.value);
        if e.value >= 1.0 && matches!(label, Label::MeanMotion | Label::Period) {
            return Some(refusal(
                event.line,
                event.column,
                format!("{words} {}", given.value),
                format!("none, since {both} make no closed orbit"),
            ));
        }
        // Whole units, since some publishers cut instead of rounding.
        let ends = [-2.0, 2.0]
            .map(|side| [-2.0, 2.0].map(|other| derived(q.value + side * q.half_unit, e.value + other * e.half_unit)));
        let (mut least, mut most) = (f64::INFINITY, f64::NEG_INFINITY);
        for end in ends.into_iter().flatten() {
            if !end.is_finite() {
                return None; // so near a parabola that the figures say nothing
            }
            least = least.min(end);
            most = most.max(end);
        }
        // 1/(1 - e) runs through infinity between these ends.
        if (1.0 - e.value).abs() <= 2.0 * e.half_unit && label != Label::InverseAxis {
            return None;
        }
        let own = 2.0 * given.half_unit + slack * given.value.abs() + 1e-12 * given.value.abs();
        if (least - own..=most + own).contains(&given.value) {
            return None;
        }
        let place = format!("{words} {}", given.value);
        Some(refusal(event.line, event.column, place, format!("{:.6}, which {both} give", derived(q.value, e.value))))
    }

    /// The brightness law: `brightness` lines, or H with an index.
    fn brightness(&self, notices: &mut Vec<(usize, String)>) -> Result<Vec<Brightness>, Error> {
        let mut branches = Vec::new();
        for (label, value, event) in &self.values {
            if let (Label::Brightness, Value::Text(text)) = (label, value) {
                let branch = branch(text).ok_or_else(|| {
                    let allowed = "brightness as `H 6.5, n 4.0` or `H 6.5, slope 10.0`, perhaps with `, dust 3`, `, from` and `, to` and a date each";
                    refusal(event.line, event.column, super::quote(text), allowed)
                })?;
                branches.push(branch);
            }
        }
        let magnitude = self.number(Label::AbsoluteMagnitude);
        let slope = self.number(Label::MagnitudeSlope).map(|(slope, _)| slope.value / 2.5);
        let mut index = self.number(Label::PhotometricIndex).map(|(index, _)| index.value).or(slope);
        if let Some((n, event)) = self.number(Label::MeanMotionOrIndex)
            && let Some(error) = self.disagreement(Label::MeanMotion, n, event, mean_motion_deg_d, 5e-5)
        {
            // Beside H, an n of 1 or more is the photometric index: no comet moves a degree a day on average.
            if magnitude.is_none() || index.is_some() || n.value < 1.0 {
                return Err(error);
            }
            index = Some(n.value);
        }
        match (magnitude, index) {
            (Some((magnitude, _)), Some(photometric_index_n)) => {
                branches.insert(0, Brightness::with_index(magnitude.value, photometric_index_n));
            }
            (None, None) => {}
            _ => notices.push((
                self.line,
                "Absolute magnitude and photometric index are used only together; one of them is missing.".into(),
            )),
        }
        Ok(branches)
    }
}

/// Degrees per day; not a number for an open orbit.
fn mean_motion_deg_d(q: f64, e: f64) -> f64 {
    MOTION_DEG_D * libm::pow((1.0 - e) / q, 1.5)
}

/// `H 6.5, n 4.0, dust 3, from 2031-01-01 TT, to 2031-03-04.5 TT`, or with `slope 10.0` in place of n; the last three optional.
fn branch(text: &str) -> Option<Brightness> {
    let mut branch = Brightness::with_index(f64::NAN, 0.0);
    branch.photometric_index_n = None;
    for (place, part) in text.split(',').enumerate() {
        let (key, value) = part.trim().split_once(' ')?;
        let number = || super::token::number(value.trim()).map(|number| number.value);
        let figure = match (key, place) {
            ("H", 0) => {
                branch.absolute_magnitude = number()?;
                continue;
            }
            ("n", 1) => Some(&mut branch.photometric_index_n),
            ("slope", 1) => Some(&mut branch.slope_2_5n),
            ("dust", 2) => Some(&mut branch.dust_over_gas_at_90_deg),
            _ => None,
        };
        if let Some(figure) = figure {
            *figure = Some(number()?);
            continue;
        }
        let limit = match key {
            "from" if branch.from.is_none() => &mut branch.from,
            "to" if branch.to.is_none() => &mut branch.to,
            _ => return None,
        };
        *limit = Some(value.trim().parse().ok()?);
    }
    let whole =
        branch.absolute_magnitude.is_finite() && (branch.photometric_index_n.is_some() || branch.slope_2_5n.is_some());
    whole.then_some(branch)
}
