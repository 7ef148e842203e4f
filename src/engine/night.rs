//! What does the engine say of one night, and of many comets in it?

use super::Engine;
use crate::body::observer::Observer;
use crate::caution::Caution;
use crate::error::Error;
use crate::night::course::Course;
use crate::night::evening::Evening;
use crate::night::moment::{Laws, Moment, no_site};
use crate::night::table::{self, Row};
use crate::say;
use crate::sky::column::Value;
use crate::time::Instant;
use crate::time::civil::Date;

impl Engine {
    /// The night of a date, or that to which `time` belongs.
    ///
    /// # Errors
    /// A plan without a site; a night outside the span of the ephemeris.
    pub fn evening(&self, date: Option<Date>, time: Instant) -> Result<Evening, Error> {
        let Observer::Site(site) = &self.plan.observer else { return Err(no_site()) };
        match date {
            Some(date) => Evening::of(date, site),
            None => Evening::holding(time, site),
        }
    }

    /// How a night runs for the plan's site and comet.
    ///
    /// # Errors
    /// As for [`Engine::evening`].
    pub fn course(&mut self, evening: &Evening) -> Result<Course, Error> {
        let plan = &self.plan;
        let laws = Laws { night: &plan.night, tails: &plan.tails, brightness: &plan.comet.brightness };
        Course::of(&mut self.watch, evening, &laws)
    }

    /// Comet, Sun and Moon over the site's horizon at a time.
    ///
    /// # Errors
    /// As for [`Engine::evening`].
    pub fn moment_at(&mut self, time: Instant) -> Result<Moment, Error> {
        let plan = &self.plan;
        let laws = Laws { night: &plan.night, tails: &plan.tails, brightness: &plan.comet.brightness };
        Moment::at(&mut self.watch, time, &laws)
    }

    /// The rows of a night as CSV: the bytes that `tailvane night` writes.
    ///
    /// # Errors
    /// As for [`Engine::evening`].
    pub fn night_csv(&mut self, course: &Course, step_days: f64) -> Result<String, Error> {
        let keys = ["time"].into_iter().chain(table::COLUMNS.iter().map(|column| column.key)).chain(["caution"]);
        let mut text = keys.collect::<Vec<&str>>().join(",");
        text.push('\n');
        for row in self.night_rows(course, step_days)? {
            text.push_str(&row.moment.sky.time.utc_iso_ms());
            for column in table::COLUMNS {
                text.push(',');
                match (column.value)(&row) {
                    Value::Number(number) => text.push_str(&number.to_string()),
                    Value::Text(words) => text.push_str(words),
                    Value::Absent => {}
                }
            }
            // No name stands in a row; of its own words only cautions may hold a comma, and none a quote.
            let words = row.cautions.join(" ");
            let quote = if words.contains(',') { "\"" } else { "" };
            text.push_str(&format!(",{quote}{words}{quote}\n"));
        }
        Ok(text)
    }

    /// The rows of a night, a step of the clock apart, with its events among them. What the night lacks stands among the
    /// cautions of the first row.
    ///
    /// # Errors
    /// As for [`Engine::evening`].
    pub fn night_rows(&mut self, course: &Course, step_days: f64) -> Result<Vec<Row>, Error> {
        let mut rows = Vec::new();
        for (time, event) in table::times(course, step_days) {
            let moment = self.moment_at(time)?;
            let cautions = self.cautions_of(&moment.sky);
            // The columns themselves say whether the Sun is up and the comet is down.
            let told = |caution: &&Caution| !matches!(caution, Caution::SunUp | Caution::CometDown { .. });
            rows.push(Row { event, moment, cautions: cautions.iter().filter(told).map(Caution::sentence).collect() });
        }
        if let Some(first) = rows.first_mut() {
            first.cautions.splice(0..0, say::night::absences(course, &self.plan.night));
        }
        Ok(rows)
    }
}
