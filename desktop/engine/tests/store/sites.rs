//! The site file in versions.

use crate::support::{Bench, NOON_S, SITE, at, bench, refused, site_with};
use brimstead_engine::store::Store;
use serde_json::json;

#[test]
fn the_newest_site_file_is_in_force_and_older_ones_are_kept() {
    let Bench { mut store, .. } = bench();
    let second = site_with(|site| site["layers"][1]["cv_m2_per_year"] = json!(1.5));
    store.add_site_version(&second, &at(NOON_S + 60)).expect("version");
    let in_force = |time_s| store.site_at(time_s).expect("query").map(|entry| entry.what);
    assert_eq!(in_force(NOON_S - 1), None);
    assert_eq!(in_force(NOON_S + 59).as_deref(), Some(SITE));
    assert_eq!(in_force(NOON_S + 60), Some(second));
    assert_eq!(store.site_versions().expect("versions").len(), 2);
}

#[test]
fn a_site_file_with_problems_is_refused_with_all_of_them() {
    let Bench { mut store, .. } = bench();
    let bad = site_with(|site| {
        site["layers"][0]["thickness_m"] = json!(-2.0);
        site["tanks"][0]["diameter_m"] = json!("wide");
    });
    let message = refused(store.add_site_version(&bad, &at(NOON_S)), "site-problems");
    assert!(message.contains("thickness_m") && message.contains("diameter_m"), "{message}");
    assert_eq!(store.site_versions().expect("versions").len(), 1);
}

#[test]
fn a_site_file_does_not_change_limits_on_the_way() {
    let Bench { mut store, .. } = bench();
    let own = site_with(|site| {
        site["instruments"][2]["limits"][1]["rule"]["applied_pressure_curve"][1][1] = json!(230.0);
    });
    let message = refused(store.add_site_version(&own, &at(NOON_S)), "limits-in-site");
    assert!(message.contains("P5"), "{message}");
    let by_kind = site_with(|site| site["limit_defaults"]["piezometer"]["hysteresis"] = json!(0.1));
    let message = refused(store.add_site_version(&by_kind, &at(NOON_S)), "limits-in-site");
    assert!(message.contains("P4"), "{message}");
    let unit = site_with(|site| site["instruments"][3]["unit"] = json!("m"));
    let message = refused(store.add_site_version(&unit, &at(NOON_S)), "limits-in-site");
    assert!(message.contains("S1") && message.contains("mm"), "{message}");
}

#[test]
fn an_instrument_can_join_and_leave_and_its_history_stays() {
    let Bench { mut store, .. } = bench();
    let joined = site_with(|site| {
        let mut plate = site["instruments"][3].clone();
        plate["id"] = json!("S2");
        site["instruments"].as_array_mut().expect("list").push(plate);
    });
    store.add_site_version(&joined, &at(NOON_S)).expect("joins");
    store.inhibit("S2", NOON_S + 60, &at(NOON_S)).expect("known now");
    store.add_site_version(SITE, &at(NOON_S)).expect("leaves");
    assert!(store.life_of("S2").expect("still known").is_empty());
}
