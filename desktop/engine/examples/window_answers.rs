//! Records what the window is answered on the invented site, for its stand-in in a browser and its
//! tests: `cargo run -p brimstead-engine --example window_answers -- desktop/ui/src/backend/standin`.

use brimstead_engine::window::views::{
    Against, ChartView, Field, Hidden, HoverPoint, MomentView, Picture, Theme, Units,
};
use brimstead_engine::window::{Progress, ReadingChart, Session, WindowError};
use serde_json::{Value, json};
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;

/// Some day after the run.
const NOW_S: i64 = 1_800_000_000;
/// Moments of the run in which the ground yields: quiet, rising, review, stop, lowered, planned.
const MOMENTS: [&str; 6] = [
    "2026-03-20T06:00:00Z",
    "2026-05-17T18:00:00Z",
    "2026-05-18T06:00:00Z",
    "2026-05-19T12:00:00Z",
    "2026-05-23T09:00:00Z",
    "2026-05-28T06:00:00Z",
];
/// The one that is recorded in both systems of units.
const LAST: &str = MOMENTS[4];
const FIELDS: [(Field, &str); 3] = [
    (Field::SigmaZ, "sigma_z"),
    (Field::ExcessPorePressure, "excess_pore_pressure"),
    (Field::Settlement, "settlement"),
];
/// Instruments with charts: the one that is most pressing at last.
const CHARTED: [&str; 1] = ["SO1"];
/// Points for the pointer that are kept of a chart.
const HOVERS: usize = 60;
/// Rooms in a window of 1280 by 800.
const FILL_LINE: Picture = Picture { width: 764.0, height: 272.0, theme: Theme::Light };
const AGAINST_TIME: Picture = Picture { width: 351.0, height: 160.0, theme: Theme::Light };
const AGAINST_PRESSURE: Picture = Picture { width: 351.0, height: 140.0, theme: Theme::Light };

fn main() -> Result<(), Box<dyn std::error::Error>> {
    let out = std::env::args().nth(1).map(PathBuf::from).ok_or("say into which folder")?;
    let demo = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../data-demo");
    let progress = Progress { tell: &|_, _| {}, cancel: &AtomicBool::new(false) };
    let session = Session::open_demo(&demo, None, NOW_S, progress)?;
    session.prepare();
    let write = |name: &str, value: &Value| -> Result<(), Box<dyn std::error::Error>> {
        Ok(std::fs::write(out.join(name), serde_json::to_string(&rounded(value))? + "\n")?)
    };
    write("opened.json", &json!(session.opened()))?;
    write("si.json", &answers(&session, Units::Si, &MOMENTS)?)?;
    write("us_customary.json", &answers(&session, Units::UsCustomary, &[LAST])?)?;
    Ok(())
}

fn milliseconds(text: &str) -> Result<f64, WindowError> {
    let parsed = text.parse::<jiff::Timestamp>();
    let time = parsed.map_err(|_| WindowError::Time { text: text.to_owned() })?;
    Ok(time.as_second() as f64 * 1000.0)
}

fn answers(session: &Session, units: Units, moments: &[&str]) -> Result<Value, WindowError> {
    let last_ms = milliseconds(LAST)?;
    let mut recorded: Vec<MomentView> = Vec::new();
    for text in moments {
        recorded.push(session.moment(milliseconds(text)?, units));
    }
    let mut contours = BTreeMap::new();
    for (field, name) in FIELDS {
        contours.insert(name, session.contours(field, last_ms, units)?);
    }
    let mut charts = BTreeMap::new();
    for id in CHARTED {
        charts.insert(
            id,
            json!({
                "time": chart(session, id, Against::Time, AGAINST_TIME, units)?,
                "pressure": chart(session, id, Against::Pressure, AGAINST_PRESSURE, units)?,
            }),
        );
    }
    let readings: Result<Vec<_>, _> = recorded
        .iter()
        .flat_map(|moment| &moment.instruments)
        .take(recorded.first().map_or(0, |moment| moment.instruments.len()))
        .map(|now| session.reading(&now.id, last_ms, units))
        .collect();
    Ok(json!({
        "moments": recorded,
        "section": session.section(units),
        "contours": contours,
        "fill_line": thinned(session.fill_line(FILL_LINE, units)?),
        "charts": charts,
        "readings": readings?,
        "working": session.working("PE1", last_ms, units)?,
        "faults": session.faults(last_ms, units),
    }))
}

fn chart(
    session: &Session,
    id: &str,
    against: Against,
    picture: Picture,
    units: Units,
) -> Result<ChartView, WindowError> {
    let asked = ReadingChart {
        id: id.to_owned(),
        against,
        time_ms: milliseconds(LAST)?,
        range: None,
        hidden: vec![Hidden::Raw],
    };
    Ok(thinned(session.reading_chart(&asked, picture, units)?))
}

/// With numbers as short as a picture needs.
fn rounded(value: &Value) -> Value {
    match value {
        Value::Number(number) => {
            let short = number.as_f64().map(|given| (given * 1000.0).round() / 1000.0);
            match short {
                Some(short) if short.fract() == 0.0 => json!(short as i64),
                Some(short) => json!(short),
                None => value.clone(),
            }
        }
        Value::Array(all) => all.iter().map(rounded).collect(),
        Value::Object(all) => {
            all.iter().map(|(name, value)| (name.clone(), rounded(value))).collect()
        }
        _ => value.clone(),
    }
}

/// Every so manieth point: enough for a stand-in.
fn thinned(mut chart: ChartView) -> ChartView {
    let every = chart.hover.len().div_ceil(HOVERS).max(1);
    let kept: Vec<HoverPoint> = chart.hover.into_iter().step_by(every).collect();
    chart.hover = kept;
    chart
}
