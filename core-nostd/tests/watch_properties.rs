//! What must hold for any limits and any sequence of readings.

#![allow(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    reason = "a test may panic; clippy excuses only functions marked as tests"
)]

use brimstead_core::instrument::check::{
    Channel, Checker, Checks, FlatLine, Hampel, Noise, Range, Response,
};
use brimstead_core::instrument::{DataState, FixedList, OutOfOrder, Reading};
use brimstead_core::quantity::Expected;
use brimstead_core::watch::{
    Basis, Curve, Direction, Limits, Observation, Persistence, Post, RateWindow, Rule, Site,
    Thresholds, Trigger, WatchState, Watcher, When,
};
use proptest::prelude::*;

/// Any float a broken sensor can produce, weighted towards plausible ones.
fn wild() -> impl Strategy<Value = f64> {
    prop_oneof![
        8 => -150.0..150.0_f64,
        1 => any::<f64>(),
        1 => prop::sample::select(vec![f64::NAN, f64::INFINITY, f64::NEG_INFINITY, -0.0, f64::MAX]),
    ]
}

fn state() -> impl Strategy<Value = DataState> {
    use DataState::{Failed, Frozen, Good, NotRead, OutOfRange, Stale, Suspect};
    prop_oneof![
        6 => Just(Good),
        4 => prop::sample::select(vec![Suspect, Stale, Frozen, OutOfRange, Failed, NotRead]),
    ]
}

/// An observation; its time is a step after the one before, now and then not forward.
fn observation() -> impl Strategy<Value = (i64, Observation)> {
    let step = prop_oneof![12 => 1..7200_i64, 1 => -3600..=0_i64, 1 => any::<i64>()];
    let value = prop_oneof![9 => wild().prop_map(Some), 1 => Just(None)];
    let expected =
        prop::option::of((wild(), wild(), wild()).prop_map(|(low, likely, high)| Expected {
            low,
            likely,
            high,
        }));
    let hold =
        prop::option::of(prop_oneof![8 => 1_749_990_000..1_750_100_000_i64, 1 => any::<i64>()]);
    (step, value, state(), prop::option::of(wild()), expected, hold).prop_map(
        |(step_s, value, state, applied_pressure_kpa, expected, hold_since_s)| {
            let reading = Reading { time_s: 0, value, state, doubt: None };
            (step_s, Observation { reading, applied_pressure_kpa, expected, hold_since_s })
        },
    )
}

fn observations() -> impl Strategy<Value = Vec<Observation>> {
    prop::collection::vec(observation(), 1..60).prop_map(|steps| {
        let mut time_s = 1_750_000_000_i64;
        let timed = steps.into_iter().map(|(step_s, mut observation)| {
            let next_s = time_s.saturating_add(step_s);
            // A wild clock is one bad reading, not the end of the record.
            time_s = if step_s.abs() <= 7200 { next_s } else { time_s };
            observation.reading.time_s = next_s;
            observation
        });
        timed.collect()
    })
}

fn persistence() -> impl Strategy<Value = Persistence> {
    (1..4_u16, prop_oneof![Just(0_i64), 1..7200_i64])
        .prop_map(|(readings, seconds)| Persistence { readings, seconds })
}

/// Four rising sizes, one or more of the first three left out.
fn sizes() -> impl Strategy<Value = Thresholds> {
    let gaps = [5.0..40.0_f64, 0.0..30.0, 0.0..30.0, 0.0..30.0];
    (gaps, 1..8_u8, any::<bool>()).prop_map(|([a, b, c, d], given, gross)| {
        let keep = |bit: u8, value: f64| (given & bit != 0).then_some(value);
        let stop = keep(4, a + b + c);
        Thresholds {
            watch: keep(1, a),
            review: keep(2, a + b),
            stop,
            gross: stop.filter(|_| gross).map(|stop| stop + d),
        }
    })
}

fn mirrored(sizes: &Thresholds) -> Thresholds {
    let minus = |value: Option<f64>| value.map(|value| -value);
    Thresholds {
        watch: minus(sizes.watch),
        review: minus(sizes.review),
        stop: minus(sizes.stop),
        gross: minus(sizes.gross),
    }
}

fn rule() -> impl Strategy<Value = Rule> {
    let direction =
        prop::sample::select(vec![Direction::Above, Direction::Below, Direction::Either]);
    let when = prop_oneof![
        3 => Just(When::Always),
        1 => (0..20_000_i64).prop_map(|after_s| When::InHold { after_s }),
    ];
    (0..4_u8, sizes(), direction, 0.0..4.9_f64, persistence(), persistence(), when).prop_map(
        |(kind, sizes, direction, hysteresis, raising, clearing, when)| {
            let signed = if direction == Direction::Below { mirrored(&sizes) } else { sizes };
            let basis = match kind {
                0 => Basis::Band { multiples: sizes, smallest_half_band: 0.5 },
                1 if direction != Direction::Below => Basis::Curve,
                2 => Basis::Rate { per_day: signed },
                _ => Basis::Fixed { values: signed },
            };
            Rule { basis, direction, hysteresis, raising, clearing, when }
        },
    )
}

fn limits() -> impl Strategy<Value = Limits> {
    prop::collection::vec(rule(), 1..=4).prop_map(|rules| {
        let list = |values: &[f64]| FixedList::from_slice(values).unwrap();
        Limits {
            rules: FixedList::from_slice(&rules).unwrap(),
            curve: Some(Curve {
                pressure_kpa: list(&[20.0, 80.0, 140.0]),
                watch: list(&[10.0, 40.0, 60.0]),
                review: list(&[15.0, 60.0, 60.0]),
                stop: list(&[20.0, 70.0, 90.0]),
                gross: list(&[50.0, 90.0, 120.0]),
            }),
            rate_window: Some(RateWindow { window_s: 36_000, min_span_s: 7200, min_readings: 3 }),
            noise: Some(0.5),
        }
    })
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 256,
        failure_persistence: None,
        ..ProptestConfig::default()
    })]

    #[test]
    fn any_sequence_is_judged_without_panic_and_bad_data_never_lowers(
        limits in limits(), observations in observations(),
    ) {
        let watcher = Watcher::new(&limits).unwrap();
        let mut state = WatchState::default();
        for observation in &observations {
            let time_s = observation.reading.time_s;
            let (next, judgement) = match watcher.judge(&state, observation, &[]) {
                Ok(judged) => judged,
                Err(refused) => {
                    let last_s = state.last_s().unwrap();
                    prop_assert_eq!(refused, OutOfOrder { time_s, last_s });
                    prop_assert!(time_s <= last_s);
                    continue;
                }
            };
            prop_assert_eq!(judgement.trigger_before, state.trigger());
            prop_assert_eq!(judgement.trigger, next.trigger());
            if observation.reading.good().is_none() {
                prop_assert!(judgement.trigger >= state.trigger());
                prop_assert!(judgement.not_ready.is_some());
                prop_assert!(judgement.data_state != DataState::Good);
                prop_assert!(judgement.held_since_s.is_some());
            }
            if judgement.trigger > Trigger::Normal {
                prop_assert!(judgement.not_ready.is_some());
            } else {
                prop_assert!(!judgement.confirmed);
            }
            if let Some(governing) = judgement.governing {
                prop_assert!(governing.value.is_finite());
                prop_assert!(!governing.margin_to_next.value.is_nan());
            }
            prop_assert!(judgement.rate.is_none_or(|rate| rate.per_day.is_finite()));
            state = next;
        }
    }

    /// Against a model that keeps the whole record and knows only good readings and one fixed
    /// limit from above.
    #[test]
    fn a_single_limit_behaves_as_its_definition_over_the_whole_record(
        values in prop::collection::vec(prop_oneof![40.0..60.0_f64, 49.0..51.0_f64], 1..80),
        hysteresis in 0.0..5.0_f64,
        raising in persistence(),
        clearing in persistence(),
        spacing_s in 60..3600_i64,
    ) {
        let limit = 50.0;
        let thresholds = Thresholds { stop: Some(limit), ..Thresholds::default() };
        let rule = Rule {
            basis: Basis::Fixed { values: thresholds },
            hysteresis,
            raising,
            clearing,
            ..Rule::default()
        };
        let rules = FixedList::from_slice(&[rule]).unwrap();
        let watcher = Watcher::new(&Limits { rules, ..Limits::default() }).unwrap();
        let mut state = WatchState::default();
        let (mut model, mut changed_at) = (Trigger::Normal, 0);
        for at in 0..values.len() {
            let time_s = at as i64 * spacing_s;
            // How many readings up to here, since the last change, are alike.
            let run = |alike: &dyn Fn(f64) -> bool| {
                values[changed_at..=at].iter().rev().take_while(|value| alike(**value)).count()
            };
            let lasts = |run: usize, wanted: Persistence| {
                run >= usize::from(wanted.readings)
                    && (run as i64 - 1) * spacing_s >= wanted.seconds
                    && run > 0
            };
            // Readings at or beyond the limit count whether or not they came before a fall.
            let reached =
                values[..=at].iter().rev().take_while(|value| **value >= limit).count();
            let new = match model {
                Trigger::Normal if lasts(reached, raising) => Trigger::Stop,
                Trigger::Stop if lasts(run(&|v| v < limit - hysteresis), clearing) => {
                    Trigger::Normal
                }
                same => same,
            };
            if new != model {
                (model, changed_at) = (new, at + 1);
            }
            let observation = Observation {
                reading: Reading::new(time_s, values[at]),
                applied_pressure_kpa: None,
                expected: None, hold_since_s: None };
            let (next, judgement) = watcher.judge(&state, &observation, &[]).unwrap();
            prop_assert_eq!(judgement.trigger, model, "reading {} of {:?}", at, values);
            state = next;
        }
    }

    #[test]
    fn a_value_beyond_gross_is_at_stop_at_once(
        mut limits in limits(), before in observations(), by in 0.0..50.0_f64,
    ) {
        let values = Thresholds { stop: Some(100.0), gross: Some(120.0), ..Thresholds::default() };
        let raising = Persistence { readings: 50, seconds: 80_000 };
        let gross = Rule { basis: Basis::Fixed { values }, raising, ..Rule::default() };
        limits.rules = FixedList::from_slice(&[gross]).unwrap();
        let watcher = Watcher::new(&limits).unwrap();
        let mut state = WatchState::default();
        for observation in &before {
            if let Ok((next, _)) = watcher.judge(&state, observation, &[]) {
                state = next;
            }
        }
        let time_s = state.last_s().unwrap_or(0).saturating_add(1);
        prop_assume!(state.last_s() != Some(i64::MAX));
        let observation = Observation {
            reading: Reading::new(time_s, 120.0 + by),
            applied_pressure_kpa: None,
            expected: None, hold_since_s: None };
        let (_, judgement) = watcher.judge(&state, &observation, &[]).unwrap();
        prop_assert_eq!(judgement.trigger, Trigger::Stop);
    }

    #[test]
    fn a_site_is_judged_alike_in_any_order_of_its_instruments(
        limits in prop::collection::vec(limits(), 5),
        scans in prop::collection::vec(prop::array::uniform5(observation()), 1..8),
        order in Just((0..5_usize).collect::<Vec<_>>()).prop_shuffle(),
    ) {
        const NEIGHBOURS: [&[u16]; 5] = [&[1, 2], &[0], &[0, 3, 4], &[2], &[]];
        let watchers: Vec<_> = limits.iter().map(|l| Watcher::new(l).unwrap()).collect();
        let run = |order: &[usize]| {
            let posts: Vec<_> = order
                .iter()
                .map(|i| Post {
                    id: *i as u16,
                    watcher: &watchers[*i],
                    neighbours: NEIGHBOURS[*i],
                    critical: i % 2 == 0,
                    inhibition: None,
                })
                .collect();
            let site = Site::new(&posts).unwrap();
            let mut states = [WatchState::default(); 5];
            let mut outcomes = [Err(OutOfOrder { time_s: 0, last_s: 0 }); 5];
            let mut results = Vec::new();
            for (number, scan) in (1..).zip(&scans) {
                let observations: Vec<_> = order
                    .iter()
                    .map(|i| {
                        let mut observation = scan[*i].1;
                        observation.reading.time_s = number * 900 + (scan[*i].0 % 1000);
                        observation
                    })
                    .collect();
                let summary = site.judge_scan(&observations, &mut states, &mut outcomes).unwrap();
                let mut by_id: Vec<_> = order.iter().copied().zip(outcomes).collect();
                by_id.sort_by_key(|(id, _)| *id);
                results.push((summary, by_id));
            }
            results
        };
        let straight = run(&[0, 1, 2, 3, 4]);
        let shuffled = run(&order);
        // Compared as text, since a margin may be infinite but never NaN.
        prop_assert_eq!(format!("{straight:?}"), format!("{shuffled:?}"));
    }

    #[test]
    fn a_state_that_went_over_the_wire_goes_on_as_if_it_had_not(
        limits in limits(), before in observations(), after in observations(),
    ) {
        let watcher = Watcher::new(&limits).unwrap();
        let feed = |mut state: WatchState, observations: &[Observation]| {
            for observation in observations {
                if let Ok((next, _)) = watcher.judge(&state, observation, &[]) {
                    state = next;
                }
            }
            state
        };
        let state = feed(WatchState::default(), &before);
        let mut bytes = [0_u8; 8192];
        let length = serde_json_core::to_slice(&state, &mut bytes).unwrap();
        let (read, _) = serde_json_core::from_slice::<WatchState>(&bytes[..length]).unwrap();
        prop_assert_eq!(read, state);
        let shift = |o: &Observation| {
            let mut later = *o;
            later.reading.time_s = o.reading.time_s.saturating_add(1_000_000);
            later
        };
        let after: Vec<_> = after.iter().map(shift).collect();
        prop_assert_eq!(feed(read, &after), feed(state, &after));
    }

    #[test]
    fn limits_survive_the_wire(limits in limits()) {
        let mut bytes = [0_u8; 8192];
        let length = serde_json_core::to_slice(&limits, &mut bytes).unwrap();
        let (read, _) = serde_json_core::from_slice::<Limits>(&bytes[..length]).unwrap();
        prop_assert_eq!(read, limits);
    }

    #[test]
    fn any_limits_are_accepted_or_refused_and_never_panic(
        values in prop::array::uniform8(prop::option::of(wild())),
        hysteresis in wild(),
        kind in 0..4_u8,
        readings in any::<u16>(),
        seconds in any::<i64>(),
    ) {
        let [watch, review, stop, gross, a, b, c, noise] = values;
        let thresholds = Thresholds { watch, review, stop, gross };
        let basis = match kind {
            0 => Basis::Band { multiples: thresholds, smallest_half_band: a.unwrap_or(1.0) },
            1 => Basis::Curve,
            2 => Basis::Rate { per_day: thresholds },
            _ => Basis::Fixed { values: thresholds },
        };
        let persistence = Persistence { readings, seconds };
        let rule = Rule {
            basis,
            direction: Direction::Either,
            hysteresis,
            raising: persistence,
            clearing: persistence,
            when: When::InHold { after_s: seconds },
        };
        let some: Vec<f64> = [a, b, c].into_iter().flatten().collect();
        let limits = Limits {
            rules: FixedList::from_slice(&[rule]).unwrap(),
            curve: Some(Curve {
                pressure_kpa: FixedList::from_slice(&some).unwrap(),
                watch: FixedList::from_slice(&some).unwrap(),
                ..Curve::default()
            }),
            rate_window: Some(RateWindow { window_s: seconds, min_span_s: 60, min_readings: 3 }),
            noise,
        };
        if let Ok(watcher) = Watcher::new(&limits) {
            let _ = watcher.warnings().count();
        }
    }

    #[test]
    fn any_readings_pass_the_checks_without_panic_and_only_whole_values_are_good(
        observations in observations(),
    ) {
        let checks = Checks {
            range: Some(Range { low: -100.0, high: 120.0 }),
            step: Some(30.0),
            rate_per_hour: Some(100.0),
            flat_line: Some(FlatLine { readings: 4, tolerance: 0.1 }),
            spike: Some(Hampel { readings: 11, threshold: 3.0, floor: 1.0 }),
            noise: Some(Noise { readings: 6, allowed: 60.0 }),
            stale_after_s: Some(3600),
            gap_above_s: Some(7200),
            rods: None,
            response: Some(Response {
                load_step_kpa: 10.0,
                least_per_kpa: 0.1,
                lag_s: 1800,
                within_s: 20_000,
            }),
        };
        let checker = Checker::new(&checks).unwrap();
        let mut channel = Channel::default();
        for observation in &observations {
            let load_kpa = observation.applied_pressure_kpa;
            let Ok((next, checked)) = checker.observe(&channel, observation.reading, load_kpa)
            else {
                continue;
            };
            let given = observation.reading;
            prop_assert!(checked.reading.state >= given.state, "a check never improves a state");
            if checked.reading.state == DataState::Good {
                prop_assert!(given.value.is_some_and(|v| (-100.0..=120.0).contains(&v)));
            }
            channel = next;
        }
    }
}
