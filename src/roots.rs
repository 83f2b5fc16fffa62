//! One-dimensional root and maximum finders that never leave their bracket.

/// Root of a continuous function between `a` and `b`, where `fa` and `fb` have opposite signs (or one is zero).
///
/// # Method
/// Brent (1973): inverse quadratic interpolation and secant, guarded by bisection. The result lies within `tolerance` of a sign change.
pub fn brent(mut f: impl FnMut(f64) -> f64, a: (f64, f64), b: (f64, f64), tolerance: f64) -> f64 {
    let ((mut a, mut fa), (mut b, mut fb)) = (a, b);
    if fa.abs() < fb.abs() {
        (a, fa, b, fb) = (b, fb, a, fa);
    }
    let (mut c, mut fc, mut d) = (a, fa, b - a);
    let mut previous = d;
    for _ in 0..200 {
        if fb == 0.0 {
            return b;
        }
        if (fb > 0.0) == (fc > 0.0) {
            c = a;
            fc = fa;
            d = b - a;
            previous = d;
        }
        if fc.abs() < fb.abs() {
            (a, b, c) = (b, c, b);
            (fa, fb, fc) = (fb, fc, fb);
        }
        let tol = 2.0 * f64::EPSILON * b.abs() + 0.5 * tolerance;
        let half = 0.5 * (c - b);
        if half.abs() <= tol {
            return b;
        }
        if previous.abs() >= tol && fa.abs() > fb.abs() {
            let s = fb / fa;
            let (mut p, mut q) = if a == c {
                (2.0 * half * s, 1.0 - s)
            } else {
                let (q, r) = (fa / fc, fb / fc);
                (s * (2.0 * half * q * (q - r) - (b - a) * (r - 1.0)), (q - 1.0) * (r - 1.0) * (s - 1.0))
            };
            if p > 0.0 {
                q = -q;
            } else {
                p = -p;
            }
            if 2.0 * p < (3.0 * half * q - (tol * q).abs()).min((previous * q).abs()) {
                previous = d;
                d = p / q;
            } else {
                d = half;
                previous = d;
            }
        } else {
            d = half;
            previous = d;
        }
        a = b;
        fa = fb;
        b += if d.abs() > tol { d } else { tol.copysign(half) };
        fb = f(b);
    }
    b
}

/// Where a function takes its largest value between `a` and `b`, and that value, starting from the interior guess `x`.
///
/// # Method
/// Brent (1973): golden section with parabolic interpolation, no derivatives (the functions maximised here have corners).
/// `tolerance` is the absolute width at which the search ends.
///
/// # Limitation
/// A function with several maxima gets one of them: scan first.
pub fn maximise(mut f: impl FnMut(f64) -> f64, a: f64, x: f64, b: f64, tolerance: f64) -> (f64, f64) {
    const GOLD: f64 = 0.381_966_011_250_105_1;
    let (mut a, mut b) = (a, b);
    let mut x = x.max(a).min(b);
    let mut fx = f(x);
    let (mut w, mut v, mut fw, mut fv) = (x, x, fx, fx);
    let (mut d, mut e) = (0.0_f64, 0.0_f64);
    for _ in 0..100 {
        let middle = 0.5 * (a + b);
        let tol = 1e-12 * x.abs() + tolerance;
        if (x - middle).abs() <= 2.0 * tol - 0.5 * (b - a) {
            break;
        }
        let mut golden = true;
        if e.abs() > tol {
            let r = (x - w) * (fx - fv);
            let mut q = (x - v) * (fx - fw);
            let mut p = (x - v) * q - (x - w) * r;
            q = 2.0 * (q - r);
            if q > 0.0 {
                p = -p;
            }
            q = q.abs();
            let before = e;
            e = d;
            if p.abs() < (0.5 * q * before).abs() && p > q * (a - x) && p < q * (b - x) {
                d = p / q;
                let u = x + d;
                if u - a < 2.0 * tol || b - u < 2.0 * tol {
                    d = tol.copysign(middle - x);
                }
                golden = false;
            }
        }
        if golden {
            e = if x >= middle { a - x } else { b - x };
            d = GOLD * e;
        }
        let u = if d.abs() >= tol { x + d } else { x + tol.copysign(d) };
        let fu = f(u);
        if fu >= fx {
            if u >= x {
                a = x;
            } else {
                b = x;
            }
            (v, fv, w, fw, x, fx) = (w, fw, x, fx, u, fu);
        } else {
            if u < x {
                a = u;
            } else {
                b = u;
            }
            if fu >= fw || w == x {
                (v, fv, w, fw) = (w, fw, u, fu);
            } else if fu >= fv || v == x || v == w {
                (v, fv) = (u, fu);
            }
        }
    }
    (x, fx)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn brent_finds_roots_of_smooth_and_cornered_functions() {
        let f = |x: f64| x.cos() - x;
        // Dottie number, OEIS A003957.
        assert!((brent(f, (0.0, f(0.0)), (1.0, f(1.0)), 1e-14) - 0.739_085_133_215_160_6).abs() < 1e-13);
        let g = |x: f64| if x < 0.3 { x - 0.3 } else { 1e4 * (x - 0.3) };
        assert!((brent(g, (-1.0, g(-1.0)), (1.0, g(1.0)), 1e-12) - 0.3).abs() < 1e-11);
    }

    #[test]
    fn maximise_finds_smooth_and_cornered_tops() {
        let (x, fx) = maximise(|x| -(x - 2.0) * (x - 2.0) + 5.0, 0.0, 1.0, 10.0, 1e-9);
        assert!((x - 2.0).abs() < 1e-6 && (fx - 5.0).abs() < 1e-12);
        let (x, fx) = maximise(|x: f64| if x < 3.0 { 2.0 * x } else { 6.0 - 5.0 * (x - 3.0) }, 0.0, 1.0, 10.0, 1e-9);
        assert!((x - 3.0).abs() < 1e-6 && (fx - 6.0).abs() < 1e-6);
    }
}
