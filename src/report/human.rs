//! Numbers and dates for people: thousands separators, month names, no bare M or MM.

use jiff::civil::Date;

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

/// "March 2031".
pub fn month(date: Date) -> String {
    let index = usize::from(date.month().unsigned_abs()).saturating_sub(1);
    format!("{} {}", MONTHS.get(index).copied().unwrap_or(""), date.year())
}

/// "Mar 2031".
pub fn short_month(date: Date) -> String {
    let index = usize::from(date.month().unsigned_abs()).saturating_sub(1);
    let name = MONTHS.get(index).copied().unwrap_or("");
    format!("{} {}", name.get(..3).unwrap_or(name), date.year())
}

/// `1234567.8` with `decimals` digits after the point and a comma between thousands: "1,234,567.80".
pub fn number(value: f64, decimals: usize) -> String {
    if !value.is_finite() {
        return "-".to_owned();
    }
    let plain = format!("{value:.decimals$}");
    let (sign, digits) = plain.strip_prefix('-').map_or(("", plain.as_str()), |rest| ("-", rest));
    let (whole, fraction) = digits.split_once('.').map_or((digits, None), |(w, f)| (w, Some(f)));
    // A figure that rounds to zero has no sign.
    let zero = whole.chars().chain(fraction.unwrap_or("").chars()).all(|c| c == '0');
    let mut out = String::from(if zero { "" } else { sign });
    for (i, c) in whole.chars().enumerate() {
        if i > 0 && (whole.len() - i).is_multiple_of(3) {
            out.push(',');
        }
        out.push(c);
    }
    if let Some(fraction) = fraction {
        out.push('.');
        out.push_str(fraction);
    }
    out
}

/// About four significant digits, without an exponent for ordinary sizes.
pub fn short(value: f64) -> String {
    let size = value.abs();
    match size {
        _ if !value.is_finite() => "-".to_owned(),
        _ if value == 0.0 => "0".to_owned(),
        _ if size >= 100.0 => number(value, 0),
        _ if size >= 10.0 => number(value, 1),
        _ if size >= 1.0 => number(value, 2),
        _ if size >= 1e-3 => number(value, 4),
        _ => format!("{value:.2e}"),
    }
}

/// Five significant digits, without an exponent down to a millionth.
pub fn significant(value: f64) -> String {
    if value == 0.0 || !value.is_finite() || value.abs() < 1e-6 {
        return short(value);
    }
    let decimals = (4.0 - value.abs().log10().floor()).clamp(0.0, 10.0) as usize;
    number(value, decimals)
}

/// A volume in words: "1.234 million STB", "12.3 thousand STB", "640 STB".
pub fn volume(value: f64, unit: &str) -> String {
    format!("{} {unit}", words(value))
}

/// A large number in words: "1.234 million", "12.3 thousand", "640".
pub fn words(value: f64) -> String {
    match value.abs() {
        size if size >= 1e9 => format!("{} billion", number(value / 1e9, 3)),
        size if size >= 1e6 => format!("{} million", number(value / 1e6, 3)),
        size if size >= 1e4 => format!("{} thousand", number(value / 1e3, 1)),
        _ => number(value, 0),
    }
}

/// A divisor and the word for it, so that axis figures up to `largest` stay short.
pub fn scale(largest: f64) -> (f64, &'static str) {
    match largest {
        v if v >= 2e9 => (1e9, "billion "),
        v if v >= 2e6 => (1e6, "million "),
        v if v >= 5e4 => (1e3, "thousand "),
        _ => (1.0, ""),
    }
}

/// Days in words a person thinks in: "17 days", "3.2 months", "2.4 years".
pub fn span(days: f64) -> String {
    let size = days.abs();
    if size < 60.0 {
        format!("{} days", number(days, if size < 10.0 { 1 } else { 0 }))
    } else if size < 730.5 {
        format!("{} months", number(days / 30.436_875, 1))
    } else {
        format!("{} years", number(days / 365.25, 1))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use jiff::civil::date;

    #[test]
    fn thousands_are_separated() {
        assert_eq!(number(1_234_567.891, 2), "1,234,567.89");
        assert_eq!(number(999.6, 0), "1,000");
        assert_eq!(number(-1234.0, 0), "-1,234");
        assert_eq!(number(-0.001, 1), "0.0");
        assert_eq!(number(f64::NAN, 1), "-");
    }

    #[test]
    fn people_read_months() {
        assert_eq!(month(date(2031, 3, 17)), "March 2031");
        assert_eq!(short_month(date(2031, 12, 1)), "Dec 2031");
    }

    #[test]
    fn figures_keep_their_size() {
        assert_eq!(significant(0.000_803_21), "0.00080321");
        assert_eq!(significant(1.357_121), "1.3571");
        assert_eq!(short(12_345.6), "12,346");
        assert_eq!(span(12.0), "12 days");
        assert_eq!(span(-475.0), "-15.6 months");
        assert_eq!(span(2276.6), "6.2 years");
    }

    #[test]
    fn volumes_are_spelled_out() {
        assert_eq!(volume(1_234_000.0, "STB"), "1.234 million STB");
        assert_eq!(volume(640.2, "STB"), "640 STB");
    }
}
