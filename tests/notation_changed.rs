//! Damaged, shifted and random notations: never a panic, never a silently wrong orbit; written comets read back.

mod common;
#[path = "common/records.rs"]
mod records;

use common::comets;
use proptest::prelude::*;
use records::*;
use tailvane::orbit::elements::Comet;
use tailvane::orbit::notation::{self, Entry};
use tailvane::plan::paste;

/// The line with every blank field at its end filled, as characters.
fn record(periodic: bool) -> Vec<char> {
    if periodic { PERIODIC.chars().collect() } else { ONE_LINE.chars().collect() }
}

#[test]
fn any_shift_by_one_column_within_the_orbit_is_refused() {
    for (periodic, columns) in [(false, 168), (true, 168), (false, 79), (true, 89), (false, 100)] {
        let good: Vec<char> = record(periodic).into_iter().take(columns).collect();
        for place in 14..79 {
            let mut shorter = good.clone();
            shorter.remove(place);
            let text: String = shorter.iter().collect();
            // Without anything after it, an inclination of fewer decimals is a good one.
            if columns > 79 || place < 75 {
                assert!(notation::read(&text).comets.is_empty(), "without column {}: {text}", place + 1);
            }
            for new in [' ', '0', '7', '.', '-', 'x'] {
                let mut longer = good.clone();
                longer.insert(place, new);
                let text: String = longer.iter().collect();
                assert!(notation::read(&text).comets.is_empty(), "`{new}` in column {}: {text}", place + 1);
            }
        }
    }
}

/// The figures of a comet's orbit in the order of the columns, as printed there.
fn figures(comet: &Comet) -> Vec<String> {
    let elements = &comet.elements;
    let numbers = [
        elements.perihelion_distance_au,
        elements.eccentricity,
        elements.argument_of_perihelion_deg,
        elements.ascending_node_deg,
        elements.inclination_deg,
    ];
    let mut figures = vec![elements.perihelion_time.to_string()];
    figures.extend(numbers.iter().map(ToString::to_string));
    figures
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 2000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn a_written_comet_reads_back_as_itself(comet in comets()) {
        let text = notation::write(&comet);
        let reading = paste::read(&text);
        prop_assert!(reading.errors.is_empty() && reading.notices.is_empty(), "{}\n{}\n{:?}", text, show(&reading), reading.notices);
        prop_assert_eq!(reading.comets, vec![Entry { line: 1, comet }]);
    }

    #[test]
    fn written_comets_in_a_row_stay_apart(list in prop::collection::vec(comets(), 1..5)) {
        let text: String = list.iter().map(notation::write).collect();
        let reading = notation::read(&text);
        prop_assert!(reading.errors.is_empty(), "{}", show(&reading));
        prop_assert_eq!(reading.comets.len(), list.len());
        for (Entry { comet: read, .. }, written) in reading.comets.iter().zip(&list) {
            prop_assert_eq!(&read.elements, &written.elements);
        }
    }

    #[test]
    fn a_replaced_character_is_refused_or_shows_in_its_own_figure_only(periodic: bool, place in 0..166_usize, new in "[ -~\u{2212}\u{e9}\t]") {
        let good = record(periodic);
        let mut changed = good.clone();
        prop_assume!(place < changed.len());
        changed[place] = new.chars().next().unwrap();
        let text: String = changed.iter().collect();
        let before = figures(&comet(&good.iter().collect::<String>()));
        if let [Entry { comet: read, .. }] = notation::read(&text).comets.as_slice() {
            let after = figures(read);
            // Columns of T, q, e, argument, node, inclination, counted from 0.
            let field = [14..29, 30..39, 41..49, 51..59, 61..69, 71..79].iter().position(|columns| columns.contains(&place));
            for index in 0..6 {
                if Some(index) != field {
                    prop_assert_eq!(&after[index], &before[index], "{}", text);
                }
            }
            if let Some(index) = field.filter(|_| changed[place] != good[place]) {
                let figure = changed[place];
                prop_assert!(figure.is_ascii_digit() || figure == ' ', "{} in {}", figure, text);
                if index > 0 {
                    let columns = [30..39, 41..49, 51..59, 61..69, 71..79][index - 1].clone();
                    let printed: String = changed[columns].iter().collect();
                    prop_assert_eq!(printed.trim().parse::<f64>().unwrap().to_string(), after[index].clone());
                }
            }
        }
    }

    #[test]
    fn a_changed_block_reads_without_panic_and_whole(place in 0..600_usize, cut in 0..4_usize, new in "[ -~\u{b1}\n]{0,2}") {
        for text in [BLOCK, PAIRS] {
            let chars: Vec<char> = text.chars().collect();
            let place = place % chars.len();
            let end = (place + cut).min(chars.len());
            let changed: String = chars[..place].iter().copied().chain(new.chars()).chain(chars[end..].iter().copied()).collect();
            for Entry { comet, .. } in notation::read(&changed).comets {
                prop_assert!(comet.validate().is_ok());
            }
        }
    }

    #[test]
    fn any_text_reads_without_panic(text in "\\PC{0,200}", bytes in prop::collection::vec(any::<u8>(), 0..200)) {
        let _ = paste::read(&text);
        let _ = paste::read(&String::from_utf8_lossy(&bytes));
    }

    #[test]
    fn any_words_of_the_trade_read_without_panic(words in prop::collection::vec(prop::sample::select(vec![
        "T", "q", "e", "Peri.", "Node", "Incl.", "Epoch", "=", "+/-", "\u{b1}", "2031", "Mar.", "4.5", "TT", "JD", "2460000.5", "(", ")", "2000.0", "1950.0", "P",
        "Q", "n", "a", "H", "A1", "0.5", "-1", "1e999", "name", "brightness", "C/2031 A1", "\n", "\n\n", ",", ":", ";", "\t", "\u{b0}", "deg", "12P", "MJD", "{", "[",
    ]), 0..40)) {
        let _ = paste::read(&words.join(" "));
        let _ = paste::read(&words.concat());
    }
}
