//! The three forms say the same, stand alone, and keep what comes from outside as text.

use super::*;
use crate::chart::theme::LIGHT;
use crate::chart::{Chart, Size};

/// An invented report with every kind of row.
pub(crate) fn page() -> ReportPage {
    let load = LoadAtReading {
        liquid_level_m: 13.42,
        applied_pressure_kpa: 139.8,
        stage: "stage 4".to_owned(),
        hours_in_stage: 6.5,
    };
    let row = InstrumentRow {
        mark: Mark::Review { confirmed: true },
        id: "P9".to_owned(),
        kind: "piezometer".to_owned(),
        place: "east edge, 10.2 m deep, soft clay".to_owned(),
        unit: "kPa".to_owned(),
        decimals: 1,
        reading: Some(91.6),
        load: Some(load),
        expected: Some(74.2),
        band_low: Some(68.0),
        band_high: Some(81.0),
        limits: vec![
            LimitValue { trigger: LimitKind::Watch, value: 83.0 },
            LimitValue { trigger: LimitKind::Review, value: 90.0 },
            LimitValue { trigger: LimitKind::Stop, value: 96.0 },
        ],
        margin: Some(Margin { to: LimitKind::Stop, value: 4.4, percent: Some(4.6) }),
        data_state: "good".to_owned(),
        age_s: Some(130),
    };
    let second = InstrumentRow {
        mark: Mark::Watch { confirmed: false },
        id: "M3".to_owned(),
        kind: "settlement plate".to_owned(),
        place: "north edge, at ground level".to_owned(),
        unit: "mm".to_owned(),
        decimals: 0,
        reading: Some(212.0),
        expected: Some(190.0),
        band_low: Some(170.0),
        band_high: Some(210.0),
        limits: vec![
            LimitValue { trigger: LimitKind::Watch, value: 210.0 },
            LimitValue { trigger: LimitKind::Stop, value: 260.0 },
        ],
        margin: Some(Margin { to: LimitKind::Watch, value: -2.0, percent: None }),
        load: Some(LoadAtReading { liquid_level_m: 13.1, ..row.load.clone().unwrap() }),
        age_s: Some(30_000),
        ..row.clone()
    };
    let silent = InstrumentRow {
        mark: Mark::NotJudged,
        id: "P5".to_owned(),
        reading: None,
        load: None,
        margin: None,
        data_state: "not read".to_owned(),
        age_s: Some(400_000),
        ..row.clone()
    };
    ReportPage {
        site: "Gannet Flats terminal".to_owned(),
        invented: true,
        title: "Tank T2, water test".to_owned(),
        moment_s: 1_779_539_400,
        zone: TimeZone::get("Europe/Amsterdam").unwrap(),
        load: vec![
            Fact { name: "water above floor".to_owned(), value: "13.42 m".to_owned() },
            Fact { name: "applied pressure".to_owned(), value: "139.8 kPa".to_owned() },
            Fact { name: "stage".to_owned(), value: "4, rise, 6.5 h in it".to_owned() },
        ],
        headline: vec![
            "Pressure at P9 rises 1.9 times faster than expected since 126 kPa applied pressure; P7 on the same side agrees.".to_owned(),
            "Site plan for Review: stop raising, read every 5 min, call the responsible engineer.".to_owned(),
        ],
        instruments: vec![row, second, silent],
        faults: vec![FaultRow {
            id: "P5".to_owned(),
            kind: "piezometer".to_owned(),
            place: "west edge, 6.0 m deep".to_owned(),
            data_state: "not read".to_owned(),
            evidence: "No value in 14 scans; its neighbours on the same logger answer.".to_owned(),
            since_s: Some(1_779_139_400),
            until_s: None,
            next_step: "Check the cable at the junction box.".to_owned(),
        }],
        charts: vec![],
        import: vec![ImportFile {
            name: "round-23-may.csv".to_owned(),
            rows: 4_212,
            kept: 4_090,
            duplicates: 117,
            refused: 5,
            messages: vec![ImportMessage {
                line: Some(17),
                lost_data: true,
                text: "The value \"1,2,3\" is not a number.".to_owned(),
            }],
        }],
    }
}

fn text(page: &ReportPage) -> String {
    page.to_text(TerminalOptions { width: Some(120), colour: false })
}

fn html(page: &ReportPage) -> String {
    page.to_html(HtmlOptions { embed_font: false })
}

#[test]
fn the_terminal_text() {
    insta::assert_snapshot!("terminal", text(&page()));
}

#[test]
fn the_json() {
    insta::assert_snapshot!("json", page().to_json().unwrap());
}

#[test]
fn the_body_of_the_page() {
    let page = html(&page());
    let body = page.split("<body>").nth(1).unwrap();
    insta::assert_snapshot!("html_body", body);
}

#[test]
fn every_form_carries_the_cautions_and_says_what_is_invented() {
    let page = page();
    let unwrapped = text(&page).replace('\n', " ");
    let plain_html = html(&page).replace("&#39;", "'");
    for form in [unwrapped, plain_html, page.to_json().unwrap()] {
        for caution in CAUTIONS {
            assert!(form.contains(caution), "{caution}");
        }
    }
    assert!(text(&page).contains(INVENTED) && html(&page).contains(INVENTED));
    let real = ReportPage { invented: false, ..page };
    assert!(!text(&real).contains(INVENTED) && !html(&real).contains(INVENTED));
}

#[test]
fn nothing_known_is_not_good_news() {
    let mut page = page();
    page.faults.clear();
    page.instruments.clear();
    assert!(page.is_incomplete());
    assert_eq!(page.counts(), "No instrument judged; no equipment fault known.");
    assert!(text(&page).contains("not good news") && html(&page).contains(INCOMPLETE));
    for form in [text(&page), html(&page)] {
        assert!(!form.to_lowercase().contains("safe."), "the tool never says so");
    }
}

#[test]
fn the_page_loads_and_runs_nothing() {
    let mut page = page();
    let size = Size { width_px: 400.0, height_px: 200.0 };
    let svg = Chart::default().render(size, &LIGHT).unwrap().svg;
    page.charts.push(ChartSection {
        caption: "Planned and actual.".to_owned(),
        svg,
        values: Some(page.instrument_table()),
    });
    let page = page.to_html(HtmlOptions { embed_font: true });
    assert!(!page.contains("<script") && !page.contains("<link") && !page.contains("@import"));
    assert!(!page.contains("style=\""));
    let elsewhere = page.replace("http://www.w3.org/2000/svg", "");
    assert!(!elsewhere.contains("http:") && !elsewhere.contains("https:"));
    assert_eq!(page.matches("@font-face").count(), 2);
}

#[test]
fn text_from_outside_cannot_become_markup() {
    const HOSTILE: &str = "<script>alert('1')</script>\"'&";
    let hostile = || HOSTILE.to_owned();
    let mut page = page();
    page.site = hostile();
    page.title = hostile();
    page.load[0] = Fact { name: hostile(), value: hostile() };
    page.headline[0] = hostile();
    let row = &mut page.instruments[0];
    (row.id, row.kind, row.place) = (hostile(), hostile(), hostile());
    (row.unit, row.data_state) = (hostile(), hostile());
    row.load.as_mut().unwrap().stage = hostile();
    let fault = &mut page.faults[0];
    (fault.id, fault.kind, fault.place) = (hostile(), hostile(), hostile());
    (fault.data_state, fault.evidence, fault.next_step) = (hostile(), hostile(), hostile());
    page.import[0].name = hostile();
    page.import[0].messages[0].text = hostile();
    page.charts.push(ChartSection {
        caption: hostile(),
        svg: String::new(),
        values: Some(Table {
            columns: vec![Column::left(HOSTILE)],
            rows: vec![vec![HOSTILE.into()]],
        }),
    });
    let page = html(&page);
    assert!(!page.contains("<script") && !page.contains("alert('1')"));
    assert!(page.matches("&lt;script&gt;").count() >= 20);
}

#[test]
fn json_keeps_a_hostile_text_and_a_fixed_offset() {
    let mut page = page();
    page.site = "\"</script>\u{1}".to_owned();
    page.zone = TimeZone::fixed(jiff::tz::offset(8));
    let read: serde_json::Value = serde_json::from_str(&page.to_json().unwrap()).unwrap();
    assert_eq!(read["site"], page.site);
    assert_eq!(read["zone"], "+08");
}
