//! The words of a comparison: what an instrument is, where it is, which stage it is, what a trigger
//! asks for. Used by every screen and report, so that the same thing has one name everywhere.

use crate::site::{Instrument, InstrumentKind, InstrumentUnit, SiteFile, Stage};
use brimstead_core::watch::Trigger;

/// A kind of instrument.
#[must_use]
pub fn kind_word(kind: InstrumentKind) -> &'static str {
    match kind {
        InstrumentKind::Piezometer => "piezometer",
        InstrumentKind::SettlementPlate => "settlement plate",
        InstrumentKind::SettlementCell => "settlement cell",
        InstrumentKind::Magnet => "magnet",
        InstrumentKind::SurveyPoint => "survey point",
        InstrumentKind::LevelGauge => "level gauge",
    }
}

/// What it measures.
#[must_use]
pub fn quantity_word(kind: InstrumentKind) -> &'static str {
    match kind {
        InstrumentKind::Piezometer => "pore pressure",
        InstrumentKind::LevelGauge => "liquid level",
        _ => "settlement",
    }
}

/// Its unit as written.
#[must_use]
pub fn unit_word(unit: InstrumentUnit) -> &'static str {
    match unit {
        InstrumentUnit::Kpa => "kPa",
        InstrumentUnit::Metre => "m",
        InstrumentUnit::Millimetre => "mm",
    }
}

/// Decimals its values are written with.
#[must_use]
pub fn decimals(unit: InstrumentUnit) -> usize {
    match unit {
        InstrumentUnit::Kpa => 1,
        InstrumentUnit::Metre => 3,
        InstrumentUnit::Millimetre => 0,
    }
}

/// Where it is: part of the tank, direction, depth, layer.
#[must_use]
pub fn place_words(site: &SiteFile, instrument: &Instrument) -> String {
    let mut words = match site.tanks.first() {
        Some(tank) => {
            let (east_m, north_m) = (instrument.x_m - tank.x_m, instrument.y_m - tank.y_m);
            let share = 2.0 * east_m.hypot(north_m) / tank.diameter_m;
            let part = match share {
                share if share < 0.15 => return with_depth("centre".to_owned(), site, instrument),
                share if share < 0.7 => "mid-radius",
                share if share < 1.2 => "edge",
                _ => "outside",
            };
            format!("{} {part}", direction(east_m, north_m))
        }
        None => String::new(),
    };
    words = with_depth(words, site, instrument);
    words
}

fn with_depth(words: String, site: &SiteFile, instrument: &Instrument) -> String {
    if instrument.depth_m <= 0.0 {
        return words;
    }
    let mut base_m = 0.0;
    let layer = site.layers.iter().find(|layer| {
        base_m += layer.thickness_m;
        instrument.depth_m < base_m
    });
    let layer = layer.map_or(String::new(), |layer| format!(", {}", layer.name));
    format!("{words}, {} m deep{layer}", instrument.depth_m)
}

/// The nearest of eight winds.
fn direction(east_m: f64, north_m: f64) -> &'static str {
    const WINDS: [&str; 8] =
        ["north", "north-east", "east", "south-east", "south", "south-west", "west", "north-west"];
    let eighth = (east_m.atan2(north_m) / std::f64::consts::FRAC_PI_4).round() as i64;
    WINDS[eighth.rem_euclid(8) as usize]
}

/// Where an instant lies in the plan.
#[derive(Debug, Clone, PartialEq)]
pub struct StageAt<'a> {
    /// The stage; none before the first.
    pub stage: Option<&'a Stage>,
    /// "rise", "lowering", "hold", "before the first stage" or "after the last stage".
    pub part: &'static str,
    /// Hours since that part began.
    pub hours: f64,
    /// Level of the next hold, m.
    pub next_level_m: Option<f64>,
}

impl StageAt<'_> {
    /// "Rise 6, hold".
    #[must_use]
    pub fn words(&self) -> String {
        match self.stage {
            Some(stage) => format!("{}, {}", stage.name, self.part),
            None => self.part.to_owned(),
        }
    }
}

/// The stage of the plan at an instant.
#[must_use]
pub fn stage_at(site: &SiteFile, time_s: i64) -> StageAt<'_> {
    let hours = |since_s: i64| (time_s - since_s) as f64 / 3600.0;
    let begun = site.stages.iter().rposition(|stage| stage.start.time_s <= time_s);
    let Some(place) = begun else {
        return StageAt {
            stage: None,
            part: "before the first stage",
            hours: hours(site.baseline.time_s),
            next_level_m: site.stages.first().map(|stage| stage.to_level_m),
        };
    };
    let stage = &site.stages[place];
    let from_m = place.checked_sub(1).map_or(0.0, |before| site.stages[before].to_level_m);
    if time_s < stage.end.time_s {
        let part = if stage.to_level_m < from_m { "lowering" } else { "rise" };
        let hours = hours(stage.start.time_s);
        StageAt { stage: Some(stage), part, hours, next_level_m: Some(stage.to_level_m) }
    } else {
        let last = place + 1 == site.stages.len() && time_s > stage.hold_until.time_s;
        StageAt {
            stage: Some(stage),
            part: if last { "after the last stage" } else { "hold" },
            hours: hours(stage.end.time_s),
            next_level_m: site.stages.get(place + 1).map(|next| next.to_level_m),
        }
    }
}

/// The level of the plan at an instant, m.
#[must_use]
pub fn planned_level_m(site: &SiteFile, time_s: i64) -> f64 {
    let mut level_m = 0.0;
    for stage in &site.stages {
        if time_s < stage.start.time_s {
            break;
        }
        let span_s = (stage.end.time_s - stage.start.time_s).max(1) as f64;
        let share = ((time_s - stage.start.time_s) as f64 / span_s).clamp(0.0, 1.0);
        level_m += share * (stage.to_level_m - level_m);
    }
    level_m
}

/// What the site's plan asks for at a trigger.
#[must_use]
pub fn plan_words(trigger: Trigger) -> &'static str {
    match trigger {
        Trigger::Normal => "Go on by the plan. The release of the next rise is a person's.",
        Trigger::Watch => {
            "Site plan for Watch: re-read, check the instrument and its neighbours before the next rise."
        }
        Trigger::Review => {
            "Site plan for Review: stop raising, read faster, call the responsible engineer, who decides in writing."
        }
        Trigger::Stop => {
            "Site plan for Stop: stop filling, clear the area, act by the site's plan; the responsible engineer and the owner decide."
        }
    }
}

/// A list in words: "PE1, PE2 and PF1".
#[must_use]
pub fn joined(names: &[&str]) -> String {
    match names {
        [] => String::new(),
        [one] => (*one).to_owned(),
        [first @ .., last] => format!("{} and {last}", first.join(", ")),
    }
}
