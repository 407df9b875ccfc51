//! `brimstead working`.

use crate::arguments::WorkingArguments;
use crate::output;
use anyhow::{Context, anyhow};
use brimstead_engine::compare::compare;
use brimstead_engine::expect::{LoadHistory, Model};
use brimstead_engine::import::read_files;
use brimstead_engine::predict::planned_history;
use brimstead_engine::working::{Sheet, sheet_of};
use brimstead_engine::{site, time};
use std::process::ExitCode;

pub fn run(given: &WorkingArguments) -> anyhow::Result<ExitCode> {
    let site = site::read(&given.site)?;
    let place = site.instruments.iter().position(|one| one.id == given.instrument);
    let place = place.ok_or_else(|| {
        let known: Vec<&str> = site.instruments.iter().map(|one| one.id.as_str()).collect();
        anyhow!(
            "there is no instrument \"{}\" in {}. Known: {}",
            given.instrument,
            given.site.display(),
            known.join(", ")
        )
    })?;
    let zone = time::zone(&site.site.time_zone).context("time zone")?;
    let at_s = time::instant(&given.at, &zone).ok_or_else(|| {
        anyhow!(
            "\"{}\" is no moment. Give RFC 3339 (2026-05-17T18:00Z) or local time of the site \
             (2026-05-17 21:00)",
            given.at
        )
    })?;
    let model = Model::new(&site)?;
    let history: LoadHistory = if given.readings.is_empty() {
        planned_history(&site)
    } else {
        compare(&site, &read_files(&site, &given.readings)?)?.history
    };
    let sheet: Sheet = sheet_of(&site, &model, &history, place, at_s)?;
    if given.json {
        output::say(serde_json::to_string_pretty(&sheet)?)?;
    } else {
        output::say(sheet.to_text())?;
    }
    Ok(ExitCode::SUCCESS)
}
