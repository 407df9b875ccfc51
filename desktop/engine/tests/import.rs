//! Readings from files: what is taken, what is refused by line, and what is said about it.

use brimstead_engine::import::{
    self, Imported, LayoutUsed, NoValue, NotANumber, Reason, Refused, SeriesOf,
};
use brimstead_engine::site::{self, FileEncoding, Signal, SiteFile};

/// One layout "Logger": comma, two lines above, Asia/Makassar (UTC+8), marks NAN and -999.
fn site() -> SiteFile {
    site::parse(include_str!("fixtures/site.json"), "site.json")
        .unwrap_or_else(|problems| panic!("{problems}"))
}

const HEAD: &str = "Invented logger\nsecond line\nTime,Level,P5,S1 (mm),Baro kPa,T_P4,P4 digits\n";

fn logger(rows: &str) -> Imported {
    import::read_bytes(&site(), &[("logger-1.csv", format!("{HEAD}{rows}").as_bytes())])
}

fn refused(imported: &Imported) -> Vec<(u32, &str, &str, Reason)> {
    let of = |refused: &'_ Refused| (refused.line, refused.reason);
    let list = &imported.report.files[0].refused;
    list.iter().map(|r| (of(r).0, r.column.as_str(), r.text.as_str(), of(r).1)).collect()
}

#[test]
fn a_good_file_is_taken_whole() {
    let imported = logger(
        "2031-03-02 06:00:00,0.010,45.2,1,101.2,27.1,8440.5\n2031-03-02 06:15:00,0.080,45.9,1,101.2,27.1,8433.0\n",
    );
    let file = &imported.report.files[0];
    assert_eq!(file.layout, LayoutUsed::Named("Logger".to_owned()));
    assert_eq!((file.rows, file.rows_accepted, file.readings, file.refused_count()), (2, 2, 12, 0));
    let p5 = imported.instrument("P5").unwrap();
    // 06:00 at UTC+8 is 22:00 UTC of the day before; checked with `date -u -d @1930168800`.
    assert_eq!(
        (p5.points[0].time_s, p5.points[0].value, p5.points[0].line),
        (1_930_168_800, 45.2, 4)
    );
    assert_eq!(p5.points[0].raw, None, "the value stands as it is in the file");
    assert_eq!(file.times_s, Some((1_930_168_800, 1_930_169_700)));
    assert_eq!(imported.channel("barometer").unwrap().points[1].value, 101.2);
    assert_eq!(imported.channel("temperature:P4").unwrap().points[0].value, 27.1);
    let p4 = imported.instrument("P4").unwrap();
    assert_eq!(
        (p4.signal, p4.points[0].value, p4.points[0].raw),
        (Signal::Digits, 8440.5, Some(8440.5))
    );
}

#[test]
fn the_report_goes_out_as_json_and_names_the_columns_taken() {
    let imported = logger("2031-03-02 06:00:00,0.010,ERROR,1,101.2,27.1,8440\n");
    let report = serde_json::to_value(&imported.report).unwrap();
    let file = &report["files"][0];
    assert_eq!(file["refused_by_reason"], serde_json::json!({ "text": 1 }));
    assert_eq!(file["refused"][0]["reason"], "text");
    let digits = serde_json::json!({
        "header": "P4 digits", "of": { "instrument": "P4" }, "signal": "digits", "unit": "digits"
    });
    assert!(file["columns_taken"].as_array().unwrap().contains(&digits), "{file}");
    assert_eq!(file["columns_taken"].as_array().unwrap().len(), 6);
}

#[test]
fn refused_fields_are_listed_by_line_and_leave_a_mark() {
    let imported = logger(
        "2031-03-02 06:00:00,0.010,ERROR,1,101.2,27.1,8440\n\
         2031-03-02 06:15:00,0.020,NaN,1,101.2,27.1,8440\n\
         2031-03-02 06:30:00,0.030,\"45,9\",1,101.2,27.1,8440\n\
         2031-03-02 06:45:00,0.040,-999.0,1,101.2,27.1,8440\n\
         2031-03-02 07:00:00,0.050,,1,101.2,27.1,8440\n",
    );
    let number = Reason::Number;
    assert_eq!(
        refused(&imported),
        [
            (4, "P5", "ERROR", number(NotANumber::Text)),
            (6, "P5", "45,9", number(NotANumber::DecimalComma)),
        ],
        "NaN is a missing mark of the layout (NAN)"
    );
    let p5 = imported.instrument("P5").unwrap();
    assert!(p5.points.is_empty());
    let reasons: Vec<_> = p5.not_read.iter().map(|mark| mark.reason).collect();
    use NoValue::{Missing, Refused};
    assert_eq!(reasons, [Refused, Missing, Refused, Missing, Missing]);
    assert_eq!(
        imported.instrument("LG1").unwrap().points.len(),
        5,
        "the other columns of the rows are kept"
    );
    assert_eq!(imported.report.files[0].missing, 3);
}

#[test]
fn refused_rows_are_listed_by_line() {
    let imported = logger(
        "2031-03-02 06:00:00,0.010,45.2,1,101.2,27.1,8440\n\
         02/03/2031 06:15,0.010,45.2,1,101.2,27.1,8440\n\
         \n\
         2031-03-02 06:30:00,0.010,45.2,1,101.2\n\
         2031-03-02 06:45:00,0.010,45.2,1,101.2,27.1,8440,7\n\
         2031-03-02 07:00:00,0.010,45.2,1,101.2,27.1,8440,\n\
         2031-03-02 07:15:00,0.010,45.2,1,10",
    );
    let lines: Vec<_> =
        refused(&imported).into_iter().map(|(line, _, _, reason)| (line, reason)).collect();
    assert_eq!(
        lines,
        [
            (5, Reason::Time),
            (7, Reason::FieldCount),
            (8, Reason::FieldCount),
            (10, Reason::FieldCount)
        ]
    );
    let file = &imported.report.files[0];
    assert_eq!(
        (file.rows, file.rows_accepted),
        (6, 2),
        "a delimiter at the end of a row does no harm"
    );
    let shown = imported.report.to_string();
    assert!(shown.contains("line 5, Time: \"02/03/2031 06:15\" is a time that does not fit the format; not imported."), "{shown}");
    assert!(shown.contains("2 of 6 rows accepted"), "{shown}");
}

#[test]
fn an_open_quotation_mark_costs_its_own_line_only() {
    let imported = logger(
        "2031-03-02 06:00:00,0.010,45.2,1,101.2,27.1,8440\n\
         2031-03-02 06:15:00,\"0.010,45.2,1,101.2,27.1,8440\n\
         2031-03-02 06:30:00,0.010,45.2,1,101.2,27.1,8440\n\
         2031-03-02 06:45:00,0.010,\"45.2,1,101.2,27.1,8440\n\
         2031-03-02 07:00:00,0.010,x,1,101.2,27.1,8440\n",
    );
    let lines: Vec<_> =
        refused(&imported).into_iter().map(|(line, _, _, reason)| (line, reason)).collect();
    assert_eq!(
        lines,
        [(5, Reason::OpenQuote), (7, Reason::OpenQuote), (8, Reason::Number(NotANumber::Text))]
    );
    assert_eq!(imported.instrument("LG1").unwrap().points.len(), 3);
}

#[test]
fn carriage_returns_and_blank_lines_keep_the_line_numbers() {
    let rows = "2031-03-02 06:00:00,0.010,45.2,1,101.2,27.1,8440\n\n\n2031-03-02 06:15:00,0.010,bad,1,101.2,27.1,8440\n";
    let text = format!("{HEAD}{rows}").replace('\n', "\r\n");
    let imported = import::read_bytes(&site(), &[("logger-1.csv", text.as_bytes())]);
    assert_eq!(refused(&imported)[0].0, 7);
    assert_eq!(imported.instrument("LG1").unwrap().points[1].line, 7);
}

#[test]
fn duplicates_are_counted_conflicts_listed_and_late_rows_sorted() {
    let row = |minute: u32, level: &str| {
        format!("2031-03-02 06:{minute:02}:00,{level},45.2,1,101.2,27.1,8440\n")
    };
    let first = format!("{HEAD}{}{}{}", row(0, "0.01"), row(30, "0.03"), row(15, "0.02"));
    let second = format!("{HEAD}{}{}{}", row(30, "0.03"), row(15, "0.99"), row(45, "0.04"));
    let files = [("logger-1.csv", first.as_bytes()), ("logger-2.csv", second.as_bytes())];
    let imported = import::read_bytes(&site(), &files);
    let level: Vec<f64> =
        imported.instrument("LG1").unwrap().points.iter().map(|point| point.value).collect();
    assert_eq!(level, [0.01, 0.02, 0.03, 0.04], "by time, the first reading of each time kept");
    assert_eq!(imported.report.conflicts.len(), 1);
    let conflict = &imported.report.conflicts[0];
    assert_eq!(
        (conflict.kept, conflict.kept_at.line, conflict.refused, conflict.refused_at.line),
        (0.02, 6, 0.99, 5)
    );
    // 06:30 stands twice in six columns, 06:15 in the five columns without conflict.
    assert_eq!(imported.report.duplicates_ignored, 11);
    let file = &imported.report.files[0];
    assert_eq!((file.out_of_order, file.latest_by_s), (1, 900));
    let shown = imported.report.to_string();
    assert!(
        shown.contains("1 rows were out of order, by up to 15 min; sorted by time."),
        "{shown}"
    );
    assert!(shown.contains("11 duplicates ignored"), "{shown}");
    assert!(shown.contains("LG1 has two readings for 2031-03-01 22:15 +00:00: 0.02 (logger-1.csv line 6) kept, 0.99 (logger-2.csv line 5) not imported."), "{shown}");
}

#[test]
fn a_missing_value_gives_way_to_a_reading_of_the_same_time() {
    let missing = format!("{HEAD}2031-03-02 06:00:00,NAN,45.2,1,101.2,27.1,8440\n");
    let there = format!("{HEAD}2031-03-02 06:00:00,0.5,45.2,1,101.2,27.1,8440\n");
    let imported = import::read_bytes(
        &site(),
        &[("logger-1.csv", missing.as_bytes()), ("logger-2.csv", there.as_bytes())],
    );
    let level = imported.instrument("LG1").unwrap();
    assert_eq!((level.points.len(), level.not_read.len()), (1, 0));
}

#[test]
fn gaps_longer_than_the_age_of_a_stale_reading_are_listed() {
    // LG1 is stale after 30 min, S1 after 1500 min.
    let imported = logger(
        "2031-03-02 06:00:00,0.01,45.2,1,101.2,27.1,8440\n\
         2031-03-02 06:30:00,0.02,45.2,1,101.2,27.1,8440\n\
         2031-03-02 09:30:00,0.03,45.2,1,101.2,27.1,8440\n",
    );
    let of: Vec<_> = imported.report.gaps.iter().map(|gap| gap.of.as_str()).collect();
    assert_eq!(of, ["LG1", "P4", "P5"]);
    let shown = imported.report.to_string();
    assert!(
        shown.contains("LG1, P4, P5: no reading for 3.0 h from 2031-03-01 22:30 +00:00"),
        "{shown}"
    );
}

#[test]
fn units_are_converted_exactly_and_the_raw_value_kept() {
    let mut site = site();
    let text = include_str!("fixtures/site.json")
        .replace(
            "\"P5\": { \"instrument\": \"P5\", \"unit\": \"kPa\" }",
            "\"P5\": { \"instrument\": \"P5\", \"unit\": \"psi\" }",
        )
        .replace(
            "{ \"instrument\": \"LG1\", \"unit\": \"m\" }",
            "{ \"instrument\": \"LG1\", \"unit\": \"ft\" }",
        )
        .replace(
            "{ \"instrument\": \"S1\", \"unit\": \"mm\" }",
            "{ \"instrument\": \"S1\", \"unit\": \"in\" }",
        )
        .replace(
            "{ \"channel\": \"barometer\", \"unit\": \"kPa\" }",
            "{ \"channel\": \"barometer\", \"unit\": \"mbar\" }",
        )
        .replace("\"unit\": \"C\"", "\"unit\": \"F\"");
    site.readings = site::parse(&text, "site.json").unwrap().readings;
    let rows = format!("{HEAD}2031-03-02 06:00:00,10,10,1,1013.25,77,8440\n");
    let imported = import::read_bytes(&site, &[("logger-1.csv", rows.as_bytes())]);
    let value = |id: &str| {
        let point = imported.instrument(id).or_else(|| imported.channel(id)).unwrap().points[0];
        (point.value, point.raw)
    };
    // By definition: foot 0.3048 m, inch 25.4 mm, psi 6.894757293168361 kPa.
    assert_eq!(value("LG1"), (3.048, Some(10.0)));
    assert_eq!(value("S1"), (25.4, Some(1.0)));
    assert_eq!(value("P5"), (68.947_572_931_683_61, Some(10.0)));
    assert_eq!(value("barometer"), (101.325, Some(1013.25)));
    assert_eq!(value("temperature:P4"), (25.0, Some(77.0)));
}

#[test]
fn unknown_and_lacking_columns_are_named() {
    let text = format!("{}2031-03-02 06:00:00,0.01,45.2,12.6\n", "a\nb\nTime,Level,P5,Battery V\n");
    let imported = import::read_bytes(&site(), &[("logger-1.csv", text.as_bytes())]);
    let notes: Vec<String> = imported.report.files[0]
        .columns
        .iter()
        .map(|note| format!("{}: {}", note.header, note.reason))
        .collect();
    assert_eq!(
        notes,
        [
            "Baro kPa: the layout names it, the file lacks it",
            "P4 digits: the layout names it, the file lacks it",
            "S1 (mm): the layout names it, the file lacks it",
            "T_P4: the layout names it, the file lacks it",
            "Battery V: nothing says what it is",
        ]
    );
    assert_eq!(imported.instrument("P5").unwrap().points.len(), 1);
}

#[test]
fn a_header_that_stands_twice_is_not_taken() {
    let text = "a\nb\nTime,Level,Level\n2031-03-02 06:00:00,0.01,0.02\n";
    let imported = import::read_bytes(&site(), &[("logger-1.csv", text.as_bytes())]);
    assert!(imported.instrument("LG1").is_none());
    assert!(
        imported
            .report
            .to_string()
            .contains("Column \"Level\" not imported: it stands in the headers more than once.")
    );
}

#[test]
fn a_header_only_and_an_empty_file_are_said_to_be_so() {
    let imported = logger("");
    assert_eq!(
        (imported.report.files[0].rows, imported.instrument("P5").unwrap().points.len()),
        (0, 0)
    );
    for bytes in [&b""[..], b"\n\n\n", b"one line", b"\xff\xfe", b"PK\x03\x04\x00\x00\x00\x00"] {
        let imported = import::read_bytes(&site(), &[("logger-1.csv", bytes)]);
        assert_eq!(imported.report.files[0].layout, LayoutUsed::None);
        assert!(imported.report.to_string().contains("not understood, nothing imported"));
    }
}

#[test]
fn local_hours_that_occur_twice_or_never_are_refused() {
    let text = include_str!("fixtures/site.json").replace(
        "\"time_zone\": \"Asia/Makassar\",\n      \"missing\"",
        "\"time_zone\": \"Europe/Riga\",\n      \"missing\"",
    );
    let site = site::parse(&text, "site.json").unwrap();
    let rows = format!(
        "{HEAD}2026-10-25 02:30:00,0.1,45,1,101,27,8440\n2026-10-25 03:30:00,0.1,45,1,101,27,8440\n2026-03-29 03:30:00,0.1,45,1,101,27,8440\n"
    );
    let imported = import::read_bytes(&site, &[("logger-1.csv", rows.as_bytes())]);
    let reasons: Vec<_> =
        refused(&imported).into_iter().map(|(line, _, _, reason)| (line, reason)).collect();
    assert_eq!(reasons, [(5, Reason::TimeTwice), (6, Reason::TimeSkipped)]);
    assert!(imported.report.to_string().contains("occurs twice because clocks go back"));
}

#[test]
fn every_encoding_gives_the_same_readings() {
    let text = format!("{HEAD}2031-03-02 06:00:00,0.5,45.2,1,101.2,27.1,8440\n")
        .replace("second", "zwölf °C");
    let utf16 = |little: bool| -> Vec<u8> {
        text.encode_utf16()
            .flat_map(|unit| if little { unit.to_le_bytes() } else { unit.to_be_bytes() })
            .collect()
    };
    let latin: Vec<u8> = text.chars().map(|c| c as u32 as u8).collect();
    let marked = [b"\xef\xbb\xbf", text.as_bytes()].concat();
    for (bytes, encoding, said) in [
        (text.clone().into_bytes(), FileEncoding::Utf8, "utf-8, by its bytes"),
        (marked, FileEncoding::Utf8, "utf-8, by its byte order mark"),
        (utf16(true), FileEncoding::Utf16Le, "utf-16le, by its bytes"),
        (utf16(false), FileEncoding::Utf16Be, "utf-16be, by its bytes"),
        (latin, FileEncoding::Windows1252, "windows-1252, by its bytes"),
    ] {
        let imported = import::read_bytes(&site(), &[("logger-1.csv", &bytes)]);
        assert_eq!(imported.report.files[0].encoding, encoding);
        assert_eq!(imported.instrument("P5").unwrap().points[0].value, 45.2, "{encoding}");
        assert!(imported.report.to_string().contains(said), "{}", imported.report);
    }
}

#[test]
fn the_report_can_be_sent_as_json() {
    let imported = logger("2031-03-02 06:00:00,0.010,ERROR,1,101.2,27.1,8440\n");
    let json = serde_json::to_value(&imported.report).unwrap();
    assert_eq!(json["files"][0]["refused_by_reason"]["text"], 1);
    assert_eq!(json["files"][0]["refused"][0]["reason"], "text");
    assert_eq!(json["files"][0]["layout"]["named"], "Logger");
    assert_eq!(json["files"][0]["encoding"], "utf-8");
    let series = serde_json::to_value(&imported.series).unwrap();
    assert_eq!(series[0]["of"]["instrument"], "LG1");
    assert_eq!(series[0]["unit"], "m");
}

mod guessing {
    use super::*;

    fn guessed(text: &str) -> Imported {
        import::read_bytes(&site(), &[("other.txt", text.as_bytes())])
    }

    #[test]
    fn columns_units_times_and_decimals_are_guessed_and_said() {
        let imported = guessed(
            "Some logger\nserial 12\nDatum;LG1 [ft];P5 (psi);S1_mm;P4 temp;Air pressure hPa;P4 digits\n\
             02.03.2031 06:00;1,0;5,5;1;27,5;1012,5;8440\n13.03.2031 06:15;1,1;n/a;1;27,5;1012,5;8440\n",
        );
        let file = &imported.report.files[0];
        assert_eq!(file.layout, LayoutUsed::Guessed, "{}", imported.report);
        assert_eq!(imported.instrument("LG1").unwrap().points[0].value, 0.3048);
        assert_eq!(imported.instrument("P5").unwrap().points.len(), 1);
        assert_eq!(file.missing, 1);
        assert_eq!(imported.channel("barometer").unwrap().points[0].value, 101.25);
        assert_eq!(imported.channel("temperature:P4").unwrap().points[0].value, 27.5);
        assert_eq!(imported.instrument("P4").unwrap().signal, Signal::Digits);
        let shown = imported.report.to_string();
        assert!(shown.contains("layout guessed, check it before use"), "{shown}");
        assert!(shown.contains("columns parted by semicolons, decimal comma, headers on line 3, times in \"Datum\" as %d.%m.%Y %H:%M in the zone of the site, Asia/Makassar: confirm it."), "{shown}");
        assert!(shown.contains("column \"P5 (psi)\" is P5 in psi."), "{shown}");
    }

    #[test]
    fn a_unit_below_the_headers_is_seen_and_a_missing_one_said() {
        let imported = guessed(
            "\"TIME\",\"P5\",\"S1\"\n\"TS\",\"psi\",\"\"\n\"2031-03-02 06:00:00\",5.5,1\n\"2031-03-02 06:15:00\",5.6,1\n\
             \"2031-03-02 06:30:00\",5.6,1\n\"2031-03-02 06:45:00\",5.6,1\n\"2031-03-02 07:00:00\",5.6,1\n\
             \"2031-03-02 07:15:00\",5.6,1\n\"2031-03-02 07:30:00\",5.6,1\n\"2031-03-02 07:45:00\",5.6,1\n\
             \"2031-03-02 08:00:00\",5.6,1\n",
        );
        let shown = imported.report.to_string();
        assert!(shown.contains("column \"P5\" is P5 in psi."), "{shown}");
        assert!(
            shown.contains("column \"S1\" is S1, without a unit: mm assumed, confirm it."),
            "{shown}"
        );
        assert_eq!(refused(&imported)[0].0, 2, "the line of units is no row: {shown}");
    }

    #[test]
    fn day_and_month_are_not_guessed_when_both_fit() {
        let imported = guessed("Time,P5 kPa\n02/03/2031 06:00,45\n02/03/2031 06:15,46\n");
        assert_eq!(imported.report.files[0].layout, LayoutUsed::None);
        assert!(
            imported.report.to_string().contains("Day and month cannot be told apart"),
            "{}",
            imported.report
        );
        let imported = guessed("Time,P5 kPa\n02/28/2031 06:00,45\n02/28/2031 06:15,46\n");
        assert_eq!(imported.instrument("P5").unwrap().points.len(), 2);
    }

    #[test]
    fn a_time_with_its_own_offset_needs_no_zone() {
        let imported =
            guessed("when,P5 kPa\n2031-03-02T06:00:00+08:00,45\n2031-03-02T06:15:00+08:00,46\n");
        assert_eq!(imported.instrument("P5").unwrap().points[0].time_s, 1_930_168_800);
        let imported = guessed("Time UTC,P5 kPa\n2031-03-01 22:00,45\n2031-03-01 22:15,46\n");
        assert_eq!(imported.instrument("P5").unwrap().points[0].time_s, 1_930_168_800);
        assert!(imported.report.to_string().contains("(UTC, as the header says)"));
    }

    #[test]
    fn an_id_must_stand_by_itself() {
        let imported = guessed(
            "Time,P55 kPa,XP5 kPa,p5-kPa\n2031-03-02T06:00:00Z,1,2,45\n2031-03-02T06:15:00Z,1,2,45\n",
        );
        let series: Vec<_> = imported.series.iter().map(|series| series.of.clone()).collect();
        assert_eq!(series, [SeriesOf::Instrument("P5".to_owned())]);
        assert_eq!(imported.instrument("P5").unwrap().points[0].value, 45.0);
    }

    #[test]
    fn a_file_that_only_the_name_fits_says_why_it_does_not() {
        let text = "Zeit,P5 kPa\n2031-03-02T06:00:00Z,45\n2031-03-02T06:15:00Z,45\n";
        let imported = import::read_bytes(&site(), &[("logger-9.csv", text.as_bytes())]);
        let shown = imported.report.to_string();
        assert!(shown.contains("Layout \"Logger\" finds no column \"Time\"."), "{shown}");
        assert_eq!(imported.report.files[0].layout, LayoutUsed::Guessed);
    }
}

#[test]
fn files_are_opened_with_clear_errors() {
    let site = site();
    assert!(import::read_files(&site, &[]).unwrap_err().to_string().contains("No file"));
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("logger-1.csv");
    let error = import::read_files(&site, std::slice::from_ref(&path)).unwrap_err().to_string();
    assert!(error.contains("logger-1.csv: cannot be read"), "{error}");
    std::fs::write(&path, format!("{HEAD}2031-03-02 06:00:00,0.5,45.2,1,101.2,27.1,8440\n"))
        .unwrap();
    assert_eq!(import::read_files(&site, &[path]).unwrap().series.len(), 6);
}

mod arbitrary {
    use super::*;
    use proptest::prelude::*;

    fn row() -> impl Strategy<Value = String> {
        let field = prop_oneof![
            "-?[0-9]{1,4}(\\.[0-9]{1,3})?",
            Just(String::new()),
            Just("NAN".to_owned()),
            "[ -~]{0,8}",
        ];
        (0u32..3000, proptest::collection::vec(field, 0..8)).prop_map(|(minute, fields)| {
            let time = format!(
                "2031-03-{:02} {:02}:{:02}:00",
                1 + minute / 1440,
                minute / 60 % 24,
                minute % 60
            );
            std::iter::once(time).chain(fields).collect::<Vec<_>>().join(",")
        })
    }

    proptest! {
        #[test]
        fn bytes_never_panic(bytes in proptest::collection::vec(any::<u8>(), 0..600)) {
            for name in ["logger-1.csv", "other"] {
                let _ = import::read_bytes(&site(), &[(name, &bytes)]).report.to_string();
            }
        }

        #[test]
        fn a_damaged_file_never_panics(at in 0usize..200, with in proptest::collection::vec(any::<u8>(), 0..9), rows in proptest::collection::vec(row(), 0..20)) {
            let mut bytes = format!("{HEAD}{}", rows.join("\n")).into_bytes();
            let at = at.min(bytes.len());
            bytes.splice(at..(at + with.len() / 2).min(bytes.len()), with);
            for name in ["logger-1.csv", "other"] {
                let _ = import::read_bytes(&site(), &[(name, &bytes)]).report.to_string();
            }
        }

        /// Nothing is dropped silently: every row is accepted or refused, and every field of an
        /// accepted row is a reading, a missing value or a refusal.
        #[test]
        fn everything_is_accounted_for(rows in proptest::collection::vec(row(), 0..30)) {
            let imported = logger(&(rows.join("\n") + "\n"));
            let file = &imported.report.files[0];
            let whole_rows = file.refused.iter().filter(|r| !matches!(r.reason, Reason::Number(_))).count() as u64;
            prop_assert_eq!(file.rows, rows.len() as u64);
            prop_assert_eq!(file.rows_accepted + whole_rows, file.rows);
            let fields = file.readings + file.missing + (file.refused_count() - whole_rows);
            prop_assert_eq!(fields, 6 * file.rows_accepted);
            let kept: usize = imported.series.iter().map(|series| series.points.len()).sum();
            let lost = imported.report.duplicates_ignored as usize + imported.report.conflicts.len();
            prop_assert_eq!((kept + lost) as u64, file.readings);
            for series in &imported.series {
                prop_assert!(series.points.windows(2).all(|pair| pair[0].time_s < pair[1].time_s));
                prop_assert!(series.points.iter().all(|point| point.value.is_finite()));
            }
        }
    }
}
