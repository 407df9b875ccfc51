//! Laws that the column obeys for any ground, load and step.

#![allow(
    clippy::panic,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

mod walking_column;

use brimstead_core::consolidation::{
    Boundary, ColumnLayer, DrainPattern, Drains, Factor, Loading, State,
};
use proptest::prelude::*;
use walking_column::{CELLS, DAY_S, HOUR_S, Walk, clay, column};

/// One to six layers from silt to soft clay, now and then one that drains freely.
fn any_layers() -> impl Strategy<Value = Vec<ColumnLayer>> {
    let layer = (0.3..8.0f64, -9.0..-5.0f64, -6.0..-2.0f64, 0..8u8).prop_map(
        |(thickness_m, cv, mv, drained)| {
            let cv_m2_per_s = 10f64.powf(cv);
            ColumnLayer {
                thickness_m,
                cv_m2_per_s,
                ch_m2_per_s: 3.0 * cv_m2_per_s,
                permeability_m_per_s: cv_m2_per_s * 10f64.powf(mv) * 9.81,
                drained: drained == 0,
            }
        },
    );
    prop::collection::vec(layer, 1..6)
}

fn any_base() -> impl Strategy<Value = Boundary> {
    prop_oneof![Just(Boundary::Drained), Just(Boundary::Closed)]
}

fn any_drains() -> impl Strategy<Value = Option<Drains>> {
    prop::option::of((1.0..3.0f64, 0.0..1.0f64, 2.0..10.0f64).prop_map(
        |(spacing_m, top_m, depth_m)| Drains {
            pattern: DrainPattern::Square,
            spacing_m,
            equivalent_diameter_m: 0.06,
            smear_ratio: 2.0,
            permeability_ratio_h_over_s: 3.0,
            discharge_m3_per_s: Some(1e-6),
            top_m,
            base_m: top_m + depth_m,
            length_m: depth_m,
        },
    ))
}

fn any_profile() -> impl Strategy<Value = [f64; CELLS]> {
    prop::collection::vec(0.0..100.0f64, CELLS)
        .prop_map(|profile| core::array::from_fn(|i| profile[i]))
}

/// From a second to a century, evenly by order of magnitude.
fn any_step_s() -> impl Strategy<Value = f64> {
    (0.0..9.5f64).prop_map(|exponent| 10f64.powf(exponent))
}

fn stored(walk: &Walk) -> f64 {
    walk.balance().stored_after_m
}

fn greatest(state: &State<CELLS>) -> f64 {
    state.excess_kpa.iter().fold(0.0f64, |most, excess| most.max(excess.abs()))
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(128))]

    #[test]
    fn no_step_is_unstable_and_a_hold_only_loses_pressure(
        layers in any_layers(),
        base in any_base(),
        drains in any_drains(),
        profile in any_profile(),
        steps in prop::collection::vec(any_step_s(), 1..8),
    ) {
        let mut walk = Walk::new(&column(&layers, base, drains.as_ref()));
        walk.try_advance(Loading::Jump(&profile), 0.0).unwrap();
        let first = greatest(&walk.state);
        let whole = stored(&walk);
        for step_s in steps {
            let before = stored(&walk);
            walk.try_advance(Loading::Hold, step_s).unwrap();
            // What is left of a mode may overshoot nothing once it is below a billionth.
            prop_assert!(stored(&walk) <= before + 1e-10 * whole, "rose over {step_s} s");
            prop_assert!(stored(&walk) >= -1e-9 * whole, "fell below nothing");
            prop_assert!(greatest(&walk.state) <= first * (1.0 + 1e-12));
        }
        prop_assert!(walk.worst_closing < 1e-12, "balance {}", walk.worst_closing);
    }

    #[test]
    fn loads_add_up(
        layers in any_layers(),
        base in any_base(),
        drains in any_drains(),
        one in any_profile(),
        other in any_profile(),
        steps in prop::collection::vec(any_step_s(), 1..6),
        factor in -2.0..2.0f64,
    ) {
        let ground = column(&layers, base, drains.as_ref());
        let sum: [f64; CELLS] = core::array::from_fn(|i| one[i] + factor * other[i]);
        let mut walks = [Walk::new(&ground), Walk::new(&ground), Walk::new(&ground)];
        for (i, step_s) in steps.iter().enumerate() {
            for (walk, load) in walks.iter_mut().zip([&one, &other, &sum]) {
                let loading =
                    if i % 3 == 2 { Loading::Jump(load) } else { Loading::Ramp(load) };
                walk.try_advance(loading, *step_s).unwrap();
            }
            let [one, other, sum] = walks.each_ref().map(|walk| &walk.state);
            // Rounding is that of the pressures put in, of which little may be left.
            let scale = 100.0 * (1.0 + factor.abs());
            for cell in 0..CELLS {
                let added = one.excess_kpa[cell] + factor * other.excess_kpa[cell];
                prop_assert!((added - sum.excess_kpa[cell]).abs() <= 1e-12 * scale);
            }
        }
    }

    #[test]
    fn a_ramp_keeps_every_cell_between_nothing_and_the_load(
        layers in any_layers(),
        base in any_base(),
        days in prop::collection::vec(0.0..5.0f64, 1..20),
    ) {
        let mut walk = Walk::new(&column(&layers, base, None));
        let mut load_kpa = 0.0;
        for change in days {
            walk.try_advance(Loading::Ramp(&[change; CELLS]), DAY_S).unwrap();
            load_kpa += change;
            for excess in walk.state.excess_kpa {
                // A thin fast layer in which a step is seven times the relaxation time passes
                // nothing by a fifth of what it held, which is a seventh of the step's load.
                prop_assert!((-0.1 * load_kpa..=load_kpa * (1.0 + 1e-12)).contains(&excess));
            }
        }
    }

    #[test]
    fn a_saved_state_goes_on_with_the_same_bits(
        layers in any_layers(),
        base in any_base(),
        drains in any_drains(),
        profile in any_profile(),
        steps in prop::collection::vec(any_step_s(), 2..8),
    ) {
        let ground = column(&layers, base, drains.as_ref());
        let mut straight = Walk::new(&ground);
        let mut resumed = Walk::new(&ground);
        for (i, step_s) in steps.iter().enumerate() {
            let loading = match i % 3 {
                0 => Loading::Jump(&profile),
                1 => Loading::Ramp(&profile),
                _ => Loading::Hold,
            };
            straight.try_advance(loading, *step_s).unwrap();
            // Saved, read back and without the factor of the last step.
            let mut text = [0u8; 4096];
            let length = serde_json_core::to_slice(&resumed.state, &mut text).unwrap();
            resumed.state = serde_json_core::from_slice(&text[..length]).unwrap().0;
            resumed.factor = Factor::empty();
            resumed.try_advance(loading, *step_s).unwrap();
            for (a, b) in straight.state.excess_kpa.iter().zip(resumed.state.excess_kpa) {
                prop_assert_eq!(a.to_bits(), b.to_bits());
            }
        }
        prop_assert_eq!(straight.state, resumed.state);
    }
}

/// Ground, load and drainage that mirror about mid-depth give an answer that does: exactly where
/// the cells do, and to the accuracy of the cells where 60 do not part evenly into the layers.
#[test]
fn a_symmetric_column_stays_symmetric() {
    let (outer, inner) = (clay(2.0, 0.02, 2e-5), clay(3.0, 0.005, 4e-6));
    for (layers, tolerance) in
        [(vec![clay(7.0, 0.01, 1e-5)], 1e-10), (vec![outer, inner, outer], 4e-3)]
    {
        let mut walk = Walk::new(&column(&layers, Boundary::Drained, None));
        walk.jump_by(|z_m| 1.0 + (z_m - 3.5).abs());
        for days in [1.0, 30.0, 400.0] {
            walk.hold_until(days * DAY_S, DAY_S);
            for i in 0..=35 {
                let z_m = 0.1 * f64::from(i);
                let (above, below) = (walk.excess_at(z_m), walk.excess_at(7.0 - z_m));
                assert!((above - below).abs() < tolerance, "{above}, {below} at {z_m}");
            }
        }
    }
}

/// Lowering after consolidation leaves suction, and it is drawn back to nothing.
#[test]
fn lowering_leaves_negative_excess_pressure_that_fades() {
    let mut walk = Walk::new(&column(&[clay(4.0, 0.05, 5e-5)], Boundary::Closed, None));
    let load = |t_s: f64| {
        let day = t_s / DAY_S;
        if day < 10.0 { 10.0 * day } else { (100.0 - 20.0 * (day - 400.0).max(0.0)).max(40.0) }
    };
    walk.ramp_until(400.0 * DAY_S, HOUR_S * 6.0, load);
    assert!(walk.excess_at(2.0) > 0.0);
    walk.ramp_until(403.0 * DAY_S, HOUR_S, load);
    let lowest = walk.excess_at(1.0);
    assert!(lowest < -20.0, "60 kPa taken off leave {lowest} kPa");
    walk.ramp_until(4000.0 * DAY_S, DAY_S, load);
    let faded = walk.excess_at(1.0);
    assert!(faded < 0.0 && faded > 0.01 * lowest, "{faded} kPa in the end");
}

/// However a hold is cut into calls, the answer stays the same to the accuracy of the scheme.
#[test]
fn the_cut_of_a_hold_hardly_matters() {
    let layers = [clay(2.0, 0.02, 2e-5), clay(5.0, 0.004, 6e-6)];
    let walk_by = |step_s: f64| {
        let mut walk = Walk::new(&column(&layers, Boundary::Closed, None));
        walk.jump_by(|_| 100.0);
        walk.hold_until(200.0 * DAY_S, step_s);
        walk
    };
    let whole = walk_by(1e10);
    for step_s in [HOUR_S, DAY_S, 30.0 * DAY_S] {
        let cut = walk_by(step_s);
        for z_m in [0.2, 1.0, 2.5, 7.0] {
            let difference = cut.excess_at(z_m) - whole.excess_at(z_m);
            assert!(difference.abs() < 0.05, "{difference} kPa at {z_m} m by {step_s} s");
        }
    }
}

/// The logger's cells hold what the office's cells hold: the same constant, the same bits for
/// a column that has been stepped with and without a kept factor.
#[test]
fn a_kept_factor_changes_no_bit() {
    let layers = [clay(1.5, 0.03, 6e-5), clay(4.0, 0.006, 8e-6), clay(6.0, 0.01, 1.2e-5)];
    let ground = column(&layers, Boundary::Closed, None);
    let (mut kept, mut fresh) = (Walk::new(&ground), Walk::new(&ground));
    let load = |t_s: f64| 50.0 + 50.0 * (t_s / (3.0 * DAY_S)).cos();
    for hour in 1..200 {
        let t_s = f64::from(hour) * HOUR_S;
        kept.ramp_until(t_s, HOUR_S, load);
        fresh.factor = Factor::empty();
        fresh.ramp_until(t_s, HOUR_S, load);
    }
    assert_eq!(kept.state, fresh.state);
}
