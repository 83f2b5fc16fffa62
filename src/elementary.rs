//! Exponential, logarithm and powers of fixed exponent, written to be inlined.
//!
//! The correlations are little else than such functions. A call of the platform's library saves and restores every number
//! in flight; here the compiler sees through, and a power costs one short polynomial instead of a logarithm and an
//! exponential. Within 5e-15 relatively (the logarithm: absolutely, near 1); outside the usual range the library answers.
//!
//! # Method
//! `x = 2^k m`, m in 1..2; m lies within 1/128 of the middle c of one of 64 cells: `m = c (1 + t)`. Then
//! `ln x = k ln 2 + ln c + ln(1 + t)` and `x^a = 2^(ka) c^a (1 + t)^a` with series in t. The exponential takes its
//! argument apart into multiples of ln 2/64 and a rest. The tables are computed when the program is compiled.

use std::f64::consts::LN_2;

const CELLS: usize = 64;
const MANTISSA_BITS: u32 = 52;
const CELL_SHIFT: u32 = MANTISSA_BITS - 6;
const ONE_BITS: u64 = 1023 << MANTISSA_BITS;

/// Sum of the exponential series; for small arguments, at compile time.
const fn exp_series(x: f64) -> f64 {
    let mut sum = 1.0;
    let mut n = 28;
    while n > 0 {
        sum = 1.0 + sum * x / n as f64;
        n -= 1;
    }
    sum
}

/// `2^x` at compile time.
const fn two_to(x: f64) -> f64 {
    let mut rest = x;
    let mut value = 1.0;
    while rest > 0.5 {
        rest -= 1.0;
        value *= 2.0;
    }
    while rest < -0.5 {
        rest += 1.0;
        value *= 0.5;
    }
    value * exp_series(rest * LN_2)
}

/// `ln x` for x in 1..2 at compile time: `2 artanh((x - 1)/(x + 1))`.
const fn ln_const(x: f64) -> f64 {
    let y = (x - 1.0) / (x + 1.0);
    let y2 = y * y;
    let mut sum = 0.0;
    let mut n = 41;
    while n > 0 {
        sum = sum * y2 + 1.0 / n as f64;
        n -= 2;
    }
    2.0 * y * sum
}

const fn middle(cell: usize) -> f64 {
    1.0 + (cell as f64 + 0.5) / CELLS as f64
}

/// Reciprocal and logarithm of the middle of each cell.
static MIDDLES: [(f64, f64); CELLS] = {
    let mut table = [(0.0, 0.0); CELLS];
    let mut cell = 0;
    while cell < CELLS {
        table[cell] = (1.0 / middle(cell), ln_const(middle(cell)));
        cell += 1;
    }
    table
};

/// `2^(i/64)`.
static ROOTS_OF_TWO: [f64; CELLS] = {
    let mut table = [0.0; CELLS];
    let mut i = 0;
    while i < CELLS {
        table[i] = two_to(i as f64 / CELLS as f64);
        i += 1;
    }
    table
};

/// A positive number taken apart, for several functions of it.
#[derive(Debug, Clone, Copy)]
pub struct Split {
    x: f64,
    /// Biased exponent: 1023 for 1..2; anything beyond 2046 for numbers that the tables do not serve.
    exponent: u32,
    cell: u32,
    t: f64,
}

impl Split {
    /// Takes a number apart. Negative numbers, zero, infinities and NaN are passed on to the library.
    #[inline]
    pub fn new(x: f64) -> Self {
        let bits = x.to_bits();
        let cell = (bits >> CELL_SHIFT) as u32 & (CELLS as u32 - 1);
        let mantissa = f64::from_bits(bits & ((1 << MANTISSA_BITS) - 1) | ONE_BITS);
        let (reciprocal, _) = MIDDLES[cell as usize];
        Self { x, exponent: (bits >> MANTISSA_BITS) as u32, cell, t: mantissa * reciprocal - 1.0 }
    }

    /// Natural logarithm.
    #[inline]
    pub fn ln(&self) -> f64 {
        // Subnormal numbers, negative ones (the sign is the next bit) and those that are none.
        if self.exponent.wrapping_sub(1) >= 2046 {
            return self.x.ln();
        }
        let t = self.t;
        let (_, ln_middle) = MIDDLES[self.cell as usize];
        let whole = f64::from(self.exponent as i32 - 1023) * LN_2 + ln_middle;
        let t2 = t * t;
        let tail = (-0.5 + t * (1.0 / 3.0)) + t2 * ((-0.25 + t * 0.2) + t2 * (-1.0 / 6.0 + t * (1.0 / 7.0)));
        whole + (t + t2 * tail)
    }
}

/// Natural logarithm.
#[inline]
pub fn ln(x: f64) -> f64 {
    Split::new(x).ln()
}

/// `e^x`.
#[inline]
pub fn exp(x: f64) -> f64 {
    /// Adding it rounds to a whole number, which then stands in the lowest bits.
    const ROUNDING: f64 = 6_755_399_441_055_744.0;
    /// ln 2/64 in two parts, the first with trailing zeros, so that its multiples are exact.
    const STEP_HIGH: f64 = f64::from_bits((LN_2 / CELLS as f64).to_bits() & !((1 << 22) - 1));
    // ln 2 beyond f64 is 2.319e-17.
    const STEP_LOW: f64 = (LN_2 / CELLS as f64 - STEP_HIGH) + 2.319_046_813_846_3e-17 / CELLS as f64;
    if x.is_nan() || x.abs() > 700.0 {
        return x.exp();
    }
    let shifted = x * (CELLS as f64 / LN_2) + ROUNDING;
    let count = shifted - ROUNDING;
    let whole = shifted.to_bits() as i32;
    let r = (x - count * STEP_HIGH) - count * STEP_LOW;
    let r2 = r * r;
    let series = r + r2 * ((0.5 + r * (1.0 / 6.0)) + r2 * (1.0 / 24.0 + r * (1.0 / 120.0)));
    let root = ROOTS_OF_TWO[(whole & (CELLS as i32 - 1)) as usize];
    let power_of_two = f64::from_bits(((1023 + i64::from(whole >> 6)) as u64) << MANTISSA_BITS);
    (root + root * series) * power_of_two
}

/// Powers of two that the table of a [`Power`] spans: 2^-8 to 2^32.
const OCTAVES: usize = 40;
const LEAST_EXPONENT: u32 = 1023 - 8;

/// The function `x^a` of one exponent.
#[derive(Debug)]
pub struct Power {
    exponent: f64,
    series: [f64; 7],
    middles: [f64; CELLS],
    octaves: [f64; OCTAVES],
}

impl Power {
    /// Prepares the tables of one exponent, at compile time.
    pub const fn new(exponent: f64) -> Self {
        let mut series = [1.0; 7];
        let mut n = 1;
        while n < 7 {
            series[n] = series[n - 1] * (exponent - (n - 1) as f64) / n as f64;
            n += 1;
        }
        let mut middles = [0.0; CELLS];
        let mut cell = 0;
        while cell < CELLS {
            middles[cell] = exp_series(exponent * ln_const(middle(cell)));
            cell += 1;
        }
        let mut octaves = [0.0; OCTAVES];
        let mut octave = 0;
        while octave < OCTAVES {
            octaves[octave] = two_to(exponent * (octave as f64 - 8.0));
            octave += 1;
        }
        Self { exponent, series, middles, octaves }
    }

    /// `x^a` of a number taken apart.
    #[inline]
    pub fn of_split(&self, x: &Split) -> f64 {
        let Some(octave) = self.octaves.get(x.exponent.wrapping_sub(LEAST_EXPONENT) as usize) else {
            return x.x.powf(self.exponent);
        };
        let (t, c) = (x.t, &self.series);
        let t2 = t * t;
        let series = 1.0 + t * c[1] + t2 * ((c[2] + t * c[3]) + t2 * ((c[4] + t * c[5]) + t2 * c[6]));
        octave * self.middles[x.cell as usize] * series
    }

    /// `x^a`.
    #[inline]
    pub fn of(&self, x: f64) -> f64 {
        self.of_split(&Split::new(x))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Numbers that fill the cells unevenly.
    fn spread(low: f64, high: f64) -> impl Iterator<Item = f64> {
        (0..200_000_u32).map(move |i| low + (high - low) * (f64::from(i) * 0.618_033_988_749_894_9).fract())
    }

    #[test]
    fn the_exponential_is_the_librarys() {
        let worst = spread(-80.0, 80.0).map(|x| (exp(x) / x.exp() - 1.0).abs()).fold(0.0, f64::max);
        assert!(worst < 1e-15, "{worst}");
        assert_eq!((exp(0.0), exp(800.0), exp(-800.0)), (1.0, f64::INFINITY, 0.0));
        assert!(exp(f64::NAN).is_nan());
    }

    #[test]
    fn the_logarithm_is_the_librarys() {
        let worst = spread(-40.0, 40.0)
            .map(f64::exp)
            .chain(spread(0.5, 2.0))
            .map(|x| (ln(x) - x.ln()).abs() / x.ln().abs().max(1.0))
            .fold(0.0, f64::max);
        assert!(worst < 1e-15, "{worst}");
        assert_eq!((ln(0.0), ln(f64::INFINITY)), (f64::NEG_INFINITY, f64::INFINITY));
        assert!(ln(-1.0).is_nan() && ln(f64::NAN).is_nan());
        assert_eq!(ln(1e-310), 1e-310_f64.ln());
    }

    #[test]
    fn powers_are_the_librarys() {
        const POWERS: [Power; 5] =
            [Power::new(1.2), Power::new(-1.163), Power::new(0.349), Power::new(1.0 / 0.83), Power::new(-0.515)];
        for power in &POWERS {
            let a = power.exponent;
            // Beyond 2^-8..2^32 too.
            let worst = spread(-7.0, 26.0).map(f64::exp).map(|x| (power.of(x) / x.powf(a) - 1.0).abs());
            let worst = worst.fold(0.0, f64::max);
            assert!(worst < 5e-15, "exponent {a}: {worst}");
            assert_eq!(power.of(0.0), 0_f64.powf(a));
            assert!(power.of(-1.0).is_nan() && power.of(f64::NAN).is_nan());
        }
    }
}
