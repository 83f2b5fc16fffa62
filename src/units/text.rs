//! Sentences of the physics layers, told in the user's units.
//!
//! The physics speaks oilfield units ("the balance gives 2104 psia"). For a metric scenario each figure that is followed by
//! such a unit is converted, with as many digits as it had. What is not recognised stays as it is, unit and all: never wrong, at
//! worst in the other system.

use super::{Dimension, UnitSystem};

/// Units in which the physics writes, and what they measure.
const SPOKEN: [(&str, Dimension); 13] = [
    ("psia", Dimension::Pressure),
    ("psi", Dimension::PressureDifference),
    ("STB/d", Dimension::LiquidRate),
    ("STB", Dimension::LiquidVolume),
    ("scf/STB", Dimension::GasOilRatio),
    ("STB/d/psi", Dimension::ProductivityIndex),
    ("psi/(STB/d)^2", Dimension::Turbulence),
    ("scf/d", Dimension::GasRate),
    ("scf", Dimension::GasVolume),
    ("ft", Dimension::Length),
    ("ft/s", Dimension::Velocity),
    // Not "in", which is a word too.
    ("inch", Dimension::Diameter),
    ("degF", Dimension::Temperature),
];
/// Fetkovich's C, whose conversion depends on the exponent that the same sentence states as "n = 0.85".
const FLOW_COEFFICIENT: &str = "STB/d/psi^2n";

impl UnitSystem {
    /// The same sentence in this system's units.
    pub fn tell(self, text: &str) -> String {
        if self == Self::Field {
            return text.to_owned();
        }
        let words: Vec<&str> = text.split(' ').collect();
        let exponent = text.split("n = ").nth(1).and_then(|rest| {
            rest.split(|c: char| !(c.is_ascii_digit() || c == '.')).next().and_then(|n| n.parse::<f64>().ok())
        });
        let mut told = Vec::with_capacity(words.len());
        let mut i = 0;
        while i < words.len() {
            match words.get(i + 1).and_then(|unit| self.converted(words[i], unit, exponent)) {
                Some((number, unit)) => {
                    told.push(number);
                    told.push(unit);
                    i += 2;
                }
                None => {
                    told.push(words[i].to_owned());
                    i += 1;
                }
            }
        }
        told.join(" ")
    }

    fn converted(self, word: &str, unit_word: &str, exponent: Option<f64>) -> Option<(String, String)> {
        let unit = unit_word.trim_end_matches([',', '.', ';', ':', ')']);
        let after = &unit_word[unit.len()..];
        let number = word.trim_start_matches(['(', '+']);
        let before = &word[..word.len() - number.len()];
        let value: f64 = number.replace(',', "").parse().ok()?;
        let (converted, label) = if unit == FLOW_COEFFICIENT {
            let rate = self.to_output(Dimension::LiquidRate, 1.0);
            let pressure = self.to_output(Dimension::PressureDifference, 1.0);
            (value * rate / pressure.powf(2.0 * exponent?), "Sm³/d/bar^2n")
        } else {
            let dimension = SPOKEN.iter().find(|row| row.0 == unit)?.1;
            (self.to_output(dimension, value), self.unit(dimension).label)
        };
        Some((format!("{before}{}", like(number, converted)), format!("{label}{after}")))
    }
}

/// `value` with as many significant digits as `pattern` shows, at least two; in powers of ten where the pattern is.
fn like(pattern: &str, value: f64) -> String {
    let (mantissa, power) = pattern.split_once(['e', 'E']).map_or((pattern, None), |(m, p)| (m, Some(p)));
    let digits = mantissa.trim_start_matches(['-', '0', '.', ',']).chars().filter(char::is_ascii_digit).count().max(2);
    if power.is_some() {
        return format!("{value:.*e}", digits - 1);
    }
    let whole = if value == 0.0 { 1 } else { value.abs().log10().floor() as i32 + 1 };
    format!("{value:.*}", usize::try_from(digits as i32 - whole).unwrap_or(0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_are_converted_with_their_digits() {
        let metric = UnitSystem::Metric;
        assert_eq!(
            metric.tell("the balance gives 2104 psia, measured were 2161 psia (-57 psi)"),
            "the balance gives 145.1 bara, measured were 149.0 bara (-3.9 bar)"
        );
        assert_eq!(metric.tell("at 280 STB/d, in the dip"), "at 44.5 Sm³/d, in the dip");
        // C is per psi to the power 2n: 1e-3 * 0.158987 / 0.0689476^2 with n = 1.
        assert_eq!(
            metric.tell("C = 1.0000e-3 STB/d/psi^2n (liquid), n = 1.000 at 2650 psia"),
            "C = 3.3444e-2 Sm³/d/bar^2n (liquid), n = 1.000 at 182.7 bara"
        );
        assert_eq!(
            metric.tell("up to 30.0 ft/s; down to 92 degF, 2.441 inch (3 in March)"),
            "up to 9.14 m/s; down to 33 °C, 62.00 mm (3 in March)"
        );
        assert_eq!(UnitSystem::Field.tell("280 STB/d"), "280 STB/d");
        assert_eq!(metric.tell("nothing to tell: 12 apples"), "nothing to tell: 12 apples");
    }
}
