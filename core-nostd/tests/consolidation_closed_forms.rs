//! Closed forms of consolidation against tables: computed ones to 1e-9, printed ones to their
//! last digit. Sources stand in the first lines of each table.

#![allow(
    clippy::panic,
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

mod reference_table;

use brimstead_core::consolidation::drains::{RadialFlow, exact_mu, simplified_mu};
use brimstead_core::consolidation::terzaghi::{
    Drainage, InitialShape, degree_of_consolidation, degree_slope, isochrone,
    ramp_degree_of_consolidation, ramp_mean_excess,
};
use brimstead_core::consolidation::{DrainPattern, Drains};
use proptest::prelude::*;
use reference_table::{Row, time};

fn shape(name: &str) -> InitialShape {
    match name {
        "uniform" => InitialShape::Uniform,
        "lin_base" => InitialShape::TriangleZeroAtDrain,
        "lin_top" => InitialShape::TriangleZeroAtBase,
        "sin_half" => InitialShape::HalfSine,
        other => panic!("unknown shape {other}"),
    }
}

fn drainage(name: &str) -> Drainage {
    match name {
        "single" => Drainage::Single,
        "double" => Drainage::Double,
        other => panic!("unknown drainage {other}"),
    }
}

fn assert_relative(got: f64, row: &Row, column: &str, tolerance: f64) {
    let want = row.number(column);
    assert!((got - want).abs() <= tolerance * want.abs(), "{column}: got {got}, want {want}");
}

#[test]
fn degrees_of_consolidation_agree_with_the_exact_table() {
    for row in time("t01_U_Tv.csv") {
        let (shape, drainage) = (shape(row.text("shape")), drainage(row.text("drainage")));
        let u = degree_of_consolidation(shape, drainage, row.number("Tv")).unwrap();
        assert_relative(u, &row, "U", 1e-12);
    }
}

#[test]
fn isochrones_agree_with_the_exact_table() {
    for row in time("t01_isochrones.csv") {
        let (shape, drainage) = (shape(row.text("shape")), drainage(row.text("drainage")));
        let u = isochrone(shape, drainage, row.number("Tv"), row.number("z_over_D")).unwrap();
        let want = row.number("u_over_u0peak");
        assert!((u - want).abs() <= 1e-14, "got {u}, want {want}");
        if want > 1e-6 {
            assert_relative(u, &row, "u_over_u0peak", 1e-9);
        }
    }
}

#[test]
fn ramps_agree_with_the_exact_table() {
    for row in time("t02_U_ramp.csv") {
        let (t, tc) = (row.number("Tv"), row.number("Tc"));
        assert_relative(ramp_degree_of_consolidation(t, tc).unwrap(), &row, "U", 1e-10);
        assert_relative(ramp_mean_excess(t, tc).unwrap(), &row, "ubar_over_qc", 1e-10);
    }
}

#[test]
fn radial_flow_agrees_with_the_exact_tables() {
    let ratios = |row: &Row| (row.number("n"), row.number("s"), row.number("kh_over_ks"));
    for row in time("t04_mu.csv") {
        let (n, s, eta) = ratios(&row);
        assert_relative(exact_mu(n, s, eta).unwrap(), &row, "mu_exact", 1e-12);
        assert_relative(simplified_mu(n, s, eta).unwrap(), &row, "mu_simplified", 1e-12);
    }
    for row in time("t04_Uh.csv") {
        let (n, s, eta) = ratios(&row);
        let flow = RadialFlow::new(n, s, eta).unwrap();
        let u = flow.degree_of_consolidation(row.number("Th"), 0.0).unwrap();
        assert_relative(u, &row, "U_h_exact_mu", 1e-12);
    }
}

#[test]
fn printed_tables_agree_to_their_last_digit() {
    for row in time("consolidation_published.csv") {
        let first = row.number("first");
        let second = row.optional("second").unwrap_or(f64::NAN);
        let single = |shape| degree_of_consolidation(shape, Drainage::Single, first).unwrap();
        let got = match row.text("quantity") {
            "uniform" => single(InitialShape::Uniform),
            // An apex at mid-depth between two drains is a triangle over each half.
            "triangle_zero_at_drain" => single(InitialShape::TriangleZeroAtDrain),
            "triangle_zero_at_base" => single(InitialShape::TriangleZeroAtBase),
            "half_sine_double" => {
                degree_of_consolidation(InitialShape::HalfSine, Drainage::Double, first).unwrap()
            }
            "isochrone_double" => {
                isochrone(InitialShape::Uniform, Drainage::Double, first, second).unwrap()
            }
            "ramp" => ramp_degree_of_consolidation(first, second).unwrap(),
            "barron_f" => exact_mu(first, 1.0, 1.0).unwrap(),
            "radial" => RadialFlow::new(first, 1.0, 1.0)
                .unwrap()
                .degree_of_consolidation(second, 0.0)
                .unwrap(),
            other => panic!("unknown quantity {other}"),
        };
        let difference = (got - row.number("value")).abs();
        assert!(difference <= row.number("tolerance"), "{got} for {}", row.text("source"));
    }
}

/// Craig, Soil Mechanics, ch. 7: 10 m of clay drained at one face, cv 9.6 m2/year, 90 % after 8.8
/// years without drains (inputs read in print); with 300 mm drains in 4 m squares and ch 14
/// m2/year by Carrillo's product after 0.70 years (answer from memory, recomputed).
#[test]
fn drains_bring_ninety_percent_from_years_to_months() {
    let vertical = |years: f64| {
        degree_of_consolidation(InitialShape::Uniform, Drainage::Single, 9.6 * years / 100.0)
            .unwrap()
    };
    assert!((vertical(8.83) - 0.9).abs() < 5e-4, "{}", vertical(8.83));
    let drains = Drains {
        pattern: DrainPattern::Square,
        spacing_m: 4.0,
        equivalent_diameter_m: 0.3,
        smear_ratio: 1.0,
        permeability_ratio_h_over_s: 1.0,
        discharge_m3_per_s: None,
        top_m: 0.0,
        base_m: 10.0,
        length_m: 10.0,
    };
    let flow = drains.radial_flow().unwrap();
    let de = drains.equivalent_spacing_m();
    let radial = flow.degree_of_consolidation(14.0 * 0.705 / (de * de), 0.0).unwrap();
    let both = 1.0 - (1.0 - radial) * (1.0 - vertical(0.705));
    assert!((both - 0.9).abs() < 2e-3, "{both}");
}

#[test]
fn drains_that_cannot_be_are_refused() {
    let sound = Drains {
        pattern: DrainPattern::Triangular,
        spacing_m: 1.5,
        equivalent_diameter_m: 0.066,
        smear_ratio: 2.0,
        permeability_ratio_h_over_s: 3.0,
        discharge_m3_per_s: Some(1e-6),
        top_m: 0.5,
        base_m: 12.5,
        length_m: 12.0,
    };
    assert!(sound.radial_flow().is_ok());
    let wrong = [
        (Drains { spacing_m: f64::NAN, ..sound }, "drain spacing"),
        (Drains { equivalent_diameter_m: 66.0, ..sound }, "0.066, not 66"),
        (Drains { base_m: 0.5, ..sound }, "not below their top"),
        (Drains { length_m: 5.0, ..sound }, "less than half"),
        (Drains { smear_ratio: 30.0, ..sound }, "must be below the spacing ratio"),
        (Drains { permeability_ratio_h_over_s: 0.5, ..sound }, "Smear lowers permeability"),
        (Drains { discharge_m3_per_s: Some(0.0), ..sound }, "leave it out"),
    ];
    for (drains, says) in wrong {
        let message = drains.radial_flow().unwrap_err().to_string();
        assert!(message.contains(says), "{message}");
    }
}

/// A drain open at both ends is symmetric about its middle, where resistance is greatest.
#[test]
fn well_resistance_is_greatest_where_the_way_is_longest() {
    let drains = Drains {
        pattern: DrainPattern::Triangular,
        spacing_m: 1.5,
        equivalent_diameter_m: 0.066,
        smear_ratio: 2.0,
        permeability_ratio_h_over_s: 3.0,
        discharge_m3_per_s: Some(1e-6),
        top_m: 1.0,
        base_m: 13.0,
        length_m: 6.0,
    };
    let flow = drains.radial_flow().unwrap();
    let at = |depth_m| drains.well_term(&flow, depth_m, 1e-9);
    assert!((at(4.0) - at(10.0)).abs() < 1e-15);
    assert!(at(7.0) > at(6.0) && at(7.0) > at(8.0));
    assert_eq!((at(0.5), at(13.5)), (0.0, 0.0));
    // Hansbo 1981 with the factor 1 - 1/n^2: pi z (2l - z) kh/qw.
    let n = flow.spacing_ratio();
    let exact = core::f64::consts::PI * 36.0 * 1e-3 * (1.0 - 1.0 / (n * n));
    assert!((at(7.0) - exact).abs() < 1e-15);
}

proptest! {
    #[test]
    fn degree_rises_from_zero_to_one_at_any_time(exponent in -14.0..4.0f64, more in 1e-6..0.5f64) {
        let t = 10f64.powf(exponent);
        for shape in [
            InitialShape::Uniform,
            InitialShape::TriangleZeroAtDrain,
            InitialShape::TriangleZeroAtBase,
            InitialShape::HalfSine,
        ] {
            for drainage in [Drainage::Single, Drainage::Double] {
                let u = degree_of_consolidation(shape, drainage, t).unwrap();
                let later = degree_of_consolidation(shape, drainage, t * (1.0 + more)).unwrap();
                prop_assert!(u > 0.0 && later <= 1.0);
                prop_assert!(later > u || u > 1.0 - 1e-12);
            }
        }
    }

    #[test]
    fn both_triangles_make_the_uniform_pressure(exponent in -8.0..1.0f64, x in 0.0..=1.0f64) {
        let t = 10f64.powf(exponent);
        for drainage in [Drainage::Single, Drainage::Double] {
            let at = |shape| isochrone(shape, drainage, t, x).unwrap();
            let sum = at(InitialShape::TriangleZeroAtDrain) + at(InitialShape::TriangleZeroAtBase);
            prop_assert!((sum - at(InitialShape::Uniform)).abs() < 1e-14);
        }
    }

    /// Simpson's rule over depth of the isochrone gives the degree: two separate formulas.
    #[test]
    fn isochrones_integrate_to_the_degree(exponent in -3.0..0.5f64) {
        let t = 10f64.powf(exponent);
        for (shape, whole) in [
            (InitialShape::Uniform, 1.0),
            (InitialShape::TriangleZeroAtDrain, 0.5),
            (InitialShape::HalfSine, 2.0 / core::f64::consts::PI),
        ] {
            for drainage in [Drainage::Single, Drainage::Double] {
                let at = |i: u32| isochrone(shape, drainage, t, f64::from(i) / 1000.0).unwrap();
                let sum: f64 = (0..500)
                    .map(|i| (at(2 * i) + 4.0 * at(2 * i + 1) + at(2 * i + 2)) / 3000.0)
                    .sum();
                let u = degree_of_consolidation(shape, drainage, t).unwrap();
                prop_assert!((1.0 - sum / whole - u).abs() < 1e-6, "{shape:?} {drainage:?} {t}");
            }
        }
    }

    /// A ramp too short to notice is an instantaneous load, and one that runs on forever loads
    /// like the integral: both joins of the ramp formula meet.
    #[test]
    fn ramps_join_without_a_step(exponent in -6.0..1.0f64, tc in -9.0..1.0f64) {
        let t = 10f64.powf(exponent);
        let tc = 10f64.powf(tc);
        let u = ramp_degree_of_consolidation(t, tc).unwrap();
        let beside = ramp_degree_of_consolidation(t * (1.0 + 1e-9), tc).unwrap();
        prop_assert!((u - beside).abs() < 3e-9 * u, "{u} {beside}");
        let (below, above) = (tc * (1.0 - 1e-6), tc * (1.0 + 1e-6));
        let shorter = ramp_degree_of_consolidation(t, below).unwrap();
        let longer = ramp_degree_of_consolidation(t, above).unwrap();
        prop_assert!(shorter >= longer * (1.0 - 1e-10));
    }

    #[test]
    fn slope_is_the_derivative(exponent in -5.0..0.7f64) {
        let t = 10f64.powf(exponent);
        let at = |t| degree_of_consolidation(InitialShape::Uniform, Drainage::Single, t).unwrap();
        let step = 1e-4 * t;
        let difference = (at(t + step) - at(t - step)) / (2.0 * step);
        let slope = degree_slope(t).unwrap();
        prop_assert!((slope - difference).abs() < 1e-6 * slope + 1e-12, "{slope} {difference}");
    }
}

#[test]
fn a_time_that_is_not_a_number_is_refused() {
    for t in [f64::NAN, f64::INFINITY, -1e-9] {
        assert!(degree_of_consolidation(InitialShape::Uniform, Drainage::Single, t).is_err());
        assert!(isochrone(InitialShape::Uniform, Drainage::Single, t, 0.5).is_err());
        assert!(ramp_degree_of_consolidation(t, 0.1).is_err());
        assert!(degree_slope(t).is_err());
    }
    assert!(isochrone(InitialShape::Uniform, Drainage::Single, 0.1, 1.1).is_err());
    assert!(ramp_degree_of_consolidation(0.1, -0.1).is_err());
}
