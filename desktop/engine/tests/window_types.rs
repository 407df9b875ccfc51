//! The TypeScript types of the front end are those of the engine.

use brimstead_engine::window::records as r;
use brimstead_engine::window::views as v;
use std::collections::BTreeMap;
use std::path::PathBuf;
use ts_rs::{Config, TS};

/// Set to write the types anew.
const WRITE: &str = "WRITE_TYPES";

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../ui/src/backend/generated")
}

fn types() -> BTreeMap<String, String> {
    let config = Config::new();
    let mut found = BTreeMap::new();
    macro_rules! all {
        ($($Type:ty),* $(,)?) => {$(
            let name = <$Type>::name(&config);
            found.insert(format!("{name}.ts"), <$Type>::export_to_string(&config).unwrap());
        )*};
    }
    all!(
        v::Against,
        v::ChartView,
        v::ContourLine,
        v::ContoursView,
        v::EntryView,
        v::Failure,
        v::FaultView,
        v::Field,
        v::Hidden,
        v::HoverPoint,
        v::InstrumentNow,
        v::LayerView,
        v::MomentView,
        v::Opened,
        v::Picture,
        v::Quantity,
        v::ReadingView,
        v::SectionView,
        v::TankView,
        v::Theme,
        v::TriggerView,
        v::Units,
        v::WorkingLine,
        v::WorkingView,
        r::Decision,
        r::ImportColumn,
        r::ImportCorrection,
        r::ImportDone,
        r::ImportFile,
        r::ImportView,
        r::InstrumentInfo,
        r::LimitProposal,
        r::LimitRowView,
        r::LimitVersionView,
        r::LimitsView,
        r::LogEntryView,
        r::LogView,
        r::ProblemView,
        r::Signature,
        r::SiteCheckView,
        r::SitePoint,
        r::SiteTextView,
        r::WorkStep,
    );
    found
}

#[test]
fn the_types_of_the_front_end_are_not_stale() {
    let expected = types();
    if std::env::var_os(WRITE).is_some() {
        std::fs::create_dir_all(folder()).unwrap();
        for (name, text) in &expected {
            std::fs::write(folder().join(name), text).unwrap();
        }
    }
    let how = format!("run {WRITE}=1 cargo test -p brimstead-engine --test window_types");
    for (name, text) in &expected {
        let found = std::fs::read_to_string(folder().join(name)).unwrap_or_default();
        assert!(found == *text, "{name} is stale: {how}");
    }
    let mut held: Vec<String> = std::fs::read_dir(folder())
        .unwrap()
        .map(|entry| entry.unwrap().file_name().to_string_lossy().into_owned())
        .collect();
    held.sort();
    assert_eq!(held, expected.into_keys().collect::<Vec<_>>(), "no type is left over: {how}");
}

/// A whole number of 64 bits would become a bigint, which JSON does not give.
#[test]
fn no_number_is_a_bigint() {
    for (name, text) in types() {
        assert!(!text.contains("bigint"), "{name}");
    }
}
