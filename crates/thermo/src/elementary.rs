//! Exponential and logarithm that the compiler can inline and vectorise.
//!
//! The platform's own are called one number at a time, and an environment of thousands of levels is little else
//! than these two. Both are good to a few units in the last place over the range used here; the tests compare them
//! with the platform's.

/// The larger of a number and a limit; what is no number stays so. One instruction, where `f64::max` takes three.
#[inline(always)]
pub(crate) fn at_least(x: f64, limit: f64) -> f64 {
    if x < limit { limit } else { x }
}

/// The smaller of a number and a limit, likewise.
#[inline(always)]
pub(crate) fn at_most(x: f64, limit: f64) -> f64 {
    if x > limit { limit } else { x }
}

/// e^x for x below 700; anything under -708 gives e^-708, which is nothing.
#[inline(always)]
pub(crate) fn exp(x: f64) -> f64 {
    // Added to a small number this leaves the nearest integer in the lowest bits.
    const ROUND: f64 = 6_755_399_441_055_744.0;
    const LN2_HIGH: f64 = 0.693_147_180_369_123_8;
    const LN2_LOW: f64 = 1.908_214_929_270_587_7e-10;
    let x = at_least(x, -708.0);
    let shifted = x * std::f64::consts::LOG2_E + ROUND;
    let n = shifted - ROUND;
    let r = (x - n * LN2_HIGH) - n * LN2_LOW;
    // Taylor to r^12, |r| < 0.347: the next term is below 2e-16. Paired so that the products overlap in time.
    let r2 = r * r;
    let r4 = r2 * r2;
    let a = (1.0 + r) + r2 * (1.0 / 2.0 + r * (1.0 / 6.0));
    let b = (1.0 / 24.0 + r * (1.0 / 120.0)) + r2 * (1.0 / 720.0 + r * (1.0 / 5_040.0));
    let c = (1.0 / 40_320.0 + r * (1.0 / 362_880.0))
        + r2 * (1.0 / 3_628_800.0 + r * (1.0 / 39_916_800.0));
    let d = 1.0 / 479_001_600.0;
    let polynomial = a + r4 * (b + r4 * (c + r4 * d));
    let power = f64::from_bits((shifted.to_bits() << 52).wrapping_add(1023 << 52));
    polynomial * power
}

/// ln x for normal positive x.
#[inline(always)]
pub(crate) fn ln(x: f64) -> f64 {
    // Bits of sqrt(1/2): the mantissa is kept within sqrt(1/2)..sqrt(2).
    const SQRT_HALF: u64 = 0x3FE6_A09E_667F_3BCD;
    const TWO_52: u64 = 0x4330_0000_0000_0000;
    const LN2_HIGH: f64 = 0.693_147_180_369_123_8;
    const LN2_LOW: f64 = 1.908_214_929_270_587_7e-10;
    let bits = x.to_bits();
    // Exponent plus 1023 and, by way of the bits of 2^52, as a float.
    let exponent = bits.wrapping_sub(SQRT_HALF).wrapping_add(1023 << 52) >> 52;
    let n = f64::from_bits(exponent | TWO_52) - (f64::from_bits(TWO_52) + 1023.0);
    let m = f64::from_bits(bits.wrapping_sub(exponent << 52).wrapping_add(1023 << 52));
    // ln m = 2 artanh((m - 1)/(m + 1)); s² < 0.0295, so that the next term is below 2e-17.
    let s = (m - 1.0) / (m + 1.0);
    let q = s * s;
    let q2 = q * q;
    let q4 = q2 * q2;
    let low = (1.0 / 3.0 + q * (1.0 / 5.0)) + q2 * (1.0 / 7.0 + q * (1.0 / 9.0));
    let high = (1.0 / 11.0 + q * (1.0 / 13.0)) + q2 * (1.0 / 15.0 + q * (1.0 / 17.0));
    let top = 1.0 / 19.0 + q * (1.0 / 21.0);
    let series = q * (low + q4 * (high + q4 * top));
    n * LN2_HIGH + (2.0 * s + (2.0 * s * series + n * LN2_LOW))
}

#[cfg(test)]
mod tests {
    #[test]
    fn exponential_agrees_with_the_platform() {
        for i in -70_000..=60_000 {
            let x = f64::from(i) * 0.01 + 1e-3;
            let (ours, theirs) = (super::exp(x), x.exp());
            assert!(
                (ours / theirs - 1.0).abs() < 1.5e-15,
                "exp({x}) = {ours:e}, not {theirs:e}"
            );
        }
        assert!(super::exp(-1e6) < 1e-300);
        assert_eq!(super::exp(0.0), 1.0);
    }

    #[test]
    fn logarithm_agrees_with_the_platform() {
        for i in 1..=400_000 {
            let x = 1.000_03_f64.powi(i) * 1e-2;
            let (ours, theirs) = (super::ln(x), x.ln());
            assert!(
                (ours - theirs).abs() <= 4e-16 * theirs.abs().max(0.1),
                "ln({x}) = {ours:e}, not {theirs:e}"
            );
        }
        assert_eq!(super::ln(1.0), 0.0);
    }
}
