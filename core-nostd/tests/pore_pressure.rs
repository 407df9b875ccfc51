//! Undrained pore pressure against the exact table.

#![allow(
    clippy::panic,
    clippy::unwrap_used,
    clippy::expect_used,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

mod reference_table;

use brimstead_core::stress::pore_pressure::{
    PorePressureLaw, UndrainedResponse, henkel_from_skempton,
};
use brimstead_core::stress::{Disc, Principal};
use reference_table::{Worst, elastic};

/// Column heading of A and its value.
const COEFFICIENTS: [(&str, f64); 5] =
    [("0", 0.0), ("1/3", 1.0 / 3.0), ("0.5", 0.5), ("0.8", 0.8), ("1", 1.0)];

fn response(law: PorePressureLaw) -> UndrainedResponse {
    UndrainedResponse::new(law).unwrap()
}

/// Both formulas, from the table's principal values and from those of the disc itself.
#[test]
fn both_formulas_agree_with_the_table_under_a_disc() {
    let disc = Disc::new(1.0, 1.0, 0.5).unwrap();
    let (mut given, mut computed) = (Worst::default(), Worst::default());
    for row in elastic("table8_pore_pressure.csv") {
        let table = Principal {
            sigma_1_kpa: row.number("dsigma_1/q"),
            sigma_2_kpa: row.number("dsigma_2/q"),
            sigma_3_kpa: row.number("dsigma_3/q"),
        };
        let (r_m, z_m) = (row.number("r/R"), row.number("z/R"));
        let own = disc.stress_at(r_m, z_m).unwrap().principal();
        for (heading, a) in COEFFICIENTS {
            let henkel = PorePressureLaw::Henkel { a: henkel_from_skempton(a), b: 1.0 };
            let skempton = PorePressureLaw::Skempton { a, b: 1.0 };
            for (law, column) in [
                (henkel, format!("du_Henkel/(B*q) a=(3A-1)/sqrt(2) A={heading}")),
                (skempton, format!("du_Skempton/(B*q) A={heading}")),
            ] {
                let want = row.number(&column);
                let place = || format!("{column} at r = {r_m}, z = {z_m}");
                given.take(response(law).excess_kpa(&table).unwrap(), want, place);
                computed.take(response(law).excess_kpa(&own).unwrap(), want, place);
            }
        }
    }
    // 17 printed digits; the small principal value comes from a difference of larger ones.
    given.assert_below(1e-15);
    computed.assert_below(1e-14);
}

#[test]
fn coefficient_b_scales_the_pressure() {
    let increment = Principal { sigma_1_kpa: 80.0, sigma_2_kpa: 40.0, sigma_3_kpa: 20.0 };
    let whole = response(PorePressureLaw::Skempton { a: 0.7, b: 1.0 });
    let part = response(PorePressureLaw::Skempton { a: 0.7, b: 0.9 });
    let (whole, part) =
        (whole.excess_kpa(&increment).unwrap(), part.excess_kpa(&increment).unwrap());
    assert!((part - 0.9 * whole).abs() < 1e-13 && (whole - 62.0).abs() < 1e-13);
}
