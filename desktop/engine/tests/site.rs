//! The site file: what is read, what is refused and in which words.

use brimstead_engine::site::{self, Compressibility, SiteProblems};

const GOOD: &str = include_str!("fixtures/site.json");
const SCHEMA: &str = include_str!("../site.schema.json");

fn refused(text: &str) -> SiteProblems {
    site::parse(text, "site.json").expect_err("the site file must be refused")
}

/// The problems of the good file after one change.
fn after(from: &str, to: &str) -> SiteProblems {
    assert!(GOOD.contains(from), "the good file holds {from}");
    refused(&GOOD.replacen(from, to, 1))
}

/// The only problem after one change, as it is shown, with its line.
fn only(from: &str, to: &str) -> String {
    let problems = after(from, to);
    assert_eq!(problems.problems.len(), 1, "one change, one problem: {problems}");
    format!("{}: {}", problems.problems[0].line, problems.problems[0])
}

#[test]
fn a_good_file_reads_and_writes_back_to_the_same_content() {
    let site = site::parse(GOOD, "site.json").unwrap_or_else(|problems| panic!("{problems}"));
    assert_eq!(site.layers.len(), 3);
    assert_eq!(
        site.layers[1].compressibility,
        Compressibility::Index { void_ratio: 2.1, cc: 0.9, cr: 0.1 }
    );
    // 2031-03-01T06:00+08:00 is 2031-02-28T22:00Z; checked with `date -u -d @1930082400`.
    assert_eq!(site.baseline.time_s, 1_930_082_400);
    let written = site.to_json().unwrap();
    let as_given: serde_json::Value = serde_json::from_str(GOOD).unwrap();
    let as_written: serde_json::Value = serde_json::from_str(&written).unwrap();
    assert_eq!(as_written, as_given);
    assert_eq!(site::parse(&written, "again").unwrap(), site);
}

#[test]
fn the_published_schema_comes_from_the_declarations() {
    let published: serde_json::Value = serde_json::from_str(SCHEMA).unwrap();
    assert_eq!(published, site::schema(), "write it anew with the example site_schema");
}

#[test]
fn the_schema_states_ranges_and_required_keys() {
    let schema = site::schema();
    let layer = &schema["$defs"]["Layer"];
    assert_eq!(layer["properties"]["thickness_m"]["minimum"], 0.01);
    assert_eq!(layer["additionalProperties"], false);
    assert!(layer["required"].as_array().unwrap().contains(&"cv_m2_per_year".into()));
    let water = &schema["$defs"]["Water"]["required"];
    assert!(!water.as_array().unwrap().contains(&"profile".into()), "profile may be left out");
    assert_eq!(schema["$defs"]["BaseStiffness"]["oneOf"][0]["const"], "rigid");
}

#[test]
fn the_core_gets_its_own_types() {
    let site = site::parse(GOOD, "site.json").unwrap();
    let ground = site.ground().unwrap();
    assert_eq!(ground.layers[1].name.as_str(), "Soft clay");
    // 2 m2 in a Julian year of 365.25 days of 86400 s.
    assert_eq!(ground.layers[1].cv_m2_per_s, 2.0 / 31_557_600.0);
    let tanks = site.tanks().unwrap();
    assert_eq!(tanks.len(), 2);
    assert_eq!(tanks[1].axis.x_m, 70.0);
}

#[test]
fn a_name_changed_to_one_too_long_for_the_core_is_refused() {
    let mut site = site::parse(GOOD, "site.json").unwrap();
    site.layers[0].name = "x".repeat(33);
    let message = site.ground().unwrap_err().to_string();
    assert!(message.contains("has 33 bytes; at most 32 fit"), "{message}");
}

#[test]
fn a_number_outside_its_range_names_value_range_and_remedy() {
    assert_eq!(
        only("\"thickness_m\": 14.0", "\"thickness_m\": -14.0"),
        "32: layers[1].thickness_m: found -14.0; allowed: layer thickness from 0.01 to 500 m. \
         Give thicknesses, not depths, from ground level down."
    );
}

#[test]
fn every_problem_is_listed_at_once_by_line() {
    let text = GOOD
        .replace("\"thickness_m\": 14.0", "\"thickness_m\": 0")
        .replace("\"cc\": 0.9", "\"cc\": \"0,9\"")
        .replace("\"smear_ratio\": 3.0", "\"smear_ratio\": 0.5")
        .replace(
            "\"time_zone\": \"Asia/Makassar\",\n    \"note\"",
            "\"time_zone\": \"Asia/Makasar\",\n    \"note\"",
        );
    let problems = refused(&text);
    let paths: Vec<_> = problems.problems.iter().map(|problem| problem.path.as_str()).collect();
    assert_eq!(
        paths,
        [
            "site.time_zone",
            "layers[1].thickness_m",
            "layers[1].compressibility.cc",
            "drains.smear_ratio"
        ]
    );
    assert_eq!(problems.not_cross_checked, ["layers"], "a layer could not be read at all");
    let shown = problems.to_string();
    assert!(shown.contains("4 problems"), "{shown}");
    assert!(shown.contains("site.json:6:18: site.time_zone: found \"Asia/Makasar\""), "{shown}");
    assert!(shown.contains("Did you mean \"Asia/Makassar\"?"), "{shown}");
    assert!(shown.contains("Give the number without quotes and with a decimal point."), "{shown}");
}

#[test]
fn a_misspelt_key_is_one_problem_with_the_key_that_was_meant() {
    let message = only("\"thickness_m\": 14.0", "\"thicknes_m\": 14.0");
    assert!(
        message.starts_with(
            "32: layers[1].thicknes_m: found unknown key \"thicknes_m\"; allowed: name,"
        ),
        "{message}"
    );
    assert!(message.ends_with("Did you mean \"thickness_m\"?"), "{message}");
}

#[test]
fn a_missing_key_is_named_with_what_belongs_there() {
    assert_eq!(
        only("\"poisson_drained\": 0.25,", ""),
        "30: layers[1].poisson_drained: found nothing; allowed: Poisson's ratio from 0 to 0.5. \
         Add the key \"poisson_drained\"."
    );
}

#[test]
fn a_key_given_twice_is_refused() {
    let message = only("\"cc\": 0.9,", "\"cc\": 0.9, \"cc\": 0.7,");
    assert!(message.contains("key \"cc\" again") && message.contains("keep one"), "{message}");
}

#[test]
fn two_ways_of_giving_one_thing_are_refused() {
    let message =
        only("\"void_ratio\": 2.1,", "\"void_ratio\": 2.1, \"constrained_modulus_kpa\": 500.0,");
    assert!(message.contains("give one way only"), "{message}");
}

#[test]
fn no_known_way_of_giving_a_thing_lists_the_ways() {
    let message = only("{ \"pop_kpa\": 15.0 }", "{ \"pop\": 15.0 }");
    assert!(
        message.contains("allowed: {ocr} or {pop_kpa} or {value_kpa}. Did you mean"),
        "{message}"
    );
}

#[test]
fn a_wrong_word_is_answered_with_the_words() {
    assert_eq!(
        only("\"drainage\": \"drained\"", "\"drainage\": \"drain\""),
        "69: base.drainage: found \"drain\"; allowed: \"drained\", \"closed\". Did you mean \"drained\"?"
    );
    let message = only("\"rigid\"", "\"rigit\"");
    assert!(
        message.ends_with("allowed: \"rigid\" or {young_kpa, poisson}. Did you mean \"rigid\"?"),
        "{message}"
    );
}

#[test]
fn an_instant_without_offset_is_refused() {
    let message = only(
        "\"baseline\": \"2031-03-01T06:00:00+08:00\"",
        "\"baseline\": \"2031-03-01T06:00:00\"",
    );
    assert!(message.contains("an instant without offset is ambiguous"), "{message}");
}

#[test]
fn another_format_version_is_refused() {
    let message = only("brimstead-site/1", "brimstead-site/2");
    assert!(message.contains("allowed: \"brimstead-site/1\""), "{message}");
}

#[test]
fn names_must_differ_and_fit_the_logger() {
    let message = only("\"name\": \"Dense sand\"", "\"name\": \"Soft clay\"");
    assert!(message.contains("a name of its own; layers[1] has this one"), "{message}");
    let long = format!("\"name\": \"{}\"", "s".repeat(33));
    let message = only("\"name\": \"Dense sand\"", &long);
    assert!(message.contains("text of 1 to 32 bytes. It has 33 bytes"), "{message}");
}

#[test]
fn a_submerged_unit_weight_is_noticed() {
    let message =
        only("\"unit_weight_below_water_kn_m3\": 15.8", "\"unit_weight_below_water_kn_m3\": 9.5");
    assert!(message.contains("bulk (saturated) unit weight, not the submerged one"), "{message}");
}

#[test]
fn saturated_soil_is_not_lighter_than_the_same_soil_above_water() {
    let message =
        only("\"unit_weight_below_water_kn_m3\": 15.8", "\"unit_weight_below_water_kn_m3\": 15.0");
    assert!(message.contains("not less than the 15.5 kN/m3 above the water table"), "{message}");
}

#[test]
fn a_piezometer_must_say_whether_it_sinks_and_is_vented() {
    let message = only(
        "\"tip_sinks\": true,\n      \"vented\": false,\n      \"limits\"",
        "\"tip_sinks\": true,\n      \"limits\"",
    );
    assert!(message.contains("no \"vented\" for the piezometer \"P5\""), "{message}");
    let plate = GOOD.replacen(
        "\"tip_sinks\": false,\n      \"vented\": true\n    }\n  ],",
        "\"master\": false\n    }\n  ],",
        1,
    );
    assert_ne!(plate, GOOD);
    assert!(site::parse(&plate, "site.json").is_ok(), "a plate need not say it");
}

#[test]
fn the_demo_site_is_good() {
    let demo = include_str!("../../../data-demo/site.json");
    let site =
        site::parse(demo, "data-demo/site.json").unwrap_or_else(|problems| panic!("{problems}"));
    assert!(site.site.invented);
}

#[test]
fn recompression_above_compression_is_noticed() {
    let message = only("\"cr\": 0.1", "\"cr\": 1.1");
    assert!(
        message.contains("layers[1].compressibility.cr") && message.contains("not more than 0.9"),
        "{message}"
    );
}

#[test]
fn a_profile_must_go_down() {
    let message = only("[21.0, 196.2]", "[0.5, 196.2]");
    assert!(message.contains("water.profile[1]: found 0.5; allowed: depth above 1"), "{message}");
}

#[test]
fn drains_must_fit_the_ground_and_each_other() {
    let message = only("\"base_m\": 16.0", "\"base_m\": 30.0");
    assert!(message.contains("not below the base of the lowest layer at 24 m"), "{message}");
    let message = only("\"equivalent_diameter_m\": 0.06", "\"equivalent_diameter_m\": 0.6");
    assert!(message.contains("drains.spacing_m") && message.contains("smear zone"), "{message}");
}

#[test]
fn a_level_above_the_shell_is_refused() {
    let message = only("\"to_level_m\": 8.0", "\"to_level_m\": 18.5");
    assert!(
        message.contains(
            "stages[1].to_level_m: found 18.5; allowed: not above the shell of \"T-1\" at 18 m"
        ),
        "{message}"
    );
    let message = only("\"liquid_level_m\": 9.0", "\"liquid_level_m\": 17.0");
    assert!(message.contains("not above the shell of \"T-2\" at 16 m"), "{message}");
}

#[test]
fn a_neighbour_without_level_is_not_taken_as_empty() {
    let message = only(",\n      \"liquid_level_m\": 9.0", "");
    assert!(
        message.contains("no liquid_level_m for the neighbour \"T-2\"")
            && message.contains("Write 0 for an empty"),
        "{message}"
    );
}

#[test]
fn tanks_must_not_overlap() {
    let message = only("\"x_m\": 70.0", "\"x_m\": 30.0");
    assert!(message.contains("the tanks overlap"), "{message}");
}

#[test]
fn stages_must_follow_each_other() {
    let message = only(
        "\"start\": \"2031-03-05T08:00:00+08:00\"",
        "\"start\": \"2031-03-04T08:00:00+08:00\"",
    );
    assert!(
        message.contains("stages[1].start")
            && message.contains("not before the stage \"Quarter\" is over"),
        "{message}"
    );
    let message =
        only("\"end\": \"2031-03-06T08:00:00+08:00\"", "\"end\": \"2031-03-05T08:00:00+08:00\"");
    assert!(message.contains("stages[1].end") && message.contains("after the start"), "{message}");
    let message = only(
        "\"hold_until\": \"2031-03-10T08:00:00+08:00\"",
        "\"hold_until\": \"2031-03-06T07:00:00+08:00\"",
    );
    assert!(
        message.contains("stages[1].hold_until") && message.contains("not before the end"),
        "{message}"
    );
}

#[test]
fn the_history_must_begin_before_the_first_stage() {
    let message = only("2030-11-01T00:00:00+08:00", "2031-11-01T00:00:00+08:00");
    assert!(
        message.contains("dead_load_since") && message.contains("not after the first stage starts"),
        "{message}"
    );
    let message = only("\"from\": \"2031-03-01", "\"from\": \"2031-03-04");
    assert!(message.contains("liquids[0].from"), "{message}");
    let message = only("\"baseline\": \"2031-03-01", "\"baseline\": \"2032-03-01");
    assert!(message.contains("not after the last stage is over"), "{message}");
}

#[test]
fn instruments_must_be_known_by_one_id() {
    let problems = after("\"id\": \"S1\"", "\"id\": \"P5\"").to_string();
    assert!(
        problems.contains(
            "instruments[3].id: found \"P5\"; allowed: a name of its own; instruments[2] has"
        ),
        "{problems}"
    );
    assert!(
        problems.contains("readings[0].columns[\"S1 (mm)\"].instrument: found \"S1\""),
        "{problems}"
    );
}

#[test]
fn an_unknown_neighbour_is_refused() {
    let message = only("\"neighbours\": [\"P5\"]", "\"neighbours\": [\"P6\"]");
    assert!(
        message.contains(
            "instruments[1].neighbours[0]: found \"P6\"; allowed: the id of an instrument"
        ),
        "{message}"
    );
    let message = only("\"neighbours\": [\"P5\"]", "\"neighbours\": [\"P4\"]");
    assert!(message.contains("An instrument cannot confirm itself."), "{message}");
}

#[test]
fn an_instrument_must_stand_in_the_ground_with_a_fitting_unit() {
    let message = only("\"depth_m\": 6.0", "\"depth_m\": 25.0");
    assert!(
        message.contains("instruments[1].depth_m: found 25; allowed: not below the base"),
        "{message}"
    );
    let message = only("\"range\": [-0.1, 20.0]", "\"range\": [20.0, -0.1]");
    assert!(message.contains("the lowest reading first"), "{message}");
    let problems = after("\"unit\": \"kPa\"", "\"unit\": \"m\"").to_string();
    assert!(problems.contains("found \"m\"; allowed: \"kPa\" for a piezometer"), "{problems}");
}

#[test]
fn a_vented_gauge_is_not_corrected_for_the_barometer_twice() {
    let text = GOOD.replacen(
        "\"tip_sinks\": true,\n      \"vented\": false,\n      \"calibration\"",
        "\"tip_sinks\": true,\n      \"vented\": true,\n      \"calibration\"",
        1,
    );
    let problems = refused(&text);
    assert_eq!(problems.problems.len(), 1, "{problems}");
    assert!(problems.to_string().contains("correcting again adds error"), "{problems}");
}

#[test]
fn the_load_needs_one_level_gauge() {
    let second =
        GOOD.replacen("\"kind\": \"settlement_plate\"", "\"kind\": \"level_gauge\"", 1).replacen(
            "\"unit\": \"mm\",\n      \"noise_sd\"",
            "\"unit\": \"m\",\n      \"noise_sd\"",
            1,
        );
    let problems = refused(&second).to_string();
    assert!(
        problems.contains("2 level gauges with 0 masters; allowed: exactly one master"),
        "{problems}"
    );
    let message = only("\"tip_sinks\": true,", "\"tip_sinks\": true, \"master\": true,");
    assert!(
        message.contains("true for a piezometer; allowed: only for a level gauge"),
        "{message}"
    );
}

#[test]
fn limits_must_rise_from_watch_to_stop() {
    let message = only("[[0.0, 30.0], [200.0, 220.0]]", "[[0.0, 30.0], [200.0, 170.0]]");
    assert!(
        message.contains("instruments[2].limits[1].rule: found review at 180 and stop at 170"),
        "{message}"
    );
    let message = only("{ \"band_multiple\": 1.5 }", "{ \"band_multiple\": 0.5 }");
    assert!(message.contains("limit_defaults.piezometer.limits[1].rule"), "{message}");
    let message = only(
        "\"trigger\": \"stop\", \"rule\": { \"app",
        "\"trigger\": \"review\", \"rule\": { \"app",
    );
    assert!(message.contains("each limit once"), "{message}");
    let message = only("[[0.0, 20.0], [200.0, 180.0]]", "[[0.0, 20.0], [0.0, 180.0]]");
    assert!(message.contains("allowed: applied pressure above 0"), "{message}");
}

#[test]
fn a_column_must_lead_to_an_instrument_in_a_fitting_unit() {
    let message = only(
        "{ \"instrument\": \"P5\", \"unit\": \"kPa\" }",
        "{ \"instrument\": \"P5\", \"unit\": \"m\" }",
    );
    assert!(
        message.contains("\"m\", which is a length; allowed: a unit of a pressure")
            && message.contains("write \"mH2O\""),
        "{message}"
    );
    let message = only(
        "{ \"instrument\": \"P5\", \"unit\": \"kPa\" }",
        "{ \"instrument\": \"P7\", \"unit\": \"kPa\" }",
    );
    assert!(message.contains("readings[0].columns.P5.instrument: found \"P7\""), "{message}");
    let message = only("\"channel\": \"barometer\"", "\"channel\": \"battery\"");
    assert!(message.contains("readings[0].columns[\"Baro kPa\"].channel"), "{message}");
    let message = only("\"temperature:P4\"", "\"temperature:P44\"");
    assert!(message.contains("Did you mean \"P4\"?"), "{message}");
    let message = only(
        "\"P5\": { \"instrument\": \"P5\", \"unit\": \"kPa\" }",
        "\"P5\": { \"instrument\": \"P5\", \"unit\": \"digits\", \"raw\": \"digits\" }",
    );
    assert!(message.contains("raw digits for \"P5\", which has no calibration"), "{message}");
    let message = only("\"P5\": { \"instrument\": \"P5\"", "\"P5\": { \"instrument\": \"P4\"");
    assert!(message.contains("a second column for \"P4\""), "{message}");
}

#[test]
fn a_layout_must_give_instants() {
    let message = only("\"%Y-%m-%d %H:%M:%S\"", "\"%Y-%m-%d\"");
    assert!(message.contains("readings[0].time_format"), "{message}");
    let message = only("\"%Y-%m-%d %H:%M:%S\"", "\"%Y-%m-%d %H\"");
    assert!(message.contains("It turns 2031-11-23T23:47:00 into 2031-11-23T23:00:00"), "{message}");
    let message = only(
        "\"time_zone\": \"Asia/Makassar\",\n      \"missing\"",
        "\"time_zone\": \"+8\",\n      \"missing\"",
    );
    assert!(message.contains("or a fixed offset such as \"+08:00\""), "{message}");
    let message = only("\"decimal\": \".\"", "\"decimal\": \",\"");
    assert!(message.contains("fall apart into two columns"), "{message}");
    let message = only("logger*.csv", "logger[.csv");
    assert!(message.contains("readings[0].files[0]"), "{message}");
}

#[test]
fn what_is_not_strict_json_is_refused_with_its_place() {
    for (from, to) in [
        ("\"format\":", "// remark\n \"format\":"),
        ("\"vented\": true\n    }\n  ],", "\"vented\": true,\n    }\n  ],"),
        ("\"format\"", "'format'"),
        ("\"thickness_m\": 14.0", "\"thickness_m\": NaN"),
        ("\"thickness_m\": 14.0", "\"thickness_m\": +14.0"),
        ("\"thickness_m\": 14.0", "\"thickness_m\": 0x0E"),
        ("\"thickness_m\": 14.0", "\"thickness_m\": 14,0"),
    ] {
        let problems = after(from, to);
        assert!(problems.problems[0].line >= 1 && !problems.problems.is_empty(), "{problems}");
    }
    let problems = after("\"thickness_m\": 14.0", "\"thickness_m\": NaN");
    assert_eq!(problems.problems[0].line, 32, "{problems}");
    assert!(refused("").to_string().contains("an empty file"));
    assert!(
        refused("[1, 2]")
            .to_string()
            .contains("found a list of 2 entries; allowed: an object with format")
    );
    let deep = "[".repeat(100_000);
    assert!(!refused(&deep).problems.is_empty());
}

#[test]
fn an_overflowing_number_is_refused() {
    let message = only("\"thickness_m\": 14.0", "\"thickness_m\": 1e999");
    assert!(
        message.contains("found 1e999; allowed: layer thickness from 0.01 to 500 m"),
        "{message}"
    );
}

#[test]
fn files_are_opened_with_clear_errors() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("site.json");
    assert!(site::read(&path).unwrap_err().to_string().contains("no readable file"));
    std::fs::write(&path, b"{\n \"format\": \"\xff\"}").unwrap();
    let problems = site::read(&path).unwrap_err();
    assert_eq!(problems.problems[0].line, 2);
    assert!(problems.to_string().contains("Save the file in UTF-8."));
    std::fs::write(&path, format!("\u{feff}{GOOD}")).unwrap();
    assert!(site::read(&path).is_ok(), "a byte order mark does no harm");
}

mod arbitrary {
    use super::{GOOD, site};
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn text_never_panics(text in ".{0,200}") {
            let _ = site::parse(&text, "any");
        }

        #[test]
        fn a_damaged_site_file_never_panics(at in 0..GOOD.len(), len in 0usize..40, with in "[\\[\\]{}\",:0-9a-z.-]{0,6}") {
            let end = (at + len).min(GOOD.len());
            if let (Some(head), Some(tail)) = (GOOD.get(..at), GOOD.get(end..))
                && let Err(problems) = site::parse(&format!("{head}{with}{tail}"), "damaged") {
                    prop_assert!(!problems.problems.is_empty(), "a refusal gives a reason");
                    let _ = problems.to_string();
                }
        }
    }
}
