//! How are angles, factors, shares and dates written for people?

use crate::frame::turn;
use crate::time::Instant;

/// A range narrower than this is one direction: two degrees.
const NARROW_RAD: f64 = 2.0 * std::f64::consts::PI / 180.0;

/// An angle in whole degrees; a direction never reads 360.
pub fn whole(angle_rad: f64) -> String {
    format!("{}\u{b0}", (angle_rad.to_degrees().round() as i64).rem_euclid(360))
}

/// An angle in tenths of a degree; a direction never reads 360.
pub fn tenth(angle_rad: f64) -> String {
    let tenths = (angle_rad.to_degrees() * 10.0).round() as i64 % 3600;
    format!("{}.{}\u{b0}", tenths / 10, tenths % 10)
}

/// A range of directions in the sense of growing position angle, whole degrees: `from 243° to 330°`; `toward 243°`
/// where it is not two degrees wide.
pub fn range([first_rad, last_rad]: [f64; 2]) -> String {
    let width = turn(last_rad - first_rad);
    if width < NARROW_RAD {
        return format!("toward {}", whole(first_rad + 0.5 * width));
    }
    format!("from {} to {}", whole(first_rad), whole(last_rad))
}

/// A share in percent with one figure below 10: `less than 1 percent`, `4 percent`, `35 percent`.
pub fn percent(share: f64) -> String {
    match share * 100.0 {
        p if p < 1.0 => "less than 1 percent".to_owned(),
        p if p < 9.5 => format!("about {p:.0} percent"),
        p => format!("about {:.0} percent", (p / 5.0).round() * 5.0),
    }
}

/// How a surface brightness compares with another, in words that go before "the tail".
pub fn beside(ratio: f64) -> String {
    match ratio {
        r if r >= 1.5 => "brighter than".to_owned(),
        r if r >= 0.67 => "about as bright as".to_owned(),
        r if r >= 0.4 => "about half as bright as".to_owned(),
        r => {
            let times = 1.0 / r;
            let times = if times < 9.5 { times.round() } else { (times / 10.0).round() * 10.0 };
            if times >= 95.0 {
                "over a hundred times fainter than".to_owned()
            } else {
                format!("about {times:.0} times fainter than")
            }
        }
    }
}

/// A date as `24 January`, with its year where that is not `year_of`'s.
pub fn day(time: Instant, year_of: Instant) -> String {
    const MONTHS: [&str; 12] = [
        "January",
        "February",
        "March",
        "April",
        "May",
        "June",
        "July",
        "August",
        "September",
        "October",
        "November",
        "December",
    ];
    let (date, here) = (time.utc_minute(), year_of.utc_minute());
    let parts: Vec<&str> = date.get(..10).unwrap_or_default().split('-').collect();
    let [year, month, day] = parts[..] else { return date };
    let (Ok(month), Ok(day)) = (month.parse::<usize>(), day.parse::<usize>()) else { return date };
    let Some(name) = month.checked_sub(1).and_then(|index| MONTHS.get(index)) else { return date };
    if here.starts_with(year) { format!("{day} {name}") } else { format!("{day} {name} {year}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_range_across_north_runs_the_short_way_round() {
        assert_eq!(range([5.9, 0.2]), "from 338\u{b0} to 11\u{b0}");
        assert_eq!(range([1.0, 1.002]), "toward 57\u{b0}");
        assert_eq!(range([6.2825, 6.2828]), "toward 0\u{b0}");
    }

    #[test]
    fn brightness_and_shares_read_in_honest_digits() {
        assert_eq!(beside(3.0), "brighter than");
        assert_eq!(beside(0.9), "about as bright as");
        assert_eq!(beside(0.45), "about half as bright as");
        assert_eq!(beside(0.21), "about 5 times fainter than");
        assert_eq!(beside(0.031), "about 30 times fainter than");
        assert_eq!(beside(0.004), "over a hundred times fainter than");
        assert_eq!(percent(0.0004), "less than 1 percent");
        assert_eq!(percent(0.043), "about 4 percent");
        assert_eq!(percent(0.37), "about 35 percent");
    }

    #[test]
    fn a_date_names_its_year_only_where_that_differs() {
        let now = Instant::from_tdb_days(8_500.0);
        assert_eq!(day(now.plus_days(-20.0), now).split(' ').count(), 2);
        assert_eq!(day(now.plus_days(-200.0), now).split(' ').count(), 3);
    }
}
