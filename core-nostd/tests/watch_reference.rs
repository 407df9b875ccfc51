//! Reductions and checks against `tests/reference/time/t10_*.csv`; each table states its origin.

#![allow(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

use approx::assert_abs_diff_eq;
use brimstead_core::instrument::check::{
    Channel, Checker, Checks, FlatLine, Hampel, flat_runs, hampel_at, hampel_centred,
};
use brimstead_core::instrument::reduce::{
    CellCalibration, CellInput, DensityLaw, RodExtension, SettlementCell, SettlementPlate,
    VibratingWire, WireCalibration, WireConversion, WireInput, digits_from_frequency,
    site_zeroed_constant,
};
use brimstead_core::instrument::{DataState, Reading};

/// Rows of a table without its head.
fn rows(table: &str) -> Vec<Vec<&str>> {
    let lines = table.lines().filter(|line| !line.starts_with('#')).skip(1);
    lines.map(|line| line.split(',').collect()).collect()
}

fn number(cell: &str) -> f64 {
    cell.parse().unwrap()
}

#[test]
fn wire_pressures_follow_the_table() {
    let linear = WireConversion::Linear { factor_kpa_per_digit: 0.07021 };
    let (a, b) = (-4.812e-9, -0.07012);
    let polynomial = WireConversion::Polynomial { a, b, c: site_zeroed_constant(a, b, 9123.4) };
    let gauge = |conversion| {
        VibratingWire::new(&WireCalibration {
            digits_zero: 9123.4,
            conversion,
            temperature_zero_c: 21.3,
            temperature_factor_kpa_per_c: -0.0453,
            barometer_zero_kpa: 99.87,
            apply_temperature: true,
            apply_barometer: true,
        })
        .unwrap()
    };
    let table = rows(include_str!("../../tests/reference/time/t10_vibrating_wire.csv"));
    assert_eq!(table.len(), 5);
    for row in table {
        let digits = digits_from_frequency(number(row[0])).unwrap();
        assert_abs_diff_eq!(digits, number(row[3]), epsilon = 1e-9);
        let input = WireInput {
            digits,
            temperature_c: Some(number(row[1])),
            barometer_kpa: Some(number(row[2])),
        };
        // 1e-9 kPa: a closed form in double precision, the terms are below 1e3 kPa.
        for (conversion, column) in [(linear, 4), (polynomial, 5)] {
            let pressure = gauge(conversion).pressure(&input).unwrap();
            assert_abs_diff_eq!(pressure.pressure_kpa, number(row[column]), epsilon = 1e-9);
        }
    }
}

fn cell(zero: CellInput, density_law: DensityLaw, apply_temperature: bool) -> SettlementCell {
    SettlementCell::new(&CellCalibration {
        density_kg_per_m3: 1062.0,
        reference_temperature_c: 20.0,
        expansion_per_c: 0.00042,
        density_law,
        gravity_m_per_s2: 9.80665,
        apply_temperature,
        zero,
    })
    .unwrap()
}

fn cell_input(row: &[&str]) -> CellInput {
    CellInput {
        pressure_kpa: number(row[1]),
        temperature_c: Some(number(row[2])),
        reservoir_level_m: number(row[3]),
    }
}

#[test]
fn settlement_cells_follow_the_table_with_either_density_law() {
    let table = rows(include_str!("../../tests/reference/time/t10_settlement_cell.csv"));
    assert_eq!(table.len(), 4);
    for (density_law, column) in [(DensityLaw::Expansion, 6), (DensityLaw::Linear, 8)] {
        let cell = cell(cell_input(&table[0]), density_law, true);
        for row in &table {
            let settlement_mm = 1000.0 * cell.settlement_m(&cell_input(row)).unwrap();
            assert_abs_diff_eq!(settlement_mm, number(row[column]), epsilon = 1e-9);
        }
    }
}

#[test]
fn a_cell_without_its_temperature_step_misreads_the_cooling_as_movement() {
    let table = rows(include_str!("../../tests/reference/time/t10_settlement_cell.csv"));
    let cell = cell(cell_input(&table[0]), DensityLaw::Expansion, false);
    let settlement_mm = 1000.0 * cell.settlement_m(&cell_input(&table[2])).unwrap();
    // 5.35 m of liquid 12 C colder at 0.00042 per C is 27.0 mm.
    assert_abs_diff_eq!(number(table[2][6]) - settlement_mm, -27.0, epsilon = 0.2);
}

#[test]
fn plates_follow_the_table_through_both_extensions() {
    let table = rows(include_str!("../../tests/reference/time/t10_settlement_plate.csv"));
    assert_eq!(table.len(), 7);
    let mut plate = SettlementPlate::new(number(table[0][1]), number(table[0][2])).unwrap();
    for (time_s, pair) in (1..).zip(table.windows(2)) {
        let length_m = number(pair[1][2]) - number(pair[0][2]);
        if length_m != 0.0 {
            plate.extend(RodExtension { time_s, length_m }).unwrap();
        }
    }
    for (time_s, row) in (0..).zip(&table) {
        let settlement_mm = 1000.0 * plate.settlement_m(time_s, number(row[1])).unwrap();
        assert_abs_diff_eq!(settlement_mm, number(row[4]), epsilon = 1e-9);
    }
}

const HAMPEL: Hampel = Hampel { readings: 11, threshold: 3.0, floor: 0.0 };

#[test]
fn centred_spikes_follow_the_table() {
    let table = rows(include_str!("../../tests/reference/time/t10_hampel.csv"));
    let values: Vec<f64> = table.iter().map(|row| number(row[1])).collect();
    let mut spikes = vec![false; values.len()];
    let found = hampel_centred(&HAMPEL, &values, 5, &mut spikes);
    assert_eq!(found, 4, "the spike put in at 41 hides in a steep stretch, as in the table");
    for (at, row) in table.iter().enumerate() {
        let verdict = hampel_at(&HAMPEL, &values, 5, at).unwrap();
        assert_abs_diff_eq!(verdict.median, number(row[2]), epsilon = 1e-9);
        assert_abs_diff_eq!(verdict.deviation, number(row[3]), epsilon = 1e-9);
        assert_abs_diff_eq!(verdict.allowed, 3.0 * number(row[4]), epsilon = 1e-9);
        assert_eq!(spikes[at], row[5] == "1", "reading {at}");
    }
}

fn live_states(checks: &Checks, values: impl Iterator<Item = f64>) -> Vec<DataState> {
    let checker = Checker::new(checks).unwrap();
    let mut channel = Channel::default();
    let mut states = Vec::new();
    for (time_s, value) in (0..).step_by(21_600).zip(values) {
        let (next, checked) = checker.observe(&channel, Reading::new(time_s, value), None).unwrap();
        channel = next;
        states.push(checked.reading.state);
    }
    states
}

#[test]
fn the_live_spike_check_finds_what_the_centred_one_finds() {
    let table = rows(include_str!("../../tests/reference/time/t10_hampel.csv"));
    let checks = Checks { spike: Some(HAMPEL), ..Checks::default() };
    let states = live_states(&checks, table.iter().map(|row| number(row[1])));
    for (at, row) in table.iter().enumerate() {
        if row[5] == "1" {
            assert_eq!(states[at], DataState::Suspect, "spike at {at}");
        }
    }
    // The record climbs in spurts, and a check that only looks back doubts the first readings of
    // each; it must not doubt a climbing record as a whole.
    let doubted = states.iter().filter(|state| **state == DataState::Suspect).count();
    assert!(doubted <= 12, "{doubted} of 60 doubted");
}

#[test]
fn flat_runs_follow_the_table() {
    let table = rows(include_str!("../../tests/reference/time/t10_flatline.csv"));
    let values: Vec<f64> = table.iter().map(|row| number(row[2])).collect();
    let rule = FlatLine { readings: 5, tolerance: 0.01 };
    let mut flat = vec![true; values.len()];
    flat_runs(&rule, &values, &mut flat);
    for (at, row) in table.iter().enumerate() {
        assert_eq!(flat[at], row[4] == "1", "reading {at}");
    }
    // The live check sees the run from its fifth reading on.
    let checks = Checks { flat_line: Some(rule), ..Checks::default() };
    let states = live_states(&checks, values.iter().copied());
    let frozen: Vec<usize> =
        (0..states.len()).filter(|at| states[*at] == DataState::Frozen).collect();
    assert_eq!(frozen, [12, 13]);
}

#[test]
fn gaps_and_staleness_follow_the_table() {
    let table = rows(include_str!("../../tests/reference/time/t10_flatline.csv"));
    let checks = Checks {
        gap_above_s: Some(12 * 3600),
        stale_after_s: Some(24 * 3600),
        ..Checks::default()
    };
    let checker = Checker::new(&checks).unwrap();
    let mut channel = Channel::default();
    for row in &table {
        let time_s = number(row[1]) as i64 * 3600;
        let reading = Reading::new(time_s, number(row[2]));
        let (next, checked) = checker.observe(&channel, reading, None).unwrap();
        channel = next;
        assert_eq!(checked.gap_s.is_some(), row[6] == "1");
    }
    let last_s = channel.last_value_s().unwrap();
    assert!(checker.age_at(&channel, last_s + 24 * 3600).is_none());
    assert!(checker.age_at(&channel, last_s + 24 * 3600 + 1).is_some());
}
