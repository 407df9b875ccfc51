//! The companion's answers on the demo site.

mod moment;
mod pictures;

use brimstead_engine::window::{Progress, Session, WindowError};
use std::path::PathBuf;
use std::sync::OnceLock;
use std::sync::atomic::AtomicBool;

/// Some day after the demo's run.
pub const NOW_S: i64 = 1_800_000_000;

pub fn demo_folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../../data-demo")
}

pub fn opened(run: Option<&str>) -> Result<Session, WindowError> {
    let progress = Progress { tell: &|_, _| {}, cancel: &AtomicBool::new(false) };
    Session::open_demo(&demo_folder(), run, NOW_S, progress)
}

/// The run in which the ground yields, compared once for all tests.
pub fn bad() -> &'static Session {
    static SESSION: OnceLock<Session> = OnceLock::new();
    SESSION.get_or_init(|| opened(None).unwrap())
}

/// Milliseconds of an instant.
pub fn at(text: &str) -> f64 {
    text.parse::<jiff::Timestamp>().unwrap().as_second() as f64 * 1000.0
}

#[test]
fn the_demo_opens_at_the_run_that_goes_wrong() {
    let opened = bad().opened();
    assert_eq!((opened.run.as_deref(), opened.invented), (Some("bad"), true));
    assert_eq!(opened.cautions.len(), 6);
    assert_eq!(opened.runs.len(), 2);
    assert!(opened.from_ms <= at("2026-03-02T06:00:00Z"));
    assert!(opened.to_ms >= at("2026-05-31T21:00:00Z"), "to the end of the plan");
    assert!(opened.last_ms < opened.to_ms, "the run ends before the plan");
}

#[test]
fn what_cannot_be_opened_says_why() {
    let code = |refused: Result<Session, WindowError>| refused.unwrap_err().code();
    assert_eq!(code(opened(Some("ugly"))), "unknown-run");
    let progress = Progress { tell: &|_, _| {}, cancel: &AtomicBool::new(false) };
    let nowhere = PathBuf::from("/nowhere at all");
    assert_eq!(code(Session::open_demo(&nowhere, None, NOW_S, progress)), "demo-missing");
    assert_eq!(code(Session::open_store(&nowhere, NOW_S, progress)), "store-missing");
    let site = demo_folder().join("site.json");
    assert_eq!(code(Session::open_store(&site, NOW_S, progress)), "not-a-store");
}

#[test]
fn long_work_tells_how_far_it_is_and_can_be_cancelled() {
    let cancel = AtomicBool::new(false);
    let told = std::sync::Mutex::new(Vec::new());
    let tell = |what: &str, done: f64| {
        told.lock().unwrap().push((what.to_owned(), done));
        if done > 0.1 {
            cancel.store(true, std::sync::atomic::Ordering::Relaxed);
        }
    };
    let progress = Progress { tell: &tell, cancel: &cancel };
    let refused = Session::open_demo(&demo_folder(), None, NOW_S, progress).unwrap_err();
    assert_eq!(refused.code(), "cancelled");
    let told = told.lock().unwrap();
    assert!(told.len() > 2 && told.is_sorted_by(|a, b| a.1 <= b.1), "{told:?}");
}
