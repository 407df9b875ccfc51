//! `brimstead compare`.

use crate::arguments::CompareArguments;
use crate::output;
use anyhow::Context;
use brimstead_core::watch::Trigger;
use brimstead_engine::chart::stamp;
use brimstead_engine::compare::{Comparison, compare, page, record};
use brimstead_engine::import::{ImportReport, read_files};
use brimstead_engine::report::HtmlOptions;
use brimstead_engine::site;
use std::path::Path;
use std::process::ExitCode;

pub fn run(given: &CompareArguments) -> anyhow::Result<ExitCode> {
    let site = site::read(&given.site)?;
    let imported = read_files(&site, &given.readings)?;
    let comparison = compare(&site, &imported)?;
    let zone = brimstead_engine::time::zone(&site.site.time_zone).context("time zone")?;
    let charts = match &given.out {
        Some(_) => page::charts(&site, &comparison, &zone),
        None => Vec::new(),
    };
    let report = page::report_page(&site, &comparison, &imported.report, &charts)?;
    let whole = record::to_json(&report, &comparison)?;
    if let Some(out) = &given.out {
        output::folder(out)?;
        output::write(&out.join("report.html"), report.to_html(HtmlOptions { embed_font: true }))?;
        output::write(&out.join("comparison.json"), &whole)?;
        output::pictures(out, &charts)?;
    }
    if given.json {
        output::say(whole)?;
    } else {
        output::say(report.to_text(output::terminal()))?;
        changes(&comparison, &zone)?;
        import_lines(&imported.report)?;
        if let Some(out) = &given.out {
            output::say(format!("\nReport: {}", shown(&out.join("report.html"))))?;
        }
    }
    Ok(exit_code(&comparison))
}

fn shown(path: &Path) -> String {
    path.canonicalize().unwrap_or_else(|_| path.to_owned()).display().to_string()
}

/// When each trigger rose or fell.
fn changes(comparison: &Comparison, zone: &jiff::tz::TimeZone) -> anyhow::Result<()> {
    let mut lines: Vec<(i64, String)> = Vec::new();
    for timeline in &comparison.timelines {
        for change in &timeline.changes {
            let doubt =
                if change.to > change.from && !change.confirmed { ", unconfirmed" } else { "" };
            lines.push((
                change.time_s,
                format!(
                    "  {}  {:6} {} to {}{doubt}",
                    stamp(change.time_s, zone),
                    timeline.id,
                    change.from,
                    change.to
                ),
            ));
        }
    }
    lines.sort();
    if !lines.is_empty() {
        output::say("\nChanges of trigger over the run:")?;
    }
    for (_, line) in lines {
        output::say(line)?;
    }
    Ok(())
}

fn import_lines(report: &ImportReport) -> anyhow::Result<()> {
    let (mut readings, mut refused) = (0, 0);
    for file in &report.files {
        readings += file.readings - file.duplicates - file.contradicted;
        refused += file.refused_by_reason.values().sum::<u64>();
    }
    output::say(format!(
        "\nRead in: {readings} readings from {} files; {refused} fields or rows refused, {} duplicates ignored, {} conflicts.",
        report.files.len(),
        report.duplicates_ignored,
        report.conflicts.len()
    ))?;
    for suspicion in &report.suspicions {
        output::say(format!("  look at: {suspicion}"))?;
    }
    Ok(())
}

fn exit_code(comparison: &Comparison) -> ExitCode {
    ExitCode::from(match comparison.highest_reached() {
        Trigger::Normal if comparison.any_fault() => 10,
        Trigger::Normal => 0,
        Trigger::Watch => 11,
        Trigger::Review => 12,
        Trigger::Stop => 13,
    })
}
