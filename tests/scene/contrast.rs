//! Can each theme be read, and does no meaning hang on colour?
//!
//! Source of the formula: WCAG 2.2, relative luminance and contrast ratio.

use std::collections::BTreeMap;
use tailvane::scene::theme::{Color, Theme};
use tailvane::scene::{Direction, Role};

const DIRECTIONS: [Direction; 5] =
    [Direction::Antisolar, Direction::NegativeVelocity, Direction::SkyMotion, Direction::Zenith, Direction::Sunward];

fn luminance(css: &str) -> f64 {
    let part = |at: usize| {
        let value = f64::from(u8::from_str_radix(&css[at..at + 2], 16).expect("two hexadecimal digits")) / 255.0;
        if value <= 0.04045 { value / 12.92 } else { ((value + 0.055) / 1.055).powf(2.4) }
    };
    0.2126 * part(1) + 0.7152 * part(3) + 0.0722 * part(5)
}

fn contrast(one: &str, other: &str) -> f64 {
    let (a, b) = (luminance(one), luminance(other));
    (a.max(b) + 0.05) / (a.min(b) + 0.05)
}

fn variables(theme: Theme) -> BTreeMap<&'static str, String> {
    theme.css_variables().into_iter().collect()
}

#[test]
fn the_contrast_formula_gives_the_published_extremes() {
    assert!((contrast("#000000", "#ffffff") - 21.0).abs() < 1e-9);
    assert!((contrast("#777777", "#ffffff") - 4.48).abs() < 0.01);
}

#[test]
fn every_text_of_the_page_stands_out_at_4_5_to_1() {
    for theme in Theme::ALL {
        let colors = variables(theme);
        for text in ["--text", "--quiet", "--caution", "--accent"] {
            for ground in ["--ground", "--panel"] {
                let ratio = contrast(&colors[text], &colors[ground]);
                assert!(ratio >= 4.5, "{}: {text} on {ground} {ratio:.2}", theme.name());
            }
        }
        let ratio = contrast(&colors["--on-accent"], &colors["--accent"]);
        assert!(ratio >= 4.5, "{}: letters on an accent {ratio:.2}", theme.name());
    }
}

#[test]
fn every_text_of_a_drawing_stands_out_at_4_5_to_1() {
    let labels = DIRECTIONS.map(Role::Label);
    let others = [Role::DialNumber, Role::Cardinal, Role::Title, Role::Note, Role::Caution];
    for theme in Theme::ALL {
        let ground = theme.look(Role::Ground).fill.expect("a ground").css();
        for role in labels.into_iter().chain(others) {
            let look = theme.look(role);
            let ratio = contrast(&look.fill.expect("letters are filled").css(), &ground);
            assert!(ratio >= 4.5, "{} {role:?} {ratio:.2}", theme.name());
            assert_eq!(look.halo.expect("letters have a halo").color.css(), ground);
        }
    }
}

#[test]
fn controls_and_what_a_drawing_must_show_stand_out_at_3_to_1() {
    for theme in Theme::ALL {
        let colors = variables(theme);
        for line in ["--border", "--focus"] {
            for ground in ["--ground", "--panel"] {
                let ratio = contrast(&colors[line], &colors[ground]);
                assert!(ratio >= 3.0, "{}: {line} on {ground} {ratio:.2}", theme.name());
            }
        }
        let lines = DIRECTIONS.map(Role::Hand).into_iter().chain(DIRECTIONS.map(Role::Mark));
        for role in lines.chain([Role::Ring, Role::TickShort, Role::TickLong, Role::ScaleBar]) {
            let ratio = contrast(&theme.look(role).pen.expect("a line").color.css(), &colors["--ground"]);
            assert!(ratio >= 3.0, "{} {role:?} {ratio:.2}", theme.name());
        }
    }
}

#[test]
fn the_hatch_is_seen_but_stays_behind() {
    for theme in Theme::ALL {
        let hatch = theme.look(Role::SunwardHalf).pen.expect("a line").color.css();
        let ratio = contrast(&hatch, &variables(theme)["--ground"]);
        assert!((1.2..2.5).contains(&ratio), "{} {ratio:.2}", theme.name());
    }
}

#[test]
fn the_red_theme_emits_red_light_only_and_writes_in_full_red() {
    let full = Color { red: 255, green: 0, blue: 0 };
    for (name, value) in Theme::Red.css_variables().iter().filter(|(name, _)| *name != "--color-scheme") {
        assert!(value.ends_with("0000"), "{name} {value}");
    }
    for role in
        DIRECTIONS.map(Role::Label).into_iter().chain([Role::DialNumber, Role::Cardinal, Role::Note, Role::Caution])
    {
        assert_eq!(Theme::Red.look(role).fill, Some(full));
    }
    for role in [Role::Ground, Role::SunwardHalf, Role::Ring, Role::Nucleus] {
        let look = Theme::Red.look(role);
        for color in [look.fill, look.pen.map(|pen| pen.color)].into_iter().flatten() {
            assert_eq!((color.green, color.blue), (0, 0), "{role:?}");
        }
    }
}

#[test]
fn hands_differ_in_pattern_and_no_theme_changes_a_pattern() {
    let hands = [Direction::Antisolar, Direction::NegativeVelocity, Direction::SkyMotion, Direction::Zenith];
    for theme in Theme::ALL {
        for (i, &one) in hands.iter().enumerate() {
            let dashes = theme.look(Role::Hand(one)).pen.expect("a line").dashes;
            assert_eq!(dashes, Theme::Dark.look(Role::Hand(one)).pen.expect("a line").dashes);
            for &other in &hands[i + 1..] {
                assert_ne!(dashes, theme.look(Role::Hand(other)).pen.expect("a line").dashes, "{one:?} {other:?}");
            }
        }
    }
}

#[test]
fn a_theme_is_found_by_its_name() {
    for theme in Theme::ALL {
        assert_eq!(Theme::named(theme.name()), Some(theme));
    }
    assert_eq!(Theme::named("blue"), None);
}
