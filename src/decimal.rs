//! Which number does a decimal text mean?
//!
//! The nearest double, by the reader of the plan file: the standard library's own would bring a second table of powers of
//! ten into the page, 10 kB that no packing makes smaller.

/// The number that `text` is: a sign, digits with at most one point, an exponent. What is too large is infinite.
///
/// The same texts and the same numbers as `text.parse::<f64>()`, but without its words (`inf`, `nan`).
pub fn read(text: &str) -> Option<f64> {
    let (negative, unsigned) = match text.strip_prefix('-') {
        Some(rest) => (true, rest),
        None => (false, text.strip_prefix('+').unwrap_or(text)),
    };
    let (mantissa, exponent) = unsigned.split_once(['e', 'E']).unwrap_or((unsigned, "0"));
    let (whole, decimals) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits = |part: &str| part.bytes().all(|byte| byte.is_ascii_digit());
    let power = exponent.strip_prefix(['-', '+']).unwrap_or(exponent);
    if !digits(whole) || !digits(decimals) || !digits(power) || power.is_empty() || whole.len() + decimals.len() == 0 {
        return None;
    }
    // JSON wants a digit before the point and one behind it, and no zero in front of others.
    let plain = whole.trim_start_matches('0');
    let first = if plain.is_empty() { "0" } else { plain };
    let json = [first, ".", decimals, "0e", exponent].concat();
    let size = serde_json::from_str(&json).unwrap_or(f64::INFINITY);
    Some(if negative { -size } else { size })
}

#[cfg(test)]
mod tests {
    use super::read;

    #[test]
    fn texts_are_read_as_the_standard_library_reads_them() {
        let texts = [
            "0",
            "-0",
            "+1",
            "1.",
            ".5",
            "007",
            "00.10",
            "-.5e3",
            "1e5",
            "1E-5",
            "1e+05",
            "1e0005",
            "1e400",
            "-1e400",
            "1e-400",
            "0e999999999999",
            "1e999999999999",
            "1e-999999999999",
            "123456789012345678901234567890",
            "2.2250738585072011e-308",
            "179769313486231580793728971405301e276",
            "0.1",
            "0.30000000000000004",
            "9007199254740993",
            "4.9e-324",
            "2.4703282292062328e-324",
            "",
            "+",
            "-",
            ".",
            "e5",
            ".e1",
            "1e",
            "1e+",
            "1.2.3",
            "--1",
            "+-1",
            " 1",
            "1 ",
            "0x1",
            "1_000",
            "1,5",
            "1e5.0",
            "1e5e5",
            "\u{2212}1",
            "\u{664}",
        ];
        for text in texts {
            let theirs = text.parse::<f64>().ok();
            assert_eq!(read(text).map(f64::to_bits), theirs.map(f64::to_bits), "{text:?}");
        }
        for word in ["inf", "-infinity", "NaN"] {
            assert_eq!(read(word), None);
        }
    }

    #[test]
    fn any_double_comes_back() {
        // A congruential sequence with the multiplier of Knuth's MMIX: bits without a pattern.
        let mut bits = 1_u64;
        for _ in 0..20_000 {
            bits = bits.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            let number = f64::from_bits(bits);
            if number.is_finite() {
                assert_eq!(read(&format!("{number:?}")).map(f64::to_bits), Some(bits));
                assert_eq!(read(&format!("{number:e}")).map(f64::to_bits), Some(bits));
            }
        }
    }
}
