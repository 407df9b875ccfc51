//! One instrument and one site, case by case: what raises a trigger, what holds it, what lets it
//! fall, and what is refused at the door.

#![allow(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    clippy::panic,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

use approx::assert_relative_eq;
use brimstead_core::instrument::{DataState, Doubt, FixedList, OutOfOrder, Reading};
use brimstead_core::quantity::Expected;
use brimstead_core::watch::{
    Basis, Curve, Direction, Inhibition, Judgement, LimitError, LimitWarning, Limits, NotReady,
    Observation, Outcome, Persistence, Post, RateWindow, Rule, ScanSummary, Site, SiteError,
    Thresholds, Trigger, Unknown, WatchState, Watcher, When,
};
use brimstead_core::working::{Step, Working};

const MINUTE: i64 = 60;

fn thresholds(watch: f64, review: f64, stop: f64) -> Thresholds {
    Thresholds { watch: Some(watch), review: Some(review), stop: Some(stop), gross: None }
}

fn fixed(values: Thresholds) -> Rule {
    Rule { basis: Basis::Fixed { values }, hysteresis: 2.0, ..Rule::default() }
}

fn limits(rules: &[Rule]) -> Limits {
    Limits { rules: FixedList::from_slice(rules).unwrap(), ..Limits::default() }
}

fn watcher(rules: &[Rule]) -> Watcher {
    Watcher::new(&limits(rules)).unwrap()
}

fn seen(time_s: i64, value: f64) -> Observation {
    Observation {
        reading: Reading::new(time_s, value),
        applied_pressure_kpa: None,
        expected: None,
        hold_since_s: None,
    }
}

/// Judges values one after another at equal spacing.
fn run(watcher: &Watcher, values: &[f64]) -> Vec<Judgement> {
    let observations: Vec<_> =
        (0..).zip(values).map(|(i, value)| seen(i * 15 * MINUTE, *value)).collect();
    run_all(watcher, &observations)
}

fn run_all(watcher: &Watcher, observations: &[Observation]) -> Vec<Judgement> {
    let mut state = WatchState::default();
    let mut judge = |observation| {
        let (next, judgement) = watcher.judge(&state, observation, &[]).unwrap();
        state = next;
        judgement
    };
    observations.iter().map(&mut judge).collect()
}

fn triggers(judgements: &[Judgement]) -> Vec<Trigger> {
    judgements.iter().map(|judgement| judgement.trigger).collect()
}

use Trigger::{Normal, Review, Stop, Watch};

#[test]
fn a_trigger_rises_on_reaching_a_limit_and_falls_only_through_the_clearing_value() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let judged = run(&watcher, &[49.9, 50.0, 48.1, 47.9, 71.0, 68.5, 67.9, 58.1, 30.0]);
    assert_eq!(
        triggers(&judged),
        [Normal, Watch, Watch, Normal, Stop, Stop, Review, Review, Normal]
    );
    let governing = judged[0].governing.unwrap();
    assert_eq!(governing.next, Watch);
    assert_relative_eq!(governing.margin_to_next.value, 0.1, epsilon = 1e-12);
    assert_relative_eq!(governing.margin_to_next.percent.unwrap(), 0.2, epsilon = 1e-12);
}

#[test]
fn a_limit_from_below_works_mirrored() {
    let rule = Rule { direction: Direction::Below, ..fixed(thresholds(10.0, 5.0, 0.0)) };
    let judged = run(&watcher(&[rule]), &[11.0, 10.0, 11.9, 12.1, -1.0, 1.0, 2.5]);
    assert_eq!(triggers(&judged), [Normal, Watch, Watch, Normal, Stop, Stop, Review]);
}

#[test]
fn either_direction_watches_both_sides_of_zero() {
    let rule = Rule { direction: Direction::Either, ..fixed(thresholds(10.0, 20.0, 30.0)) };
    let judged = run(&watcher(&[rule]), &[0.0, -10.0, -31.0, 25.0, 0.0]);
    assert_eq!(triggers(&judged), [Normal, Watch, Stop, Review, Normal]);
    assert_relative_eq!(judged[0].governing.unwrap().margin_to_next.value, 10.0);
    let at_minus_31 = judged[2].governing.unwrap();
    assert_eq!(at_minus_31.limits.thresholds.stop, Some(-30.0));
    assert_relative_eq!(at_minus_31.margin_to_next.value, -1.0);
}

#[test]
fn persistence_waits_for_readings_and_for_seconds_and_shows_what_is_pending() {
    let raising = Persistence { readings: 3, seconds: 40 * MINUTE };
    let rule = Rule { raising, ..fixed(thresholds(50.0, 60.0, 70.0)) };
    let judged = run(&watcher(&[rule]), &[55.0, 65.0, 65.0, 65.0, 65.0]);
    // Three readings are there at 30 min, the 40 minutes only at 45; Review began one later.
    assert_eq!(triggers(&judged), [Normal, Normal, Normal, Watch, Review]);
    assert_eq!(judged[0].pending, Some(Watch));
    assert_eq!(judged[1].pending, Some(Review));
    assert_eq!(judged[1].not_ready, Some(NotReady::Pending { trigger: Review }));
    assert_eq!(judged[4].pending, None);
    assert!(judged[3].confirmed, "it has been seen four times");
}

#[test]
fn one_good_reading_back_inside_starts_the_persistence_anew() {
    let raising = Persistence { readings: 2, seconds: 0 };
    let rule = Rule { raising, ..fixed(thresholds(50.0, 60.0, 70.0)) };
    let judged = run(&watcher(&[rule]), &[55.0, 45.0, 55.0, 45.0, 55.0, 55.0]);
    assert_eq!(triggers(&judged), [Normal, Normal, Normal, Normal, Normal, Watch]);
}

#[test]
fn a_gross_value_goes_to_stop_on_one_reading() {
    let values = Thresholds { gross: Some(90.0), ..thresholds(50.0, 60.0, 70.0) };
    let raising = Persistence { readings: 4, seconds: 3600 };
    let rule = Rule { raising, ..fixed(values) };
    let judged = run(&watcher(&[rule]), &[40.0, 89.0, 90.0]);
    assert_eq!(triggers(&judged), [Normal, Normal, Stop]);
    // 89 was beyond Stop as well, so Stop has been seen twice.
    assert!(judged[2].confirmed);
    let alone = run(&watcher(&[rule]), &[40.0, 95.0, 94.0]);
    assert!(!alone[1].confirmed && alone[2].confirmed);
}

#[test]
fn clearing_can_ask_for_more_than_one_reading_and_goes_no_lower_than_they_allow() {
    let clearing = Persistence { readings: 3, seconds: 0 };
    let rule = Rule { clearing, ..fixed(thresholds(50.0, 60.0, 70.0)) };
    let judged = run(&watcher(&[rule]), &[75.0, 40.0, 55.0, 40.0, 40.0, 40.0, 40.0]);
    // The 55 among the three clearing readings still holds Watch.
    assert_eq!(triggers(&judged), [Stop, Stop, Stop, Watch, Watch, Watch, Normal]);
}

#[test]
fn a_trigger_is_unconfirmed_until_seen_again_or_by_a_neighbour() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let judged = run(&watcher, &[55.0, 55.0, 65.0, 65.0, 55.0]);
    let confirmed: Vec<_> = judged.iter().map(|j| (j.trigger, j.confirmed)).collect();
    assert_eq!(
        confirmed,
        [(Watch, false), (Watch, true), (Review, false), (Review, true), (Watch, true)]
    );
    let (_, judgement) =
        watcher.judge(&WatchState::default(), &seen(0, 55.0), &[Normal, Watch]).unwrap();
    assert!(judgement.confirmed);
    let (_, judgement) = watcher.judge(&WatchState::default(), &seen(0, 45.0), &[Stop]).unwrap();
    assert!(!judgement.confirmed, "there is nothing to confirm at Normal");
}

#[test]
fn what_a_neighbour_confirmed_is_unconfirmed_again_on_rising_further() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let (state, first) = watcher.judge(&WatchState::default(), &seen(0, 55.0), &[Watch]).unwrap();
    assert!(first.confirmed);
    let (_, second) = watcher.judge(&state, &seen(900, 75.0), &[Normal]).unwrap();
    assert_eq!((second.trigger, second.confirmed), (Stop, false));
}

#[test]
fn a_suspect_value_between_two_good_ones_does_not_start_the_persistence_anew() {
    let raising = Persistence { readings: 2, seconds: 0 };
    let watcher = watcher(&[Rule { raising, ..fixed(thresholds(50.0, 60.0, 70.0)) }]);
    let suspect = Reading::new(900, 10.0).with_doubt(Doubt::Step { change: -45.0, limit: 5.0 });
    let judged = run_all(
        &watcher,
        &[seen(0, 55.0), Observation { reading: suspect, ..seen(900, 0.0) }, seen(1800, 55.0)],
    );
    assert_eq!(triggers(&judged), [Normal, Normal, Watch]);
}

fn bad_readings(time_s: i64, value: f64) -> Vec<Reading> {
    let doubts = [
        Doubt::Age { age_s: 9000, limit_s: 3600 },
        Doubt::FlatLine { readings: 8, since_s: 0 },
        Doubt::AboveRange { limit: 1.0 },
        Doubt::NoSignal,
        Doubt::NoAnswer,
        Doubt::Step { change: -30.0, limit: 5.0 },
    ];
    let mut readings: Vec<_> =
        doubts.iter().map(|doubt| Reading::new(time_s, value).with_doubt(*doubt)).collect();
    readings.push(Reading::new(time_s, f64::NAN));
    readings.push(Reading::absent(time_s, Doubt::NoAnswer));
    // Contradictions from outside: a good state beside nothing, or beside what is no number.
    for forged in [None, Some(f64::NAN), Some(f64::NEG_INFINITY)] {
        readings.push(Reading { time_s, value: forged, state: DataState::Good, doubt: None });
    }
    readings
}

#[test]
fn bad_data_holds_the_trigger_says_since_when_and_blocks_the_next_rise() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let (raised, _) = watcher.judge(&WatchState::default(), &seen(0, 65.0), &[]).unwrap();
    for (raised_or_new, trigger) in [(raised, Review), (WatchState::default(), Normal)] {
        for reading in bad_readings(900, 10.0) {
            let observation = Observation { reading, ..seen(900, 10.0) };
            let (state, first) = watcher.judge(&raised_or_new, &observation, &[]).unwrap();
            assert_eq!(first.trigger, trigger, "{reading:?}");
            assert_ne!(first.data_state, DataState::Good);
            assert_eq!(first.held_since_s, Some(900));
            assert!(!first.ready_for_next_rise());
            let later = Observation { reading: Reading { time_s: 1800, ..reading }, ..observation };
            let (state, second) = watcher.judge(&state, &later, &[]).unwrap();
            assert_eq!((second.trigger, second.held_since_s), (trigger, Some(900)));
            let (_, third) = watcher.judge(&state, &seen(2700, 10.0), &[]).unwrap();
            assert_eq!(third.trigger, Normal, "a good reading clears it");
            assert_eq!(third.held_since_s, None);
        }
    }
}

#[test]
fn a_suspect_or_frozen_value_beyond_a_limit_still_raises() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    for doubt in [
        Doubt::ManyStepped { channels: 11, time_s: 0 },
        Doubt::Step { change: 40.0, limit: 5.0 },
        Doubt::FlatLine { readings: 5, since_s: 0 },
    ] {
        let reading = Reading::new(0, 75.0).with_doubt(doubt);
        let observation = Observation { reading, ..seen(0, 0.0) };
        let (state, judgement) = watcher.judge(&WatchState::default(), &observation, &[]).unwrap();
        assert_eq!((judgement.trigger, judgement.confirmed), (Stop, false), "{doubt}");
        let again = Observation { reading: Reading { time_s: 900, ..reading }, ..observation };
        let (_, judgement) = watcher.judge(&state, &again, &[]).unwrap();
        assert!(!judgement.confirmed, "a doubtful reading does not confirm itself");
    }
}

#[test]
fn a_value_out_of_range_says_nothing_of_the_ground() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let reading = Reading::new(0, 99_999.0).with_doubt(Doubt::AboveRange { limit: 350.0 });
    let observation = Observation { reading, ..seen(0, 0.0) };
    let (_, judgement) = watcher.judge(&WatchState::default(), &observation, &[]).unwrap();
    assert_eq!((judgement.trigger, judgement.pending), (Normal, None));
    assert_eq!(
        judgement.not_ready,
        Some(NotReady::Data { state: DataState::OutOfRange, since_s: 0 })
    );
}

fn band_rule() -> Rule {
    let multiples = thresholds(1.0, 2.0, 3.0);
    Rule {
        basis: Basis::Band { multiples, smallest_half_band: 1.0 },
        direction: Direction::Either,
        hysteresis: 0.1,
        ..Rule::default()
    }
}

fn against(time_s: i64, value: f64, expected: Option<Expected>) -> Observation {
    Observation { expected, ..seen(time_s, value) }
}

#[test]
fn a_band_counts_half_widths_on_its_own_side() {
    let expected = Expected::new(80.0, 100.0, 110.0);
    let observations = [(0, 109.9), (1, 110.0), (2, 81.0), (3, 60.0), (4, 130.0)]
        .map(|(time_s, value)| against(time_s, value, expected));
    let judged = run_all(&watcher(&[band_rule()]), &observations);
    assert_eq!(triggers(&judged), [Normal, Watch, Watch, Review, Stop]);
    assert_eq!(judged[0].residual, Some(109.9 - 100.0));
    assert_relative_eq!(judged[3].position_in_band.unwrap(), -2.0);
    let at_60 = judged[3].governing.unwrap();
    assert_eq!(at_60.limits.thresholds.stop, Some(40.0));
    assert_relative_eq!(at_60.margin_to_next.value, 20.0);
    assert_relative_eq!(at_60.margin_to_next.percent.unwrap(), 100.0 / 3.0);
}

#[test]
fn a_band_that_narrows_to_a_line_is_widened_to_the_smallest_half_band() {
    let line = Expected::new(100.0, 100.0, 100.0);
    let observations = [(0, 100.9), (1, 101.0)].map(|(t, value)| against(t, value, line));
    let judged = run_all(&watcher(&[band_rule()]), &observations);
    assert_eq!(triggers(&judged), [Normal, Watch]);
}

#[test]
fn without_an_expected_band_its_rule_holds_and_the_others_go_on() {
    let watcher = watcher(&[band_rule(), fixed(thresholds(150.0, 160.0, 170.0))]);
    let expected = Expected::new(80.0, 100.0, 110.0);
    let forged = Some(Expected { low: 5.0, likely: f64::NAN, high: 1.0 });
    let judged = run_all(
        &watcher,
        &[
            against(0, 125.0, expected),
            against(1, 100.0, None),
            against(2, 100.0, forged),
            against(3, 165.0, None),
            against(4, 100.0, None),
            against(5, 100.0, expected),
        ],
    );
    assert_eq!(triggers(&judged), [Review, Review, Review, Review, Review, Normal]);
    assert_eq!(judged[1].governing, None, "what governs cannot be judged now");
    assert_eq!(judged[3].governing.unwrap().rule, 1);
    let (_, unknown) = watcher.judge(&WatchState::default(), &seen(0, 100.0), &[]).unwrap();
    assert_eq!(unknown.not_ready, Some(NotReady::Unknown { unknown: Unknown::Expected }));
}

fn curve() -> Curve {
    let list = |values: &[f64]| FixedList::from_slice(values).unwrap();
    Curve {
        pressure_kpa: list(&[50.0, 100.0, 150.0]),
        watch: list(&[20.0, 40.0, 70.0]),
        review: FixedList::default(),
        stop: list(&[30.0, 60.0, 90.0]),
        gross: FixedList::default(),
    }
}

fn curve_watcher() -> Watcher {
    let rule = Rule { basis: Basis::Curve, hysteresis: 1.0, ..Rule::default() };
    Watcher::new(&Limits { curve: Some(curve()), ..limits(&[rule]) }).unwrap()
}

#[test]
fn a_curve_is_linear_between_points_and_level_beyond_its_ends() {
    let at = |kpa| curve().at(kpa);
    for (kpa, watch, stop) in [
        (0.0, 20.0, 30.0),
        (50.0, 20.0, 30.0),
        (75.0, 30.0, 45.0),
        (100.0, 40.0, 60.0),
        (125.0, 55.0, 75.0),
        (150.0, 70.0, 90.0),
        (400.0, 70.0, 90.0),
    ] {
        let (limits, beyond) = at(kpa);
        assert_relative_eq!(limits.watch.unwrap(), watch);
        assert_relative_eq!(limits.stop.unwrap(), stop);
        assert_eq!((limits.review, beyond), (None, kpa > 150.0));
    }
}

#[test]
fn the_same_reading_is_normal_at_full_load_and_stop_at_low_load() {
    let loaded =
        |time_s, kpa| Observation { applied_pressure_kpa: Some(kpa), ..seen(time_s, 50.0) };
    let judged = run_all(&curve_watcher(), &[loaded(0, 150.0), loaded(1, 100.0), loaded(2, 60.0)]);
    assert_eq!(triggers(&judged), [Normal, Watch, Stop]);
    assert!(judged[0].ready_for_next_rise());
    assert_eq!(judged[1].governing.unwrap().next, Stop, "there is no Review on this curve");
}

#[test]
fn an_unknown_load_holds_the_curve_and_a_load_beyond_it_blocks_the_next_rise() {
    let watcher = curve_watcher();
    let loaded = |time_s, kpa| Observation { applied_pressure_kpa: kpa, ..seen(time_s, 50.0) };
    let judged = run_all(
        &watcher,
        &[
            loaded(0, Some(60.0)),
            loaded(1, None),
            loaded(2, Some(f64::NAN)),
            loaded(3, Some(150.0)),
            loaded(4, Some(151.0)),
        ],
    );
    assert_eq!(triggers(&judged), [Stop, Stop, Stop, Normal, Normal]);
    assert_eq!(judged[4].not_ready, Some(NotReady::BeyondCurve));
    let (_, unknown) = watcher.judge(&WatchState::default(), &loaded(0, None), &[]).unwrap();
    assert_eq!(unknown.not_ready, Some(NotReady::Unknown { unknown: Unknown::Load }));
}

#[test]
fn a_rate_rule_waits_for_its_window_and_blocks_until_then() {
    let rule = Rule {
        basis: Basis::Rate { per_day: thresholds(0.010, 0.015, 0.020) },
        hysteresis: 0.001,
        ..Rule::default()
    };
    let rate_window = Some(RateWindow { window_s: 86_400, min_span_s: 43_200, min_readings: 4 });
    let watcher = Watcher::new(&Limits { rate_window, ..limits(&[rule]) }).unwrap();
    // 16 mm/day for a day, then 4 mm/day.
    let settlement_m =
        |hour: f64| 0.016 / 24.0 * hour.min(24.0) + 0.004 / 24.0 * (hour - 24.0).max(0.0);
    let observations: Vec<_> =
        (0..=72).map(|hour| seen(hour * 3600, settlement_m(hour as f64))).collect();
    let judged = run_all(&watcher, &observations);
    assert_eq!(judged[11].rate, None);
    assert_eq!(judged[11].not_ready, Some(NotReady::Unknown { unknown: Unknown::Rate }));
    assert_eq!(judged[12].trigger, Review);
    assert_relative_eq!(judged[12].rate.unwrap().per_day, 0.016, max_relative = 1e-9);
    assert_eq!(judged[72].trigger, Normal);
    assert_relative_eq!(judged[72].rate.unwrap().per_day, 0.004, max_relative = 1e-9);
    assert!(judged[72].ready_for_next_rise());
}

#[test]
fn a_rule_for_holds_waits_for_its_time_and_keeps_its_trigger_through_the_next_rise() {
    let when = When::InHold { after_s: 1800 };
    let watcher = watcher(&[Rule { when, ..fixed(thresholds(50.0, 60.0, 70.0)) }]);
    let at = |minute: i64, value, hold_minute: Option<i64>| Observation {
        hold_since_s: hold_minute.map(|minute| minute * MINUTE),
        ..seen(minute * MINUTE, value)
    };
    let judged = run_all(
        &watcher,
        &[
            at(0, 55.0, None),
            at(15, 55.0, Some(0)),
            at(30, 55.0, Some(0)),
            at(45, 10.0, None),
            at(60, 10.0, Some(50)),
            at(80, 10.0, Some(50)),
        ],
    );
    assert_eq!(triggers(&judged), [Normal, Normal, Watch, Watch, Watch, Normal]);
    assert_eq!(judged[0].not_ready, Some(NotReady::HoldNotJudged));
    assert_eq!(judged[1].not_ready, Some(NotReady::HoldNotJudged));
    assert!(judged[5].ready_for_next_rise());
}

#[test]
fn time_to_the_limit_is_margin_over_rate_while_the_reading_nears_it() {
    let rate_window = Some(RateWindow { window_s: 86_400, min_span_s: 3600, min_readings: 3 });
    let watcher =
        Watcher::new(&Limits { rate_window, ..limits(&[fixed(thresholds(50.0, 60.0, 70.0))]) });
    let observe = |per_day: f64| {
        let observations: Vec<_> =
            (0..=12).map(|hour| seen(hour * 3600, 30.0 + per_day * hour as f64 / 24.0)).collect();
        run_all(watcher.as_ref().unwrap(), &observations)[12].governing.unwrap()
    };
    // 16 kPa are left after half a day at 8 kPa/day.
    assert_relative_eq!(observe(8.0).days_to_next.unwrap(), 2.0, max_relative = 1e-9);
    assert_eq!(observe(-8.0).days_to_next, None);
    assert_eq!(observe(0.0).days_to_next, None);
}

#[test]
fn new_limits_do_not_lower_a_trigger_until_a_good_reading_clears_them() {
    let old = watcher(&[fixed(thresholds(50.0, 60.0, 70.0)), band_rule()]);
    let wide = watcher(&[fixed(thresholds(80.0, 90.0, 100.0))]);
    let (state, first) = old.judge(&WatchState::default(), &seen(0, 75.0), &[]).unwrap();
    assert_eq!((first.trigger, first.confirmed), (Stop, false));
    let state = wide.take_over(&state);
    assert_eq!(state.trigger(), Stop);
    let dead = Observation { reading: Reading::absent(900, Doubt::NoAnswer), ..seen(900, 0.0) };
    let (state, held) = wide.judge(&state, &dead, &[]).unwrap();
    assert_eq!((held.trigger, held.since_s), (Stop, 0));
    let (state, _) = wide.judge(&state, &seen(1800, 85.0), &[]).unwrap();
    assert_eq!(state.trigger(), Watch);
    let (state, _) = wide.judge(&state, &seen(2700, 75.0), &[]).unwrap();
    assert_eq!(state.trigger(), Normal);
}

#[test]
fn the_highest_rule_counts_and_the_nearest_limit_governs() {
    let near = fixed(thresholds(50.0, 60.0, 70.0));
    let far = fixed(thresholds(80.0, 90.0, 100.0));
    let judged = run(&watcher(&[far, near]), &[40.0, 65.0, 95.0]);
    assert_eq!(triggers(&judged), [Normal, Review, Stop]);
    assert!(judged.iter().all(|judgement| judgement.governing.unwrap().rule == 1));
}

#[test]
fn time_that_does_not_go_forward_is_refused_and_nothing_changes() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let start = 1_750_000_000;
    let (state, _) = watcher.judge(&WatchState::default(), &seen(start, 55.0), &[]).unwrap();
    for time_s in [start, start - 1, 0, i64::MIN] {
        assert_eq!(
            watcher.judge(&state, &seen(time_s, 55.0), &[]),
            Err(OutOfOrder { time_s, last_s: start })
        );
    }
    // A double does not count as seen again.
    let (_, judgement) = watcher.judge(&state, &seen(start + 900, 55.0), &[]).unwrap();
    assert!(judgement.confirmed);
    assert_eq!(judgement.since_s, start);
}

#[test]
fn working_shows_residual_limits_and_margin() {
    #[derive(Default)]
    struct Lines(Vec<String>);
    impl Working for Lines {
        fn step(&mut self, step: Step<'_>) {
            self.0.push(format!("{} = {} {}", step.name, step.value, step.unit));
        }
    }
    let mut lines = Lines::default();
    let observation = against(0, 125.0, Expected::new(80.0, 100.0, 110.0));
    let watcher = watcher(&[band_rule()]);
    let _ = watcher.judge_with(&WatchState::default(), &observation, &[], &mut lines).unwrap();
    assert_eq!(
        lines.0,
        [
            "residual = 25 ",
            "limit of Watch now = 110 ",
            "limit of Review now = 120 ",
            "limit of Stop now = 130 ",
            "margin to the next limit = 5 ",
            "margin to the next limit = 16.666666666666664 %",
        ]
    );
}

#[test]
fn limits_that_make_no_sense_are_refused_with_the_rule() {
    let refused = |rule: Rule| Watcher::new(&limits(&[rule])).unwrap_err();
    assert_eq!(Watcher::new(&limits(&[])).unwrap_err(), LimitError::NoRules);
    assert_eq!(refused(fixed(thresholds(60.0, 50.0, 70.0))), LimitError::Order { rule: 0 });
    assert_eq!(
        refused(Rule { direction: Direction::Below, ..fixed(thresholds(50.0, 60.0, 70.0)) }),
        LimitError::Order { rule: 0 }
    );
    assert_eq!(refused(fixed(Thresholds::default())), LimitError::NoThresholds { rule: 0 });
    let gross = Thresholds { watch: Some(1.0), gross: Some(9.0), ..Thresholds::default() };
    assert_eq!(refused(fixed(gross)), LimitError::GrossWithoutStop { rule: 0 });
    let wide = Rule {
        direction: Direction::Either,
        hysteresis: 50.0,
        ..fixed(thresholds(50.0, 60.0, 70.0))
    };
    assert_eq!(refused(wide), LimitError::NeverClears { rule: 0 });
    let rate = Basis::Rate { per_day: thresholds(1.0, 2.0, 3.0) };
    assert_eq!(
        refused(Rule { basis: rate, ..Rule::default() }),
        LimitError::WindowMissing { rule: 0 }
    );
    assert_eq!(
        refused(Rule { basis: Basis::Curve, ..Rule::default() }),
        LimitError::CurveMissing { rule: 0 }
    );
    for value in [f64::NAN, f64::INFINITY] {
        assert!(matches!(refused(fixed(thresholds(value, 60.0, 70.0))), LimitError::OutOfRange(_)));
        let rule = Rule { hysteresis: value, ..fixed(thresholds(50.0, 60.0, 70.0)) };
        assert!(matches!(refused(rule), LimitError::OutOfRange(_)));
    }
    let never = Persistence { readings: 0, seconds: 0 };
    let rule = Rule { raising: never, ..fixed(thresholds(50.0, 60.0, 70.0)) };
    assert!(matches!(refused(rule), LimitError::OutOfRange(_)));
}

#[test]
fn curves_that_make_no_sense_are_refused() {
    let rule = Rule { basis: Basis::Curve, ..Rule::default() };
    let refused =
        |curve| Watcher::new(&Limits { curve: Some(curve), ..limits(&[rule]) }).unwrap_err();
    let list = |values: &[f64]| FixedList::from_slice(values).unwrap();
    let falling = Curve { pressure_kpa: list(&[50.0, 50.0, 150.0]), ..curve() };
    assert_eq!(refused(falling), LimitError::CurveOrder);
    let short = Curve { stop: list(&[30.0, 60.0]), ..curve() };
    assert_eq!(refused(short), LimitError::CurveLength);
    assert_eq!(refused(Curve::default()), LimitError::CurveLength);
    let crossing = Curve { watch: list(&[20.0, 65.0, 70.0]), ..curve() };
    assert_eq!(refused(crossing), LimitError::Order { rule: 0 });
    let negative = Curve { pressure_kpa: list(&[-50.0, 100.0, 150.0]), ..curve() };
    assert!(matches!(refused(negative), LimitError::OutOfRange(_)));
}

#[test]
fn a_curve_that_begins_above_zero_load_is_flagged() {
    let found: Vec<_> = curve_watcher().warnings().collect();
    assert_eq!(found, [LimitWarning::CurveStartsLate { rule: 0, pressure_kpa: 50.0 }]);
}

#[test]
fn a_span_that_would_come_and_go_with_the_readings_is_refused() {
    let window = |window_s, min_span_s, min_readings| {
        let rate_window = Some(RateWindow { window_s, min_span_s, min_readings });
        let rule = fixed(thresholds(50.0, 60.0, 70.0));
        Watcher::new(&Limits { rate_window, ..limits(&[rule]) }).map(|_| ())
    };
    assert_eq!(window(86_400, 69_120, 3), Ok(()));
    assert_eq!(window(86_400, 69_121, 3), Err(LimitError::SpanBeyondWindow));
    assert!(matches!(window(86_400, 43_200, 2), Err(LimitError::OutOfRange(_))));
    assert!(matches!(window(-1, 43_200, 3), Err(LimitError::OutOfRange(_))));
}

#[test]
fn a_limit_inside_the_noise_is_flagged_and_allowed() {
    let warnings = |noise, rule: Rule| -> Vec<LimitWarning> {
        let limits = Limits { noise: Some(noise), ..limits(&[rule]) };
        Watcher::new(&limits).unwrap().warnings().collect()
    };
    let rule = fixed(thresholds(50.0, 60.0, 70.0));
    assert_eq!(warnings(1.0, rule), []);
    assert_eq!(
        warnings(20.0, rule),
        [
            LimitWarning::WithinNoise { rule: 0, distance: 50.0, noise: 20.0 },
            LimitWarning::Chatters { rule: 0, hysteresis: 2.0, noise: 20.0 },
        ]
    );
    // 1 mm readings, four in 12 hours: sigma sqrt(12*3/(4*5)) / 0.5 d = 2.68 mm/day.
    let rate = Rule {
        basis: Basis::Rate { per_day: thresholds(0.005, 0.010, 0.015) },
        hysteresis: 0.003,
        ..Rule::default()
    };
    let rate_window = Some(RateWindow { window_s: 86_400, min_span_s: 43_200, min_readings: 4 });
    let limits = Limits { noise: Some(0.001), rate_window, ..limits(&[rate]) };
    let found: Vec<_> = Watcher::new(&limits).unwrap().warnings().collect();
    let [LimitWarning::WithinNoise { noise, .. }] = found[..] else { panic!("{found:?}") };
    assert_relative_eq!(noise, 0.002_683_281_572_999_748, max_relative = 1e-12);
}

/// Four instruments of one site; the neighbours of each.
const NEIGHBOURS: [(u16, &[u16]); 4] = [(11, &[12]), (12, &[11]), (13, &[]), (14, &[11])];

fn scan(order: [usize; 4], observations: [Observation; 4]) -> (Vec<(u16, Outcome)>, ScanSummary) {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let posts = order.map(|i| {
        let (id, neighbours) = NEIGHBOURS[i];
        Post { id, watcher: &watcher, neighbours, critical: id == 13, inhibition: None }
    });
    let observations = order.map(|i| observations[i]);
    let site = Site::new(&posts).unwrap();
    let mut states = [WatchState::default(); 4];
    let mut outcomes = [Err(OutOfOrder { time_s: 0, last_s: 0 }); 4];
    let summary = site.judge_scan(&observations, &mut states, &mut outcomes).unwrap();
    let mut by_id: Vec<_> = posts.iter().map(|post| post.id).zip(outcomes).collect();
    by_id.sort_by_key(|(id, _)| *id);
    (by_id, summary)
}

#[test]
fn neighbours_confirm_within_the_same_scan_in_any_order_of_the_instruments() {
    let dead = Observation { reading: Reading::absent(0, Doubt::NoSignal), ..seen(0, 0.0) };
    let observations = [seen(0, 55.0), seen(0, 65.0), dead, seen(0, 40.0)];
    let first = scan([0, 1, 2, 3], observations);
    for order in [[3, 2, 1, 0], [1, 3, 0, 2], [2, 0, 3, 1]] {
        assert_eq!(scan(order, observations), first);
    }
    let (outcomes, summary) = first;
    let judged: Vec<_> =
        outcomes.iter().map(|(_, o)| o.unwrap()).map(|j| (j.trigger, j.confirmed)).collect();
    assert_eq!(judged, [(Watch, true), (Review, true), (Normal, false), (Normal, false)]);
    assert_eq!((summary.highest, summary.highest_at), (Review, Some(12)));
    assert_eq!(summary.highest_confirmed, Review);
    assert_eq!(summary.at_trigger, [2, 1, 1, 0]);
    assert_eq!((summary.faults, summary.critical_faults), (1, 1));
    assert!(!summary.ready_for_next_rise());
    assert_eq!(summary.not_ready, Some((12, NotReady::Raised { trigger: Review })));
}

#[test]
fn a_doubtful_neighbour_confirms_nothing() {
    let jumped = Reading::new(0, 95.0).with_doubt(Doubt::ManyStepped { channels: 4, time_s: 0 });
    let jumped = Observation { reading: jumped, ..seen(0, 0.0) };
    let (outcomes, summary) = scan([0, 1, 2, 3], [jumped, jumped, seen(0, 1.0), seen(0, 1.0)]);
    assert_eq!((summary.highest, summary.highest_confirmed), (Stop, Normal));
    assert!(!outcomes[0].1.unwrap().confirmed);
}

#[test]
fn one_clock_set_back_does_not_stop_the_judging_of_the_others() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let posts = [1, 2].map(|id| Post {
        id,
        watcher: &watcher,
        neighbours: &[],
        critical: false,
        inhibition: None,
    });
    let site = Site::new(&posts).unwrap();
    let mut states = [WatchState::default(); 2];
    let mut outcomes = [Err(OutOfOrder { time_s: 0, last_s: 0 }); 2];
    let now = 1_750_000_000;
    site.judge_scan(&[seen(now, 65.0), seen(now, 10.0)], &mut states, &mut outcomes).unwrap();
    let summary = site
        .judge_scan(&[seen(1000, 10.0), seen(now + 900, 55.0)], &mut states, &mut outcomes)
        .unwrap();
    assert_eq!(outcomes[0], Err(OutOfOrder { time_s: 1000, last_s: now }));
    assert_eq!(outcomes[1].unwrap().trigger, Watch);
    assert_eq!((summary.highest, summary.highest_at), (Review, Some(1)), "the trigger is held");
    assert_eq!(summary.faults, 1);
    let faults: Vec<_> = site.faults(&outcomes).collect();
    assert_eq!((faults[0].id, faults[0].since_s), (1, now));
}

#[test]
fn an_inhibited_instrument_stays_in_view_and_blocks_the_next_rise() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let by = "A. Example".try_into().unwrap();
    let reason = "cable under repair".try_into().unwrap();
    let inhibition = Inhibition::new(0, 3600, by, reason).unwrap();
    let posts = [Post {
        id: 7,
        watcher: &watcher,
        neighbours: &[],
        critical: false,
        inhibition: Some(&inhibition),
    }];
    let site = Site::new(&posts).unwrap();
    let mut states = [WatchState::default()];
    let mut outcomes = [Err(OutOfOrder { time_s: 0, last_s: 0 })];
    let mut scan = |time_s, value| {
        let summary = site.judge_scan(&[seen(time_s, value)], &mut states, &mut outcomes).unwrap();
        (summary, outcomes[0].unwrap())
    };
    let (summary, judgement) = scan(0, 40.0);
    assert_eq!(judgement.not_ready, Some(NotReady::Inhibited { until_s: 3600 }));
    assert_eq!((summary.inhibited, summary.ready_for_next_rise()), (1, false));
    let (summary, judgement) = scan(900, 75.0);
    assert_eq!((summary.highest, judgement.trigger), (Stop, Stop), "silenced, not hidden");
    assert_eq!(judgement.inhibited_until_s, Some(3600));
    let (summary, judgement) = scan(3600, 75.0);
    assert_eq!((summary.inhibited, judgement.inhibited_until_s), (0, None));
}

#[test]
fn sites_and_scans_that_do_not_fit_are_refused() {
    let watcher = watcher(&[fixed(thresholds(50.0, 60.0, 70.0))]);
    let post = |id, neighbours| Post {
        id,
        watcher: &watcher,
        neighbours,
        critical: false,
        inhibition: None,
    };
    assert_eq!(Site::new(&[post(1, &[]), post(1, &[])]).unwrap_err(), SiteError::Twice { id: 1 });
    assert_eq!(
        Site::new(&[post(1, &[9])]).unwrap_err(),
        SiteError::Neighbour { id: 1, neighbour: 9 }
    );
    assert_eq!(
        Site::new(&[post(1, &[1])]).unwrap_err(),
        SiteError::Neighbour { id: 1, neighbour: 1 }
    );
    let posts = [post(1, &[])];
    let site = Site::new(&posts).unwrap();
    assert_eq!(
        site.judge_scan(&[], &mut [], &mut []),
        Err(SiteError::Length { instruments: 1, given: 0 })
    );
    let empty = Site::new(&[]).unwrap();
    let summary = empty.judge_scan(&[], &mut [], &mut []).unwrap();
    assert!(!summary.ready_for_next_rise(), "no instruments is no good news");
}

/// The logger keeps one state and one channel for each instrument in 128 KiB.
#[test]
fn what_is_kept_for_an_instrument_stays_small() {
    use brimstead_core::instrument::check::Channel;
    for (name, size, allowed) in [
        ("WatchState", size_of::<WatchState>(), 1024),
        ("Channel", size_of::<Channel>(), 512),
        ("Watcher", size_of::<Watcher>(), 1536),
        ("Judgement", size_of::<Judgement>(), 448),
    ] {
        println!("{name}: {size} bytes");
        assert!(size <= allowed, "{name} takes {size} bytes, allowed {allowed}");
    }
}
