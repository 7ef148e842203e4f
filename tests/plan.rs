//! The plan file: print and read are inverse; what is not a plan is refused with its place.

mod common;

use common::plans;
use proptest::prelude::*;
use tailvane::error::{Error, Place};
use tailvane::plan::Plan;

const PLAN: &str = r#"{
  "tailvane_plan": 1,
  "comet": {
    "name": "Invented comet",
    "elements": {
      "perihelion_distance_au": 0.52,
      "eccentricity": 1.0003,
      "inclination_deg": 61.2,
      "ascending_node_deg": 201.9,
      "argument_of_perihelion_deg": 33.4,
      "perihelion_time": "2031-03-04.51732 TT",
      "epoch": "2031-02-20.0 TT",
      "nongravitational": {
        "a1_au_d2": 1.2e-8,
        "a2_au_d2": -3e-10,
        "a3_au_d2": 0.0,
        "delay_days": 0.0
      }
    },
    "brightness": [
      {
        "absolute_magnitude": 6.5,
        "photometric_index_n": 4.0
      }
    ]
  },
  "observer": {
    "name": "Invented hill",
    "longitude_deg": 23.4,
    "latitude_deg": 37.1,
    "height_m": 640.0
  },
  "time": "2031-03-20T05:30:00Z"
}
"#;

fn refusal(text: &str) -> Error {
    match Plan::parse(text) {
        Ok(plan) => panic!("read as {}", plan.print()),
        Err(error) => error,
    }
}

/// Refuses the plan with `old` replaced by `new`, at the line of `old`, saying every one of `parts`.
fn refuses(old: &str, new: &str, parts: &[&str]) {
    assert!(PLAN.contains(old), "{old}");
    let error = refusal(&PLAN.replacen(old, new, 1));
    let line = PLAN[..PLAN.find(old).unwrap()].matches('\n').count() + 1;
    match error.place {
        Place::Line { line: found, column } => {
            assert!(found.abs_diff(line) <= 1 && column > 0, "{error}, wanted line {line}")
        }
        ref place => panic!("{place:?}"),
    }
    for part in parts {
        assert!(error.to_string().contains(part), "{error}: wanted {part}");
    }
}

#[test]
fn the_printed_plan_is_the_plan_as_documented() {
    assert_eq!(Plan::parse(PLAN).unwrap().print(), PLAN);
    assert_eq!(Plan::parse(&format!("\u{feff}\r\n{}", PLAN.replace('\n', "\r\n"))).unwrap().print(), PLAN);
}

#[test]
fn optional_parts_may_be_absent() {
    let short = r#"{"tailvane_plan":1,"comet":{"name":"A","elements":{"perihelion_distance_au":1,"eccentricity":1,"inclination_deg":0,
        "ascending_node_deg":0,"argument_of_perihelion_deg":0,"perihelion_time":"JD 2460000.5 TT"}}}"#;
    let plan = Plan::parse(short).unwrap();
    assert!(plan.time.is_none() && plan.sites.is_empty() && plan.comet.brightness.is_empty());
    assert!(!plan.print().contains("epoch") && !plan.print().contains("observer"));
    assert_eq!(Plan::parse(&plan.print_line()).unwrap(), plan);
}

#[test]
fn refusals_name_key_line_and_what_is_allowed() {
    refuses(
        "\"eccentricity\"",
        "\"ecc\"",
        &["unknown key `ecc`", "comet.elements", "`eccentricity`", "line 7, column"],
    );
    refuses("\"height_m\"", "\"tails\": 1, \"height_m\"", &["unknown key `tails`"]);
    refuses("\"observer\"", "\"camera\": {}, \"observer\"", &["no `pixels_wide` at camera"]);
    refuses("0.52", "\"0.52\"", &["string \"0.52\"", "comet.elements.perihelion_distance_au", "a number"]);
    refuses("0.52", "-0.52", &["line 6, column 33", "-0.52", "comet.elements.perihelion_distance_au", "above 0"]);
    refuses("0.52", "0", &["above 0"]);
    refuses("0.52", "1e999", &["line 6", "number out of range"]);
    refuses("0.52", "NaN", &["line 6", "JSON"]);
    refuses("1.0003", "-0.1", &["line 7, column 23", "eccentricity of 0 or more"]);
    // Orbits on which arithmetic or dust would never come to an end.
    for absurd in ["1e308", "1e20", "1e-12", "5e-324"] {
        refuses("0.52", absurd, &["perihelion_distance_au", "0.0001 to 10000"]);
    }
    refuses("1.0003", "1e100", &["comet.elements.eccentricity", "to 1000"]);
    let near = PLAN.replace("0.52", "0.01").replace("1.0003", "0.5");
    assert!(refusal(&near).to_string().contains("a month or longer"));
    assert!(Plan::parse(&near.replace("0.5,", "0.98,")).is_ok());
    refuses("61.2", "180.1", &["0 to 180"]);
    refuses("201.9", "null", &["ascending_node_deg", "a number"]);
    refuses("201.9", "-361", &["-360 to 360"]);
    refuses("2031-03-04.51732 TT", "2031-03-32.5 TT", &["day 32", "1 to 31", "comet.elements.perihelion_time"]);
    refuses("2031-03-20T05:30:00Z", "2031-03-20T05:30:00", &["`Z`", "at time"]);
    refuses("\"2031-03-20T05:30:00Z\"", "2460000.5", &["a date such as", "at time"]);
    refuses("1.2e-8", "1.2", &["nongravitational.a1_au_d2", "1e-8 au/day^2"]);
    refuses("37.1", "97.1", &["observer.latitude_deg", "-90 to 90"]);
    refuses("\"Invented comet\"", "\"\"", &["comet.name", "a name"]);
    refuses("6.5", "1e3", &["comet.brightness[0].absolute_magnitude", "line 22"]);
    refuses("\"epoch\":", "\"eccentricity\":", &["`eccentricity` twice"]);
    refuses(
        "\"tailvane_plan\": 1",
        "\"tailvane_plan\": 2, \"sounds\": 3",
        &["line 2, column 20", "plan of version 2", "version 1"],
    );
    refuses("\"tailvane_plan\": 1", "\"tailvane_plan\": \"1\"", &["version \"1\""]);
    refuses("\"tailvane_plan\": 1", "\"tailvane_plan\": 0", &["version 0"]);
}

#[test]
fn a_season_is_kept_as_typed_and_refused_by_its_ends() {
    let with = |season: &str| PLAN.replacen("  \"time\"", &format!("  \"season\": {season},\n  \"time\""), 1);
    let good = with(r#"{ "from": "2031-01-01.50 TT", "to": "2031-06-30T00:00:00Z" }"#);
    let plan = Plan::parse(&good).unwrap();
    assert!(plan.print().contains("\"2031-01-01.50 TT\"") && plan.print().contains("\"season\""));
    assert_eq!(Plan::parse(&plan.print()).unwrap(), plan);
    for (season, parts) in [
        (r#"{ "from": "2031-06-30T00:00:00Z", "to": "2031-01-01T00:00:00Z" }"#, ["season.to", "after `from`"]),
        (r#"{ "from": "1950-01-01T00:00:00Z", "to": "2031-01-01T00:00:00Z" }"#, ["season.to", "at most 40 years"]),
        (r#"{ "from": "1650-01-01T00:00:00Z", "to": "2031-01-01T00:00:00Z" }"#, ["season.from", "1900"]),
        (r#"{ "from": "2031-01-01T00:00:00Z" }"#, ["no `to`", "season"]),
        (
            r#"{ "from": "2031-01-01T00:00:00Z", "to": "2031-02-01T00:00:00Z", "step": 1 }"#,
            ["unknown key `step`", "season"],
        ),
    ] {
        let error = refusal(&with(season));
        assert!(matches!(error.place, Place::Line { .. }), "{error}");
        for part in parts {
            assert!(error.to_string().contains(part), "{error}: wanted {part}");
        }
    }
}

#[test]
fn a_branch_of_the_brightness_takes_one_of_two_slopes() {
    let slope =
        PLAN.replace("\"photometric_index_n\": 4.0", "\"slope_2_5n\": 10.7,\n        \"dust_over_gas_at_90_deg\": 3.0");
    let plan = Plan::parse(&slope).unwrap();
    assert_eq!((plan.comet.brightness[0].slope(), plan.print()), (10.7, slope));
    refuses(
        "\"photometric_index_n\": 4.0",
        "\"slope_2_5n\": 10, \"photometric_index_n\": 4",
        &["both of them", "either"],
    );
    refuses("\"photometric_index_n\": 4.0", "\"dust_over_gas_at_90_deg\": 1", &["neither", "comet.brightness[0]"]);
    refuses("\"photometric_index_n\": 4.0", "\"slope_2_5n\": 251", &["slope_2_5n", "-250 to 250"]);
    refuses("4.0\n", "4.0, \"dust_over_gas_at_90_deg\": -1\n", &["dust_over_gas_at_90_deg", "0 to 1000"]);
}

#[test]
fn the_night_section_is_read_printed_and_judged() {
    let end = "\"time\": \"2031-03-20T05:30:00Z\"";
    let with = |section: &str| format!("{end},\n  \"night\": {section}");
    let plan =
        Plan::parse(&PLAN.replace(end, &with("{ \"sun_below_deg\": -12, \"pixel_scale_arcsec\": 1.5 }"))).unwrap();
    assert_eq!(
        (plan.night.sun_below_deg, plan.night.comet_above_deg, plan.night.pixel_scale_arcsec),
        (-12.0, 5.0, Some(1.5))
    );
    assert_eq!(Plan::parse(&plan.print()).unwrap(), plan);
    let refused = |section: &str| refusal(&PLAN.replace(end, &with(section))).to_string();
    assert!(refused("{ \"sun_below\": -9 }").contains("unknown key `sun_below`"));
    for (section, key) in [
        ("{ \"sun_below_deg\": 3 }", "night.sun_below_deg"),
        ("{ \"comet_above_deg\": 95 }", "night.comet_above_deg"),
        ("{ \"pixel_scale_arcsec\": 0 }", "night.pixel_scale_arcsec"),
        ("{ \"longest_trail_px\": -1 }", "night.longest_trail_px"),
    ] {
        assert!(refused(section).contains(key), "{}", refused(section));
    }
}

#[test]
fn a_missing_key_is_named() {
    let error = refusal(&PLAN.replace("      \"eccentricity\": 1.0003,\n", ""));
    assert!(error.to_string().contains("no `eccentricity` at comet.elements"), "{error}");
    assert!(refusal("{}").to_string().contains("no `tailvane_plan`"));
    let kept = PLAN.replace("  \"observer\"", "  \"comets\": [{\"name\": \"\", \"elements\": {}}],\n  \"observer\"");
    assert!(refusal(&kept).to_string().contains("comets[0].elements"), "{}", refusal(&kept));
    for text in ["", "  \n", "5", "null", "[]", "{", "{\"tailvane_plan\": 1", "\u{0}", "tailvane"] {
        let error = refusal(text);
        assert!(matches!(error.place, Place::Line { line: 1.., column: 1.. }), "{text}: {error}");
    }
    assert!(refusal(&format!("{PLAN} x")).to_string().contains("line 35, column 2"));
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 10_000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn a_plan_printed_and_read_is_the_same_plan(plan in plans()) {
        let text = plan.print();
        prop_assert_eq!(&Plan::parse(&text).unwrap(), &plan);
        prop_assert_eq!(&Plan::parse(&plan.print_line()).unwrap(), &plan);
        prop_assert_eq!(Plan::parse(&text).unwrap().print(), text);
    }

    #[test]
    fn a_changed_plan_never_panics(place in 0..PLAN.len(), cut in 0..20_usize, new in "[\\PC\u{0}\n]{0,3}") {
        let mut text = PLAN.to_string();
        let end = (place + cut).min(text.len());
        text.replace_range(place..end, &new);
        if let Ok(plan) = Plan::parse(&text) {
            prop_assert_eq!(&Plan::parse(&plan.print()).unwrap(), &plan);
        }
    }

    #[test]
    fn any_text_never_panics(text in "[\\PC\n\\[\\]{}:,\"]{0,80}") {
        let _ = Plan::parse(&text);
    }
}
