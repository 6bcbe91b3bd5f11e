//! What must hold for every profile, whatever its numbers.
#![allow(clippy::unwrap_used, clippy::expect_used)]

mod common;

use common::profiles::*;
use dewbound_thermo::*;
use proptest::prelude::*;

fn surface(environment: &Environment) -> Ascent {
    lift(environment, environment.bottom(), Method::default()).unwrap()
}

fn all_starts(environment: &Environment) -> Vec<Air> {
    let mut starts = vec![environment.bottom()];
    starts.extend(mixed_start(environment, MIXED_DEPTH));
    starts.extend(
        most_unstable_start(environment, MOST_UNSTABLE_DEPTH, |_| true).map(|(_, air)| air),
    );
    starts
}

fn check_sane(environment: &Environment, ascent: &Ascent) {
    assert!(
        ascent.cape.is_finite() && ascent.cape >= 0.0 && ascent.cape.is_sign_positive(),
        "{ascent:?}"
    );
    assert!(ascent.theta_e.k().is_finite() && ascent.lcl.temperature.k().is_finite());
    assert!(ascent.lcl.pressure.pa().is_finite() && ascent.lcl.pressure <= ascent.start.pressure);
    assert_eq!(ascent.buoyant.is_empty(), ascent.cin.is_none());
    assert_eq!(ascent.buoyant.is_empty(), ascent.lfc.is_none());
    assert_eq!(ascent.cape == 0.0, ascent.buoyant.is_empty());
    if let Some(cin) = ascent.cin {
        assert!(
            cin.is_finite() && cin <= 0.0 && !(cin == 0.0 && cin.is_sign_negative()),
            "{ascent:?}"
        );
    }
    let mut above = f64::INFINITY;
    for layer in &ascent.buoyant {
        assert!(
            layer.area > 0.0 && layer.bottom.pa() <= above && layer.top < layer.bottom,
            "{ascent:?}"
        );
        assert!(
            layer.bottom <= ascent.lcl.pressure && layer.top >= environment.top(),
            "{ascent:?}"
        );
        above = layer.top.pa();
    }
    if let (Some(el), Some(lfc)) = (ascent.el, ascent.lfc) {
        assert!(el < lfc, "{ascent:?}");
    }
    if ascent.el.is_none() && !ascent.buoyant.is_empty() {
        assert!(ascent.at_least);
    }
}

/// Every kind of ascent there is.
fn methods() -> Vec<Method> {
    let condensates = [Condensate::Water, Condensate::WaterAndIce];
    let processes = std::iter::once(Process::ThetaE)
        .chain(condensates.map(Process::Direct))
        .chain(condensates.map(Process::Reversible));
    processes
        .map(Method::of)
        .flat_map(|method| [method, method.without_virtual_correction()])
        .collect()
}

fn any_method() -> impl Strategy<Value = Method> {
    prop::sample::select(methods())
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn finite_profiles_give_finite_numbers(columns in columns(1..60)) {
        let environment = columns.environment();
        for start in all_starts(&environment) {
            check_sane(&environment, &lift(&environment, start, Method::default()).unwrap());
        }
        let held = environment.with_humidity_held();
        prop_assert_eq!(held.humidity().dry, 0);
        check_sane(&held, &surface(&held));
    }

    /// Any finite start: between levels, saturated, bone dry, hot, cold, above, below.
    #[test]
    fn any_start_gives_an_ascent_or_none(columns in columns(1..30), p in prop_oneof![1.0..1e3_f64, 1e3..1200e2_f64], t in 60.0..400.0_f64, td in 30.0..400.0_f64) {
        let environment = columns.environment();
        let start = Air { pressure: Pressure::from_pa(p), temperature: Temperature::from_k(t), dewpoint: Temperature::from_k(td) };
        let pressures: Vec<Pressure> = columns.p.iter().map(|p| Pressure::from_pa(*p)).collect();
        for method in methods() {
            let ascent = lift(&environment, start, method);
            let exact = lift_exactly(&environment, start, method);
            prop_assert_eq!(ascent.is_some(), exact.is_some());
            for ascent in [ascent, exact].into_iter().flatten() {
                check_sane(&environment, &ascent);
                for state in parcel_path(start, method, &pressures) {
                    let (t, tv) = (state.temperature.k(), state.virtual_temperature.k());
                    prop_assert!(t.is_finite() && t > 0.0 && tv.is_finite() && tv > 0.0, "{method:?} {state:?}");
                    // Condensate weighs; vapour alone makes lighter.
                    prop_assert!(tv >= t || matches!(method.process, Process::Reversible(_)), "{method:?} {state:?}");
                }
            }
            if let Some(lifted) = Lifted::of(&environment, start, method) {
                let part = lifted.cape_between(pressures[0], pressures[pressures.len() / 2]);
                prop_assert!(part.is_finite() && part >= 0.0, "{method:?} {part}");
            }
        }
    }

    /// The exact path to 1e-9, by any method, from one and the same start.
    #[test]
    fn interpolated_levels_change_nothing_exactly(
        columns in unstable(),
        other in columns(1..30),
        shares in prop::collection::vec(0.0..1.0_f64, 1..60),
        method in any_method(),
    ) {
        for columns in [columns, other] {
            let (coarse, fine) = (columns.environment(), with_levels_inserted(&columns, &shares).environment());
            for start in all_starts(&coarse).into_iter().take(2) {
                let (a, b) = (lift_exactly(&coarse, start, method).unwrap(), lift_exactly(&fine, start, method).unwrap());
                prop_assert!(close(a.cape, b.cape, 1e-9), "{method:?}: CAPE {} and {}", a.cape, b.cape);
                prop_assert_eq!(a.cin.is_some(), b.cin.is_some());
                if let (Some(ca), Some(cb)) = (a.cin, b.cin) {
                    prop_assert!(close(ca, cb, 1e-9), "{method:?}: CIN {ca} and {cb}, {a:?} {b:?}");
                }
            }
        }
    }

    /// Kept condensate gives up its heat: at one pressure the air is never colder than where it fell out. Compared as
    /// temperature, without its weight; to the error of the integration.
    #[test]
    fn reversible_air_is_never_colder_than_pseudo_adiabatic(
        p in 500e2..1080e2_f64,
        t in 235.0..312.0_f64,
        depression in 0.0..25.0_f64,
        ice in any::<bool>(),
    ) {
        let condensate = if ice { Condensate::WaterAndIce } else { Condensate::Water };
        let start = Air { pressure: Pressure::from_pa(p), temperature: Temperature::from_k(t), dewpoint: Temperature::from_k(t - depression) };
        let pressures: Vec<Pressure> = (0..80).map(|i| Pressure::from_pa(p * (20e2 / p).powf(f64::from(i) / 79.0))).collect();
        let path = |process| parcel_path(start, Method::of(process), &pressures);
        let (direct, reversible) = (path(Process::Direct(condensate)), path(Process::Reversible(condensate)));
        for (direct, reversible) in direct.iter().zip(&reversible) {
            let (a, b) = (direct.temperature.k(), reversible.temperature.k());
            prop_assert!(b >= a - 1e-6, "{direct:?} {reversible:?}");
        }
    }

    /// The numbers belong to the interpolated profile, not to its levels.
    #[test]
    fn interpolated_levels_change_nothing(columns in unstable(), shares in prop::collection::vec(0.0..1.0_f64, 1..80)) {
        let (coarse, fine) = (columns.environment(), with_levels_inserted(&columns, &shares).environment());
        for (a, b) in all_starts(&coarse).into_iter().zip(all_starts(&fine)).take(2) {
            let (a, b) = (lift(&coarse, a, Method::default()).unwrap(), lift(&fine, b, Method::default()).unwrap());
            prop_assert!(close(a.cape, b.cape, 1e-6), "CAPE {} and {}", a.cape, b.cape);
            prop_assert_eq!(a.lfc.is_some(), b.lfc.is_some());
            if a.cape > 1e-3 {
                let (la, lb) = (a.lfc.unwrap().pa(), b.lfc.unwrap().pa());
                prop_assert!(close(la, lb, 1e-6), "LFC {la} and {lb}");
                prop_assert!(close(a.cin.unwrap(), b.cin.unwrap(), 1e-6), "CIN {:?} and {:?}", a.cin, b.cin);
                prop_assert_eq!(a.el.is_some(), b.el.is_some());
                if let (Some(a), Some(b)) = (a.el, b.el) {
                    prop_assert!(close(a.pa(), b.pa(), 1e-6), "EL {a:?} and {b:?}");
                }
            }
        }
    }

    /// The same for profiles of any shape, gaps and dry tops included; there areas alone, which are continuous.
    #[test]
    fn interpolated_levels_change_no_area(columns in columns(1..30), shares in prop::collection::vec(0.0..1.0_f64, 1..40)) {
        let (coarse, fine) = (columns.environment(), with_levels_inserted(&columns, &shares).environment());
        let (a, b) = (surface(&coarse), surface(&fine));
        prop_assert!(close(a.cape, b.cape, 1e-6), "CAPE {} and {}", a.cape, b.cape);
        if let (Some((ta, wa)), Some((tb, wb))) = (
            coarse.layer_mean(coarse.bottom().pressure, coarse.top()),
            fine.layer_mean(fine.bottom().pressure, fine.top()),
        ) {
            prop_assert!((ta - tb).abs() < 1e-9 * ta && (wa - wb).abs() < 1e-9, "{ta} {wa} and {tb} {wb}");
        }
        let (a, b) = (coarse.thickness(coarse.bottom().pressure, coarse.top()), fine.thickness(fine.bottom().pressure, fine.top()));
        prop_assert!((a.unwrap() - b.unwrap()).abs() < 1e-8 * a.unwrap(), "{a:?} and {b:?}");
    }

    /// With the surroundings as they are, a moister parcel is never less buoyant. The tabulated path may waver by its
    /// own error, the exact one by its quadrature.
    #[test]
    fn cape_never_falls_with_the_parcels_dew_point(columns in unstable(), drier in 0.0..15.0_f64, step in 0.001..3.0_f64) {
        let environment = columns.environment();
        let bottom = environment.bottom();
        let moist = bottom.temperature.k() - 0.5 * drier;
        let start = |td: f64| Air { dewpoint: Temperature::from_k(td), ..bottom };
        let (low, high) = (start(moist - step), start(moist));
        let cape = |start| lift(&environment, start, Method::default()).unwrap().cape;
        prop_assert!(cape(high) >= cape(low) - 0.02, "{} then {}", cape(low), cape(high));
        let exactly = |start| lift_exactly(&environment, start, Method::default()).unwrap().cape;
        prop_assert!(exactly(high) >= exactly(low) - 1e-3, "{} then {}", exactly(low), exactly(high));
    }

    /// The stated bound of the fast path: CAPE and CIN within 0.01 % (or 0.01 J/kg).
    #[test]
    fn the_fast_path_agrees_with_the_exact_one(columns in unstable(), other in any_method()) {
        let environment = columns.environment();
        for (start, method) in all_starts(&environment).into_iter().flat_map(|start| [(start, Method::default()), (start, other)]) {
            let fast = lift(&environment, start, method).unwrap();
            let exact = lift_exactly(&environment, start, method).unwrap();
            prop_assert!((fast.cape - exact.cape).abs() <= 1e-4 * exact.cape.max(100.0), "{} and {}", fast.cape, exact.cape);
            if exact.buoyant.len() == 1 && exact.cape > 1.0 {
                let (a, b) = (fast.cin.unwrap(), exact.cin.unwrap());
                prop_assert!((a - b).abs() <= 1e-4 * b.abs().max(100.0), "CIN {a} and {b}");
                prop_assert!((fast.lfc.unwrap().pa() / exact.lfc.unwrap().pa() - 1.0).abs() < 1e-4);
            }
        }
    }

    /// An environment made again from another one is the environment made afresh.
    #[test]
    fn a_refilled_environment_is_a_new_one(
        first in columns(1..40),
        second in columns(1..40),
        lowest in 0..12_usize,
        colder in -3.0..3.0_f64,
        dropped in 0..3_usize,
    ) {
        // Only the lowest levels differ, and some are gone.
        let mut dragged = first.clone();
        let dropped = dropped.min(dragged.p.len() - 2);
        dragged.p.drain(..dropped);
        dragged.t.drain(..dropped);
        dragged.td.drain(..dropped);
        let end = lowest.min(dragged.t.len());
        for t in &mut dragged.t[..end] {
            *t += colder;
        }
        dragged.td[0] = dragged.td[0].or(Some(dragged.t[0] - 25.0));
        let mut environment = first.environment();
        for columns in [&dragged, &first, &second, &dragged, &dragged] {
            environment = environment.refilled(&columns.p, &columns.t, &columns.td).unwrap();
            let fresh = columns.environment();
            prop_assert_eq!(environment.pressure(), fresh.pressure());
            prop_assert_eq!(environment.temperature(), fresh.temperature());
            prop_assert_eq!(environment.dewpoint(), fresh.dewpoint());
            prop_assert_eq!(environment.humidity(), fresh.humidity());
            let (a, b) = (surface(&environment), surface(&fresh));
            prop_assert!((a.cape - b.cape).abs() < 1e-7 && a.buoyant.len() == b.buoyant.len(), "{a:?} and {b:?}");
            let held = environment.with_humidity_held();
            let again = held.refilled(&columns.p, &columns.t, &columns.td).unwrap();
            prop_assert_eq!(again.dewpoint(), fresh.dewpoint());
            prop_assert!((surface(&again).cape - b.cape).abs() < 1e-7);
        }
    }
}
