//! The expectation room as a whole: limits that theory knows, history, saving and the band.

#![allow(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    reason = "a test stops where its own ground is wrong"
)]

use brimstead_core::config::{COLUMN_CELLS, MAX_TANKS, Name};
use brimstead_core::consolidation::Factor;
use brimstead_core::expectation::{
    Column, ColumnState, ExpectationError, Moment, Multipliers, Point, Sensor, SiteModel, envelope,
    explain,
};
use brimstead_core::ground::{
    BaseDrainage, BaseStiffness, Compressibility, Ground, GroundWater, Layer, Preconsolidation,
    Profile,
};
use brimstead_core::instrument::Kind;
use brimstead_core::load::{PlanPosition, Tank};
use brimstead_core::settlement::immediate::immediate_settlement;
use brimstead_core::settlement::primary::primary_settlement;
use brimstead_core::stress::{Disc, Ring};
use brimstead_core::units::{DAY_S, YEAR_S};
use brimstead_core::working::{Step, Working};
use proptest::prelude::*;

type CoreColumn = Column<COLUMN_CELLS>;

fn layer(name: &str, thickness_m: f64, drained: bool) -> Layer {
    Layer {
        name: Name::try_from(name).unwrap(),
        thickness_m,
        unit_weight_above_water_kn_m3: 15.5,
        unit_weight_below_water_kn_m3: if drained { 19.0 } else { 16.0 },
        compressibility: if drained {
            Compressibility::Modulus { constrained_modulus_kpa: 30_000.0 }
        } else {
            Compressibility::Ratio { compression_ratio: 0.25, recompression_ratio: 0.03 }
        },
        preconsolidation: Preconsolidation::PopKpa(15.0),
        secondary_ratio: 0.0,
        cv_m2_per_s: 2.0 / YEAR_S,
        ch_m2_per_s: 3.0 / YEAR_S,
        permeability_m_per_s: 1e-9,
        young_undrained_kpa: 8_000.0,
        young_drained_kpa: 4_000.0,
        poisson_drained: 0.3,
        undrained_strength_kpa: if drained { 0.0 } else { 20.0 },
        undrained_strength_gradient_kpa_per_m: 0.0,
        pore_pressure_response: 0.9,
        drained,
    }
}

fn tank(x_m: f64) -> Tank {
    Tank {
        name: Name::try_from("T1").unwrap(),
        axis: PlanPosition { x_m, y_m: 0.0 },
        diameter_m: 40.0,
        shell_height_m: 18.0,
        loaded_depth_m: 0.0,
        floor_pressure_kpa: 1.0,
        pad_pressure_kpa: 10.0,
        excavation_relief_kpa: 0.0,
        shell_line_load_kn_m: 30.0,
        ring_line_load_kn_m: 0.0,
    }
}

fn site() -> SiteModel {
    let layers = [layer("sand", 2.0, true), layer("clay", 8.0, false), layer("base", 3.0, true)];
    SiteModel {
        ground: Ground {
            layers: layers.into_iter().collect(),
            water: GroundWater::Hydrostatic { water_table_m: 1.0 },
            water_unit_weight_kn_m3: 9.81,
            base_drainage: BaseDrainage::Drained,
            base_stiffness: BaseStiffness::Rigid,
        },
        drains: None,
        tanks: [tank(0.0), tank(60.0)].into_iter().collect(),
    }
}

fn pressures(first_kpa: f64) -> [f64; MAX_TANKS] {
    let mut all = [0.0; MAX_TANKS];
    all[0] = first_kpa;
    all
}

fn sensor(kind: Kind, x_m: f64, depth_m: f64) -> Sensor {
    Sensor { kind, place: PlanPosition { x_m, y_m: 0.0 }, depth_m, tip_sinks: true }
}

fn settled(x_m: f64) -> (CoreColumn, ColumnState<COLUMN_CELLS>) {
    let column = CoreColumn::new(&site(), PlanPosition { x_m, y_m: 0.0 }).unwrap();
    let mut state = column.start(0, &pressures(0.0)).unwrap();
    let year_s = YEAR_S as i64;
    column.advance(&mut state, 100 * year_s, &pressures(0.0), &mut Factor::empty()).unwrap();
    (column, state)
}

/// Total increment by the closed forms, summed by hand here.
fn increment_kpa(x_m: f64, depth_m: f64, liquid_kpa: f64) -> f64 {
    let mut sum = 0.0;
    for (axis_m, liquid_kpa) in [(0.0, liquid_kpa), (60.0, 0.0)] {
        let r_m = f64::abs(x_m - axis_m);
        let disc = Disc::new(20.0, liquid_kpa + 11.0, 0.5).unwrap();
        let ring = Ring::new(20.0, 30.0, 0.5).unwrap();
        sum += disc.stress_at(r_m, depth_m).unwrap().sigma_z_kpa
            + ring.stress_at(r_m, depth_m).unwrap().sigma_z_kpa;
    }
    sum
}

#[test]
fn a_sudden_load_raises_the_response_share_of_the_elastic_increment() {
    let (column, mut state) = settled(5.0);
    let before = column.excess_pore_pressure_kpa(&state, 6.0).unwrap();
    assert!(before.abs() < 1e-6, "the dead load has drained away in a century: {before}");
    let now_s = state.time_s;
    column.advance(&mut state, now_s, &pressures(100.0), &mut Factor::empty()).unwrap();
    let raised = column.excess_pore_pressure_kpa(&state, 6.0).unwrap();
    let expected = 0.9 * (increment_kpa(5.0, 6.0, 100.0) - increment_kpa(5.0, 6.0, 0.0));
    // Cells hold the increment of their middle; between middles a parabola is drawn.
    assert!((raised - expected).abs() < 2e-3 * expected, "{raised} against {expected}");
}

#[test]
fn after_a_century_settlement_is_that_of_the_end_of_primary() {
    let (column, mut state) = settled(5.0);
    let point = Point::new(&site(), sensor(Kind::SettlementPlate, 5.0, 0.0)).unwrap();
    let now_s = state.time_s;
    let mut factor = Factor::empty();
    column.advance(&mut state, now_s + 86_400, &pressures(100.0), &mut factor).unwrap();
    let later_s = now_s + 200 * YEAR_S as i64;
    column.advance(&mut state, later_s, &pressures(100.0), &mut factor).unwrap();
    let ground = site().ground;
    let profile = Profile::new(&ground).unwrap();
    let primary =
        primary_settlement(&profile, |z| increment_kpa(5.0, z, 100.0), 0.0, 1e-6).unwrap();
    let disc = Disc::new(20.0, 100.0, 0.5).unwrap();
    let immediate = immediate_settlement(
        &profile,
        |z, _| disc.displacement_at(1.0, 5.0, z).unwrap().settlement_m,
        0.0,
    )
    .unwrap();
    let static_m = primary.settlement_m + immediate.settlement_m;
    let reached_m = point.settlement_m(&column, &state);
    assert!((reached_m - static_m).abs() < 1e-3 * static_m, "{reached_m} against {static_m}");
}

#[test]
fn a_saved_state_goes_on_bit_for_bit() {
    let (column, mut state) = settled(20.0);
    let start_s = state.time_s;
    let mut factor = Factor::empty();
    for hour in 1..100_i64 {
        let kpa = f64::min(hour as f64, 60.0);
        column.advance(&mut state, start_s + 3600 * hour, &pressures(kpa), &mut factor).unwrap();
    }
    let saved = serde_json::to_string(&state).unwrap();
    let mut resumed: ColumnState<COLUMN_CELLS> = serde_json::from_str(&saved).unwrap();
    assert_eq!(resumed, state);
    for hour in 100..200_i64 {
        let time_s = start_s + 3600 * hour;
        column.advance(&mut state, time_s, &pressures(50.0), &mut factor).unwrap();
        column.advance(&mut resumed, time_s, &pressures(50.0), &mut Factor::empty()).unwrap();
    }
    assert_eq!(resumed, state, "a lent factor or a saved state must not change a bit");
}

#[test]
fn lowering_leaves_the_memory_of_the_largest_effective_stress() {
    let (column, mut state) = settled(0.0);
    let point = Point::new(&site(), sensor(Kind::SettlementPlate, 0.0, 0.0)).unwrap();
    let mut factor = Factor::empty();
    let start_s = state.time_s;
    let step_s = 30 * DAY_S as i64;
    let mut at = |state: &mut _, step: i64, kpa: f64| {
        column.advance(state, start_s + step * step_s, &pressures(kpa), &mut factor).unwrap();
        point.settlement_m(&column, state)
    };
    let empty_m = point.settlement_m(&column, &state);
    let loaded_m = at(&mut state, 600, 100.0);
    let unloaded_m = at(&mut state, 1200, 0.0);
    let reloaded_m = at(&mut state, 1800, 100.0);
    assert!(unloaded_m < loaded_m, "rebound");
    assert!(unloaded_m > empty_m + 0.5 * (loaded_m - empty_m), "virgin compression stays");
    assert!((reloaded_m - loaded_m).abs() < 5e-3 * loaded_m, "reloading ends where it was");
}

#[test]
fn a_piezometer_reads_static_pressure_at_its_sinking_tip_with_background_and_excess() {
    let (column, mut state) = settled(5.0);
    let point = Point::new(&site(), sensor(Kind::Piezometer, 5.0, 6.0)).unwrap();
    let zero = point.zero(&column, &state);
    let still = Moment { liquid_level_m: 0.0, background_kpa: 2.5 };
    let at_rest = point.reading(&column, &state, zero, &still).unwrap();
    assert!((at_rest - (9.81 * 5.0 + 2.5)).abs() < 1e-6, "{at_rest}");
    let later_s = state.time_s + 50 * YEAR_S as i64;
    column.advance(&mut state, later_s, &pressures(100.0), &mut Factor::empty()).unwrap();
    let sunk_m = point.settlement_m(&column, &state) - zero.settlement_m;
    let excess = column.excess_pore_pressure_kpa(&state, 6.0).unwrap();
    let reading = point.reading(&column, &state, zero, &still).unwrap();
    assert!(sunk_m > 0.2, "the tip sinks with the clay below it: {sunk_m}");
    assert!((reading - (at_rest + 9.81 * sunk_m + excess)).abs() < 1e-6);
}

#[test]
fn time_does_not_run_back_and_the_state_stays() {
    let (column, mut state) = settled(5.0);
    let before = state;
    let refused = column.advance(&mut state, 0, &pressures(1.0), &mut Factor::empty());
    assert!(matches!(refused, Err(ExpectationError::TimeRunsBack { .. })));
    assert_eq!(state, before);
}

#[test]
fn kinds_without_an_expectation_say_so() {
    let (column, state) = settled(5.0);
    let point = Point::new(&site(), sensor(Kind::Inclinometer, 5.0, 6.0)).unwrap();
    let zero = point.zero(&column, &state);
    let refused = point.reading(&column, &state, zero, &Moment::default()).unwrap_err();
    assert!(refused.to_string().contains("lateral displacement"), "{refused}");
}

#[test]
fn multipliers_scale_what_they_name_and_keep_the_response_at_one() {
    let case = Multipliers {
        compressibility: 1.3,
        cv: 0.5,
        ch: 2.0,
        pore_pressure_response: 1.2,
        young: 0.8,
    };
    let changed = site().in_case(&case).unwrap().ground.layers[1].clone();
    let best = site().ground.layers[1].clone();
    assert_eq!(
        changed.compressibility,
        Compressibility::Ratio { compression_ratio: 0.25 * 1.3, recompression_ratio: 0.03 * 1.3 }
    );
    assert_eq!(changed.cv_m2_per_s, 0.5 * best.cv_m2_per_s);
    assert_eq!(changed.ch_m2_per_s, 2.0 * best.ch_m2_per_s);
    assert_eq!(changed.pore_pressure_response, 1.0);
    assert_eq!(changed.young_undrained_kpa, 0.8 * best.young_undrained_kpa);
    assert!(site().in_case(&Multipliers { cv: f64::NAN, ..Multipliers::LIKELY }).is_err());
}

#[test]
fn the_band_holds_every_case_and_the_noise() {
    let band = envelope(&[10.0, 8.0, 13.0], 0.5).unwrap();
    assert_eq!((band.low, band.likely, band.high), (7.0, 10.0, 14.0));
    assert!(envelope(&[], 0.5).is_none());
    assert!(envelope(&[10.0, f64::NAN], 0.5).is_none());
}

/// Collects names and values of a sheet.
#[derive(Default)]
struct Sheet(Vec<(String, f64)>);

impl Working for Sheet {
    fn step(&mut self, step: Step<'_>) {
        self.0.push((step.name.to_owned(), step.value));
    }
}

#[test]
fn the_sheet_ends_with_the_reading_and_its_parts_add_up() {
    let (column, mut state) = settled(5.0);
    let point = Point::new(&site(), sensor(Kind::Piezometer, 5.0, 6.0)).unwrap();
    let zero = point.zero(&column, &state);
    let later_s = state.time_s + 30 * DAY_S as i64;
    column.advance(&mut state, later_s, &pressures(80.0), &mut Factor::empty()).unwrap();
    let mut sheet = Sheet::default();
    let moment = Moment::default();
    let reading = explain(&site(), &point, (&column, &state), zero, &moment, &mut sheet).unwrap();
    assert_eq!(sheet.0.last().unwrap(), &("expected pore pressure".to_owned(), reading));
    let of = |name: &str| sheet.0.iter().find(|(n, _)| n == name).unwrap().1;
    let total = of("vertical stress increment of all tanks");
    assert!((total - increment_kpa(5.0, 6.0, 80.0)).abs() < 1e-9 * total);
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 24, ..ProptestConfig::default() })]

    #[test]
    fn mean_excess_never_rises_in_a_hold(kpa in 1.0_f64..150.0, days in 1_i64..400, x_m in 0.0_f64..40.0) {
        let (column, mut state) = settled(x_m);
        let start_s = state.time_s;
        let mut factor = Factor::empty();
        column.advance(&mut state, start_s + 86_400, &pressures(kpa), &mut factor).unwrap();
        let mean = |state: &ColumnState<COLUMN_CELLS>| {
            column.profile_at(state).map(|point| point.excess_kpa).sum::<f64>()
        };
        let mut last = mean(&state);
        for step in 1..20_i64 {
            let time_s = start_s + 86_400 + step * days * 3_600;
            column.advance(&mut state, time_s, &pressures(kpa), &mut factor).unwrap();
            let now = mean(&state);
            prop_assert!(now <= last + 1e-9, "{now} after {last}");
            last = now;
        }
    }
}
