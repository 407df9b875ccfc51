use super::*;
use crate::instrument::DataState;
use std::vec::Vec;

fn feed(checks: &Checks, readings: &[(i64, f64)]) -> Vec<Checked> {
    let checker = Checker::new(checks).unwrap();
    let mut channel = Channel::default();
    readings
        .iter()
        .map(|(time_s, value)| {
            let (next, checked) =
                checker.observe(&channel, Reading::new(*time_s, *value), None).unwrap();
            channel = next;
            checked
        })
        .collect()
}

fn states(checked: &[Checked]) -> Vec<DataState> {
    checked.iter().map(|c| c.reading.state).collect()
}

#[test]
fn a_value_outside_the_range_is_out_of_range_and_its_ends_are_inside() {
    let checks = Checks { range: Some(Range { low: -10.0, high: 350.0 }), ..Checks::default() };
    let checked = feed(&checks, &[(0, -10.0), (1, 350.0), (2, 350.1), (3, -11.0), (4, f64::NAN)]);
    use DataState::{Failed, Good, OutOfRange};
    assert_eq!(states(&checked), [Good, Good, OutOfRange, OutOfRange, Failed]);
}

#[test]
fn a_value_out_of_range_is_not_compared_with() {
    let checks = Checks {
        range: Some(Range { low: 0.0, high: 350.0 }),
        step: Some(5.0),
        ..Checks::default()
    };
    let checked = feed(&checks, &[(0, 100.0), (1, 9999.0), (2, 101.0)]);
    assert_eq!(checked[2].reading.state, DataState::Good);
}

#[test]
fn a_step_is_suspect_once_and_a_second_reading_at_the_new_value_is_good() {
    let checks = Checks { step: Some(5.0), ..Checks::default() };
    let checked = feed(&checks, &[(0, 100.0), (900, 120.0), (1800, 121.0)]);
    use DataState::{Good, Suspect};
    assert_eq!(states(&checked), [Good, Suspect, Good]);
    assert!(checked[1].stepped && !checked[2].stepped);
    assert_eq!(checked[1].reading.value, Some(120.0), "the value is kept");
}

#[test]
fn a_rate_is_judged_by_the_time_between() {
    let checks = Checks { rate_per_hour: Some(10.0), ..Checks::default() };
    let checked = feed(&checks, &[(0, 0.0), (3600, 9.0), (3960, 11.0), (40_000, 60.0)]);
    use DataState::{Good, Suspect};
    assert_eq!(states(&checked), [Good, Good, Suspect, Good]);
}

#[test]
fn a_step_of_one_rod_is_held_until_a_person_books_it() {
    let rods = Rods { lengths_m: FixedList::from_slice(&[1.0, 1.5]).unwrap(), tolerance_m: 0.005 };
    let checks = Checks { rods: Some(rods), ..Checks::default() };
    let checker = Checker::new(&checks).unwrap();
    let mut channel = Channel::default();
    let mut last = None;
    for (time_s, value) in [(0, 0.052), (100, -0.947), (200, -0.946), (300, -0.945)] {
        let (next, checked) = checker.observe(&channel, Reading::new(time_s, value), None).unwrap();
        channel = next;
        last = Some(checked.reading);
    }
    let last = last.unwrap();
    assert_eq!(last.state, DataState::Suspect);
    assert!(matches!(last.doubt, Some(Doubt::RodLength { rod_m: 1.0, .. })));
    // Booked: the reduced value goes back to where it was.
    let channel = channel.released();
    let (_, checked) = checker.observe(&channel, Reading::new(400, 0.056), None).unwrap();
    assert_eq!(checked.reading.state, DataState::Good);
}

#[test]
fn noise_looks_through_a_trend() {
    let noise = Noise { readings: 8, allowed: 0.5 };
    let checks = Checks { noise: Some(noise), ..Checks::default() };
    let ramp: Vec<_> = (0..12).map(|i| (i * 900, i as f64 * 0.5)).collect();
    assert!(feed(&checks, &ramp).iter().all(|c| c.reading.state == DataState::Good));
    let noisy: Vec<_> =
        (0..12).map(|i| (i * 900, 50.0 + if i % 2 == 0 { 1.0 } else { -1.0 })).collect();
    let checked = feed(&checks, &noisy);
    assert_eq!(checked[6].reading.state, DataState::Good, "too few readings to tell");
    // Successive differences of 2: sqrt(4 / 2).
    let Some(Doubt::Noise { deviation, .. }) = checked[7].reading.doubt else {
        panic!("noise not seen");
    };
    assert!((deviation - 2.0_f64.sqrt()).abs() < 1e-12);
}

#[test]
fn age_makes_stale_and_a_dead_channel_keeps_ageing() {
    let checks = Checks { stale_after_s: Some(3600), ..Checks::default() };
    let checker = Checker::new(&checks).unwrap();
    let (channel, _) = checker.observe(&Channel::default(), Reading::new(0, 1.0), None).unwrap();
    assert_eq!(checker.age_at(&channel, 3600), None);
    assert_eq!(checker.age_at(&channel, 3601), Some(Doubt::Age { age_s: 3601, limit_s: 3600 }));
    let dead = Reading::absent(7200, Doubt::NoAnswer);
    let (channel, checked) = checker.observe(&channel, dead, None).unwrap();
    assert_eq!(checked.reading.state, DataState::NotRead, "the worse state stays");
    assert_eq!(channel.last_value_s(), Some(0));
}

#[test]
fn a_gap_is_reported_with_its_length() {
    let checks = Checks { gap_above_s: Some(43_200), ..Checks::default() };
    let checked = feed(&checks, &[(0, 1.0), (21_600, 1.1), (129_600, 1.4)]);
    assert_eq!(checked[1].gap_s, None);
    assert_eq!(checked[2].gap_s, Some(108_000));
}

#[test]
fn a_double_or_a_clock_set_back_is_refused() {
    let checker = Checker::new(&Checks::default()).unwrap();
    let (channel, _) =
        checker.observe(&Channel::default(), Reading::new(1_750_000_000, 1.0), None).unwrap();
    for time_s in [1_750_000_000, 0, i64::MIN] {
        assert_eq!(
            checker.observe(&channel, Reading::new(time_s, 1.0), None),
            Err(OutOfOrder { time_s, last_s: 1_750_000_000 })
        );
    }
}

#[test]
fn eleven_channels_in_one_scan_are_electrical_until_verified_but_keep_their_values() {
    let checks = Checks { step: Some(5.0), ..Checks::default() };
    let checker = Checker::new(&checks).unwrap();
    let mut channels = [Channel::default(); 16];
    let mut checked = Vec::new();
    for time_s in [0, 900, 1800] {
        checked.clear();
        for (i, channel) in channels.iter_mut().enumerate() {
            let jump = if time_s > 0 && i < 11 { 40.0 } else { 0.0 };
            let (next, result) =
                checker.observe(channel, Reading::new(time_s, 100.0 + jump), None).unwrap();
            *channel = next;
            checked.push(result);
        }
        let rule = ManyAtOnce { channels: 4, share: 0.5 };
        let held = look_over_scan(&rule, time_s, &mut channels, &mut checked);
        assert_eq!(held, if time_s == 900 { 11 } else { 0 });
    }
    for (i, result) in checked.iter().enumerate() {
        if i < 11 {
            assert_eq!(
                result.reading.doubt,
                Some(Doubt::ManyStepped { channels: 11, time_s: 900 }),
                "still held at the next scan"
            );
            assert_eq!(result.reading.value, Some(140.0));
        } else {
            assert_eq!(result.reading.state, DataState::Good);
        }
    }
}

fn response() -> Response {
    Response { load_step_kpa: 5.0, least_per_kpa: 0.2, lag_s: 1800, within_s: 86_400 }
}

/// Runs (time, load, value) through the response check alone.
fn answers(steps: &[(i64, f64, f64)]) -> Vec<Option<Doubt>> {
    let mut state = ResponseState::default();
    steps
        .iter()
        .map(|(time_s, load_kpa, value)| {
            let sample = Sample { time_s: *time_s, value: *value };
            let (next, doubt) = response().observe(&state, sample, *load_kpa);
            state = next;
            doubt
        })
        .collect()
}

#[test]
fn a_piezometer_that_ignores_a_rise_is_doubted_until_it_answers_one() {
    let doubts = answers(&[
        (0, 100.0, 80.0),
        (900, 106.0, 80.1),
        (1800, 108.0, 80.1),
        (2700, 110.0, 80.1),
        (3600, 110.0, 80.1),
        (4500, 110.0, 86.0),
    ]);
    assert!(doubts[..3].iter().all(Option::is_none), "it has its lag to answer");
    assert!(matches!(doubts[3], Some(Doubt::NoResponse { .. })));
    assert!(doubts[4].is_some());
    assert_eq!(doubts[5], None, "a late answer clears it");
}

#[test]
fn a_rise_that_lowers_the_pressure_has_the_wrong_sign_and_a_lowering_is_a_test_too() {
    let doubts = answers(&[(0, 100.0, 80.0), (900, 110.0, 74.0), (2700, 110.0, 74.0)]);
    assert!(matches!(doubts[2], Some(Doubt::WrongSign { .. })));
    let doubts = answers(&[(0, 100.0, 80.0), (900, 90.0, 74.0), (2700, 90.0, 74.0)]);
    assert_eq!(doubts[2], None);
}

#[test]
fn slow_loading_is_no_test_and_load_going_back_does_not_clear_a_failure() {
    // 6 kPa spread over three days.
    let slow: Vec<_> = (0..4).map(|d| (d * 90_000, 100.0 + 2.0 * d as f64, 80.0)).collect();
    assert!(answers(&slow).iter().all(Option::is_none));
    let back =
        answers(&[(0, 100.0, 80.0), (900, 110.0, 80.0), (2700, 110.0, 80.0), (3600, 101.0, 80.0)]);
    assert!(back[3].is_some());
}

fn level_check() -> LevelCheck {
    LevelCheck { moves_by_m: 0.005, volume_m3: 100.0, others: 3, patience_s: 1200 }
}

#[test]
fn a_level_that_stands_still_while_volume_moves_is_frozen() {
    let mut state = LevelState::default();
    let mut seen = Vec::new();
    for minute in 0..=40 {
        let view = LevelView { net_volume_m3: Some(7.0 * f64::from(minute)), others_moved: 0 };
        let reading = Reading::new(i64::from(minute) * 60, 12.0 + 0.001 * f64::from(minute % 2));
        let (next, judged) = level_check().observe(&state, reading, &view);
        state = next;
        seen.push(judged);
    }
    assert_eq!(seen[14].state, DataState::Good, "98 m3 do not show yet");
    assert_eq!(seen[15].state, DataState::Frozen);
    assert_eq!(seen[40].doubt, Some(Doubt::LevelFrozenVolume { for_s: 2400, volume_m3: 280.0 }));
    // It comes unstuck.
    let view = LevelView { net_volume_m3: Some(287.0), others_moved: 0 };
    let (_, judged) = level_check().observe(&state, Reading::new(2460, 12.13), &view);
    assert_eq!(judged.state, DataState::Good);
}

#[test]
fn a_level_that_stands_still_while_others_respond_is_frozen_after_its_patience() {
    let state = LevelState::default();
    let (state, _) = level_check().observe(&state, Reading::new(0, 12.0), &LevelView::default());
    let view = LevelView { net_volume_m3: None, others_moved: 4 };
    let (state, early) = level_check().observe(&state, Reading::new(600, 12.0), &view);
    assert_eq!(early.state, DataState::Good);
    assert_eq!(state.still_since_s(), Some(0));
    let (_, late) = level_check().observe(&state, Reading::new(1200, 12.0), &view);
    assert_eq!(late.doubt, Some(Doubt::LevelFrozenOthers { for_s: 1200, instruments: 4 }));
}

#[test]
fn a_level_in_a_hold_stays_good_for_days() {
    let mut state = LevelState::default();
    for hour in 0..240_i64 {
        let view = LevelView { net_volume_m3: Some(5_000.0), others_moved: 0 };
        let (next, judged) = level_check().observe(&state, Reading::new(hour * 3600, 12.0), &view);
        state = next;
        assert_eq!(judged.state, DataState::Good);
    }
}

#[test]
fn change_since_an_instant_is_read_from_the_remembered_values() {
    let checker = Checker::new(&Checks::default()).unwrap();
    let mut channel = Channel::default();
    for time_s in 0..5 {
        let reading = Reading::new(time_s * 900, 2.0 * time_s as f64);
        channel = checker.observe(&channel, reading, None).unwrap().0;
    }
    assert_eq!(channel.change_since(900), Some(6.0));
    assert_eq!(channel.change_since(3600), None);
}

#[test]
fn thresholds_that_make_no_sense_are_refused() {
    let range = |low, high| Checks { range: Some(Range { low, high }), ..Checks::default() };
    assert!(Checker::new(&range(10.0, -10.0)).is_err());
    assert!(Checker::new(&range(f64::NAN, 10.0)).is_err());
    let step = Checks { step: Some(-1.0), ..Checks::default() };
    assert!(Checker::new(&step).is_err());
    let flat = FlatLine { readings: 200, tolerance: 0.0 };
    assert!(Checker::new(&Checks { flat_line: Some(flat), ..Checks::default() }).is_err());
    let stale = Checks { stale_after_s: Some(-5), ..Checks::default() };
    assert!(Checker::new(&stale).is_err());
}
