//! Reading of quantities: a number, then a unit.

use super::table::{Dimension, reduce, units, units_of};

/// Why a text is not the quantity that was expected.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct QuantityError {
    /// What was found.
    pub message: String,
    /// What was expected or probably meant.
    pub help: Option<String>,
}

impl QuantityError {
    fn new(message: impl Into<String>, help: impl Into<String>) -> Self {
        Self { message: message.into(), help: Some(help.into()) }
    }
}

impl std::fmt::Display for QuantityError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match &self.help {
            Some(help) => write!(f, "{} ({help})", self.message),
            None => f.write_str(&self.message),
        }
    }
}

impl std::error::Error for QuantityError {}

/// Reads "3600 psia" into the program's unit of `dimension`.
///
/// # Errors
/// When the number or the unit cannot be read, the unit belongs to another dimension, or nothing says whether a
/// pressure is absolute or gauge.
///
/// # Example
/// ```
/// use wane::units::{Dimension, parse};
/// assert_eq!(parse("220 psig", Dimension::Pressure, 14.696), Ok(234.696));
/// assert!(parse("220 psi", Dimension::Pressure, 14.696).is_err());
/// ```
pub fn parse(text: &str, dimension: Dimension, atmospheric_pressure_psia: f64) -> Result<f64, QuantityError> {
    let (number, unit_text) = split(text.trim(), dimension)?;
    let reduced = reduce(unit_text);
    if reduced.is_empty() {
        return Err(QuantityError::new(
            format!("`{}` has no unit", text.trim()),
            format!("write {} with its unit, like \"{}\"", dimension.with_article(), with_main_unit(number, dimension)),
        ));
    }
    match units_of(dimension).find(|unit| unit.answers_to(&reduced)) {
        Some(unit) => Ok(unit.to_inside(number, atmospheric_pressure_psia)),
        None => Err(wrong_unit(number, unit_text, &reduced, dimension)),
    }
}

/// Reads Fetkovich's coefficient, "0.00079 STB/d/psi^2n", whose unit depends on the exponent n. STB/d/psi^2n inside.
///
/// # Errors
/// As [`parse`].
pub fn parse_flow_coefficient(text: &str, exponent: f64) -> Result<f64, QuantityError> {
    let example = "0.00079 STB/d/psi^2n";
    let (number, unit_text) = number_and_rest(text.trim())
        .map_err(|message| QuantityError::new(message, format!("a flow coefficient is written like \"{example}\"")))?;
    let reduced = reduce(unit_text).replace("psia", "psi").replace("bara", "bar");
    let split = reduced.strip_suffix("2n").and_then(|rest| rest.rsplit_once('/'));
    let converted = split.and_then(|(rate, pressure)| {
        let rate = units_of(Dimension::LiquidRate).find(|unit| unit.answers_to(rate))?;
        let pressure = units_of(Dimension::PressureDifference).find(|unit| unit.answers_to(pressure))?;
        Some(rate.to_inside(number, 0.0) / pressure.to_inside(1.0, 0.0).powf(2.0 * exponent))
    });
    converted.ok_or_else(|| {
        QuantityError::new(
            format!("`{unit_text}` is not a unit of a flow coefficient"),
            format!("known are STB/d/psi^2n, Sm3/d/bar^2n, Sm3/d/kPa^2n: \"{example}\""),
        )
    })
}

/// Reads a plain number as people write it ("1e6", "12,500,000.0", "-2").
///
/// # Errors
/// When it is no finite number, or a comma leaves its size open.
pub fn parse_number(text: &str) -> Result<f64, String> {
    match number_and_rest(text.trim()) {
        Ok((number, "")) => Ok(number),
        Ok((_, rest)) => Err(format!("`{rest}` is left over after the number")),
        Err(message) => Err(message),
    }
}

fn split(text: &str, dimension: Dimension) -> Result<(f64, &str), QuantityError> {
    number_and_rest(text).map_err(|message| {
        QuantityError::new(
            message,
            format!("{} is a number and a unit, like \"{}\"", dimension.with_article(), dimension.example()),
        )
    })
}

/// The leading number and what follows it.
fn number_and_rest(text: &str) -> Result<(f64, &str), String> {
    let end = number_length(text);
    let (number, rest) = text.split_at(end);
    if number.is_empty() {
        let first: String = text.chars().take(40).collect();
        let word = first.trim_start_matches(['+', '-']).to_lowercase();
        return Err(if word.starts_with("nan") || word.starts_with("inf") {
            format!("`{first}` is not a finite number")
        } else if text.is_empty() {
            "nothing is written here".to_owned()
        } else {
            format!("`{first}` does not begin with a number")
        });
    }
    let plain = without_separators(number)?;
    match plain.parse::<f64>() {
        Ok(value) if value.is_finite() => Ok((value, rest.trim())),
        Ok(_) => Err(format!("`{number}` is too large a number")),
        Err(_) => Err(format!("`{number}` is not a number")),
    }
}

/// Length in bytes of sign, digits with separators, and exponent.
fn number_length(text: &str) -> usize {
    let bytes = text.as_bytes();
    let digit = |i: usize| bytes.get(i).is_some_and(u8::is_ascii_digit);
    let mut i = usize::from(matches!(bytes.first(), Some(b'+' | b'-')));
    let start = i;
    while digit(i) || (matches!(bytes.get(i), Some(b'.' | b',' | b'_')) && (digit(i + 1) || i > start)) {
        i += 1;
    }
    if i == start {
        return 0;
    }
    if matches!(bytes.get(i), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(i + 1), Some(b'+' | b'-')));
        // "1e3Sm3" is a number, "34 e" is not.
        if digit(i + 1 + sign) {
            i += 1 + sign;
            while digit(i) {
                i += 1;
            }
        }
    }
    i
}

/// Takes thousands separators out, and refuses where a comma may as well be a decimal one.
fn without_separators(number: &str) -> Result<String, String> {
    if !number.contains(',') {
        return Ok(number.replace('_', ""));
    }
    let mantissa_end = number.find(['e', 'E']).unwrap_or(number.len());
    let (mantissa, exponent) = number.split_at(mantissa_end);
    let (whole, fraction) = match mantissa.split_once('.') {
        Some((whole, fraction)) => (whole, Some(fraction)),
        None => (mantissa, None),
    };
    let groups: Vec<&str> = whole.trim_start_matches(['+', '-']).split(',').collect();
    let grouped = groups.first().is_some_and(|g| (1..=3).contains(&g.len()) && *g != "0")
        && groups.iter().skip(1).all(|g| g.len() == 3)
        && !fraction.is_some_and(|f| f.contains(','));
    if grouped && (groups.len() > 2 || fraction.is_some()) {
        Ok(number.replace([',', '_'], ""))
    } else if grouped {
        let joined = groups.concat();
        let decimal = format!("{}.{}", groups[0], groups[1].trim_end_matches('0')).trim_end_matches('.').to_owned();
        Err(format!(
            "the comma in `{number}` leaves open whether it is {joined} or {decimal}{exponent}: write it without"
        ))
    } else {
        Err(format!("`{number}` has a comma where a decimal point is expected"))
    }
}

fn with_main_unit(number: f64, dimension: Dimension) -> String {
    let name = units_of(dimension).next().map_or("", |unit| unit.name);
    format!("{number} {name}")
}

fn list(dimension: Dimension) -> String {
    units_of(dimension).map(|unit| unit.name).collect::<Vec<_>>().join(", ")
}

fn wrong_unit(number: f64, unit_text: &str, reduced: &str, dimension: Dimension) -> QuantityError {
    if dimension == Dimension::Pressure && matches!(reduced, "psi" | "lbf/in2" | "lb/in2" | "#") {
        return QuantityError::new(
            format!("`{unit_text}` leaves open whether the pressure is absolute or gauge"),
            format!("write \"{number} psia\" or \"{number} psig\""),
        );
    }
    if matches!(reduced, "msm3" | "mmsm3" | "mm3" | "msm3/d" | "mmsm3/d") {
        return QuantityError::new(
            format!("`{unit_text}` is read as a thousand by some and as a million by others"),
            "write \"thousand Sm3\" or \"million Sm3\" (with /d for a rate)".to_owned(),
        );
    }
    let known = list(dimension);
    let others: Vec<&str> =
        units().iter().filter(|unit| unit.answers_to(reduced)).map(|unit| unit.dimension.with_article()).collect();
    if others.is_empty() {
        QuantityError::new(
            format!("`{unit_text}` is not a known unit"),
            format!("units of {}: {known}", dimension.with_article()),
        )
    } else {
        QuantityError::new(
            format!("`{unit_text}` is the unit of {}, {} is expected", others.join(" or "), dimension.with_article()),
            format!("units of {}: {known}", dimension.with_article()),
        )
    }
}
