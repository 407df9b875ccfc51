//! The moment strip, one reading, faults and the sheet.

use crate::{at, bad};
use brimstead_engine::window::views::{TriggerView, Units};

const QUIET: &str = "2026-04-05T12:00:00Z";
const YIELDING: &str = "2026-05-18T14:00:00Z";
const PLANNED: &str = "2026-05-28T04:00:00Z";

#[test]
fn a_quiet_moment_says_what_was_judged() {
    let moment = bad().moment(at(QUIET), Units::Si);
    assert_eq!(moment.time_text, "5 Apr 2026, 15:00 (UTC+3)");
    assert_eq!(moment.liquid_level.text, "8.01 m");
    assert_eq!(moment.applied_pressure.text, "95.3 kPa");
    assert_eq!((moment.load_known, moment.load_source.as_str()), (true, "by LG1"));
    assert_eq!(moment.stage, "Rise 3, hold");
    assert!(moment.stage_detail.starts_with("198.0 h in, 1.99 m up"), "{}", moment.stage_detail);
    assert_eq!(moment.counts[2..], [0, 0], "no Review, no Stop");
    assert!(moment.headline[0].contains("inside their limits"), "{:?}", moment.headline);
    assert_eq!(moment.to_lower.as_deref(), Some("7 h 33 min to lower 1 m"));
}

/// 1963.5 m2 by 0.3048 m at 260 m3/h: 2 h 18 min.
#[test]
fn us_customary_converts_everything_shown() {
    let moment = bad().moment(at(QUIET), Units::UsCustomary);
    assert_eq!(moment.liquid_level.text, "26.28 ft");
    assert_eq!(moment.applied_pressure.unit, "psf");
    assert_eq!(moment.to_lower.as_deref(), Some("2 h 18 min to lower 1 ft"));
    assert!((moment.liquid_level_m - 8.011).abs() < 1e-9, "the drawing stays in metres");
    for one in &moment.instruments {
        for value in [&one.reading, &one.expected, &one.band_low].into_iter().flatten() {
            assert!(["psf", "ft", "in"].contains(&value.unit.as_str()), "{}: {value:?}", one.id);
        }
    }
    let words = format!("{:?} {:?}", moment.headline, moment.stage_detail);
    assert!(!words.contains(" m ") && !words.contains("kPa") && !words.contains(" mm"), "{words}");
}

#[test]
fn a_yielding_edge_is_said_with_its_load_and_its_neighbours() {
    let moment = bad().moment(at(YIELDING), Units::Si);
    assert!(moment.counts[2] + moment.counts[3] > 0, "{:?}", moment.counts);
    assert!(!moment.ready && !moment.not_ready.is_empty());
    let words = moment.headline.join(" ");
    for part in ["PE1 reads", "above the expected", "applied pressure", "since", "beside it"] {
        assert!(words.contains(part), "{part} in {words}");
    }
    assert!(moment.plan.contains("stop"), "{}", moment.plan);
    let highest = moment.instruments.iter().map(|one| one.trigger).max().unwrap();
    assert!(words.starts_with(&format!("{highest:?} at ")), "{words}");
}

#[test]
fn a_planned_moment_is_no_news_about_the_ground() {
    let moment = bad().moment(at(PLANNED), Units::Si);
    assert!(moment.planned && !moment.ready);
    assert_eq!(moment.liquid_level.text, "14.00 m");
    assert_eq!((moment.counts[0], moment.to_limit), (0, None));
    assert!(moment.headline[0].starts_with("Planned"), "{:?}", moment.headline);
    for one in &moment.instruments {
        assert_eq!((one.reading.is_none(), one.data_state.as_str()), (true, "not read"));
        assert!(one.trigger == TriggerView::Normal || one.held, "{} still stands", one.id);
    }
    let expected = moment.instruments.iter().filter(|one| one.expected.is_some()).count();
    assert_eq!(expected, moment.instruments.len(), "what would be expected is known");
}

#[test]
fn before_the_first_reading_nothing_is_good() {
    let moment = bad().moment(at("2026-03-01T00:00:00Z"), Units::Si);
    assert!(!moment.load_known && !moment.ready);
    assert_eq!((moment.liquid_level.text.as_str(), moment.counts), ("unknown", [0; 4]));
    assert!(moment.instruments.iter().all(|one| one.age == "never read"));
}

#[test]
fn a_reading_has_limits_steps_and_a_plan() {
    let view = bad().reading("PE1", at(YIELDING), Units::Si).unwrap();
    let triggers: Vec<TriggerView> = view.limits.iter().map(|limit| limit.0).collect();
    assert_eq!(triggers, [TriggerView::Watch, TriggerView::Review, TriggerView::Stop]);
    assert_eq!(view.changes.first().map(|change| change.1), Some(TriggerView::Normal));
    assert!(view.now.margin.is_some());
    assert!(view.plan.contains("Site plan"), "{}", view.plan);
    let cell = bad().reading("SC3", at(YIELDING), Units::Si).unwrap();
    assert!(cell.rate.as_ref().is_some_and(|rate| rate.contains("mm a day over")), "{cell:?}");
}

/// Read in digits: factor times (zero less digits), temperature and air pressure on top.
#[test]
fn digits_show_their_corrections_step_by_step() {
    let view = bad().reading("PM2", at(YIELDING), Units::Si).unwrap();
    let names: Vec<&str> = view.steps.iter().map(|step| step.0.as_str()).collect();
    assert_eq!(
        names,
        [
            "as it stands in the file",
            "pressure from digits",
            "temperature correction",
            "air pressure correction",
            "pore pressure"
        ]
    );
    let number = |place: usize| {
        let text = view.steps[place].1.replace('\u{2212}', "-");
        text.split(' ').next().unwrap().parse::<f64>().unwrap()
    };
    assert!((number(1) - 0.0921 * (8714.2 - number(0))).abs() < 0.06);
    assert!((number(4) - number(1) - number(2) - number(3)).abs() < 0.16, "rounded to 0.1");
}

#[test]
fn an_instrument_that_is_not_there_is_refused() {
    assert_eq!(
        bad().reading("PX9", at(QUIET), Units::Si).unwrap_err().code(),
        "unknown-instrument"
    );
    assert_eq!(
        bad().working("PX9", at(QUIET), Units::Si).unwrap_err().code(),
        "unknown-instrument"
    );
}

#[test]
fn faults_stand_apart_and_say_what_to_do() {
    let faults = bad().faults(at(YIELDING), Units::Si);
    assert!(faults.is_sorted_by_key(|fault| !fault.now), "those that go on come first");
    assert!(faults.iter().all(|fault| !fault.evidence.is_empty() && !fault.next_step.is_empty()));
    let spike = faults.iter().find(|fault| fault.id == "PW2").unwrap();
    assert_eq!((spike.state.as_str(), spike.now), ("suspect", false));
    let earlier = bad().faults(at(QUIET), Units::Si);
    assert!(earlier.len() < faults.len(), "what comes later is not known yet");
}

#[test]
fn the_sheet_ends_with_what_the_moment_expects() {
    let moment = bad().moment(at(YIELDING), Units::Si);
    let one = moment.instruments.iter().find(|one| one.id == "PE1").unwrap();
    let sheet = bad().working("PE1", at(YIELDING), Units::Si).unwrap();
    let last = sheet.lines.last().unwrap();
    let value: f64 = last.value.split(' ').next().unwrap().parse().unwrap();
    assert!((value - one.expected.as_ref().unwrap().value).abs() < 5e-4, "{value}");
    assert!(sheet.lines.iter().all(|line| line.formula_mathml.starts_with("<math")));
    assert!(sheet.text.contains("Advice only"));
    let us = bad().working("PE1", at(YIELDING), Units::UsCustomary).unwrap();
    assert!(us.lines.last().unwrap().value.ends_with(" psf)"), "the SI value with psf beside it");
}
