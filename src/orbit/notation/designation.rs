//! Which comet does a designation name?
//!
//! Unpacks the seven characters of the clearing house's packed provisional designation, and recognises a comet's
//! designation at the start of a line. Source: the clearing house's published description of packed designations.

/// `2031 A1` from `K31A010`, `2019 Y4-B` from `K19Y04b`, `2015 ER61` from `K15E61R`; None if it is no such thing.
pub(super) fn unpack(packed: &str) -> Option<String> {
    let chars: Vec<char> = packed.chars().collect();
    let &[century, tens, ones, half_month, cycle_tens, cycle_ones, last] = chars.as_slice() else { return None };
    let century = match century {
        'I' => 18,
        'J' => 19,
        'K' => 20,
        'L' => 21,
        _ => return None,
    };
    let year = century * 100 + tens.to_digit(10)? * 10 + ones.to_digit(10)?;
    if !half_month.is_ascii_uppercase() || matches!(half_month, 'I' | 'Z') {
        return None;
    }
    // 0-9, then A-Z for 10-35 and a-z for 36-61.
    let tens = match cycle_tens {
        '0'..='9' => u32::from(cycle_tens) - u32::from('0'),
        'A'..='Z' => u32::from(cycle_tens) - u32::from('A') + 10,
        'a'..='z' => u32::from(cycle_tens) - u32::from('a') + 36,
        _ => return None,
    };
    let order = tens * 10 + cycle_ones.to_digit(10)?;
    match last {
        '0' if order > 0 => Some(format!("{year} {half_month}{order}")),
        'a'..='z' if order > 0 => Some(format!("{year} {half_month}{order}-{}", last.to_ascii_uppercase())),
        // Found as a minor planet, hence two letters.
        'A'..='Z' if order > 0 => Some(format!("{year} {half_month}{last}{order}")),
        'A'..='Z' => Some(format!("{year} {half_month}{last}")),
        _ => None,
    }
}

/// How many bytes at the start of `line` (no leading blanks) name a comet, as `C/2031 A1 (Invented)` or `412P/Invented`,
/// after an optional word `Comet`.
///
/// The name ends after a closing parenthesis, else before two blanks or a tab, else before a word followed by `=`.
pub(super) fn title(line: &str) -> Option<(usize, &str)> {
    let skipped = match line.get(..6) {
        Some(word) if word.eq_ignore_ascii_case("comet ") => line.len() - line[6..].trim_start().len(),
        _ => 0,
    };
    let rest = &line[skipped..];
    let digits = rest.bytes().take_while(u8::is_ascii_digit).count();
    let mut after = rest[digits..].chars();
    let kind = after.next().is_some_and(|c| matches!(c, 'C' | 'P' | 'D' | 'X' | 'I' | 'A'));
    let follows = match after.next() {
        Some('/') => after.next().is_some_and(char::is_alphanumeric),
        Some(c) => (1..=4).contains(&digits) && (c.is_whitespace() || c == '-'),
        None => (1..=4).contains(&digits),
    };
    if !kind || digits > 4 || !follows {
        return None;
    }
    let mut end = rest.len();
    if let Some(gap) = rest.find("  ").into_iter().chain(rest.find('\t')).min() {
        end = gap;
    }
    if let Some(close) = rest[..end].find(')') {
        end = close + 1;
    } else if let Some(equals) = rest[..end].find('=') {
        let before = rest[..equals].trim_end();
        end = before.rfind(char::is_whitespace).unwrap_or(0);
    }
    let name = rest[..end].trim_end();
    (!name.is_empty()).then_some((skipped + end, name))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn packed_designations_unpack() {
        // Forms from the published description of packed designations, with invented or documented examples.
        for (packed, plain) in [
            ("K31A010", "2031 A1"),
            ("J95O010", "1995 O1"),
            ("K19Y04b", "2019 Y4-B"),
            ("K15E61R", "2015 ER61"),
            ("J94P01b", "1994 P1-B"),
            ("K08A10a", "2008 A10-A"),
            ("K31AA0C", "2031 AC100"),
            ("I86S00A", "1886 SA"),
        ] {
            assert_eq!(unpack(packed).as_deref(), Some(plain), "{packed}");
        }
        for odd in
            ["", "K31A01", "K31A0100", "M31A010", "K3xA010", "K31I010", "K31A000", "K31A0x0", "K31A01-", "\u{e9}31A010"]
        {
            assert_eq!(unpack(odd), None, "{odd}");
        }
    }

    #[test]
    fn titles_are_recognised_and_cut() {
        for (line, name) in [
            ("C/2031 A1 (Invented)", "C/2031 A1 (Invented)"),
            ("COMET C/2031 A1 (INVENTED) T 2031", "C/2031 A1 (INVENTED)"),
            ("412P/Invented-Other 3", "412P/Invented-Other 3"),
            ("412P", "412P"),
            ("P/2031 A1   T 2031", "P/2031 A1"),
            ("C/2031 A1 q=0.52 e=1.0", "C/2031 A1"),
        ] {
            assert_eq!(title(line).map(|(_, name)| name), Some(name), "{line}");
        }
        for line in [
            "",
            "Comet",
            "P   6.37",
            "P = 6.37",
            "A1 = 0",
            "C",
            "C/",
            "2031 Mar. 4.5",
            "q 0.5",
            "12 P",
            "Peri. 3",
            "\u{e9}",
        ] {
            assert_eq!(title(line), None, "{line}");
        }
    }
}
