//! Where do the ticks of dates stand along a stretch of time, and which of them are named?
//!
//! Ticks stand at whole minutes, hours, days, months or years of UTC, the finest steps whose names have room; shorter
//! ticks without a name stand between. The first name and every January say the year.

use super::super::lettering::width_px;
use crate::time::Instant;
use crate::time::civil::{Date, MONTHS_SHORT};

/// A tick: its time, and its name, empty for a bare one.
#[derive(Clone, Debug, PartialEq)]
pub struct Tick {
    pub days: f64,
    pub words: String,
}

/// From one tick to the next.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Step {
    Minutes(i64),
    /// Days of the month that leave this remainder-free from the first; none close to the next month.
    Days(u32),
    Months(u32),
    Years(i32),
}

/// Steps of bare and of named ticks, finest first.
const LADDER: [(Step, Step); 17] = [
    (Step::Minutes(5), Step::Minutes(30)),
    (Step::Minutes(15), Step::Minutes(60)),
    (Step::Minutes(60), Step::Minutes(180)),
    (Step::Minutes(60), Step::Minutes(360)),
    (Step::Minutes(180), Step::Minutes(720)),
    (Step::Minutes(360), Step::Days(1)),
    (Step::Days(1), Step::Days(2)),
    (Step::Days(1), Step::Days(5)),
    (Step::Days(1), Step::Days(10)),
    (Step::Days(10), Step::Months(1)),
    (Step::Months(1), Step::Months(3)),
    (Step::Months(3), Step::Years(1)),
    (Step::Years(1), Step::Years(2)),
    (Step::Years(1), Step::Years(5)),
    (Step::Years(2), Step::Years(10)),
    (Step::Years(10), Step::Years(50)),
    (Step::Years(20), Step::Years(100)),
];

/// From one name to the next, at least, in letter sizes.
const GAP: f64 = 1.1;
/// Most ticks of a stretch; far more than any page shows.
const MOST: usize = 2000;

impl Step {
    /// Mean length, days.
    fn days(self) -> f64 {
        match self {
            Step::Minutes(minutes) => minutes as f64 / 1440.0,
            Step::Days(days) => f64::from(days),
            Step::Months(months) => f64::from(months) * 30.4,
            Step::Years(years) => f64::from(years) * 365.25,
        }
    }

    /// Whether a tick stands at the beginning of this day, for steps of a day and longer.
    fn stands_at(self, date: Date) -> bool {
        match self {
            Step::Minutes(_) => true,
            // The 31st would crowd the first.
            Step::Days(days) => (date.day - 1).is_multiple_of(days) && (days == 1 || date.day < 30),
            Step::Months(months) => date.day == 1 && (date.month - 1).is_multiple_of(months),
            Step::Years(years) => date.day == 1 && date.month == 1 && date.year.rem_euclid(years) == 0,
        }
    }

    /// The widest name of such a tick.
    fn widest(self) -> &'static str {
        match self {
            Step::Minutes(_) => "00:00",
            Step::Days(_) => "28 May",
            Step::Months(_) => "May",
            Step::Years(_) => "2000",
        }
    }

    /// Times of UTC, in UT1 days from J2000 (12 h), between two.
    fn times(self, first: f64, last: f64) -> Vec<(f64, Date, i64)> {
        let mut found = Vec::new();
        let midnight = |days: f64| libm::floor(days + 0.5) as i64;
        if let Step::Minutes(step) = self {
            let mut number = libm::ceil((first + 0.5) * 1440.0 / step as f64 - 1e-6) as i64 * step;
            while number as f64 / 1440.0 - 0.5 <= last && found.len() < MOST {
                if let Some(date) = Date::from_day_number(number.div_euclid(1440)) {
                    found.push((number as f64 / 1440.0 - 0.5, date, number.rem_euclid(1440)));
                }
                number += step;
            }
            return found;
        }
        for day in midnight(first - 1e-9)..=midnight(last) {
            let at = day as f64 - 0.5;
            if at < first - 1e-9 {
                continue;
            }
            if let Some(date) = Date::from_day_number(day).filter(|&date| self.stands_at(date)) {
                found.push((at, date, 0));
            }
        }
        found
    }
}

/// Ticks from one time to another over a width; names are written to the right of their tick in letters of a size.
/// Names keep within the width and never meet.
pub fn ticks(from: Instant, to: Instant, width: f64, size_px: f64) -> Vec<Tick> {
    let (first, last) = (from.ut1_days(), to.ut1_days());
    let length = (last - first).max(1e-6);
    let px_per_day = width / length;
    let room = |step: Step| width_px(step.widest(), size_px, false) + GAP * size_px;
    let (bare, named) = LADDER
        .into_iter()
        .find(|(_, named)| named.days() * px_per_day * 0.93 >= room(*named))
        .unwrap_or(LADDER[LADDER.len() - 1]);
    let mut ticks: Vec<Tick> = Vec::new();
    let mut free_from = f64::NEG_INFINITY;
    let mut year_said = None;
    for (at, date, minute) in named.times(first, last) {
        let x = (at - first) * px_per_day;
        let with_year = year_said != Some(date.year);
        let fits = |words: &str| x >= free_from && x + width_px(words, size_px, false) + 0.4 * size_px <= width;
        let long = name(named, date, minute, with_year);
        let short = name(named, date, minute, false);
        let words = if fits(&long) {
            long
        } else if fits(&short) {
            short
        } else {
            String::new()
        };
        if !words.is_empty() {
            free_from = x + width_px(&words, size_px, false) + 0.7 * size_px;
            year_said = Some(date.year);
        }
        ticks.push(Tick { days: Instant::from_ut1_days(at).tdb_days(), words });
    }
    if bare.days() * px_per_day >= 4.0 {
        let taken: Vec<f64> = ticks.iter().map(|tick| tick.days).collect();
        for (at, ..) in bare.times(first, last) {
            let days = Instant::from_ut1_days(at).tdb_days();
            if taken.iter().all(|other| (other - days).abs() > 1e-6) {
                ticks.push(Tick { days, words: String::new() });
            }
        }
    }
    ticks
}

fn name(step: Step, date: Date, minute: i64, with_year: bool) -> String {
    let Date { year, month, day } = date;
    let month = MONTHS_SHORT[month as usize - 1].trim_end_matches('.');
    match step {
        Step::Minutes(_) if minute == 0 || with_year => {
            let clock = if minute == 0 { String::new() } else { format!(" {:02}:{:02}", minute / 60, minute % 60) };
            let year = if with_year { format!(" {year}") } else { String::new() };
            format!("{day} {month}{year}{clock}")
        }
        Step::Minutes(_) => format!("{:02}:{:02}", minute / 60, minute % 60),
        Step::Days(_) if with_year => format!("{day} {month} {year}"),
        Step::Days(_) => format!("{day} {month}"),
        Step::Months(_) if with_year => format!("{month} {year}"),
        Step::Months(_) => month.to_owned(),
        Step::Years(_) => year.to_string(),
    }
}
