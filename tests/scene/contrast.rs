//! Can each theme be read, and does no meaning hang on colour?
//!
//! Source of the formula: WCAG 2.2, relative luminance and contrast ratio.

use std::collections::BTreeMap;
use tailvane::scene::theme::{Color, Theme};
use tailvane::scene::theme::{LIGHTS, TONES};
use tailvane::scene::{Body, Direction, Family, Lane, Role};
use tailvane::season::series::Curve;

const DIRECTIONS: [Direction; 6] = [
    Direction::Antisolar,
    Direction::IonAxis,
    Direction::NegativeVelocity,
    Direction::SkyMotion,
    Direction::Zenith,
    Direction::Sunward,
];
const BODIES: [Body; 3] = [Body::Comet, Body::Sun, Body::Moon];
const FAMILIES: [Family; 3] = [Family::Syndyne, Family::Synchrone, Family::NeckLine];

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
    let others =
        [Role::DialNumber, Role::Cardinal, Role::Title, Role::Note, Role::Caution, Role::PlaceLabel, Role::CameraLabel];
    for theme in Theme::ALL {
        let ground = theme.look(Role::Ground).fill.expect("a ground").css();
        for role in
            labels.into_iter().chain(FAMILIES.map(Role::CurveLabel)).chain(BODIES.map(Role::CourseLabel)).chain(others)
        {
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
        let others = [
            Role::Ring,
            Role::TickShort,
            Role::TickLong,
            Role::ScaleBar,
            Role::WedgeEdge,
            Role::TowardSunLine,
            Role::TowardSunHatch,
            Role::OrbitPath,
            Role::PlaneLine,
            Role::SightLine,
            Role::Angle,
            Role::SheetRim,
            Role::SheetEdgeOn,
            Role::Observer,
            Role::Axis,
            Role::CameraFrame,
            Role::CameraCorner,
            Role::CameraHandle,
            Role::Horizon,
            Role::Now,
            Role::DarkTime,
        ];
        for role in lines.chain(FAMILIES.map(Role::Curve)).chain(BODIES.map(Role::Course)).chain(others) {
            let ratio = contrast(&theme.look(role).pen.expect("a line").color.css(), &colors["--ground"]);
            assert!(ratio >= 3.0, "{} {role:?} {ratio:.2}", theme.name());
        }
    }
}

/// Letters over the light of the sky have a halo; still the lightest step must leave them readable without it.
#[test]
fn the_light_of_the_sky_rises_in_steps_and_leaves_letters_readable() {
    for theme in Theme::ALL {
        let ground = theme.look(Role::Ground).fill.expect("a ground");
        let mixed = |level: u8| {
            let look = theme.look(Role::SkyLight(level));
            let over = look.fill.expect("a fill");
            let mix = |a: u8, b: u8| (f64::from(a) + (f64::from(b) - f64::from(a)) * look.fill_opacity).round() as u8;
            let color = Color {
                red: mix(ground.red, over.red),
                green: mix(ground.green, over.green),
                blue: mix(ground.blue, over.blue),
            };
            color.css()
        };
        for level in 0..LIGHTS {
            let text = theme.look(Role::CourseLabel(Body::Comet)).fill.expect("letters").css();
            assert!(contrast(&text, &mixed(level)) >= 3.0, "{} {level}", theme.name());
            if level > 0 {
                assert!(luminance(&mixed(level)) > luminance(&mixed(level - 1)), "{} {level}", theme.name());
            }
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
fn curves_differ_in_pattern_or_weight_from_each_other_and_no_theme_changes_that() {
    let patterns = |theme: Theme| {
        FAMILIES.map(|family| theme.look(Role::Curve(family)).pen.map(|pen| (pen.width.to_bits(), pen.dashes)))
    };
    let dark = patterns(Theme::Dark);
    assert!(dark[0] != dark[1] && dark[1] != dark[2] && dark[0] != dark[2]);
    for theme in Theme::ALL {
        assert_eq!(patterns(theme), dark);
    }
}

#[test]
fn the_tone_map_begins_at_the_ground_and_goes_one_way() {
    for theme in Theme::ALL {
        let ground = theme.look(Role::Ground).fill.expect("a ground");
        assert_eq!(theme.dust_color(0.0), ground);
        assert_eq!(theme.dust_color(-1.0), ground);
        assert_eq!(theme.dust_color(2.0), theme.dust_stops()[4].color);
        let ramp: Vec<f64> = (0..=100).map(|i| luminance(&theme.dust_color(f64::from(i) / 100.0).css())).collect();
        let sign = if theme == Theme::Paper { -1.0 } else { 1.0 };
        assert!(ramp.windows(2).all(|pair| sign * (pair[1] - pair[0]) >= 0.0), "{}", theme.name());
        assert!((ramp[100] - ramp[0]).abs() > 0.2, "{}", theme.name());
    }
    for i in 0..=100 {
        let color = Theme::Red.dust_color(f64::from(i) / 100.0);
        assert_eq!((color.green, color.blue), (0, 0));
    }
}

#[test]
fn a_hatch_is_seen_on_the_brightest_cell_of_a_map() {
    for theme in Theme::ALL {
        let hatch = theme.look(Role::MapHatch).pen.expect("a line").color.css();
        for level in 0..TONES {
            let cell = theme.look(Role::Tone(level)).fill.expect("a cell is filled").css();
            let ratio = contrast(&hatch, &cell);
            assert!(ratio >= 2.5, "{} tone {level} {ratio:.2}", theme.name());
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

#[test]
fn the_ribbon_can_be_read_in_every_theme_and_without_colour() {
    for theme in Theme::ALL {
        let ground = theme.look(Role::Ground).fill.expect("a ground").css();
        let lanes = [Lane::SunwardDust, Lane::DarkHours, Lane::NearSun];
        let names = Curve::ALL.map(Role::CurveName).into_iter().chain(Curve::ALL.map(Role::CurveNumber));
        for role in names.chain(lanes.map(Role::LaneName)).chain([Role::EventName]) {
            let look = theme.look(role);
            let ratio = contrast(&look.fill.expect("letters are filled").css(), &ground);
            assert!(ratio >= 4.5, "{} {role:?} {ratio:.2}", theme.name());
            assert_eq!(look.halo.expect("letters have a halo").color.css(), ground);
        }
        let rims = [Lane::SunwardDust, Lane::NearSun].map(Role::BandRim);
        for role in Curve::ALL.map(Role::SeasonCurve).into_iter().chain(rims).chain([Role::Handle, Role::EventStroke]) {
            let ratio = contrast(&theme.look(role).pen.expect("a line").color.css(), &ground);
            assert!(ratio >= 3.0, "{} {role:?} {ratio:.2}", theme.name());
        }
        let patterns = Curve::ALL.map(|curve| theme.look(Role::SeasonCurve(curve)).pen.expect("a line"));
        for (at, one) in patterns.iter().enumerate() {
            for other in &patterns[at + 1..] {
                assert!(one.dashes != other.dashes || one.width != other.width, "{one:?} {other:?}");
            }
        }
    }
}
