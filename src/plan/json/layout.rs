//! How is JSON laid out?
//!
//! As serde_json lays it out, indented or on one line, to the last character. Its own printer of numbers is left out, since the
//! table of powers of ten that it brings would add a fortieth to the page; the one of the standard library finds the
//! same shortest digits.

use serde::Serialize;
use serde_json::Serializer;
use serde_json::ser::Formatter;
use std::io::{Result, Write};

/// A value as JSON: indented by two blanks, or on one line without any.
pub(in crate::plan) fn print(value: &impl Serialize, indented: bool) -> String {
    let mut text = Vec::new();
    let mut serializer = Serializer::with_formatter(&mut text, Layout { indented, depth: 0, empty: true });
    // A plan has keys that are text and goes to memory: nothing of it can fail.
    value.serialize(&mut serializer).ok();
    String::from_utf8(text).unwrap_or_default()
}

struct Layout {
    indented: bool,
    /// Open lists and objects.
    depth: usize,
    /// Whether the innermost of them holds nothing so far.
    empty: bool,
}

impl Layout {
    fn open(&mut self, out: &mut (impl Write + ?Sized), bracket: &[u8]) -> Result<()> {
        self.depth += 1;
        self.empty = true;
        out.write_all(bracket)
    }

    fn item(&mut self, out: &mut (impl Write + ?Sized), first: bool) -> Result<()> {
        if !first {
            out.write_all(b",")?;
        }
        self.line(out)
    }

    fn close(&mut self, out: &mut (impl Write + ?Sized), bracket: &[u8]) -> Result<()> {
        self.depth -= 1;
        if !self.empty {
            self.line(out)?;
        }
        self.empty = false;
        out.write_all(bracket)
    }

    fn line(&self, out: &mut (impl Write + ?Sized)) -> Result<()> {
        if self.indented {
            out.write_all(b"\n")?;
            for _ in 0..self.depth {
                out.write_all(b"  ")?;
            }
        }
        Ok(())
    }
}

impl Formatter for Layout {
    fn write_f64<W: ?Sized + Write>(&mut self, out: &mut W, value: f64) -> Result<()> {
        out.write_all(number(value).as_bytes())
    }

    fn begin_array<W: ?Sized + Write>(&mut self, out: &mut W) -> Result<()> {
        self.open(out, b"[")
    }

    fn begin_array_value<W: ?Sized + Write>(&mut self, out: &mut W, first: bool) -> Result<()> {
        self.item(out, first)
    }

    fn end_array_value<W: ?Sized + Write>(&mut self, _: &mut W) -> Result<()> {
        self.empty = false;
        Ok(())
    }

    fn end_array<W: ?Sized + Write>(&mut self, out: &mut W) -> Result<()> {
        self.close(out, b"]")
    }

    fn begin_object<W: ?Sized + Write>(&mut self, out: &mut W) -> Result<()> {
        self.open(out, b"{")
    }

    fn begin_object_key<W: ?Sized + Write>(&mut self, out: &mut W, first: bool) -> Result<()> {
        self.item(out, first)
    }

    fn begin_object_value<W: ?Sized + Write>(&mut self, out: &mut W) -> Result<()> {
        out.write_all(if self.indented { b": " } else { b":" })
    }

    fn end_object_value<W: ?Sized + Write>(&mut self, _: &mut W) -> Result<()> {
        self.empty = false;
        Ok(())
    }

    fn end_object<W: ?Sized + Write>(&mut self, out: &mut W) -> Result<()> {
        self.close(out, b"}")
    }
}

/// The shortest digits that give this finite number back; plain from 0.00001 to below 1e16, with an exponent elsewhere.
fn number(value: f64) -> String {
    let scientific = format!("{value:e}");
    let (digits, exponent) = scientific.split_once('e').unwrap_or((&scientific, "0"));
    let (sign, digits) = digits.strip_prefix('-').map_or(("", digits), |digits| ("-", digits));
    let exponent: i32 = exponent.parse().unwrap_or(0);
    if !(-5..16).contains(&exponent) {
        return if exponent < 0 { scientific } else { scientific.replace('e', "e+") };
    }
    let digits = digits.replace('.', "");
    let whole = exponent + 1;
    if whole <= 0 {
        return sign.to_owned() + "0." + &"0".repeat(-whole as usize) + &digits;
    }
    let whole = whole as usize;
    let zeros = "0".repeat((whole + 1).saturating_sub(digits.len()));
    let digits = digits + &zeros;
    sign.to_owned() + &digits[..whole] + "." + &digits[whole..]
}

#[cfg(test)]
mod tests {
    use super::{number, print};

    /// Digits of every length at every size, and the ends of the range.
    fn numbers() -> impl Iterator<Item = f64> {
        let digits = [1.0, -1.0, 1.5, 9.99, 123_456.0, 0.1 + 0.2, 1.0 / 3.0, 9_007_199_254_740_991.0];
        let scaled = (-30..30).flat_map(move |power| digits.map(|digits| digits * 10_f64.powi(power)));
        scaled.chain([0.0, -0.0, f64::MAX, f64::MIN_POSITIVE, 5e-324, 1e15, 1e16, 1e17, 1e-4, 1e-5, 1e-6])
    }

    #[test]
    fn numbers_are_printed_as_serde_json_prints_them() {
        for value in numbers() {
            assert_eq!(number(value), serde_json::to_string(&value).unwrap());
        }
    }

    #[test]
    fn lists_and_objects_are_laid_out_as_serde_json_lays_them_out() {
        let value =
            serde_json::json!({ "a": [], "b": {}, "c": [1, [2.5, "\"é\n"], { "d": null }, []], "e": { "f": [{}] } });
        assert_eq!(print(&value, true), serde_json::to_string_pretty(&value).unwrap());
        assert_eq!(print(&value, false), serde_json::to_string(&value).unwrap());
    }
}
