//! `tailvane season` as a script and a calendar meet it: columns, forms, escapes, the same bytes again, refusals.

#[path = "common/command.rs"]
mod command;

use command::tailvane;
use std::process::Output;

/// An invented comet that crosses its plane; its name is as nasty as a name may be.
fn plan(name: &str) -> String {
    format!(
        r#"{{ "tailvane_plan": 1, "comet": {{ "name": "{name}", "elements": {{
        "perihelion_distance_au": 0.52, "eccentricity": 1.0003, "inclination_deg": 61.2, "ascending_node_deg": 201.9,
        "argument_of_perihelion_deg": 33.4, "perihelion_time": "2031-03-04.51732 TT", "epoch": "2030-02-20.0 TT" }} }},
        "observer": {{ "name": "Invented hill", "longitude_deg": 23.4, "latitude_deg": 37.1 }} }}"#
    )
}

const RANGE: [&str; 4] = ["--from", "2031-02-20T00:00:00Z", "--to", "2031-11-01T00:00:00Z"];

fn run(arguments: &[&str], input: &str) -> Output {
    tailvane(&[&["season", "-"], arguments].concat(), input)
}

fn said(more: &[&str], input: &str) -> String {
    let output = run(&[&RANGE[..], more].concat(), input);
    assert_eq!(output.status.code(), Some(0), "{more:?}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).expect("UTF-8")
}

fn refused(arguments: &[&str], code: i32) -> String {
    let output = run(arguments, &plan("Invented comet"));
    assert_eq!(output.status.code(), Some(code), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
    assert!(output.stdout.is_empty(), "{arguments:?}");
    String::from_utf8(output.stderr).expect("UTF-8")
}

#[test]
fn csv_has_the_fixed_columns_in_order_of_time_and_json_the_same_numbers() {
    let text = said(&[], &plan("Invented comet"));
    assert_eq!(text.lines().next(), Some("time,event,value,unit,note,caution"));
    let mut reader = csv::Reader::from_reader(text.as_bytes());
    let rows: Vec<csv::StringRecord> = reader.records().map(|row| row.expect("a row")).collect();
    assert!(rows.windows(2).all(|pair| pair[0][0] <= pair[1][0]));
    let row = |event: &str| rows.iter().find(|row| &row[1] == event).unwrap_or_else(|| panic!("no {event}\n{text}"));
    // 2031-03-04.51732 TT less 69.184 s.
    assert_eq!(&row("perihelion")[0], "2031-03-04T12:23:47.264Z");
    assert_eq!((&row("perihelion")[2], &row("perihelion")[3]), ("0.52", "au"));
    let crossing = row("orbit-plane crossing");
    let opposite =
        rows.iter().any(|row| &row[1] == "orbit-plane crossing" && row[4].contains("old dust can lie sunward"));
    assert!(opposite && crossing[4].contains("uncertain by"), "{text}");
    assert!(crossing[5].contains("days from their epoch"), "{}", &crossing[5]);
    let json: serde_json::Value = serde_json::from_str(&said(&["--json"], &plan("Invented comet"))).expect("JSON");
    let list = json.as_array().expect("a list");
    assert_eq!(list.len(), rows.len());
    for (object, row) in list.iter().zip(&rows) {
        assert_eq!(object["time"].as_str(), Some(&row[0]));
        assert_eq!(object["value"].as_f64(), row[2].parse().ok());
        assert!(object["cautions"].is_array());
    }
}

/// Content lines of a calendar: unfolded (RFC 5545, 3.1).
fn content_lines(text: &str) -> Vec<String> {
    text.replace("\r\n ", "").split_terminator("\r\n").map(str::to_owned).collect()
}

#[test]
fn the_calendar_is_folded_escaped_and_the_same_each_time() {
    let name = "Kometenstra\u{df}e; a,b \\\\ END:VEVENT \u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}\u{661f}";
    let text = said(&["--calendar"], &plan(name));
    assert_eq!(text, said(&["--calendar"], &plan(name)));
    assert!(text.ends_with("END:VCALENDAR\r\n"));
    assert!(!text.replace("\r\n", "").contains(['\r', '\n']), "a bare line end");
    assert!(text.split("\r\n").all(|line| line.len() <= 75), "a line of more than 75 octets");
    assert!(text.contains("\r\n "), "nothing was long enough to fold");
    let lines = content_lines(&text);
    let count = |wanted: &str| lines.iter().filter(|line| *line == wanted).count();
    let events = count("BEGIN:VEVENT");
    assert!(events > 5 && events == count("END:VEVENT"), "{events}");
    let summaries: Vec<&String> = lines.iter().filter(|line| line.starts_with("SUMMARY:")).collect();
    assert!(summaries.iter().all(|line| line.contains("\\; a\\,b \\\\ END")), "{summaries:?}");
    let perihelion = lines.iter().position(|line| line.ends_with(": perihelion")).expect("a perihelion");
    assert_eq!(lines[perihelion - 1], "DTSTART:20310304T122400Z");
    assert_eq!(lines[perihelion - 2], "DTSTAMP:20310304T122400Z");
    let mut uids: Vec<&String> = lines.iter().filter(|line| line.starts_with("UID:")).collect();
    uids.sort();
    uids.dedup();
    assert_eq!(uids.len(), events);
}

#[test]
fn tables_for_people_round_to_the_minute_and_hold_no_markup_of_a_name() {
    let name = "[x](http://a.b) |=1+1 <b>";
    for (form, foul) in [("markdown", "[x]("), ("wiki", "|=1+1 <b>")] {
        let text = said(&["--table", form], &plan(name));
        assert!(!text.contains(foul), "{form}: {text}");
        assert!(text.contains("perihelion"), "{form}");
    }
    let plain = said(&["--table", "plain"], &plan("Invented comet"));
    assert!(plain.contains("2031-03-04 12:24 UTC") && plain.contains("0.5200 au"), "{plain}");
    assert!(plain.starts_with("Season of Invented comet, seen from the Earth's centre"));
}

#[test]
fn a_plan_with_a_season_needs_no_times() {
    let [_, from, _, to] = RANGE;
    let season = format!("\"season\": {{ \"from\": \"{from}\", \"to\": \"{to}\" }}, \"comet\"");
    let output = run(&[], &plan("Invented comet").replacen("\"comet\"", &season, 1));
    assert_eq!(String::from_utf8(output.stdout).expect("UTF-8"), said(&[], &plan("Invented comet")));
    assert!(refused(&[], 2).contains("a plan with a season"));
}

#[test]
fn wrong_ranges_and_forms_are_refused() {
    let [_, from, _, to] = RANGE;
    assert!(refused(&["--from", to, "--to", from], 1).contains("--to: "));
    assert!(refused(&["--from", "1899-01-01T00:00:00Z", "--to", to], 1).contains("--from: "));
    assert!(refused(&["--from", "1950-01-01T00:00:00Z", "--to", to], 1).contains("at most 40 years"));
    assert!(refused(&["--from", from], 2).contains("--from and --to"));
    assert!(refused(&["--from", from, "--to", to, "--step", "1d"], 2).contains("finds its times"));
    assert!(refused(&["--from", from, "--to", to, "--table", "latex"], 2).contains("plain, markdown or wiki"));
    assert!(refused(&["--from", from, "--to", to, "--calendar", "--json"], 2).contains("one of"));
}
