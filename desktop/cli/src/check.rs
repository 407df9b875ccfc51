//! `brimstead check`.

use crate::REFUSED;
use crate::arguments::CheckArguments;
use crate::output;
use brimstead_core::watch::Watcher;
use brimstead_engine::compare::limits_of;
use brimstead_engine::expect::Model;
use brimstead_engine::site;
use serde_json::json;
use std::process::ExitCode;

pub fn run(given: &CheckArguments) -> anyhow::Result<ExitCode> {
    let site = match site::read(&given.site) {
        Ok(site) => site,
        Err(problems) => {
            if given.json {
                output::say(format!(
                    "{}",
                    json!({"problems": problems.to_string().lines().collect::<Vec<_>>()})
                ))?;
            } else {
                output::say(problems)?;
            }
            return Ok(ExitCode::from(REFUSED));
        }
    };
    Model::new(&site)?;
    let mut warnings = Vec::new();
    for instrument in &site.instruments {
        match limits_of(&site, instrument)? {
            None => warnings.push(format!("{}: has no limits and is never judged", instrument.id)),
            Some(limits) => {
                let watcher = Watcher::new(&limits)
                    .map_err(|refused| anyhow::anyhow!("limits of {}: {refused}", instrument.id))?;
                warnings.extend(
                    watcher.warnings().map(|warning| format!("{}: {warning}", instrument.id)),
                );
            }
        }
    }
    if given.json {
        output::say(json!({"problems": [], "warnings": warnings}))?;
        return Ok(ExitCode::SUCCESS);
    }
    output::say(format!(
        "{}: {} layers, {} tanks, {} stages, {} instruments. Nothing to put right.",
        site.site.name,
        site.layers.len(),
        site.tanks.len(),
        site.stages.len(),
        site.instruments.len()
    ))?;
    for warning in warnings {
        output::say(format!("  look at {warning}"))?;
    }
    Ok(ExitCode::SUCCESS)
}
