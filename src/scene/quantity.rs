//! How are angles and lengths written on a drawing?
//!
//! For people: rounded to what the drawing can show. Full precision is in the table and the files.

use crate::frame::turn;
use crate::time::Instant;

/// Kilometres in one astronomical unit, exact (IAU 2012 resolution B2).
pub const KM_PER_AU: f64 = 149_597_870.7;

/// A position angle in degrees to one decimal, from 0.0 to 359.9, with the degree sign.
pub fn position_angle(angle_rad: f64) -> String {
    let tenths = (turn(angle_rad).to_degrees() * 10.0).round() as i64 % 3600;
    format!("{}.{}°", tenths / 10, tenths % 10)
}

/// An angle on the sky in the largest unit that keeps it above one, with two or three figures.
pub fn arc(angle_rad: f64) -> String {
    let degrees = angle_rad.to_degrees();
    let (value, sign) = match degrees {
        d if d >= 0.9995 => (d, '°'),
        d if d * 60.0 >= 0.9995 => (d * 60.0, '′'),
        d => (d * 3600.0, '″'),
    };
    let decimals = match value {
        v if v >= 99.95 => 0,
        v if v >= 0.9995 => 1,
        v if v >= 0.0995 => 2,
        _ => 3,
    };
    format!("{value:.decimals$}{sign}")
}

/// A position angle in whole degrees, from 0 to 359, with the degree sign.
pub fn whole_position_angle(angle_rad: f64) -> String {
    format!("{}°", turn(angle_rad).to_degrees().round() as i64 % 360)
}

/// A ratio of radiation pressure to gravity: `β 0.03`. The space does not break.
pub fn beta(beta: f64) -> String {
    format!("β\u{a0}{}", figures(beta))
}

/// An age: `30 d`. The space does not break.
pub fn age(days: f64) -> String {
    format!("{}\u{a0}d", figures(days))
}

/// At most three significant figures, without an exponent.
pub fn figures(value: f64) -> String {
    if value == 0.0 || !value.is_finite() {
        return "0".to_string();
    }
    let magnitude = libm::floor(libm::log10(value.abs())) as i32;
    let decimals = (2 - magnitude).clamp(0, 12) as usize;
    let plain = format!("{value:.decimals$}");
    if plain.contains('.') { plain.trim_end_matches('0').trim_end_matches('.').to_string() } else { plain }
}

/// A day of the calendar, UTC, with its year: `26 Feb 2031`.
pub fn day_of_year(time: Instant) -> String {
    const MONTHS: [&str; 12] = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];
    let date = time.utc_minute();
    let mut parts = date.split([' ', '-']);
    let found = (|| {
        let year = parts.next()?;
        let month: usize = parts.next()?.parse().ok()?;
        let day: u32 = parts.next()?.parse().ok()?;
        Some(format!("{day}\u{a0}{}\u{a0}{year}", MONTHS.get(month.checked_sub(1)?)?))
    })();
    found.unwrap_or(date)
}

/// A day of the calendar, UTC: `26 Feb`.
pub fn day(time: Instant) -> String {
    let whole = day_of_year(time);
    match whole.rsplit_once('\u{a0}') {
        Some((day, _)) => day.to_string(),
        None => whole,
    }
}

/// A length in km with three figures: `541 000 km`, `1.23 million km`. The spaces do not break.
pub fn length(km: f64) -> String {
    if !km.is_finite() {
        return "beyond measure".to_string();
    }
    if km >= 999_500.0 {
        let millions = three_figures(km / 1e6);
        return format!("{millions}\u{a0}million\u{a0}km");
    }
    format!("{}\u{a0}km", three_figures(km))
}

/// Three significant figures, thousands set apart.
fn three_figures(value: f64) -> String {
    if value < 99.95 {
        let decimals = match value {
            v if v >= 9.995 => 1,
            v if v >= 0.9995 => 2,
            _ => 3,
        };
        let plain = format!("{value:.decimals$}");
        return if plain.contains('.') { plain.trim_end_matches('0').trim_end_matches('.').to_string() } else { plain };
    }
    let mut step = 1.0;
    while value / step >= 999.5 {
        step *= 10.0;
    }
    let whole = format!("{:.0}", (value / step).round() * step);
    let mut grouped = String::new();
    for (place, digit) in whole.chars().enumerate() {
        if place > 0 && (whole.len() - place) % 3 == 0 {
            grouped.push('\u{a0}');
        }
        grouped.push(digit);
    }
    grouped
}

/// Right ascension and declination, J2000: `05h 12m 44.1s  +41° 07′ 12″`.
pub fn place(right_ascension_rad: f64, declination_rad: f64) -> String {
    let tenths = (turn(right_ascension_rad).to_degrees() / 15.0 * 36_000.0).round() as i64 % 864_000;
    let seconds = (declination_rad.to_degrees() * 3600.0).round() as i64;
    let sign = if seconds < 0 { '−' } else { '+' };
    let seconds = seconds.abs();
    format!(
        "{:02}h {:02}m {:02}.{}s  {sign}{:02}° {:02}′ {:02}″",
        tenths / 36_000,
        tenths / 600 % 60,
        tenths / 10 % 60,
        tenths % 10,
        seconds / 3600,
        seconds / 60 % 60,
        seconds % 60
    )
}

/// A round arc for a scale bar: its angle and its words.
pub struct RoundArc {
    pub angle_rad: f64,
    pub words: String,
}

/// Round arcs from a thousandth of an arc second to 60 degrees, rising.
pub fn round_arcs() -> impl DoubleEndedIterator<Item = RoundArc> {
    const SECONDS: [&str; 13] =
        ["0.001", "0.002", "0.005", "0.01", "0.02", "0.05", "0.1", "0.2", "0.5", "1", "2", "5", "10"];
    const SIXTIETHS: [&str; 6] = ["1", "2", "5", "10", "20", "30"];
    let seconds = SECONDS.into_iter().chain(["20", "30"]).map(|words| (words, '″', 3600.0));
    let minutes = SIXTIETHS.into_iter().map(|words| (words, '′', 60.0));
    let degrees = SIXTIETHS.into_iter().chain(["45", "60"]).map(|words| (words, '°', 1.0));
    let all: Vec<_> = seconds.chain(minutes).chain(degrees).collect();
    all.into_iter().map(|(words, sign, parts): (&str, char, f64)| RoundArc {
        angle_rad: (crate::decimal::read(words).expect("a number in the list above") / parts).to_radians(),
        words: format!("{words}{sign}"),
    })
}
