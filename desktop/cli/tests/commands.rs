//! The commands on the demo: what they say, what they write, how they end.

mod program;

use program::{Ran, demo, readings, run, small_site, text};
use serde_json::Value;

fn site() -> String {
    text(&demo().join("site.json"))
}

/// `compare` on a demo run with further arguments.
fn compare(of: &str, more: &[&str]) -> Ran {
    let files = readings(of);
    let site = site();
    let mut arguments = vec!["compare", site.as_str(), "--readings"];
    arguments.extend(files.iter().map(String::as_str));
    arguments.extend(more);
    run(&arguments)
}

fn instrument<'a>(whole: &'a Value, id: &str) -> &'a Value {
    let all = whole["instruments"].as_array().expect("instruments");
    all.iter().find(|one| one["id"] == id).unwrap_or_else(|| panic!("no {id}"))
}

fn seconds(text: &str) -> i64 {
    text.parse::<jiff::Timestamp>().expect("an instant").as_second()
}

/// Ids of the instruments whose highest trigger is one of these.
fn reached<'a>(whole: &'a Value, triggers: &[&str]) -> Vec<&'a str> {
    let all = whole["instruments"].as_array().expect("instruments");
    all.iter()
        .filter(|one| triggers.contains(&one["highest_trigger"].as_str().expect("a trigger")))
        .map(|one| one["id"].as_str().expect("an id"))
        .collect()
}

/// First change of any instrument to a trigger, Unix s.
fn first(whole: &Value, trigger: &str) -> Option<i64> {
    let all = whole["instruments"].as_array().expect("instruments");
    let changes = all.iter().flat_map(|one| one["trigger_changes"].as_array().expect("changes"));
    changes.filter(|one| one["to"] == trigger).filter_map(|one| one["time_s"].as_i64()).min()
}

#[test]
fn the_good_run_is_equipment_and_no_ground() {
    let ran = compare("run-good", &["--json"]);
    assert_eq!(ran.status, 11, "{}", ran.err);
    let whole = ran.json();
    assert_eq!(whole["highest_trigger"], "Watch");
    assert_eq!(reached(&whole, &["Review", "Stop"]), Vec::<&str>::new());
    for (id, state, from) in
        [("PM1", "frozen", "2026-04-08T03:00:00Z"), ("SP1", "out of range", "2026-04-14T00:00:00Z")]
    {
        let faults = instrument(&whole, id)["equipment_faults"].as_array().unwrap();
        let last = faults.last().unwrap_or_else(|| panic!("{id} has no fault"));
        assert_eq!(last["data_state"], state, "{last}");
        assert!(last["to_s"].is_null(), "goes on: {last}");
        let late_s = last["from_s"].as_i64().unwrap() - seconds(from);
        assert!((0..24 * 3600).contains(&late_s), "{id} is found {late_s} s after it began");
        let told = whole["report"]["faults"].as_array().unwrap();
        assert!(told.iter().any(|fault| fault["id"] == id), "{id} among the faults of the report");
    }
    the_frozen_master_gauge_is_found_and_the_other_used(&whole);
}

/// 29 Apr 20:30 to 30 Apr 02:15 UTC: LG1 stands still during a rise, LG2 goes on.
fn the_frozen_master_gauge_is_found_and_the_other_used(whole: &Value) {
    let faults = instrument(whole, "LG1")["equipment_faults"].as_array().unwrap();
    let (begins, ends) = (seconds("2026-04-29T20:30:00Z"), seconds("2026-04-30T02:15:00Z"));
    let frozen = faults
        .iter()
        .find(|one| one["data_state"] == "frozen" && one["from_s"].as_i64().unwrap() >= begins)
        .unwrap_or_else(|| panic!("no frozen spell of LG1: {faults:?}"));
    let (from_s, to_s) = (frozen["from_s"].as_i64().unwrap(), frozen["to_s"].as_i64().unwrap());
    assert!(from_s - begins <= 2 * 3600 && to_s <= ends + 1800, "{frozen}");
    let level_of = |id: &str, time_s: i64| {
        let all = instrument(whole, id)["readings"].as_array().unwrap();
        let row = all.iter().find(|row| row["time_s"] == time_s)?;
        Some((row["value"].as_f64()?, row["liquid_level_m"].as_f64()?))
    };
    let (mut compared, mut apart_m) = (0, 0.0_f64);
    for time_s in (from_s..to_s).step_by(900) {
        if let (Some((second, used)), Some((master, _))) =
            (level_of("LG2", time_s), level_of("LG1", time_s))
        {
            assert_eq!(used, second, "LG2 is in use at {time_s}");
            apart_m = (used - master).abs().max(apart_m);
            compared += 1;
        }
    }
    assert!(compared >= 10, "{compared} instants of the spell compared");
    assert!(apart_m > 0.1, "the frozen gauge is {apart_m} m behind at the end");
}

/// Instruments on the east edge, where the wedge shears.
fn is_east(id: &str) -> bool {
    ["PE", "PF", "ME"].iter().any(|of| id.starts_with(of))
        || ["PO1", "SC3", "SV04", "SV05", "SV06", "SP2", "SO1"].contains(&id)
}

#[test]
fn the_bad_run_is_the_east_edge_and_warns_for_hours() {
    let ran = compare("run-bad", &["--json"]);
    assert_eq!(ran.status, 13, "{}", ran.err);
    let whole = ran.json();
    let (review, stop) = (first(&whole, "Review").unwrap(), first(&whole, "Stop").unwrap());
    let warning_h = (stop - review) as f64 / 3600.0;
    assert!((6.0..=40.0).contains(&warning_h), "{warning_h} h between Review and Stop");
    assert!(review > seconds("2026-05-17T03:00:00Z"), "not before anything happens");
    let above_watch = reached(&whole, &["Review", "Stop"]);
    assert!(above_watch.len() >= 5, "{above_watch:?}");
    let raised = reached(&whole, &["Watch", "Review", "Stop"]);
    assert!(raised.iter().all(|id| is_east(id)), "the sound side stays Normal: {raised:?}");
    for id in ["PE1", "PE2", "SC3"] {
        assert_eq!(instrument(&whole, id)["highest_trigger"], "Stop", "{id}");
    }
    let told = whole["report"]["headline"].to_string();
    assert!(
        told.contains("Review first at SC3") && told.contains("before Stop first at"),
        "{told}"
    );
}

/// A file of readings that is quickly compared.
fn march() -> String {
    text(&demo().join("run-good/logger-a-2026-03.csv"))
}

#[test]
fn the_table_on_a_pipe_has_no_colour_and_the_cautions() {
    let folder = tempfile::tempdir().unwrap();
    let ran = run(&["compare", &small_site(folder.path()), "--readings", &march()]);
    assert!([0, 10, 11].contains(&ran.status), "{} {}", ran.status, ran.err);
    assert!(!ran.out.contains('\u{1b}'), "no escape code into a pipe");
    for words in [
        "This site, its people and all its numbers are invented.",
        "PE1",
        "Advice only.",
        "Not a safety-rated trip.",
        "0 fields or rows refused",
    ] {
        assert!(ran.out.contains(words), "no \"{words}\" in {}", ran.out);
    }
}

#[test]
fn check_finds_nothing_wrong_with_the_demo() {
    let ran = run(&["check", &site()]);
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(ran.out.contains("52 instruments. Nothing to put right."), "{}", ran.out);
    let json = run(&["check", &site(), "--json"]).json();
    assert_eq!(json["problems"], Value::Array(Vec::new()));
}

#[test]
fn check_lists_every_problem_of_a_wrong_file_by_line() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("site.json");
    let good = std::fs::read_to_string(demo().join("site.json")).unwrap();
    let line_of = |words: &str| {
        1 + good.lines().position(|line| line.contains(words)).unwrap_or_else(|| panic!("{words}"))
    };
    let (table, weight) = ("\"water_table_m\": 1.0", "\"unit_weight_kn_m3\": 9.81");
    let wrong = good.replacen(table, "\"water_tabel_m\": 1.0", 1).replacen(
        weight,
        "\"unit_weight_kn_m3\": \"heavy\"",
        1,
    );
    std::fs::write(&file, wrong).unwrap();
    let ran = run(&["check", &text(&file)]);
    assert_eq!(ran.status, 2);
    for (words, line) in [("water_tabel_m", line_of(table)), ("heavy", line_of(weight))] {
        let told = ran.out.lines().find(|told| told.contains(words));
        let told = told.unwrap_or_else(|| panic!("{words} in {}", ran.out));
        assert!(told.contains(&line.to_string()), "line {line} in {told}");
    }
    let missing = run(&["check", &text(&folder.path().join("none.json"))]);
    assert_eq!(missing.status, 2);
    assert!((missing.out + &missing.err).contains("none.json"));
}

/// The last line of a hand-check sheet is what `compare` expects at that time.
#[test]
fn the_sheet_ends_with_what_compare_expects() {
    let files: Vec<String> =
        readings("run-bad").into_iter().filter(|file| file.contains("-03.")).collect();
    let site = site();
    let with_readings = |arguments: &[&str]| {
        let mut all: Vec<&str> = arguments.to_vec();
        all.push("--readings");
        all.extend(files.iter().map(String::as_str));
        run(&all)
    };
    let whole = with_readings(&["compare", &site, "--json"]).json();
    for (id, at) in [("PE1", "2026-03-24T18:00:00Z"), ("SP2", "2026-03-24T04:30:00Z")] {
        let readings = instrument(&whole, id)["readings"].as_array().unwrap();
        let row = readings.iter().find(|row| row["time_s"] == seconds(at)).expect("that reading");
        let expected = row["expected"].as_f64().expect("an expectation");
        let sheet = with_readings(&["working", &site, "--instrument", id, "--at", at, "--json"]);
        assert_eq!(sheet.status, 0, "{}", sheet.err);
        let sheet = sheet.json();
        let last = sheet["lines"].as_array().unwrap().last().unwrap();
        // Plates are read in mm, the sheet is in m.
        let scale = if last["unit"] == "m" { 1000.0 } else { 1.0 };
        let worked = last["value"].as_f64().unwrap() * scale;
        assert!((worked - expected).abs() <= 1e-9 * expected.abs(), "{id}: {worked} {expected}");
        assert_eq!(sheet["cautions"].as_array().unwrap().len(), 6);
    }
}

#[test]
fn working_says_what_it_does_not_know() {
    let site = site();
    let ran = run(&["working", &site, "--instrument", "PX9", "--at", "2026-05-17T18:00Z"]);
    assert_eq!(ran.status, 2);
    assert!(ran.err.contains("no instrument \"PX9\"") && ran.err.contains("PE1"), "{}", ran.err);
    let ran = run(&["working", &site, "--instrument", "PE1", "--at", "yesterday"]);
    assert_eq!(ran.status, 2);
    assert!(ran.err.contains("\"yesterday\" is no moment"), "{}", ran.err);
    let by_plan = run(&["working", &site, "--instrument", "PE1", "--at", "2026-05-17 21:00"]);
    assert_eq!(by_plan.status, 0, "{}", by_plan.err);
    assert!(by_plan.out.contains("Advice only."), "cautions below the sheet");
}

#[test]
fn predict_follows_the_plan() {
    let ran = run(&["predict", &site(), "--json"]);
    assert_eq!(ran.status, 0, "{}", ran.err);
    let json = ran.json();
    let moments = json["moments"].as_array().unwrap();
    let at = |name: &str| {
        moments.iter().position(|one| one["name"] == name).unwrap_or_else(|| panic!("no {name}"))
    };
    let (reached, held) = (at("Rise 6, level reached"), at("Rise 6, end of hold"));
    assert_eq!(moments[reached]["liquid_level_m"], 14.0);
    let of = |id: &str, moment: usize, key: &str| {
        let all = json["instruments"].as_array().unwrap();
        let one = all.iter().find(|one| one["id"] == id).unwrap_or_else(|| panic!("no {id}"));
        one["bands"][moment][key].as_f64().unwrap_or_else(|| panic!("no {key} in {one}"))
    };
    assert!(of("PE1", held, "likely") < of("PE1", reached, "likely"), "pressure drains in a hold");
    assert!(of("SC1", held, "likely") > of("SC1", reached, "likely"), "and the ground settles");
    for id in ["PE1", "SC1"] {
        assert!(of(id, held, "low") < of(id, held, "likely"));
        assert!(of(id, held, "likely") < of(id, held, "high"));
    }
    let table = run(&["predict", &site()]);
    assert!(table.out.contains("Rise 6, end of hold") && table.out.contains("Advice only."));
    assert!(!table.out.contains('\u{1b}'));
}

#[test]
fn out_holds_a_report_that_needs_nothing_else() {
    let folder = tempfile::tempdir().unwrap();
    let (site, files) = (small_site(folder.path()), march());
    let out = folder.path().join("new/report");
    let ran = run(&["compare", &site, "--out", &text(&out), "--readings", &files]);
    assert!([0, 10, 11].contains(&ran.status), "{} {}", ran.status, ran.err);
    assert!(ran.out.contains("report.html"), "says where: {}", ran.out);
    let html = std::fs::read_to_string(out.join("report.html")).unwrap();
    for outside in ["http://", "https://", "<script", "<link", "src=\"", "@import"] {
        let found = html.match_indices(outside).map(|(at, _)| &html[at..]);
        let named = |rest: &str| rest.starts_with("http://www.w3.org/");
        let embedded = |rest: &str| rest.starts_with("src=\"data:");
        let outside: Vec<&str> = found
            .filter(|rest| !named(rest) && !embedded(rest))
            .map(|rest| rest.get(..60).unwrap_or(rest))
            .collect();
        assert!(outside.is_empty(), "{outside:?}");
    }
    for words in ["PE1", "Advice only.", "invented"] {
        assert!(html.contains(words), "{words}");
    }
    let whole: Value =
        serde_json::from_str(&std::fs::read_to_string(out.join("comparison.json")).unwrap())
            .unwrap();
    assert_eq!(whole["instruments"].as_array().unwrap().len(), 3);
    let names: Vec<String> = std::fs::read_dir(&out)
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .collect();
    for name in ["PE1-time.svg", "PE1-time.png", "PE1-pressure.svg", "LG1-time.png"] {
        assert!(names.iter().any(|have| have == name), "{name} among {names:?}");
    }
    let svg = std::fs::read_to_string(out.join("PE1-time.svg")).unwrap();
    assert!(svg.starts_with("<svg") || svg.starts_with("<?xml"), "{}", &svg[..80]);
    let png = std::fs::read(out.join("PE1-time.png")).unwrap();
    assert!(png.starts_with(b"\x89PNG"));
}

#[test]
fn what_cannot_be_read_is_named_and_ends_with_two() {
    let site = site();
    let ran = run(&["compare", &site, "--readings", "no-such-file.csv"]);
    assert_eq!((ran.status, ran.out.as_str()), (2, ""));
    assert!(ran.err.contains("no-such-file.csv"), "{}", ran.err);
    let ran = run(&["compare", "no-such-site.json", "--readings", "x.csv"]);
    assert_eq!(ran.status, 2);
    assert!(ran.err.contains("no-such-site.json"), "{}", ran.err);
    assert_eq!(run(&["compare", &site]).status, 2, "readings must be given");
    assert_eq!(run(&["pump"]).status, 2, "there is no such command");
}
