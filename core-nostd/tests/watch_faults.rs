//! What goes wrong on sites, played through instrument checks and watch together: the right doubt
//! is named, no trigger falls, and the next rise is blocked.

#![allow(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    clippy::integer_division,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

use brimstead_core::instrument::check::{
    Channel, Checked, Checker, Checks, FlatLine, LevelCheck, LevelState, LevelView, ManyAtOnce,
    Response, Rods, look_over_scan,
};
use brimstead_core::instrument::reduce::{
    RodExtension, SettlementPlate, Thermistor, VibratingWire, WireCalibration, WireConversion,
    WireInput, digits_from_frequency,
};
use brimstead_core::instrument::{DataState, Doubt, FixedList, Reading};
use brimstead_core::watch::{
    Basis, Curve, Judgement, Limits, NotReady, Observation, Persistence, Rule, Thresholds, Trigger,
    Unknown, WatchState, Watcher,
};

const SCAN_S: i64 = 900;
const START_S: i64 = 1_750_000_000;

/// Piezometer limits that grow with the load, raised on two readings.
fn piezometer() -> Watcher {
    let list = |values: &[f64]| FixedList::from_slice(values).unwrap();
    let raising = Persistence { readings: 2, seconds: 0 };
    let rule = Rule { basis: Basis::Curve, hysteresis: 1.0, raising, ..Rule::default() };
    let curve = Curve {
        pressure_kpa: list(&[0.0, 150.0]),
        watch: list(&[60.0, 150.0]),
        review: list(&[65.0, 170.0]),
        stop: list(&[70.0, 190.0]),
        gross: list(&[100.0, 230.0]),
    };
    let rules = FixedList::from_slice(&[rule]).unwrap();
    Watcher::new(&Limits { rules, curve: Some(curve), ..Limits::default() }).unwrap()
}

/// An instrument with its checks and its limits, fed scan by scan.
struct Line {
    checker: Checker,
    channel: Channel,
    watcher: Watcher,
    state: WatchState,
}

impl Line {
    fn new(checks: Checks, watcher: Watcher) -> Self {
        let checker = Checker::new(&checks).unwrap();
        Self { checker, channel: Channel::default(), watcher, state: WatchState::default() }
    }

    fn check(&mut self, reading: Reading, load_kpa: Option<f64>) -> Checked {
        let (channel, checked) = self.checker.observe(&self.channel, reading, load_kpa).unwrap();
        self.channel = channel;
        checked
    }

    fn judge(&mut self, reading: Reading, load_kpa: Option<f64>) -> Judgement {
        let observation = Observation {
            reading,
            applied_pressure_kpa: load_kpa,
            expected: None,
            hold_since_s: None,
        };
        let (state, judgement) = self.watcher.judge(&self.state, &observation, &[]).unwrap();
        self.state = state;
        judgement
    }

    fn scan(&mut self, number: i64, value: f64, load_kpa: Option<f64>) -> Judgement {
        let reading = Reading::new(START_S + number * SCAN_S, value);
        let checked = self.check(reading, load_kpa);
        self.judge(checked.reading, load_kpa)
    }
}

#[test]
fn a_level_frozen_while_the_pump_runs_leaves_the_load_unknown_and_blocks_the_next_rise() {
    let check = LevelCheck { moves_by_m: 0.005, volume_m3: 100.0, others: 0, patience_s: 0 };
    let mut level_state = LevelState::default();
    let mut line = Line::new(Checks::default(), piezometer());
    let mut last = None;
    for number in 0..6 {
        let time_s = START_S + number * SCAN_S;
        let view = LevelView { net_volume_m3: Some(125.0 * number as f64), others_moved: 0 };
        // It follows for two scans, then sticks.
        let liquid_level_m = 10.0 + 0.06 * number.min(2) as f64;
        let (next, level) =
            check.observe(&level_state, Reading::new(time_s, liquid_level_m), &view);
        level_state = next;
        let load_kpa = level.good().map(|m| 9.81 * m);
        last = Some((level, line.scan(number, 90.0, load_kpa)));
    }
    let (level, judgement) = last.unwrap();
    assert_eq!(level.doubt, Some(Doubt::LevelFrozenVolume { for_s: 3 * SCAN_S, volume_m3: 375.0 }));
    assert_eq!(judgement.not_ready, Some(NotReady::Unknown { unknown: Unknown::Load }));
    assert_eq!(judgement.trigger, Trigger::Normal, "an instrument fault is no ground trigger");
}

#[test]
fn plates_that_rise_while_the_tank_fills_are_doubted_for_their_sign() {
    // Metres of settlement per kPa: 0.2 mm at least within two scans of a 10 kPa rise.
    let response =
        Response { load_step_kpa: 10.0, least_per_kpa: 2e-5, lag_s: 2 * SCAN_S, within_s: 86_400 };
    let values = Thresholds { stop: Some(0.5), ..Thresholds::default() };
    let rules =
        FixedList::from_slice(&[Rule { basis: Basis::Fixed { values }, ..Rule::default() }]);
    let watcher = Watcher::new(&Limits { rules: rules.unwrap(), ..Limits::default() }).unwrap();
    let mut line = Line::new(Checks { response: Some(response), ..Checks::default() }, watcher);
    let mut last = None;
    for number in 0..6 {
        let load_kpa = 5.0 * number as f64;
        last = Some(line.scan(number, -0.0004 * load_kpa, Some(load_kpa)));
    }
    let judgement = last.unwrap();
    assert!(matches!(judgement.doubt, Some(Doubt::WrongSign { .. })), "{:?}", judgement.doubt);
    assert!(!judgement.ready_for_next_rise());
}

#[test]
fn a_rod_that_was_extended_and_not_booked_does_not_clear_a_plate() {
    let values = Thresholds {
        watch: Some(0.10),
        review: Some(0.15),
        stop: Some(0.20),
        ..Thresholds::default()
    };
    let rule = Rule { basis: Basis::Fixed { values }, hysteresis: 0.005, ..Rule::default() };
    let rules = FixedList::from_slice(&[rule]).unwrap();
    let rods = Rods { lengths_m: FixedList::from_slice(&[1.0]).unwrap(), tolerance_m: 0.006 };
    let watcher = Watcher::new(&Limits { rules, ..Limits::default() }).unwrap();
    let mut line = Line::new(Checks { rods: Some(rods), ..Checks::default() }, watcher);
    let mut plate = SettlementPlate::new(4.0, 1.5).unwrap();
    let read = |plate: &SettlementPlate, number: i64, top_m: f64| {
        plate.settlement_m(START_S + number * SCAN_S, top_m).unwrap()
    };
    assert_eq!(line.scan(0, read(&plate, 0, 3.88), None).trigger, Trigger::Watch);
    for number in 1..10 {
        let judgement = line.scan(number, read(&plate, number, 4.879), None);
        assert_eq!(judgement.trigger, Trigger::Watch, "held through scan {number}");
        assert!(matches!(judgement.doubt, Some(Doubt::RodLength { rod_m: 1.0, .. })));
    }
    plate.extend(RodExtension { time_s: START_S + SCAN_S, length_m: 1.0 }).unwrap();
    line.channel = line.channel.released();
    let judgement = line.scan(10, read(&plate, 10, 4.878), None);
    assert_eq!((judgement.trigger, judgement.data_state), (Trigger::Watch, DataState::Good));
}

#[test]
fn a_dead_wire_or_an_open_thermistor_is_no_ground_reading() {
    let wire = VibratingWire::new(&WireCalibration {
        digits_zero: 9000.0,
        conversion: WireConversion::Linear { factor_kpa_per_digit: 0.07 },
        temperature_zero_c: 12.0,
        temperature_factor_kpa_per_c: -0.05,
        barometer_zero_kpa: 101.3,
        apply_temperature: true,
        apply_barometer: false,
    })
    .unwrap();
    let read = |frequency_hz: f64, ohm: f64, time_s: i64| {
        let value = digits_from_frequency(frequency_hz).map_err(Into::into).and_then(|digits| {
            let temperature_c = Thermistor::OHM_3000.temperature_c(ohm).ok();
            wire.pressure(&WireInput { digits, temperature_c, barometer_kpa: None })
        });
        match value {
            Ok(pressure) => Reading::new(time_s, pressure.pressure_kpa),
            Err(error) => Reading::absent(time_s, error.doubt()),
        }
    };
    let mut line = Line::new(Checks::default(), piezometer());
    let alive = line.judge(read(2700.0, 5500.0, 0), Some(50.0));
    assert_eq!((alive.data_state, alive.pending), (DataState::Good, Some(Trigger::Stop)));
    for (number, (frequency_hz, ohm)) in
        (1..).zip([(0.0, 5500.0), (2700.0, f64::INFINITY), (f64::NAN, 5500.0)])
    {
        let judgement = line.judge(read(frequency_hz, ohm, number * SCAN_S), Some(50.0));
        assert!(judgement.data_state > DataState::Frozen, "{:?}", judgement.data_state);
        assert_eq!((judgement.trigger, judgement.pending), (Trigger::Normal, None));
        assert!(!judgement.ready_for_next_rise());
        assert_eq!(judgement.held_since_s, Some(SCAN_S));
    }
}

#[test]
fn a_gauge_that_goes_dead_flat_holds_its_trigger_while_the_limit_grows_past_it() {
    let flat_line = Some(FlatLine { readings: 5, tolerance: 0.0 });
    let mut line = Line::new(Checks { flat_line, ..Checks::default() }, piezometer());
    for (number, value) in [(0, 101.0), (1, 101.3)] {
        line.scan(number, value, Some(50.0));
    }
    assert_eq!(line.state.trigger(), Trigger::Review, "limit of Review is 100 kPa here");
    // It sticks at 101.4 and the load goes on growing.
    let mut judged = Vec::new();
    for number in 2..12 {
        judged.push(line.scan(number, 101.4, Some(50.0 + 10.0 * (number - 5).max(0) as f64)));
    }
    assert_eq!(judged[3].trigger, Trigger::Review);
    let last = judged.last().unwrap();
    assert_eq!((last.trigger, last.data_state), (Trigger::Review, DataState::Frozen));
    assert!(last.held_since_s.is_some());
}

#[test]
fn lightning_is_named_electrical_and_does_not_lower_a_trigger_that_stood() {
    let checks = Checks { step: Some(8.0), ..Checks::default() };
    let mut lines: Vec<Line> = (0..12).map(|_| Line::new(checks, piezometer())).collect();
    let mut triggers = Vec::new();
    for number in 0..8 {
        let mut checked: Vec<Checked> = lines
            .iter_mut()
            .enumerate()
            .map(|(i, line)| {
                // All stand at Review; from the fifth scan eleven of them read 60 kPa less.
                let value = if number >= 4 && i < 11 { 45.0 } else { 105.0 };
                line.check(Reading::new(START_S + number * SCAN_S, value), Some(50.0))
            })
            .collect();
        let mut channels: Vec<Channel> = lines.iter().map(|line| line.channel).collect();
        let rule = ManyAtOnce { channels: 4, share: 0.5 };
        look_over_scan(&rule, START_S + number * SCAN_S, &mut channels, &mut checked);
        triggers.clear();
        for ((line, channel), checked) in lines.iter_mut().zip(channels).zip(checked) {
            line.channel = channel;
            triggers.push(line.judge(checked.reading, Some(50.0)));
        }
    }
    for judgement in &triggers[..11] {
        assert_eq!(judgement.trigger, Trigger::Review);
        assert_eq!(
            judgement.doubt,
            Some(Doubt::ManyStepped { channels: 11, time_s: START_S + 4 * SCAN_S })
        );
    }
}

#[test]
fn a_record_that_comes_late_gives_the_triggers_it_would_have_given_in_time() {
    let values: Vec<f64> = (0..40).map(|i| 60.0 + 1.5 * f64::from(i)).collect();
    let mut live = Line::new(Checks::default(), piezometer());
    let in_time: Vec<Judgement> =
        (0..).zip(&values).map(|(n, value)| live.scan(n, *value, Some(50.0))).collect();
    // Nine hours late, shuffled, a third of it twice: sorted by time of measurement, with what the
    // watch refuses left out.
    let mut late: Vec<(i64, f64)> = (0..).zip(values).collect();
    late.reverse();
    late.extend(late.clone().into_iter().step_by(3));
    late.sort_by_key(|(number, _)| *number);
    let watcher = piezometer();
    let mut state = WatchState::default();
    let (mut judged, mut refused) = (Vec::new(), 0);
    for (number, value) in late {
        let reading = Reading::new(START_S + number * SCAN_S, value);
        let observation = Observation {
            reading,
            applied_pressure_kpa: Some(50.0),
            expected: None,
            hold_since_s: None,
        };
        match watcher.judge(&state, &observation, &[]) {
            Ok((next, judgement)) => {
                state = next;
                judged.push(judgement);
            }
            Err(_) => refused += 1,
        }
    }
    assert_eq!(judged, in_time);
    assert_eq!(refused, 14);
    let passed: Vec<i64> = judged
        .iter()
        .filter(|j| j.trigger > j.trigger_before)
        .map(|j| (j.since_s - START_S).div_euclid(SCAN_S))
        .collect();
    assert_eq!(passed, [21, 28, 35], "limits of 90, 100 and 110 kPa, second reading each");
}

#[test]
fn a_clock_set_back_to_1970_is_refused_and_a_clock_set_right_goes_on() {
    let mut line = Line::new(Checks::default(), piezometer());
    line.scan(0, 80.0, Some(50.0));
    let reset = Observation {
        reading: Reading::new(12, 80.0),
        applied_pressure_kpa: Some(50.0),
        expected: None,
        hold_since_s: None,
    };
    assert!(line.watcher.judge(&line.state, &reset, &[]).is_err());
    assert!(line.checker.observe(&line.channel, reset.reading, None).is_err());
    assert_eq!(line.scan(1, 80.0, Some(50.0)).trigger, Trigger::Normal);
}

#[test]
fn text_and_absurd_numbers_never_reach_a_trigger() {
    let range = brimstead_core::instrument::check::Range { low: -20.0, high: 350.0 };
    let mut line = Line::new(Checks { range: Some(range), ..Checks::default() }, piezometer());
    // Wrong register orders of a float: denormal, huge, not a number.
    for (number, bits) in (0..).zip([0x0000_4842_u32, 0x7f80_4842, 0x7fc0_0000, 0x4842_7149]) {
        let value = f64::from(f32::from_bits(bits));
        let judgement = line.scan(number, value, Some(50.0));
        assert_eq!(judgement.trigger, Trigger::Normal, "{value}");
    }
}
