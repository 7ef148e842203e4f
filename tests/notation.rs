//! Published notations of elements. Invented comets, except where a source is named.

#[path = "common/records.rs"]
mod records;

use records::*;
use tailvane::error::Place;
use tailvane::orbit::elements::Brightness;
use tailvane::orbit::notation;
use tailvane::plan::{Plan, paste};

#[test]
fn one_comet_reads_the_same_in_every_notation() {
    for text in [ONE_LINE, BLOCK, PAIRS] {
        assert_invented(&comet(text));
        assert_invented(&comet(&text.replace('\n', "\r\n")));
        assert_invented(&comet(&text.replace('\n', "\r")));
        assert_invented(&comet(&format!("\u{feff}\n\n{text}\n\n")));
        assert_invented(&comet(&text.trim_end().replace('-', "\u{2212}").replace("+/\u{2212}", "+/-")));
    }
    let law = Brightness::with_index(6.5, 4.0);
    assert_eq!(comet(ONE_LINE).brightness, std::slice::from_ref(&law));
    assert_eq!(comet(PAIRS).brightness, [law]);
    let push = comet(PAIRS).elements.nongravitational.unwrap();
    assert_eq!((push.a1_au_d2, push.a2_au_d2, push.a3_au_d2), (1.2e-8, -3e-10, 0.0));
}

#[test]
fn printed_circulars_vary_and_read_the_same() {
    for text in [
        // Two quantities on a line with signs of equality, as telegrams print them.
        "     COMET C/2031 A1 (Invented)\n\n                    Epoch = 2031 Feb. 20.0 TT\n     T = 2031 Mar.  4.51732 TT         Peri. =  33.40000\n     e = 1.0003000                      Node  = 201.90000   2000.0\n     q = 0.5200000 AU                   Incl. =  61.20000\n",
        "C/2031 A1 (Invented)\nEpoch 2031 February 20.0 TT\nT 2031 March 4.51732\nq 0.5200000 +/- 0.0000002 AU\ne 1.0003000 \u{b1} 0.0000012\nPeri 33.40000 +/-0.00002\nNode 201.90000\u{b0} (J2000.0)\nIncl 61.20000(2)",
        "C/2031 A1 (Invented)\tT 2031 Mar 4.51732 ET\tq 0.52\te 1.0003\tPeri. 33.4\tNode 201.9\tIncl. 61.2\tEpoch 2031 Feb 20.0",
        "C/2031 A1 (Invented)  q=0.52, e=1.0003, i=61.2, node=201.9, peri=33.4, Tp=20310304.51732, epoch=2031-02-20.0",
        "object: C/2031 A1 (Invented)\nperihelion_time: 2031-03-04.51732 TT\nepoch: JD 2462917.5\nperihelion_distance_au: 0.52\neccentricity: 1.0003\ninclination_deg: 61.2\nascending_node_deg: 201.9\nargument_of_perihelion_deg: 33.4",
    ] {
        assert_invented(&comet(text));
    }
    // What stands before the name that begins a comet is not that comet's.
    refuses(&format!("T = 2031-03-04.5 TT\n{}", PAIRS.replace("T = 2031-03-04.51732 TT\n", "")), 2, 0, &["without T"]);
}

#[test]
fn dates_read_in_every_printed_form() {
    for (date, stamp) in [
        ("2031 Mar. 4.51732 TT", "2031-03-04.51732 TT"),
        ("2031 March 04.51732", "2031-03-04.51732 TT"),
        ("2031 sept 4.5 UT", "2031-09-04.5 UTC"),
        ("2031 3 4.5", "2031-03-04.5 TT"),
        ("2031-Mar-04.5", "2031-03-04.5 TT"),
        ("2031/03/04.5 TDT", "2031-03-04.5 TT"),
        ("2031-03-04T12:00:00Z", "2031-03-04T12:00:00Z"),
        ("20310304.51732", "2031-03-04.51732 TT"),
        ("JD 2462929.01732", "JD 2462929.01732 TT"),
        ("2462929.01732 TDB", "JD 2462929.01732 TDB"),
        ("MJD 62929.5", "2031-03-04.5 TT"),
        ("62929.5 MJD", "2031-03-04.5 TT"),
        ("837 Feb. 28.3", "0837-02-28.3 TT"),
        ("2031 Mar. 4.51732 +/- 0.00002 TT", "2031-03-04.51732 TT"),
    ] {
        let text = PAIRS.replace("2031-03-04.51732 TT", date);
        assert_eq!(comet(&text).elements.perihelion_time.to_string(), stamp, "{date}");
    }
    for (date, parts) in [
        ("", ["no date", "a date such as"]),
        ("2031", ["2031", "a date such as"]),
        ("2031 Mar.", ["no day", "the day"]),
        ("2031 Mrz. 4.5", ["Mrz.", "a month"]),
        ("2031 Mar. 32.5", ["day 32", "1 to 31"]),
        ("2031 Feb. 29.5", ["day 29", "1 to 28"]),
        ("2031 13 4.5", ["13", "month"]),
        ("2031-03-32.5 TT", ["day 32", "1 to 31"]),
        ("2031-03-04T12:00:00", ["the end of the date", "`Z`"]),
        ("62928.5", ["62928.5", "a date such as"]),
        ("NaN", ["NaN", "a date such as"]),
        ("JD", ["no number", "after `JD`"]),
        ("JD NaN", ["NaN", "Julian date"]),
        ("2031 Mar. 4.51732 TT = JDT 2462940.5", ["JD 2462940.5", "2031-03-04.51732 TT"]),
    ] {
        refuses(&PAIRS.replace("2031-03-04.51732 TT", date), 7, 0, &parts);
    }
}

#[test]
fn real_comets_read_from_lines_in_the_published_columns() {
    // C/2011 L4 and C/2022 E3 (JPL small-body table, ELEMENTS.COMET, orbits JPL 137 and 77), set in the columns here.
    let text = "    CK11L040  2013 03 10.1700  0.301544  1.000033  333.6516   65.6659   84.2082  20130314   5.5  3.2  C/2011 L4\n    CK22E030  2023 01 12.7852  1.112244  1.000302  145.8149  302.5550  109.1695  20221021  10.5  4.0  C/2022 E3";
    let comets = comets_of(text);
    assert_eq!(comets[0].elements.perihelion_distance_au, 0.301544);
    assert_eq!(comets[0].elements.perihelion_time.to_string(), "2013-03-10.1700 TT");
    assert_eq!(comets[1].elements.inclination_deg, 109.1695);
    assert_eq!(comets[1].name, "C/2022 E3");
}

#[test]
fn names_come_from_the_designation_where_none_is_printed() {
    let named = |head: &str| comet(&format!("{head}{}", &ONE_LINE[12..100])).name;
    assert_eq!(named("    CK31A010"), "C/2031 A1");
    assert_eq!(named("    PK31A01b"), "P/2031 A1-B");
    assert_eq!(named("0412P       "), "412P");
    assert_eq!(named("0412P     az"), "412P-AZ");
    assert_eq!(named("0412PK31A010"), "412P (P/2031 A1)");
    assert_eq!(named("    C       "), "Comet without a name");
    refuses(&format!("    CK31?010{}", &ONE_LINE[12..100]), 1, 6, &["K31?010", "packed"]);
}

#[test]
fn one_line_records_vary_in_length() {
    let short = ONE_LINE
        .replace(" 0.520000", " 0.52    ")
        .replace("1.000300", "1.0     ")
        .replace(" 33.4000", " 33.4   ")
        .replace("201.9000", "201.9   ");
    let short = comet(&short[..76]);
    assert_eq!((short.elements.perihelion_distance_au, short.elements.eccentricity), (0.52, 1.0));
    assert!(short.elements.epoch.is_none() && short.brightness.is_empty());
    let bare = comet(&ONE_LINE[..79]);
    assert_eq!(bare.elements.inclination_deg, 61.2);
    let mut without_epoch = ONE_LINE.to_string();
    without_epoch.replace_range(81..89, "        ");
    assert!(comet(&without_epoch).elements.epoch.is_none());
    assert_eq!(comet(&ONE_LINE.replace(" 6.5  4.0", "-1.5 10.0")).brightness[0].absolute_magnitude, -1.5);
    assert_eq!(comet(&ONE_LINE.replace(" 6.5  4.0", "6.55 4.25")).brightness[0].photometric_index_n, Some(4.25));
    assert_eq!(comet(&format!("{ONE_LINE}   and more text")).name, "C/2031 A1 (Invented)");
    let moved_up = ONE_LINE.split_whitespace().collect::<Vec<_>>().join(" ");
    refuses(&moved_up, 1, 0, &["column"]);
    let reading = notation::read(&ONE_LINE.replace(" 6.5  4.0", " 6.5     "));
    assert!(reading.comets[0].comet.brightness.is_empty() && reading.notices[0].text.contains("together"));
    let old = notation::read(&ONE_LINE.replace("2031 03 04", " 837 02 28"));
    assert!(old.notices[0].text.contains("Gregorian"));
}

#[test]
fn one_line_faults_are_named_with_their_column() {
    for (old, new, column, parts) in [
        (" 0.520000", "-0.520000", 31, ["-0.520000", "without a sign"]),
        (" 0.520000", " 0.000000", 31, ["perihelion distance of 0", "above 0"]),
        (" 0.520000", "         ", 31, ["blanks", "columns 31-39"]),
        (" 0.520000", " 0.52 000", 31, ["0.52 000", "columns 31-39"]),
        (" 0.520000", " O.520000", 32, ["O.520000", "columns 31-39"]),
        (" 0.520000", " 0,520000", 31, ["0,520000", "column 33"]),
        (" 0.520000", "  0.52000", 34, ["column 34", "shifted by 1 column to the right"]),
        ("010  2031", "010 x2031", 14, ["`x`", "blank columns 13-14"]),
        ("61.2000  2031", "61.20007 2031", 80, ["`7`", "blank columns 80-81"]),
        (" 6.5  4.0", " 6.57 4.0", 96, ["`7`", "blank column 96"]),
        ("4.0  C/2031", "4.0 C/2031 ", 102, ["`C`", "blank columns 101-102"]),
        ("20310220   6.5", "20310220 x 6.5", 91, ["`x`", "blank columns 90-91"]),
        (" 61.2000", "181.2000", 72, ["181.2", "0 to 180"]),
        ("201.9000", "361.9000", 62, ["361.9", "0 to 360"]),
        ("03 04.5173", "03 32.5173", 23, ["day 32", "1 to 31"]),
        ("03 04.5173", "02 30.5173", 23, ["day 30", "1 to 28"]),
        ("03 04.5173", "13 04.5173", 20, ["month 13", "1 to 12"]),
        ("03 04.5173", "03        ", 23, ["blanks", "columns 23-29"]),
        ("20310220", "20312 20", 87, ["`2`", "month of the epoch"]),
        ("20310220", "20310231", 88, ["day 31", "1 to 28"]),
        ("CK31A010", "KK31A010", 5, ["`K`", "C, P, D"]),
        (" 6.5  4.0", "  6.5 4.0", 95, ["column 95", "shifted"]),
        (" 33.4000", "\t33.4000", 52, ["a tab", "blanks only"]),
        ("  C/2031", "   C/2031", 104, ["C/2031", "column 103"]),
    ] {
        assert!(ONE_LINE.contains(old), "{old}");
        refuses(&ONE_LINE.replacen(old, new, 1), 1, column, &parts);
    }
}

#[test]
fn look_alikes_are_refused_by_kind() {
    // Invented records in the published columns of other kinds.
    for (text, part) in [
        (
            "00999    3.34  0.15 K319D  60.07881   73.42937   80.25496   10.58780  0.0789126  0.21429254   2.7660512  0 INV 12345",
            "minor planet",
        ),
        ("     K31A01A* C2031 03 04.51732 12 34 56.78 -12 34 56.7          15.6 T      XXX", "an observation"),
        ("2 99999  51.6416 247.4627 0006703 130.5360 325.0288 15.72125391563537", "Earth satellite"),
    ] {
        refuses(text, 1, 0, &[part]);
    }
}

#[test]
fn good_lines_load_beside_bad_ones() {
    let bad = ONE_LINE.replace(" 0.520000", "-0.520000");
    let reading =
        notation::read(&format!("# invented\n{ONE_LINE}\n{bad}\n\n{PERIODIC}\n0412P  2033 11 garbled\n{BLOCK}"));
    let lines: Vec<usize> = reading.comets.iter().map(|entry| entry.line).collect();
    assert_eq!(lines, [2, 5, 8]);
    assert!(
        reading.errors.iter().any(|error| error.place == Place::Line { line: 3, column: 31 }),
        "{}",
        show(&reading)
    );
    // Line 6 stands in the block's own text, whose prose is passed over.
    let reading = notation::read(&format!("{ONE_LINE}\n0412P  2033 11 garbled\n{PERIODIC}"));
    assert_eq!(reading.comets.len(), 2);
    assert_eq!(reading.errors[0].place, Place::Line { line: 2, column: 1 });
}

#[test]
fn comets_of_one_name_both_load_and_are_named_apart() {
    let reading = notation::read(&format!("{ONE_LINE}\n{ONE_LINE}\n{PERIODIC}\n{ONE_LINE}"));
    let names: Vec<&str> = reading.comets.iter().map(|entry| entry.comet.name.as_str()).collect();
    assert_eq!(
        names,
        ["C/2031 A1 (Invented)", "C/2031 A1 (Invented) (2)", "412P/Invented", "C/2031 A1 (Invented) (3)"]
    );
    assert_eq!(reading.notices.len(), 2);
    assert_eq!(reading.notices[0].line, 2);
}

#[test]
fn labelled_faults_are_named() {
    for (old, new, line, parts) in [
        ("q = 0.5200000 AU", "q = -0.52", 2, ["q (perihelion distance) -0.52", "above 0"]),
        ("q = 0.5200000 AU", "q = 0", 2, ["q (perihelion distance) 0", "above 0"]),
        ("q = 0.5200000 AU", "q = NaN", 2, ["NaN", "a number for q"]),
        ("q = 0.5200000 AU", "q = inf", 2, ["inf", "a number for q"]),
        ("q = 0.5200000 AU", "q = 1e999", 2, ["1e999", "a number for q"]),
        ("q = 0.5200000 AU", "q = 0,52", 2, ["0,52", "decimal point"]),
        ("q = 0.5200000 AU", "q = 77800000 km", 2, ["`km`", "in au"]),
        ("q = 0.5200000 AU", "q = 0.52 0.53", 2, ["second number", "one number"]),
        ("q = 0.5200000 AU", "q =", 2, ["the end of the line", "a number for q"]),
        ("q = 0.5200000 AU", "", 1, ["without q (perihelion distance)", "T, q, e"]),
        ("e = 1.0003000", "e = -0.1", 3, ["e (eccentricity) -0.1", "0 or more"]),
        ("e = 1.0003000", "e = 1.OOO3", 3, ["1.OOO3", "a number for e"]),
        ("i = 61.20000\u{b0}", "i = 180.1", 4, ["180.1", "0 to 180"]),
        ("i = 61.20000\u{b0}", "i = 1.07 rad", 4, ["`rad`", "in deg"]),
        ("201.90000 deg", "-361 deg", 5, ["-361", "-360 to 360"]),
        ("T = 2031-03-04.51732 TT\n", "", 1, ["without T (time of perihelion)", "T, q, e"]),
        ("H = 6.5", "equinox = 1950.0", 9, ["the equinox 1950.0", "2000.0"]),
        ("201.90000 deg", "201.90000 B1950", 5, ["the equinox B1950", "2000.0"]),
        ("H = 6.5", "q = 0.53", 9, ["q (perihelion distance) twice", "line 2, column 1"]),
        ("A1 = 1.2e-8 au/d^2", "A1 = 1.2", 11, ["A1 1.2", "1e-8 au/day^2"]),
        ("H = 6.5", "a = 3.4", 9, ["a (semimajor axis) 3.4", "q 0.52 and e 1.0003"]),
        ("H = 6.5", "P = 6.3 years", 9, ["P (period) 6.3", "no closed orbit"]),
    ] {
        assert!(PAIRS.contains(old), "{old}");
        refuses(&PAIRS.replacen(old, new, 1), line, 0, &parts);
    }
    refuses(&BLOCK.replace("(2000.0)", "(1950.0)"), 4, 0, &["the equinox 1950.0", "turn the angles"]);
    refuses(&BLOCK.replace("T 2031 Mar. 4.51732 TT", ""), 2, 0, &["without T"]);
    refuses(&BLOCK.replace("JDT 2462917.5", "JDT 2462918.5"), 2, 0, &["JD 2462918.5", "2031-02-20.0 TT"]);
}

#[test]
fn derived_quantities_must_agree_with_q_and_e_within_their_rounding() {
    // q 1.353211, e 0.612304: a = q/(1-e) = 3.490402, P = a^1.5 = 6.5209, n = 0.985607668601/P = 0.151146 (by hand).
    let block = |extra: &str| {
        format!(
            "412P/Invented\nT 2033 Nov. 21.0815 TT\nq 1.353211\ne 0.612304\nPeri. 187.0121\nNode 9.5022\nIncl. 4.0810\n{extra}\n"
        )
    };
    for extra in [
        "a 3.49040",
        "a 3.4904",
        "a 3.5",
        "z 0.286500",
        "n 0.15115",
        "n = 0.15115",
        "P 6.52",
        "P 6.521",
        "P = 6.52 years",
        "a = 3.49 AU  n = 0.151  P = 6.5 years",
    ] {
        assert_eq!(comet(&block(extra)).elements.perihelion_distance_au, 1.353211, "{extra}");
    }
    for (extra, given, derived) in [
        ("a 3.4915", "a (semimajor axis) 3.4915", "3.49039"),
        ("a 4.3904", "a (semimajor axis) 4.3904", "3.49039"),
        ("z 0.287500", "z (1/a) 0.2875", "0.2865"),
        ("n 0.15215", "n (mean motion) 0.15215", "0.1511"),
        ("n = 0.15215", "n (mean motion) 0.15215", "0.1511"),
        ("P 6.54", "P (period) 6.54", "6.52"),
        ("P 8", "P (period) 8", "6.52"),
    ] {
        refuses(&block(extra), 8, 0, &[given, derived, "q 1.353211 and e 0.612304"]);
    }
    // Beside H an n of 1 or more is the photometric index.
    assert_eq!(comet(&block("H = 10.0  n = 6.0")).brightness[0].photometric_index_n, Some(6.0));
    refuses(&block("H = 10.0  n = 0.6"), 8, 0, &["n (mean motion) 0.6"]);
    refuses(&block("n = 6.0"), 8, 0, &["n (mean motion) 6"]);
}

#[test]
fn several_blocks_part_at_names_blank_lines_or_the_first_label() {
    let other = BLOCK
        .replace("A1 (Invented)", "B2 (Invented)")
        .replace("0.5200000", "0.6200000")
        .replace("z  -0.0005769", "z  -0.0004839");
    let bare = |block: &str| block.lines().skip(2).take(5).collect::<Vec<_>>().join("\n");
    for text in [
        format!("{BLOCK}{other}"),
        format!("{BLOCK}\n\n{other}"),
        format!("{}\n\n{}", bare(BLOCK), bare(&other)),
        format!("{}\n{}", bare(BLOCK), bare(&other)),
    ] {
        let comets = comets_of(&text);
        let distances: Vec<f64> = comets.iter().map(|comet| comet.elements.perihelion_distance_au).collect();
        assert_eq!(distances, [0.52, 0.62], "{text}");
    }
    // With T missing in the first, nothing may borrow the second's.
    let headless = bare(BLOCK).lines().skip(1).collect::<Vec<_>>().join("\n");
    refuses(&format!("{headless}\n{}", bare(&other)), 1, 0, &["2 comets in one run"]);
    let reading = notation::read(&format!("{headless}\n\n{}", bare(&other)));
    assert_eq!(reading.comets.len(), 1);
    assert!(reading.errors[0].to_string().contains("without T"));
    // Every line doubled in its end, as some pages copy.
    assert_invented(&comet(&BLOCK.replace('\n', "\n\n")));
    assert_eq!(comets_of(&format!("{BLOCK}{other}").replace('\n', "\n\n")).len(), 2);
}

#[test]
fn names_before_an_equals_sign_that_mean_nothing_are_said() {
    let reading = notation::read(&format!("{PAIRS}MOID = 0.3 au\nsource = invented\n"));
    assert_eq!(reading.comets.len(), 1, "{}", show(&reading));
    let said: Vec<String> = reading.notices.iter().map(ToString::to_string).collect();
    assert!(said[0].starts_with("line 13: `MOID`") && said[1].contains("`source`"), "{said:?}");
}

#[test]
fn texts_without_elements_say_what_can_be_pasted() {
    for text in [
        "",
        "  \n\t\n",
        "hello",
        "Dear all,\nthe comet is bright, e.g. 5 mag.\n",
        "name = X",
        "<html><body>404</body></html>",
    ] {
        let reading = notation::read(text);
        assert!(reading.comets.is_empty() && reading.errors.len() == 1, "{text}: {}", show(&reading));
    }
    assert!(
        notation::read("").errors[0].to_string().contains("found nothing; expected elements of one or more comets")
    );
}

#[test]
fn binary_and_oversized_pastes_are_refused_with_where() {
    refuses("q = 0.5\ne = \u{0}1", 2, 5, &["binary", "U+0000"]);
    refuses(&String::from_utf8_lossy(&[0x89, b'P', b'N', b'G', 13, 10, 26, 10, 0, 0]), 2, 1, &["binary", "U+001A"]);
    refuses(&"\u{fffd}\u{e9}".repeat(50), 1, 1, &["binary"]);
    refuses(&"x".repeat(notation::MOST_BYTES + 1), 1, 1, &["16.0 million bytes", "at most 16"]);
    assert_eq!(comet(&ONE_LINE.replace("Invented", "Inv\u{fffd}nted")).name, "C/2031 A1 (Inv\u{fffd}nted)");
}

#[test]
fn ten_million_bytes_are_read_or_refused_without_a_heap_of_errors() {
    let lines = format!("{ONE_LINE}\n").repeat(60_000);
    let reading = notation::read(&lines);
    assert_eq!(reading.comets.len(), 60_000);
    assert_eq!(reading.comets[59_999].comet.name, "C/2031 A1 (Invented) (60000)");
    assert_eq!(reading.notices.len(), notation::MOST_ERRORS);
    let faults = notation::read(&format!("{}\n", ONE_LINE.replace(" 0.52", "-0.52")).repeat(60_000));
    assert_eq!(faults.errors.len() + faults.errors_left_out, 60_000);
    refuses(&"e = a 5 T = ".repeat(800_000), 1, 1, &["a line of 9600000 bytes", "at most 10000"]);
    assert_eq!(notation::read(&"e = a 5 T = \n".repeat(80_000)).comets.len(), 0);
    assert_eq!(notation::read(&"prose about a 5 day arc\n".repeat(400_000)).comets.len(), 0);
    assert_eq!(notation::read(&BLOCK.repeat(20_000)).comets.len(), 20_000);
    let bare: String = BLOCK.lines().skip(2).map(|line| format!("{line}\n")).collect();
    assert_eq!(notation::read(&bare.repeat(20_000)).comets.len(), 20_000);
}

#[test]
fn plans_and_lists_of_them_are_read_as_pastes() {
    let comet = comet(PAIRS);
    let plan = Plan::from(comet.clone());
    let (one, bare) = (plan.print(), serde_json::to_string(&comet).unwrap());
    for (text, count) in [
        (one.clone(), 1),
        (format!("[{one},\n{bare}]"), 2),
        (format!("{}\n{}\n", plan.print_line(), plan.print_line()), 2),
        (bare.clone(), 1),
        (format!("\u{feff} {one}"), 1),
        (PAIRS.to_string(), 1),
        (ONE_LINE.to_string(), 1),
    ] {
        let reading = paste::read(&text);
        assert!(reading.errors.is_empty(), "{text}\n{}", show(&reading));
        assert_eq!(reading.comets.len(), count);
        assert!(!text.starts_with('{') || reading.comets[0].comet == comet);
    }
    let reading = paste::read(&format!("[{bare},\n {},\n {bare}]", bare.replace("1.0003", "-1")));
    assert_eq!(reading.comets.len(), 2);
    assert!(
        matches!(reading.errors[0].place, Place::Line { line: 2, .. })
            && reading.errors[0].to_string().contains("eccentricity"),
        "{}",
        show(&reading)
    );
    for text in [
        "[",
        "{",
        "[]",
        "{}",
        "[1, 2]",
        "[{}] x",
        "{}}",
        "[}",
        "{\"tailvane_plan\": 9}",
        &one[..one.len() / 2],
        &format!("[{bare}"),
    ] {
        assert!(!paste::read(text).errors.is_empty(), "{text}");
    }
    assert!(paste::read(&format!("[{bare}, {{\"name\": ")).comets.len() == 1);
    assert_eq!(paste::read("").errors, notation::read("").errors);
}
