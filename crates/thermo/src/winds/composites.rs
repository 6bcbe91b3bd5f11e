//! Composite indices of the literature, each with its terms.

/// A composite index and what it is made of.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Composite {
    /// The index: the product of its terms.
    pub value: f64,
    /// Its terms.
    pub terms: Vec<Term>,
}

/// One factor of a composite index.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Term {
    /// What it is made of.
    pub name: &'static str,
    /// That input's value.
    pub input: f64,
    /// That input's unit.
    pub unit: &'static str,
    /// The factor, limits applied.
    pub factor: f64,
}

/// What the composite indices are made of. Heights are above the ground.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct CompositeInputs {
    /// CAPE of the surface parcel, J/kg.
    pub surface_cape: Option<f64>,
    /// Height of its LCL, m.
    pub surface_lcl_height: Option<f64>,
    /// CAPE of the mixed parcel, J/kg.
    pub mixed_cape: Option<f64>,
    /// CIN of the mixed parcel, J/kg, <= 0.
    pub mixed_cin: Option<f64>,
    /// Height of its LCL, m.
    pub mixed_lcl_height: Option<f64>,
    /// CAPE of the most unstable parcel, J/kg.
    pub most_unstable_cape: Option<f64>,
    /// Height of the base of the effective inflow layer, m.
    pub inflow_base_height: Option<f64>,
    /// Storm-relative helicity 0-1 km, m²/s².
    pub helicity_0_to_1km: Option<f64>,
    /// Storm-relative helicity of the effective inflow layer, m²/s².
    pub helicity_effective: Option<f64>,
    /// Length of the wind difference 0-6 km, m/s.
    pub difference_0_to_6km: Option<f64>,
    /// Length of the effective bulk wind difference, m/s.
    pub difference_effective: Option<f64>,
}

/// The composite indices. Absent where an input is, or isn't finite. Without free convection there is no CIN, and as a rule no
/// effective layer: the indices that need them are absent then, not 0.
///
/// All definitions are from memory: the publications have not been opened for this project. CAPE and helicity have no
/// limit in any of them. Helicity keeps its sign: for storms that deviate to the left it is as a rule negative, and so is the
/// index; in the mirror image of a profile, with the mirrored motion, only the sign of the index differs. Where CAPE is only a
/// lower limit, the index is one too.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Composites {
    /// Supercell composite parameter (Thompson et al. 2003, Wea. Forecasting 18, 1243-1261), as revised for the effective layer
    /// (Thompson et al. 2004, 22nd Conf. on Severe Local Storms; 2007, Wea. Forecasting 22, 102-115):
    ///
    /// (most unstable CAPE / 1000 J/kg) · (effective helicity / 50 m²/s²) · (effective difference / 20 m/s).
    ///
    /// The last term is 0 below 10 m/s and 1 above 20 m/s. The term with CIN that came into use later is not part of it.
    pub supercell: Option<Composite>,
    /// Significant tornado parameter of fixed layers (Thompson et al. 2003), with the divisors and limits that came with the
    /// revision of 2004:
    ///
    /// (surface CAPE / 1500 J/kg) · ((2000 m - surface LCL height) / 1000 m) · (helicity 0-1 km / 150 m²/s²) · (difference
    /// 0-6 km / 20 m/s).
    ///
    /// The LCL term is 1 below 1000 m and 0 above 2000 m; the last term is 0 below 12.5 m/s and 1.5 above 30 m/s. Not sure:
    /// the paper of 2003 itself divided by other values, used the mixed parcel, and had a term with CIN.
    pub significant_tornado_fixed: Option<Composite>,
    /// Significant tornado parameter of the effective layer with CIN (Thompson et al. 2012, Wea. Forecasting 27, 1136-1154):
    ///
    /// (mixed CAPE / 1500 J/kg) · ((2000 m - mixed LCL height) / 1000 m) · (effective helicity / 150 m²/s²) · (effective
    /// difference / 20 m/s) · ((200 J/kg + mixed CIN) / 150 J/kg).
    ///
    /// The LCL term is 1 below 1000 m and 0 above 2000 m; the term of the difference is 0 below 12.5 m/s and 1.5 above 30
    /// m/s; the term of CIN is 1 above -50 J/kg and 0 below -200 J/kg; the index is 0 when the base of the effective inflow
    /// layer lies above the ground, given here as a term of its own.
    pub significant_tornado_effective: Option<Composite>,
}

impl Composites {
    /// Of their inputs.
    pub fn of(inputs: &CompositeInputs) -> Self {
        Self {
            supercell: supercell(inputs),
            significant_tornado_fixed: significant_tornado_fixed(inputs),
            significant_tornado_effective: significant_tornado_effective(inputs),
        }
    }
}

fn supercell(inputs: &CompositeInputs) -> Option<Composite> {
    product([
        term(
            "most unstable CAPE",
            inputs.most_unstable_cape,
            "J/kg",
            |cape| cape / 1000.0,
        ),
        term(
            "effective helicity",
            inputs.helicity_effective,
            "m²/s²",
            |helicity| helicity / 50.0,
        ),
        term(
            "effective wind difference",
            inputs.difference_effective,
            "m/s",
            |difference| at_least(10.0, difference) * (difference / 20.0).min(1.0),
        ),
    ])
}

fn significant_tornado_fixed(inputs: &CompositeInputs) -> Option<Composite> {
    product([
        term("surface CAPE", inputs.surface_cape, "J/kg", |cape| {
            cape / 1500.0
        }),
        term(
            "surface LCL height",
            inputs.surface_lcl_height,
            "m",
            low_lcl,
        ),
        term(
            "helicity 0-1 km",
            inputs.helicity_0_to_1km,
            "m²/s²",
            |helicity| helicity / 150.0,
        ),
        term(
            "wind difference 0-6 km",
            inputs.difference_0_to_6km,
            "m/s",
            strong_difference,
        ),
    ])
}

fn significant_tornado_effective(inputs: &CompositeInputs) -> Option<Composite> {
    product([
        term("mixed CAPE", inputs.mixed_cape, "J/kg", |cape| {
            cape / 1500.0
        }),
        term("mixed LCL height", inputs.mixed_lcl_height, "m", low_lcl),
        term(
            "effective helicity",
            inputs.helicity_effective,
            "m²/s²",
            |helicity| helicity / 150.0,
        ),
        term(
            "effective wind difference",
            inputs.difference_effective,
            "m/s",
            strong_difference,
        ),
        term("mixed CIN", inputs.mixed_cin, "J/kg", |cin| {
            ((200.0 + cin) / 150.0).clamp(0.0, 1.0)
        }),
        term(
            "inflow base height",
            inputs.inflow_base_height,
            "m",
            |base| {
                if base > 0.0 { 0.0 } else { 1.0 }
            },
        ),
    ])
}

fn low_lcl(height: f64) -> f64 {
    ((2000.0 - height) / 1000.0).clamp(0.0, 1.0)
}

fn strong_difference(difference: f64) -> f64 {
    at_least(12.5, difference) * (difference / 20.0).min(1.5)
}

/// 1 from `limit` up, 0 below it.
fn at_least(limit: f64, value: f64) -> f64 {
    if value < limit { 0.0 } else { 1.0 }
}

fn term(
    name: &'static str,
    input: Option<f64>,
    unit: &'static str,
    factor: impl Fn(f64) -> f64,
) -> Option<Term> {
    let input = input.filter(|input| input.is_finite())?;
    Some(Term {
        name,
        input,
        unit,
        factor: factor(input),
    })
}

fn product<const N: usize>(terms: [Option<Term>; N]) -> Option<Composite> {
    let terms: Vec<Term> = terms.into_iter().collect::<Option<_>>()?;
    let value: f64 = terms.iter().map(|term| term.factor).product();
    // Zero times a negative is -0.0, which is not to be shown.
    value.is_finite().then_some(Composite {
        value: value + 0.0,
        terms,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Within all limits; what follows is worked by hand beside each check.
    fn inputs() -> CompositeInputs {
        CompositeInputs {
            surface_cape: Some(3000.0),
            surface_lcl_height: Some(1500.0),
            mixed_cape: Some(2250.0),
            mixed_cin: Some(-125.0),
            mixed_lcl_height: Some(1200.0),
            most_unstable_cape: Some(3500.0),
            inflow_base_height: Some(0.0),
            helicity_0_to_1km: Some(300.0),
            helicity_effective: Some(225.0),
            difference_0_to_6km: Some(25.0),
            difference_effective: Some(16.0),
        }
    }

    fn check(index: Option<Composite>, expected: f64, factors: &[f64]) {
        let index = index.expect("all inputs are there");
        assert!(
            (index.value - expected).abs() < 1e-12,
            "{} instead of {expected}",
            index.value
        );
        assert_eq!(index.terms.len(), factors.len());
        for (term, factor) in index.terms.iter().zip(factors) {
            assert!(
                (term.factor - factor).abs() < 1e-12,
                "{}: {} instead of {factor}",
                term.name,
                term.factor
            );
        }
    }

    #[test]
    fn within_all_limits() {
        let composites = Composites::of(&inputs());
        // 3.5 * 4.5 * 0.8 = 12.6.
        check(composites.supercell, 12.6, &[3.5, 4.5, 0.8]);
        // 2 * 0.5 * 2 * 1.25 = 2.5.
        check(
            composites.significant_tornado_fixed,
            2.5,
            &[2.0, 0.5, 2.0, 1.25],
        );
        // 1.5 * 0.8 * 1.5 * 0.8 * (75/150 = 0.5) * 1 = 0.72.
        check(
            composites.significant_tornado_effective,
            0.72,
            &[1.5, 0.8, 1.5, 0.8, 0.5, 1.0],
        );
    }

    #[test]
    fn limits_of_the_effective_difference_in_the_supercell_parameter() {
        // 3.5 * 4.5 = 15.75 times: 0 below 10 m/s, 10/20 at it, 1 at 20 m/s and beyond.
        for (difference, factor, value) in [
            (0.0, 0.0, 0.0),
            (9.99, 0.0, 0.0),
            (10.0, 0.5, 7.875),
            (20.0, 1.0, 15.75),
            (45.0, 1.0, 15.75),
        ] {
            let composites = Composites::of(&CompositeInputs {
                difference_effective: Some(difference),
                ..inputs()
            });
            check(composites.supercell, value, &[3.5, 4.5, factor]);
        }
    }

    #[test]
    fn limits_of_the_lcl() {
        // Fixed: 2 * LCL * 2 * 1.25 = 5 LCL; effective: 1.5 * LCL * 1.5 * 0.8 * 0.5 = 0.9 LCL.
        for (height, factor) in [
            (400.0, 1.0),
            (1000.0, 1.0),
            (1001.0, 0.999),
            (1999.0, 0.001),
            (2000.0, 0.0),
            (3100.0, 0.0),
        ] {
            let composites = Composites::of(&CompositeInputs {
                surface_lcl_height: Some(height),
                mixed_lcl_height: Some(height),
                ..inputs()
            });
            check(
                composites.significant_tornado_fixed,
                5.0 * factor,
                &[2.0, factor, 2.0, 1.25],
            );
            check(
                composites.significant_tornado_effective,
                0.9 * factor,
                &[1.5, factor, 1.5, 0.8, 0.5, 1.0],
            );
        }
    }

    #[test]
    fn limits_of_the_difference_in_the_tornado_parameters() {
        // Fixed: 2 * 0.5 * 2 = 2 times; effective: 1.5 * 0.8 * 1.5 * 0.5 = 0.9 times. 12.5/20 = 0.625, 30/20 = 1.5.
        for (difference, factor) in [
            (12.49, 0.0),
            (12.5, 0.625),
            (30.0, 1.5),
            (30.1, 1.5),
            (60.0, 1.5),
        ] {
            let composites = Composites::of(&CompositeInputs {
                difference_0_to_6km: Some(difference),
                difference_effective: Some(difference),
                ..inputs()
            });
            check(
                composites.significant_tornado_fixed,
                2.0 * factor,
                &[2.0, 0.5, 2.0, factor],
            );
            check(
                composites.significant_tornado_effective,
                0.9 * factor,
                &[1.5, 0.8, 1.5, factor, 0.5, 1.0],
            );
        }
    }

    #[test]
    fn limits_of_cin_and_of_the_base() {
        // 1.5 * 0.8 * 1.5 * 0.8 = 1.44 times: 1 from -50 J/kg up, (200 - 110) / 150 = 0.6, 0 from -200 J/kg down.
        for (cin, factor) in [
            (0.0, 1.0),
            (-49.0, 1.0),
            (-50.0, 1.0),
            (-110.0, 0.6),
            (-200.0, 0.0),
            (-350.0, 0.0),
        ] {
            let at = |base: f64| {
                Composites::of(&CompositeInputs {
                    mixed_cin: Some(cin),
                    inflow_base_height: Some(base),
                    ..inputs()
                })
                .significant_tornado_effective
            };
            check(at(0.0), 1.44 * factor, &[1.5, 0.8, 1.5, 0.8, factor, 1.0]);
            check(at(12.0), 0.0, &[1.5, 0.8, 1.5, 0.8, factor, 0.0]);
        }
    }

    #[test]
    fn helicity_keeps_its_sign() {
        let composites = Composites::of(&CompositeInputs {
            helicity_0_to_1km: Some(-300.0),
            helicity_effective: Some(-225.0),
            ..inputs()
        });
        check(composites.supercell, -12.6, &[3.5, -4.5, 0.8]);
        check(
            composites.significant_tornado_fixed,
            -2.5,
            &[2.0, 0.5, -2.0, 1.25],
        );
        // Times nothing it is nothing, without a sign.
        let calm = Composites::of(&CompositeInputs {
            helicity_effective: Some(-225.0),
            difference_effective: Some(5.0),
            ..inputs()
        });
        let value = calm.supercell.expect("all inputs are there").value;
        assert!(value == 0.0 && value.is_sign_positive());
    }

    #[test]
    fn absent_where_an_input_is() {
        assert_eq!(
            Composites::of(&CompositeInputs::default()),
            Composites::default()
        );
        let without_cin = Composites::of(&CompositeInputs {
            mixed_cin: None,
            helicity_0_to_1km: Some(f64::NAN),
            ..inputs()
        });
        assert!(without_cin.supercell.is_some());
        assert_eq!(without_cin.significant_tornado_effective, None);
        assert_eq!(without_cin.significant_tornado_fixed, None);
    }
}
