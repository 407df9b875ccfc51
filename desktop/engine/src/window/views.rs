//! What the window shows, as plain data: every number already in the unit asked for, with its text,
//! so that the front end draws and never calculates. Instants are milliseconds of Unix time.

use serde::{Deserialize, Serialize};
use ts_rs::TS;

/// Unit system of everything shown and typed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize, TS)]
#[serde(rename_all = "snake_case")]
pub enum Units {
    /// m, mm, kPa, m3.
    #[default]
    Si,
    /// ft, in, psf, bbl.
    UsCustomary,
}

/// Colours of charts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize, TS)]
#[serde(rename_all = "snake_case")]
pub enum Theme {
    /// Light ground.
    #[default]
    Light,
    /// Dark ground.
    Dark,
    /// For bright sun: black on white, doubled lines.
    Sunlight,
}

/// Alarm level of a ground reading.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize, TS)]
#[serde(rename_all = "snake_case")]
pub enum TriggerView {
    /// Inside the expected band.
    Normal,
    /// Outside expected.
    Watch,
    /// Stop raising, review.
    Review,
    /// Stop filling, clear the area.
    Stop,
}

/// A number with its unit and its text.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct Quantity {
    /// In the unit shown.
    pub value: f64,
    /// Unit shown.
    pub unit: String,
    /// Value and unit as they are to be read.
    pub text: String,
}

/// What is open.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct Opened {
    /// Path of the store, or of the demo.
    pub path: String,
    /// Name of the site.
    pub site: String,
    /// Tank under test.
    pub tank: String,
    /// The site does not exist.
    pub invented: bool,
    /// IANA zone in which times are shown.
    pub zone: String,
    /// First instant of plan or readings.
    pub from_ms: f64,
    /// Last instant of plan or readings.
    pub to_ms: f64,
    /// Last instant at which anything was measured: where the cursor starts.
    pub last_ms: f64,
    /// Runs that can be opened on the demo site (name, one sentence).
    pub runs: Vec<(String, String)>,
    /// The run shown, where it is the demo.
    pub run: Option<String>,
    /// What keeps the readings from being compared, and what to do.
    pub note: Option<String>,
    /// What goes with every output that could be acted on.
    pub cautions: Vec<String>,
}

/// The moment strip and everything that hangs on the cursor.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct MomentView {
    /// The cursor.
    pub time_ms: f64,
    /// The cursor in the site's zone, with its offset.
    pub time_text: String,
    /// The cursor is after the last reading: what is shown is the plan.
    pub planned: bool,
    /// Liquid level above the floor.
    pub liquid_level: Quantity,
    /// The same in metres, for the drawing.
    pub liquid_level_m: f64,
    /// Gauge in use, or why the load is unknown.
    pub load_source: String,
    /// False: the load is unknown and the level is the last known one.
    pub load_known: bool,
    /// Applied pressure.
    pub applied_pressure: Quantity,
    /// Stage and whether rise, hold or lowering ("Rise 4, hold").
    pub stage: String,
    /// Hours in it, and how far to the next hold level.
    pub stage_detail: String,
    /// Shortest time to a limit at the present rates ("1 h 40 min to Stop at PE1"), none when
    /// nothing moves towards one.
    pub to_limit: Option<String>,
    /// Time to lower the liquid at the stated pump rate ("7 h 33 min to lower 1 m").
    pub to_lower: Option<String>,
    /// Instruments at Normal (judged on a good reading), Watch, Review, Stop.
    pub counts: [u32; 4],
    /// Instruments with an equipment fault.
    pub faults: u32,
    /// Whether nothing objects to the next rise, and what does.
    pub ready: bool,
    /// The most pressing objections, in words.
    pub not_ready: Vec<String>,
    /// What happened, against which load, who agrees: one to three sentences.
    pub headline: Vec<String>,
    /// What the site's plan says to do at the highest trigger.
    pub plan: String,
    /// Every instrument at this moment, in the order of the site file.
    pub instruments: Vec<InstrumentNow>,
}

/// One instrument at the cursor.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct InstrumentNow {
    /// Its id.
    pub id: String,
    /// Its kind in words ("piezometer").
    pub kind: String,
    /// Where it is in words ("east edge, 9.25 m deep, upper soft clay").
    pub place: String,
    /// Trigger at the cursor.
    pub trigger: TriggerView,
    /// Seen again, or a neighbour agrees.
    pub confirmed: bool,
    /// The trigger is held, not measured: the reading behind it is not good.
    pub held: bool,
    /// Has no limits, so it is never judged.
    pub not_judged: bool,
    /// "good", "suspect", "stale", "frozen", "out of range", "failed", "not read".
    pub data_state: String,
    /// Equipment fault in words, when there is one.
    pub fault: Option<String>,
    /// Last reading at or before the cursor.
    pub reading: Option<Quantity>,
    /// Expected then.
    pub expected: Option<Quantity>,
    /// Band then.
    pub band_low: Option<Quantity>,
    /// Band then.
    pub band_high: Option<Quantity>,
    /// Place of the reading in the band: -1 low end, +1 high end.
    pub band_position: Option<f64>,
    /// Margin to the next limit, in words ("4.4 kPa to Stop").
    pub margin: Option<String>,
    /// Age of the reading in words ("8 min").
    pub age: String,
    /// Why it does not support the next rise.
    pub objection: Option<String>,
    /// East of the tank's axis along the section, m, and depth, m: where it is drawn.
    pub section_x_m: f64,
    /// Depth below ground, m (negative above).
    pub depth_m: f64,
    /// Distance from the plane of the section, m.
    pub off_section_m: f64,
}

/// The fixed drawing of the section, in metres: x along the section from the tank's axis, depth
/// positive down.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct SectionView {
    /// Along which line ("west to east through T-7").
    pub title: String,
    /// Left, right, top (negative: above ground) and bottom of the drawing, m.
    pub extent_m: [f64; 4],
    /// Layers: name, top m, base m, drained.
    pub layers: Vec<LayerView>,
    /// Depth of the water table, m.
    pub water_table_m: f64,
    /// Drains: from x, to x, top, base, spacing as drawn, m.
    pub drains: Option<[f64; 5]>,
    /// Tanks on the section.
    pub tanks: Vec<TankView>,
}

/// A layer of the section.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct LayerView {
    /// Name.
    pub name: String,
    /// Depth of the top, m.
    pub top_m: f64,
    /// Depth of the base, m.
    pub base_m: f64,
    /// Free-draining.
    pub drained: bool,
}

/// A tank of the section.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct TankView {
    /// Name.
    pub name: String,
    /// The one under test; its level comes with the moment.
    pub under_test: bool,
    /// Axis along the section, m.
    pub x_m: f64,
    /// Diameter, m.
    pub diameter_m: f64,
    /// Shell height, m.
    pub shell_height_m: f64,
    /// Constant level of a neighbour, m.
    pub liquid_level_m: Option<f64>,
    /// Label with diameter in the units shown.
    pub label: String,
}

/// What contours show.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, TS)]
#[serde(rename_all = "snake_case")]
pub enum Field {
    /// Vertical stress increment.
    SigmaZ,
    /// Radial stress increment in the section.
    SigmaX,
    /// Stress increment across the section.
    SigmaY,
    /// Shear stress in the section.
    TauXz,
    /// Excess pore pressure.
    ExcessPorePressure,
    /// Settlement since the baseline.
    Settlement,
}

/// Contours at a moment, in metres of the section.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct ContoursView {
    /// Unit of the values.
    pub unit: String,
    /// Each line: its value as text, and its points [x_m, depth_m].
    pub lines: Vec<ContourLine>,
    /// What they are and under which assumption, in words.
    pub note: String,
}

/// One contour line.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct ContourLine {
    /// Value in the unit shown.
    pub label: String,
    /// Where to write it.
    pub label_at: [f64; 2],
    /// Points along it.
    pub points: Vec<[f64; 2]>,
}

/// A picture as the page has room for it.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize, TS)]
pub struct Picture {
    /// Width, px.
    pub width: f64,
    /// Height, px.
    pub height: f64,
    /// Colours.
    pub theme: Theme,
}

/// What runs along the horizontal axis of the chart of a reading.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, TS)]
#[serde(rename_all = "snake_case")]
pub enum Against {
    /// Time.
    Time,
    /// Applied pressure.
    Pressure,
}

/// What may be left out of the chart of a reading.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, TS)]
#[serde(rename_all = "snake_case")]
pub enum Hidden {
    /// The expected band.
    Band,
    /// The likely value.
    Expected,
    /// Limits.
    Limits,
    /// Readings before their corrections.
    Raw,
}

/// A chart ready to be put on the page.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct ChartView {
    /// SVG made by the engine.
    pub svg: String,
    /// Pixels and values of the ends of the x axis: px0, px1, v0, v1. Values of a time axis are
    /// seconds of Unix time.
    pub x: [f64; 4],
    /// The same of the y axis.
    pub y: [f64; 4],
    /// Points for the pointer, thinned like the drawing.
    pub hover: Vec<HoverPoint>,
    /// Changes of a trigger, to jump to, by time.
    pub events: Vec<HoverPoint>,
}

/// What the pointer says near a point of a chart.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct HoverPoint {
    /// Where on the chart, px.
    pub px: [f64; 2],
    /// Time, value, applied pressure, band, trigger, in words.
    pub text: String,
    /// The instant, to move the cursor there.
    pub time_ms: f64,
}

/// One entry of the life story or the log.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct EntryView {
    /// When, in the site's zone.
    pub time_text: String,
    /// What ("rod extension", "decision: hold").
    pub what: String,
    /// Who.
    pub who: String,
    /// Why, or the note.
    pub text: String,
}

/// The reading view of one instrument at the cursor.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct ReadingView {
    /// The instrument at the cursor.
    pub now: InstrumentNow,
    /// Limits at this load: trigger, value in words.
    pub limits: Vec<(TriggerView, String)>,
    /// The number as read, and each correction step: name, value in words.
    pub steps: Vec<(String, String)>,
    /// Rate over its window, with its doubt, in words.
    pub rate: Option<String>,
    /// Changes of its trigger up to the cursor: time, from, to.
    pub changes: Vec<(String, TriggerView, TriggerView)>,
    /// What the site's plan says for this trigger.
    pub plan: String,
    /// What happened in one or two sentences.
    pub sentence: Vec<String>,
    /// Life story and notes.
    pub story: Vec<EntryView>,
}

/// One line of a hand-check sheet.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct WorkingLine {
    /// What is computed.
    pub name: String,
    /// Formula as MathML.
    pub formula_mathml: String,
    /// Formula as plain text, to copy.
    pub formula_text: String,
    /// The numbers put in: symbol and value.
    pub inputs: Vec<(String, String)>,
    /// Value with unit.
    pub value: String,
    /// Source of the method.
    pub source: String,
}

/// A hand-check sheet.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct WorkingView {
    /// What it works out.
    pub title: String,
    /// Line by line.
    pub lines: Vec<WorkingLine>,
    /// The whole sheet as text, to copy.
    pub text: String,
}

/// An equipment fault, never mixed with ground triggers.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, TS)]
pub struct FaultView {
    /// The instrument.
    pub id: String,
    /// Its kind in words.
    pub kind: String,
    /// Where it is.
    pub place: String,
    /// Data state in words.
    pub state: String,
    /// From when, in words.
    pub from: String,
    /// Until when, or "goes on".
    pub to: String,
    /// It holds at the cursor.
    pub now: bool,
    /// What was found.
    pub evidence: String,
    /// What to do.
    pub next_step: String,
}

/// How anything fails, for the window.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, TS)]
pub struct Failure {
    /// A word the front end may act on.
    pub code: String,
    /// What happened, what it means, what to do.
    pub message: String,
}
