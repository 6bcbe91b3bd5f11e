//! Small numerical tools.

/// Integral of `f` over `[a, b]` by the four-point Gauss-Legendre rule (exact for polynomials of degree 7).
#[inline]
pub(crate) fn gauss4(a: f64, b: f64, f: impl Fn(f64) -> f64) -> f64 {
    const X1: f64 = 0.339_981_043_584_856_3;
    const X2: f64 = 0.861_136_311_594_052_6;
    const W1: f64 = 0.652_145_154_862_546_1;
    const W2: f64 = 0.347_854_845_137_453_85;
    let (mid, half) = (0.5 * (a + b), 0.5 * (b - a));
    half * (W1 * (f(mid - X1 * half) + f(mid + X1 * half))
        + W2 * (f(mid - X2 * half) + f(mid + X2 * half)))
}

/// Integral over a step of length `h` from the values and slopes at its ends (trapezium with end correction;
/// exact for cubics).
#[inline(always)]
pub(crate) fn hermite_integral(h: f64, left: (f64, f64), right: (f64, f64)) -> f64 {
    h * (0.5 * (left.0 + right.0) + h * (1.0 / 12.0) * (left.1 - right.1))
}

/// A zero of `f` between `a` and `b`, where its values `fa` and `fb` have opposite signs (or one is zero).
///
/// Chandrupatla's method (1997, Advances in Engineering Software 28, 145-149; from memory): inverse quadratic
/// interpolation where the three last points promise that it helps, halving elsewhere. Never leaves the bracket, always ends;
/// smooth functions take five or six evaluations.
#[inline]
pub(crate) fn zero_between(
    mut a: f64,
    mut fa: f64,
    mut b: f64,
    mut fb: f64,
    f: impl Fn(f64) -> f64,
) -> f64 {
    if fa == 0.0 {
        return a;
    }
    if fb == 0.0 {
        return b;
    }
    let tolerance = 1e-14 * a.abs().max(b.abs()).max(1.0);
    // The first step is that of false position.
    let mut share = fa / (fa - fb);
    for _ in 0..120 {
        let width = (b - a).abs();
        // At least a tolerance from either end, so that the bracket closes from both sides.
        let least = tolerance / width;
        if least >= 0.5 {
            break;
        }
        let x = a + share.clamp(least, 1.0 - least) * (b - a);
        let fx = f(x);
        if fx == 0.0 {
            return x;
        }
        // `a` becomes the newest point, `b` the other end of the bracket, `c` the point left behind.
        let (c, fc);
        if (fx > 0.0) == (fa > 0.0) {
            (c, fc) = (a, fa);
        } else {
            (c, fc) = (b, fb);
            (b, fb) = (a, fa);
        }
        (a, fa) = (x, fx);
        let xi = (a - b) / (c - b);
        let phi = (fa - fb) / (fc - fb);
        share = if phi * phi < xi && (1.0 - phi) * (1.0 - phi) < 1.0 - xi {
            fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (fc - fb)
        } else {
            0.5
        };
    }
    if fa.abs() < fb.abs() { a } else { b }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rules_are_exact_for_the_polynomials_they_promise() {
        // Integral of x^7 - 3 x^2 over [0.2, 1.7].
        let exact = |x: f64| x.powi(8) / 8.0 - x.powi(3);
        let gauss = gauss4(0.2, 1.7, |x| x.powi(7) - 3.0 * x * x);
        assert!((gauss - (exact(1.7) - exact(0.2))).abs() < 1e-12);
        // Integral of x^3 over [0.5, 0.9].
        let hermite = hermite_integral(0.4, (0.125, 0.75), (0.729, 2.43));
        assert!((hermite - (0.9_f64.powi(4) - 0.5_f64.powi(4)) / 4.0).abs() < 1e-15);
    }

    #[test]
    fn zeros_are_found_to_the_last_places() {
        for root in [-0.999, -0.3, 1e-9, 0.5, 0.97] {
            for f in [
                |x: f64| x,
                |x: f64| x * x * x,
                |x: f64| (3.0 * x).exp() - 1.0,
                |x: f64| x.cbrt(),
            ] {
                let g = |x: f64| f(x - root);
                let found = zero_between(-1.0, g(-1.0), 1.0, g(1.0), g);
                // The triple root is flat: only its value can be asked for.
                assert!(
                    (found - root).abs() < 1e-12 || g(found).abs() < 1e-20,
                    "{found} for {root}"
                );
            }
        }
        assert_eq!(zero_between(0.0, 0.0, 1.0, 1.0, |x| x), 0.0);
        assert_eq!(zero_between(-1.0, -1.0, 0.0, 0.0, |x| x), 0.0);
    }
}
