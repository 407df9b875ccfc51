//! Tanks, liquids, stages and the cases of the band.

use super::super::model::{SiteParts, Stage, Tank};
use super::super::reader::{InstantText, Reading};
use super::{quoted, unique};
use brimstead_core::load::SHELL_HEIGHT;

pub(super) fn check(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    if let Some(tanks) = parts.tanks {
        unique(reading, "tanks", "name", tanks.iter().map(|tank| tank.name.as_str()));
        tank_levels(reading, tanks);
        apart(reading, tanks);
    }
    if let Some(band) = parts.band {
        unique(reading, "band.cases", "name", band.cases.iter().map(|case| case.name.as_str()));
    }
    if let Some(stages) = parts.stages {
        unique(reading, "stages", "name", stages.iter().map(|stage| stage.name.as_str()));
        stage_times(reading, stages);
        if let Some(tank) = parts.tanks.and_then(|tanks| tanks.first()) {
            stage_levels(reading, stages, tank);
        }
    }
    liquids(reading, parts);
    starts(reading, parts);
}

fn tank_levels(reading: &Reading<'_>, tanks: &[Tank]) {
    for (index, tank) in tanks.iter().enumerate() {
        let path = format!("tanks[{index}].liquid_level_m");
        match tank.liquid_level_m {
            Some(level) if index == 0 => {
                let allowed = "no constant level for the tank under test";
                reading.report(
                    &path,
                    level.to_string(),
                    allowed,
                    "Its level comes from the stages and the level gauge.",
                );
            }
            Some(level) => above_shell(reading, &path, level, tank),
            None if index > 0 => {
                let place = format!("tanks[{index}].name");
                let found = format!("no liquid_level_m for the neighbour \"{}\"", tank.name);
                let allowed = format!("{path} from 0 to {} m", tank.shell_height_m);
                reading.report(&place, found, allowed, "Write 0 for an empty neighbour.");
            }
            None => {}
        }
    }
}

fn above_shell(reading: &Reading<'_>, path: &str, level: f64, tank: &Tank) {
    // A refused shell height says nothing about levels.
    if level <= tank.shell_height_m || SHELL_HEIGHT.check(tank.shell_height_m).is_err() {
        return;
    }
    let allowed = format!("not above the shell of \"{}\" at {} m", tank.name, tank.shell_height_m);
    reading.report(
        path,
        level.to_string(),
        allowed,
        "Levels are heights above the tank bottom, in metres.",
    );
}

fn apart(reading: &Reading<'_>, tanks: &[Tank]) {
    for (index, tank) in tanks.iter().enumerate() {
        for (other_index, other) in tanks.iter().enumerate().take(index) {
            let distance = (tank.x_m - other.x_m).hypot(tank.y_m - other.y_m);
            let least = 0.5 * (tank.diameter_m + other.diameter_m);
            if distance < least {
                let found = format!("an axis {distance:.3} m from that of \"{}\"", other.name);
                let allowed =
                    format!("at least {least} m, or the tanks overlap (tanks[{other_index}])");
                reading.report(
                    &format!("tanks[{index}].x_m"),
                    found,
                    allowed,
                    "Check axes and diameters.",
                );
            }
        }
    }
}

fn stage_levels(reading: &Reading<'_>, stages: &[Stage], tank: &Tank) {
    for (index, stage) in stages.iter().enumerate() {
        above_shell(reading, &format!("stages[{index}].to_level_m"), stage.to_level_m, tank);
    }
}

fn stage_times(reading: &Reading<'_>, stages: &[Stage]) {
    for (index, stage) in stages.iter().enumerate() {
        let path = |key: &str| format!("stages[{index}].{key}");
        if stage.end.time_s <= stage.start.time_s {
            later(reading, &path("end"), &stage.end, "after the start", &stage.start);
        }
        if stage.hold_until.time_s < stage.end.time_s {
            later(
                reading,
                &path("hold_until"),
                &stage.hold_until,
                "not before the end",
                &stage.end,
            );
        }
        let Some(before) = index.checked_sub(1).and_then(|before| stages.get(before)) else {
            continue;
        };
        let busy_until = if before.hold_until.time_s > before.end.time_s {
            &before.hold_until
        } else {
            &before.end
        };
        if stage.start.time_s < busy_until.time_s {
            let rule = format!("not before the stage \"{}\" is over", before.name);
            later(reading, &path("start"), &stage.start, &rule, busy_until);
        }
    }
}

fn later(reading: &Reading<'_>, path: &str, found: &InstantText, rule: &str, than: &InstantText) {
    let allowed = format!("{rule} ({})", than.text);
    reading.report(path, quoted(&found.text), allowed, "Look at dates and UTC offsets.");
}

fn liquids(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    let Some(liquids) = parts.liquids else { return };
    for (index, pair) in liquids.windows(2).enumerate() {
        let [before, after] = [&pair[0].from, &pair[1].from];
        if after.time_s <= before.time_s {
            later(
                reading,
                &format!("liquids[{}].from", index + 1),
                after,
                "after the liquid before",
                before,
            );
        }
    }
    let first_rise = parts.stages.and_then(|stages| stages.first());
    if let (Some(liquid), Some(stage)) = (liquids.first(), first_rise)
        && liquid.from.time_s > stage.start.time_s
    {
        earlier(reading, "liquids[0].from", &liquid.from, "the first stage starts", &stage.start);
    }
}

/// The instants that begin the history.
fn starts(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    let Some(stages) = parts.stages else { return };
    if let (Some(since), Some(first)) = (parts.dead_load_since, stages.first())
        && since.time_s > first.start.time_s
    {
        earlier(reading, "dead_load_since", since, "the first stage starts", &first.start);
    }
    if let (Some(baseline), Some(last)) = (parts.baseline, stages.last())
        && baseline.time_s > last.hold_until.time_s
    {
        earlier(reading, "baseline", baseline, "the last stage is over", &last.hold_until);
    }
}

fn earlier(
    reading: &Reading<'_>,
    path: &str,
    found: &InstantText,
    event: &str,
    than: &InstantText,
) {
    let allowed = format!("not after {event} ({})", than.text);
    reading.report(path, quoted(&found.text), allowed, "Look at dates and UTC offsets.");
}
