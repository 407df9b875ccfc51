//! What must hold between the entries of a site file.

mod ground;
pub(crate) mod instruments;
mod load;
mod readings;

use super::model::SiteParts;
use super::reader::Reading;
use crate::time;

/// Checks every pair of sections of which both could be read, and notes the others.
pub(super) fn between_sections(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    note_unread(reading, parts);
    if let Some(site) = parts.site
        && time::zone(&site.time_zone).is_none()
    {
        zone_refused(
            reading,
            "site.time_zone",
            &site.time_zone,
            "an IANA zone name such as \"Asia/Makassar\"",
        );
    }
    ground::check(reading, parts);
    load::check(reading, parts);
    instruments::check(reading, parts);
    readings::check(reading, parts);
}

fn note_unread(reading: &Reading<'_>, parts: &SiteParts<'_>) {
    let unread = [
        ("format", parts.format.is_none()),
        ("site", parts.site.is_none()),
        ("water", parts.water.is_none()),
        ("layers", parts.layers.is_none()),
        ("base", parts.base.is_none()),
        ("drains", parts.drains.is_none()),
        ("tanks", parts.tanks.is_none()),
        ("liquids", parts.liquids.is_none()),
        ("dead_load_since", parts.dead_load_since.is_none()),
        ("baseline", parts.baseline.is_none()),
        ("stages", parts.stages.is_none()),
        ("band", parts.band.is_none()),
        ("instruments", parts.instruments.is_none()),
        ("limit_defaults", parts.limit_defaults.is_none()),
        ("readings", parts.readings.is_none()),
    ];
    reading.note_not_cross_checked(
        unread.iter().filter(|(_, missing)| *missing).map(|&(name, _)| name),
    );
}

fn zone_refused(reading: &Reading<'_>, path: &str, given: &str, allowed: &str) {
    let remedy =
        time::near_zone(given).map_or_else(String::new, |near| format!("Did you mean \"{near}\"?"));
    reading.report(path, quoted(given), allowed, remedy);
}

fn quoted(text: &str) -> String {
    format!("\"{text}\"")
}

/// Reports every name that an earlier entry of the same list has.
fn unique<'n>(reading: &Reading<'_>, list: &str, key: &str, names: impl Iterator<Item = &'n str>) {
    let names: Vec<_> = names.collect();
    for (index, name) in names.iter().enumerate() {
        if let Some(first) = names[..index].iter().position(|earlier| earlier == name) {
            let allowed = format!("a name of its own; {list}[{first}] has this one");
            let remedy = "Messages and readings would not tell the two apart.";
            reading.report(&format!("{list}[{index}].{key}"), quoted(name), allowed, remedy);
        }
    }
}
