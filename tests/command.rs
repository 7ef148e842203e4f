//! The command line as a script meets it: columns, forms, cautions, refusals and exit codes.

#[path = "common/command.rs"]
mod command;

use command::tailvane as run;
use std::collections::BTreeMap;
use std::path::PathBuf;

/// An invented comet, seen from the geocentre.
const PLAN: &str = r#"{ "tailvane_plan": 1, "comet": { "name": "Invented comet Alder", "elements": {
    "perihelion_distance_au": 0.52, "eccentricity": 1.0003, "inclination_deg": 61.2, "ascending_node_deg": 201.9,
    "argument_of_perihelion_deg": 33.4, "perihelion_time": "2031-03-04.51732 TT", "epoch": "2031-02-20.0 TT" } },
    "time": "2031-03-20T05:30:00Z" }"#;

/// Standard output of a call that must succeed.
fn said(arguments: &[&str], input: &str) -> String {
    let output = run(arguments, input);
    assert_eq!(output.status.code(), Some(0), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).expect("UTF-8")
}

/// Standard error of a call that must end with this code and say nothing on standard output.
fn refused(arguments: &[&str], input: &str, code: i32) -> String {
    let output = run(arguments, input);
    assert_eq!(output.status.code(), Some(code), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
    assert!(output.stdout.is_empty(), "{arguments:?}: {}", String::from_utf8_lossy(&output.stdout));
    String::from_utf8(output.stderr).expect("UTF-8")
}

type Rows = Vec<BTreeMap<String, String>>;

fn rows(text: &str) -> Rows {
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    reader.deserialize().map(|row| row.expect("a row")).collect()
}

fn number(row: &BTreeMap<String, String>, key: &str) -> f64 {
    row[key].parse().unwrap_or_else(|_| panic!("{key}: '{}'", row[key]))
}

/// A file of its own, in the build's temporary folder.
fn file(name: &str, text: &str) -> PathBuf {
    let path = PathBuf::from(env!("CARGO_TARGET_TMPDIR")).join(name);
    std::fs::write(&path, text).expect("a file can be written");
    path
}

#[test]
fn ion_has_the_fixed_columns_and_its_angles_agree_with_those_of_the_sky() {
    let text = said(&["ion", "-", "--wind-km-s", "300,400"], PLAN);
    assert!(
        text.starts_with("wind_km_s,axis_position_angle_deg,angle_from_antisolar_deg,aberration_deg,caution\n300,")
    );
    let sky = &rows(&said(&["sky", "-"], PLAN))[0];
    let ions = rows(&text);
    assert_eq!(ions.len(), 2);
    for row in &ions {
        let back = number(row, "axis_position_angle_deg") - number(row, "angle_from_antisolar_deg");
        assert!((back - number(sky, "antisolar_position_angle_deg")).abs() < 1e-9);
    }
    // Without winds: the plan's slowest, axis and fastest.
    let winds: Vec<f64> = rows(&said(&["ion", "-"], PLAN)).iter().map(|row| number(row, "wind_km_s")).collect();
    assert_eq!(winds, [300.0, 400.0, 800.0]);
}

#[test]
fn several_times_put_the_time_first() {
    let text = said(&["ion", "-", "--at", "2031-03-20T05:30:00Z", "--at", "2031-03-21.0 TT"], PLAN);
    let rows = rows(&text);
    assert!(text.starts_with("time,wind_km_s,"));
    assert_eq!(rows.len(), 6);
    assert_eq!(rows[0]["time"], "2031-03-20T05:30:00.000Z");
    let dust = [
        "dust",
        "-",
        "--from",
        "2031-03-20T00:00Z",
        "--to",
        "2031-03-22T00:00Z",
        "--step",
        "1d",
        "--beta",
        "1",
        "--ages",
        "5",
    ];
    let text = said(&dust, PLAN);
    assert!(text.starts_with("time,beta,age_days,"));
    assert_eq!(text.lines().count(), 4);
}

#[test]
fn dust_comes_beta_by_beta_with_the_fixed_columns() {
    let text = said(&["dust", "-", "--beta", "0.1,1.2", "--ages", "0,10,30"], PLAN);
    assert!(
        text.starts_with("beta,age_days,x_au,y_au,z_au,xi_deg,eta_deg,position_angle_deg,separation_deg,caution\n")
    );
    let rows = rows(&text);
    let named: Vec<[f64; 2]> = rows.iter().map(|row| [number(row, "beta"), number(row, "age_days")]).collect();
    assert_eq!(named, [[0.1, 0.0], [0.1, 10.0], [0.1, 30.0], [1.2, 0.0], [1.2, 10.0], [1.2, 30.0]]);
    for row in &rows {
        let (xi, eta) = (number(row, "xi_deg").to_radians(), number(row, "eta_deg").to_radians());
        assert!((xi.hypot(eta).atan().to_degrees() - number(row, "separation_deg")).abs() < 1e-12);
        if number(row, "age_days") == 0.0 {
            // Dust that leaves now is the nucleus, light time and all, and has no direction.
            assert!(xi.hypot(eta) < 1e-13 && row["position_angle_deg"].is_empty());
        } else {
            let angle = xi.atan2(eta).to_degrees().rem_euclid(360.0);
            assert!((angle - number(row, "position_angle_deg")).abs() < 1e-9);
        }
        assert_eq!(row["caution"], "");
    }
    // The place of the youngest is the comet's, at the light time that `sky` implies.
    let sky = &self::rows(&said(&["sky", "-"], PLAN))[0];
    let r =
        ["x_au", "y_au", "z_au"].map(|key| number(&rows[0], key)).iter().map(|part| part * part).sum::<f64>().sqrt();
    assert!((r - number(sky, "sun_distance_au")).abs() < 1e-12);
}

#[test]
fn dust_without_betas_or_ages_takes_round_ones_from_the_plans_ranges() {
    let rows = rows(&said(&["dust", "-"], PLAN));
    let mut betas: Vec<f64> = rows.iter().map(|row| number(row, "beta")).collect();
    betas.dedup();
    assert_eq!(betas, [0.001, 0.003, 0.01, 0.03, 0.1, 0.3, 1.0]);
    assert_eq!(rows.len(), 7 * 10);
}

#[test]
fn grains_are_read_in_any_order_of_columns_and_leave_with_their_ejection() {
    let plan = file("grains.plan.json", PLAN);
    let plan = plan.to_str().expect("a plain path");
    let grains = "\u{feff} normal_km_s , age_days,beta\r\n0,10,0.1\r\n\r\n\"0.5\", 10,0.1\r\n";
    let rows = rows(&said(&["dust", plan, "--grains", "-"], grains));
    let plain = self::rows(&said(&["dust", plan, "--beta", "0.1", "--ages", "10"], ""));
    assert_eq!(rows.len(), 2);
    assert_eq!(rows[0], plain[0]);
    // Half a km/s for ten days, along the normal: 0.0029 au, a little less as the Sun pulls it back.
    let apart = ["x_au", "y_au", "z_au"].map(|key| number(&rows[1], key) - number(&rows[0], key));
    let apart = apart.iter().map(|part| part * part).sum::<f64>().sqrt();
    assert!((0.0026..0.0030).contains(&apart), "{apart}");
}

#[test]
fn json_holds_the_same_numbers_as_csv() {
    for call in [vec!["ion", "-"], vec!["dust", "-", "--beta", "0.3,2.5", "--ages", "0,20,1500"], vec!["sky", "-"]] {
        let rows = rows(&said(&call, PLAN));
        let json = said(&[&call[..], &["--json"]].concat(), PLAN);
        let json: serde_json::Value = serde_json::from_str(&json).expect("JSON");
        let list = json.as_array().expect("a list");
        assert_eq!(list.len(), rows.len());
        for (object, row) in list.iter().zip(&rows) {
            assert_eq!(object.as_object().expect("an object").len(), row.len());
            for (key, text) in row {
                match key.as_str() {
                    "caution" => {
                        let sentences: Vec<&str> =
                            object["cautions"].as_array().expect("a list").iter().filter_map(|s| s.as_str()).collect();
                        assert_eq!(&sentences.join(" "), text);
                    }
                    _ if text.is_empty() => assert!(object[key].is_null(), "{key}"),
                    _ => match object[key].as_f64() {
                        Some(number) => assert_eq!(number, text.parse::<f64>().expect("a number"), "{key}"),
                        None => assert_eq!(object[key].as_str(), Some(text.as_str())),
                    },
                }
            }
        }
    }
}

#[test]
fn grains_that_cannot_be_are_cautioned_and_never_give_a_nan() {
    let sungrazer = PLAN.replace("0.52", "0.003").replace("1.0003", "1.0");
    let text = said(&["dust", "-", "--beta", "0,0.5,1,2", "--ages", "1,15.70,15.705,15.71,40"], &sungrazer);
    assert!(!text.to_lowercase().contains("nan") && !text.contains("inf"), "{text}");
    let cautions: Vec<String> = rows(&text).into_iter().map(|mut row| row.remove("caution").expect("there")).collect();
    for words in ["leads through the Sun", "inside the Sun when"] {
        assert!(cautions.iter().any(|caution| caution.contains(words)), "{words}: {cautions:?}");
    }
    let periodic = PLAN.replace("1.0003", "0.6");
    let rows = rows(&said(&["dust", "-", "--beta", "0.01", "--ages", "50,1400"], &periodic));
    assert!(rows[0]["caution"].is_empty() && rows[1]["caution"].contains("times around the Sun"), "{rows:?}");
}

#[test]
fn a_wrong_grain_is_refused_at_its_line_and_column() {
    let plan = file("wrong.plan.json", PLAN);
    let plan = plan.to_str().expect("a plain path");
    for (grains, place, allowed) in [
        ("beta,age_days\n0.1,10\n-0.1,3\n", "line 3, column 1", "a number from 0"),
        ("beta,age_days\n0.1,-3\n", "line 2, column 5", "a number from 0"),
        ("beta,age_days\n0.1,NaN\n", "line 2, column 5", "a number from 0"),
        ("beta,age_days\n0.1, inf\n", "line 2, column 6", "a number from 0"),
        ("beta,age_days\n0.1,ten\n", "line 2, column 5", "a number from 0"),
        ("beta,age_days\n0.1,\n", "line 2, column 5", "a number from 0"),
        ("beta,age_days,radial_km_s\n0.1,1,nan\n", "line 2, column 7", "a number from -1000"),
        ("beta,radial_km_s\n0.1,1\n", "line 1, column 1", "beta and age_days"),
        ("beta,age_days,speed\n0.1,1,2\n", "line 1, column 15", "only beta, age_days"),
        ("beta,age_days,beta\n0.1,1,2\n", "line 1, column 15", "each column once"),
        ("beta,age_days\n0.1,10,3\n", "line 2, column 8", "2 fields"),
        ("beta,age_days\n0.1\n", "line 2, column 1", "2 fields"),
        ("\n \n", "line 1, column 1", "a header line"),
    ] {
        let message = refused(&["dust", plan, "--grains", "-"], grains, 1);
        assert!(message.contains(place) && message.contains(allowed), "{grains:?}: {message}");
    }
    let named = file("wrong.csv", "beta,age_days\n0.1,x\n");
    let message = refused(&["dust", plan, "--grains", named.to_str().expect("a plain path")], "", 1);
    assert!(message.contains("wrong.csv: line 2, column 5"), "{message}");
    let message = refused(&["dust", plan, "--grains", "no such file"], "", 1);
    assert!(message.contains("no such file"), "{message}");
}

#[test]
fn wrong_values_are_refused_and_wrong_calls_are_usage() {
    for (call, words) in [
        (vec!["dust", "-", "--beta", "-1"], "--beta: found '-1'; expected a number from 0"),
        (vec!["dust", "-", "--ages", "3,NaN"], "--ages: found 'NaN'"),
        (vec!["dust", "-", "--ages", "3,,4"], "--ages: found nothing"),
        (vec!["ion", "-", "--wind-km-s", "0"], "--wind-km-s: found '0'"),
        (vec!["ion", "-", "--at", "2250-01-01T00:00Z"], "1900-01-01 to 2100-12-31"),
        (vec!["draw", "-", "--view", "sky", "--out", "x.svg", "--width", "5"], "--width: found '5'"),
        (vec!["draw", "-", "--view", "sky", "--out", "no folder/x.svg"], "no folder/x.svg"),
        (vec!["draw", "-", "--view", "season", "--out", "x.svg", "--curves", "beauty"], "curve 'beauty'"),
        (
            ["draw - --view season --out x.svg --from", "2031-03-02T00:00:00Z --to 2031-03-01T00:00:00Z"]
                .iter()
                .flat_map(|part| part.split(' '))
                .collect(),
            "season.to",
        ),
    ] {
        let message = refused(&call, PLAN, 1);
        assert!(message.contains(words), "{call:?}: {message}");
    }
    for call in [
        vec!["dust"],
        vec!["dust", "-", "--grains", "-"],
        vec!["dust", "-", "--grains", "x", "--beta", "1"],
        vec!["ion", "-", "--winds", "400"],
        vec!["draw", "-", "--out", "x.svg"],
        vec!["draw", "-", "--view", "sky"],
        vec!["draw", "-", "--view", "moon", "--out", "x.svg"],
        vec!["draw", "-", "--view", "season", "--out", "x.svg", "--from", "2031-03-01T00:00:00Z"],
        vec!["draw", "-", "--view", "sky", "--out", "x.svg", "--theme", "beige"],
        vec!["tail", "-"],
    ] {
        let message = refused(&call, PLAN, 2);
        assert!(message.contains("tailvane dust PLAN"), "{call:?}: {message}");
    }
}

#[test]
fn doubts_about_the_elements_are_said_with_the_dust() {
    let old = PLAN.replace("2031-02-20.0 TT", "2029-02-20.0 TT");
    let output = run(&["dust", "-", "--beta", "1", "--ages", "5"], &old);
    assert_eq!(output.status.code(), Some(0));
    let message = String::from_utf8(output.stderr).expect("UTF-8");
    assert_eq!(message.matches("days from their epoch").count(), 1, "{message}");
    let rows = rows(&said(&["ion", "-"], &old));
    assert!(rows[0]["caution"].contains("days from their epoch"));
}

#[test]
fn draw_writes_the_same_picture_each_time_in_the_size_and_theme_asked_for() {
    for view in ["sky", "orbit"] {
        let draw = |name: &str, theme: &str| {
            let path = file(name, "");
            let path = path.to_str().expect("a plain path");
            said(
                &["draw", "-", "--view", view, "--out", path, "--width", "900", "--height", "700", "--theme", theme],
                PLAN,
            );
            std::fs::read_to_string(path).expect("a picture")
        };
        let (one, two) = (draw(&format!("{view}-1.svg"), "dark"), draw(&format!("{view}-2.svg"), "dark"));
        assert_eq!(one, two);
        assert_ne!(one, draw(&format!("{view}-3.svg"), "paper"));
        let document = roxmltree::Document::parse(&one).expect("well-formed");
        let svg = document.root_element();
        assert_eq!((svg.attribute("width"), svg.attribute("height")), (Some("900"), Some("700")));
        assert!(one.contains("Invented comet Alder"));
    }
}

#[test]
fn draw_writes_the_season_between_two_dates_with_its_events_and_the_plan_can_hold_them() {
    let draw = |name: &str, plan: &str, options: &[&str]| {
        let path = file(name, "");
        let path = path.to_str().expect("a plain path");
        said(&[&["draw", "-", "--view", "season", "--out", path, "--width", "900"], options].concat(), plan);
        std::fs::read_to_string(path).expect("a picture")
    };
    let ends = ["2031-02-10T00:00:00Z", "2031-03-05T00:00:00Z"];
    let asked = draw("season-1.svg", PLAN, &["--from", ends[0], "--to", ends[1]]);
    let document = roxmltree::Document::parse(&asked).expect("well-formed");
    assert_eq!(document.root_element().attribute("width"), Some("900"));
    for words in
        ["Season of Invented comet Alder", ">perihelion<", "From 2031-02-10 to 2031-03-05 UTC", "orbit-plane angle"]
    {
        assert!(asked.contains(words), "{words}");
    }
    let season = format!("\"season\": {{\"from\": \"{}\", \"to\": \"{}\"}}, \"comet\"", ends[0], ends[1]);
    let held = PLAN.replacen("\"comet\"", &season, 1);
    assert_eq!(draw("season-2.svg", &held, &[]), asked);
    let other = draw("season-3.svg", &held, &["--curves", "phase_angle_deg,sun_distance_au"]);
    assert!(other.contains("distance to the Sun") && !other.contains("orbit-plane angle"));
}

/// The plan seen from an invented hill.
fn from_hill() -> String {
    PLAN.replacen(
        "\"time\"",
        "\"observer\": { \"name\": \"Invented hill\", \"longitude_deg\": 23.4, \"latitude_deg\": 37.1 }, \"time\"",
        1,
    )
}

#[test]
fn a_night_is_rows_of_the_clock_with_events_among_them() {
    let plan = from_hill();
    let text = said(&["night", "-", "--date", "2031-03-20"], &plan);
    let header = text.lines().next().expect("a header");
    assert!(
        header.starts_with("time,event,part_of_night,altitude_deg,azimuth_deg,air_mass,sun_altitude_deg,"),
        "{header}"
    );
    assert!(header.ends_with(",caution"));
    let found = rows(&text);
    for event in ["sunset", "sunrise", "astronomical twilight ends", "astronomical twilight begins", "comet highest"] {
        assert_eq!(found.iter().filter(|row| row["event"] == event).count(), 1, "{event}");
    }
    assert!(found.windows(2).all(|pair| pair[0]["time"] <= pair[1]["time"]));
    let plain: Vec<_> = found.iter().filter(|row| row["event"].is_empty()).collect();
    assert!(plain.len() > 60 && plain.iter().all(|row| row["time"].ends_with("0:00.000Z")));
    // The same numbers as `sky` at a row's time, and the same in JSON.
    let row = plain[30];
    let sky = &rows(&said(&["sky", "-", "--at", &row["time"]], &plan))[0];
    for key in [
        "altitude_deg",
        "azimuth_deg",
        "sun_altitude_deg",
        "moon_separation_deg",
        "zenith_position_angle_deg",
        "motion_arcsec_per_minute",
    ] {
        assert_eq!(number(row, key), number(sky, key), "{key}");
    }
    let json: serde_json::Value =
        serde_json::from_str(&said(&["night", "-", "--date", "2031-03-20", "--json"], &plan)).expect("JSON");
    assert_eq!(json.as_array().map(Vec::len), Some(found.len()));
    assert!(json[0]["total_magnitude"].is_null() && json[0]["cautions"].is_array());
    // The night of the plan's own time is the one that began the evening before.
    assert_eq!(said(&["night", "-"], &plan), said(&["night", "-", "--date", "2031-03-19"], &plan));
    let fine = rows(&said(&["night", "-", "--step", "1m"], &plan)).len();
    assert!(fine > 8 * found.len(), "{fine}");
}

#[test]
fn a_night_refuses_what_it_cannot_use() {
    let plan = from_hill();
    assert!(refused(&["night", "-"], PLAN, 1).contains("observer"));
    assert!(refused(&["night", "-", "--date", "20.3.2031"], &plan, 1).contains("2031-03-20"));
    assert!(refused(&["night", "-", "--date", "2150-01-01"], &plan, 1).contains("2100-12-31"));
    assert!(refused(&["night", "-", "--at", "2031-03-20T00:00:00Z"], &plan, 2).contains("--date"));
    assert!(refused(&["night", "-", "--step", "0.5s"], &plan, 2).contains("a second"));
    let polar = plan.replace("37.1", "78.0");
    let first = &rows(&said(&["night", "-", "--date", "2031-06-20"], &polar))[0];
    assert!(first["caution"].contains("does not set"), "{}", first["caution"]);
}

#[test]
fn camera_has_its_columns_and_its_angles_agree_with_those_of_the_sky() {
    let with = |more: &str| {
        PLAN.replace(
            "\"time\"",
            &format!("\"camera\": {{ \"pixels_wide\": 6000, \"pixels_high\": 4000, \"scale_arcsec_per_pixel\": 2{more} }}, \"time\""),
        )
    };
    let plan = with(", \"image_up_position_angle_deg\": 40");
    let text = said(&["camera", "-"], &plan);
    assert!(
        text.starts_with("time,image_up_position_angle_deg,long_side_position_angle_deg,field_width_deg,"),
        "{text}"
    );
    let (row, sky) = (&rows(&text)[0], &rows(&said(&["sky", "-"], &plan))[0]);
    // The nucleus in the middle, as on the sky: clockwise from image up is against the sense of position angle.
    let sum = number(row, "antisolar_clockwise_from_up_deg") + number(sky, "antisolar_position_angle_deg") - 40.0;
    assert!((sum / 360.0 - (sum / 360.0).round()).abs() < 1e-9, "{sum}");
    assert_eq!(number(row, "long_side_position_angle_deg").round(), 130.0);
    for (key, of_sky) in
        [("middle_right_ascension_deg", "right_ascension_deg"), ("middle_declination_deg", "declination_deg")]
    {
        assert!((number(row, key) - number(sky, of_sky)).abs() < 1e-9);
    }
    assert!(refused(&["camera", "-"], PLAN, 1).contains("no camera"));
    assert!(refused(&["camera", "-"], &with(", \"mount\": \"altazimuth\""), 1).contains("a site"));
    assert!(refused(&["camera", "-"], &with(", \"nucleus_up_px\": 1e7"), 1).contains("camera.nucleus_up_px"));
    let json: serde_json::Value = serde_json::from_str(&said(&["camera", "-", "--json"], &plan)).expect("JSON");
    assert_eq!(json[0]["nucleus_right_px"], 0.0);
}
