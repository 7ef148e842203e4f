//! How is a comet written as lines that people read and edit?
//!
//! `name = value` lines, which [`super::read`] reads back to the same comet: every date as it was typed, every number
//! with as many digits as it needs. The shape of the text is fixed; angles are degrees.

use crate::orbit::elements::{Brightness, Comet};
use std::fmt::Write;

/// The comet as `name = value` lines. Reading them gives the same comet, if it is valid.
pub fn write(comet: &Comet) -> String {
    let elements = &comet.elements;
    let mut text = format!("name = {}\n", comet.name);
    let mut line = |label: &str, value: String| {
        // Writing to a string cannot fail.
        let _ = writeln!(text, "{label} = {value}");
    };
    line("T", elements.perihelion_time.to_string());
    line("q", format!("{:?} au", elements.perihelion_distance_au));
    line("e", format!("{:?}", elements.eccentricity));
    line("peri", format!("{:?} deg", elements.argument_of_perihelion_deg));
    line("node", format!("{:?} deg", elements.ascending_node_deg));
    line("i", format!("{:?} deg", elements.inclination_deg));
    if let Some(epoch) = &elements.epoch {
        line("epoch", epoch.to_string());
    }
    if let Some(push) = elements.nongravitational {
        line("A1", format!("{:?} au/d^2", push.a1_au_d2));
        line("A2", format!("{:?} au/d^2", push.a2_au_d2));
        line("A3", format!("{:?} au/d^2", push.a3_au_d2));
        line("delay", format!("{:?} days", push.delay_days));
    }
    if let [branch] = comet.brightness.as_slice()
        && let Some(n) = branch.photometric_index_n
        && *branch == Brightness::with_index(branch.absolute_magnitude, n)
    {
        line("H", format!("{:?}", branch.absolute_magnitude));
        line("photometric index n", format!("{n:?}"));
    } else {
        for branch in &comet.brightness {
            let mut value = format!("H {:?}", branch.absolute_magnitude);
            for (word, figure) in [
                ("n", branch.photometric_index_n),
                ("slope", branch.slope_2_5n),
                ("dust", branch.dust_over_gas_at_90_deg),
            ] {
                if let Some(figure) = figure {
                    let _ = write!(value, ", {word} {figure:?}");
                }
            }
            for (word, limit) in [("from", &branch.from), ("to", &branch.to)] {
                if let Some(limit) = limit {
                    let _ = write!(value, ", {word} {limit}");
                }
            }
            line("brightness", value);
        }
    }
    text
}
