//! The charts of the window, with what the pointer says near a point.

use super::failure::WindowError;
use super::moment::Cursor;
use super::session::{Session, milliseconds, seconds};
use super::shown::Shown;
use super::views::{Against, ChartView, Hidden, HoverPoint, Picture, Theme, Units};
use crate::chart::theme::{DARK, LIGHT, SUNLIGHT};
use crate::chart::{
    self, AxisMapping, Chart, Dash, Dot, Highlight, Kind, Look, Mark, Rendered, ScaleMapping, Size,
    Token,
};
use crate::compare::charts::{against_pressure, against_time, fill_line, mark_of};
use crate::compare::words::stage_at;
use crate::compare::{Row, Timeline, uncorrected};
use crate::series::{Point, thin};
use brimstead_core::instrument::DataState;

/// Below this width readings are drawn with smaller dots, px.
const SMALL_PX: f64 = 560.0;
/// Radius of a dot there, px.
const SMALL_DOT_PX: f64 = 1.1;
/// The lane of marks below the plot, px.
const LANE_PX: f64 = 12.0;

/// What is asked of the chart of a reading.
#[derive(Debug, Clone)]
pub struct ReadingChart {
    /// The instrument.
    pub id: String,
    /// What runs along the horizontal axis.
    pub against: Against,
    /// The cursor.
    pub time_ms: f64,
    /// Ends of the time axis, ms; everything when left out.
    pub range: Option<(f64, f64)>,
    /// What is left out.
    pub hidden: Vec<Hidden>,
}

impl Picture {
    fn size(self) -> Size {
        Size { width_px: self.width, height_px: self.height }
    }

    fn theme(self) -> &'static chart::Theme {
        match self.theme {
            Theme::Light => &LIGHT,
            Theme::Dark => &DARK,
            Theme::Sunlight => &SUNLIGHT,
        }
    }
}

impl Session {
    /// The liquid level against time, planned and measured.
    ///
    /// # Errors
    /// When the picture is too small.
    pub fn fill_line(&self, picture: Picture, units: Units) -> Result<ChartView, WindowError> {
        let shown = Shown::level(units);
        let mut line = fill_line(&self.site, &self.comparison, &self.zone);
        line.unit = shown.unit().to_owned();
        let levels = line.plan.iter_mut().chain(&mut line.actual);
        levels.for_each(|point| point.1 = shown.value(point.1));
        let measured: Vec<Point> =
            line.actual.iter().map(|(time_s, level)| (*time_s as f64, *level)).collect();
        let last_s = self.comparison.last_s;
        let planned: Vec<Point> = line
            .plan
            .iter()
            .filter(|(time_s, _)| *time_s > last_s)
            .map(|(time_s, level)| (*time_s as f64, *level))
            .collect();
        let chart = line.chart();
        let drawn = chart.render(picture.size(), picture.theme())?;
        let mut hover = Vec::new();
        for point in thinned(&measured, picture).into_iter().chain(planned) {
            let (time_s, level) = (point.0 as i64, point.1);
            hover.extend(hover_point(
                &drawn.mapping,
                point,
                time_s,
                self.level_words(time_s, level, shown, units),
            ));
        }
        let events = self.events(0..self.known.len(), &drawn.mapping);
        Ok(view(drawn, hover, events))
    }

    /// Changes of the triggers of instruments, in the lane under the plot.
    fn events(
        &self,
        instruments: impl IntoIterator<Item = usize>,
        mapping: &AxisMapping,
    ) -> Vec<HoverPoint> {
        let lane_px = mapping.y.px0.max(mapping.y.px1) + LANE_PX;
        let mut events = Vec::new();
        for timeline in instruments.into_iter().map(|index| self.timeline(index)) {
            for change in &timeline.changes {
                let px = mapping.x.px(change.time_s as f64);
                if px < mapping.x.px0 || px > mapping.x.px1 {
                    continue;
                }
                let text = format!(
                    "{}: {} from {} to {}",
                    self.stamp(change.time_s),
                    timeline.id,
                    change.from,
                    change.to
                );
                let time_ms = milliseconds(change.time_s);
                events.push(HoverPoint { px: [px, lane_px], text, time_ms });
            }
        }
        events.sort_by(|a, b| a.time_ms.total_cmp(&b.time_ms));
        events
    }

    fn level_words(&self, time_s: i64, level: f64, shown: Shown, units: Units) -> String {
        let stage = stage_at(&self.site, time_s);
        let cursor = self.cursor(milliseconds(time_s), units);
        let level_text = format!("{} {}", chart::number(level, shown.decimals()), shown.unit());
        let kpa = self.comparison.model.applied_pressure_kpa(time_s, self.level_m(time_s));
        let source = match self.comparison.load.at(time_s).and_then(|load| load.gauge) {
            _ if cursor.planned => "planned".to_owned(),
            Some(gauge) => format!("by {}", self.timeline(gauge).id),
            None => "load unknown".to_owned(),
        };
        format!(
            "{}: {level_text} {source}, {} applied pressure; {}",
            self.stamp(time_s),
            Shown::pressure(units).text(kpa),
            stage.words()
        )
    }

    /// One instrument against time or against applied pressure.
    ///
    /// # Errors
    /// An instrument that the site does not have, or a picture that is too small.
    pub fn reading_chart(
        &self,
        asked: &ReadingChart,
        picture: Picture,
        units: Units,
    ) -> Result<ChartView, WindowError> {
        let index = self.index_of(&asked.id)?;
        let cursor = self.cursor(asked.time_ms, units);
        let timeline = self.timeline(index);
        let shown = Shown::reading(timeline.unit, units);
        let mut chart = match asked.against {
            Against::Time => self.against_time(index, asked, shown),
            Against::Pressure => pressure_chart(timeline, shown, units),
        };
        if !asked.hidden.contains(&Hidden::Raw) && asked.against == Against::Time {
            self.add_uncorrected(index, &mut chart, shown);
        }
        chart.series.retain(|series| !asked.hidden.iter().any(|one| one.hides(series.look.class)));
        for series in &mut chart.series {
            if matches!(series.kind, Kind::Dots { .. }) && picture.width < SMALL_PX {
                series.look.weight_px = series.look.weight_px.min(SMALL_DOT_PX);
            }
        }
        chart.highlight = self.picked(index, asked.against, cursor);
        let drawn = chart.render(picture.size(), picture.theme())?;
        let hover = self.reading_hover(index, asked, picture, units, &drawn.mapping);
        let of_time = asked.against == Against::Time;
        let events = self.events(of_time.then_some(index), &drawn.mapping);
        Ok(view(drawn, hover, events))
    }

    fn against_time(&self, index: usize, asked: &ReadingChart, shown: Shown) -> Chart {
        let timeline = self.timeline(index);
        let mut drawn = against_time(&self.site, &self.comparison, timeline, &self.zone);
        drawn.quantity.unit = shown.unit().to_owned();
        drawn.quantity.decimals = shown.decimals();
        drawn.span_s = asked.range.map(|(from_ms, to_ms)| (seconds(from_ms), seconds(to_ms)));
        // Bands along the plan are drawn once they are there; nothing waits for them.
        let scale = timeline.scale();
        if let Some(ahead) = self.ahead.get() {
            drawn.expected.extend(ahead.of(index).map(|(time_s, band)| chart::Expected {
                x: time_s,
                low: band.low * scale,
                likely: band.likely * scale,
                high: band.high * scale,
            }));
        }
        convert_expected(&mut drawn.expected, shown);
        drawn.readings.iter_mut().for_each(|reading| reading.value = shown.value(reading.value));
        convert_limits(&mut drawn.limits, shown);
        drawn.chart()
    }

    /// What a gauge that is read in digits says before its corrections.
    fn add_uncorrected(&self, index: usize, chart: &mut Chart, shown: Shown) {
        let given = &self.site.instruments[index];
        let scale = self.timeline(index).scale();
        let points: Vec<Point> = uncorrected(given, &self.imported)
            .into_iter()
            .map(|(time_s, value)| (time_s as f64, shown.value(value * scale)))
            .collect();
        if points.is_empty() {
            return;
        }
        let look = Look {
            class: "raw",
            label: "uncorrected".to_owned(),
            token: Token::Soft,
            weight_px: 1.0,
            dash: Dash::Dotted,
        };
        chart.series.insert(0, chart::Series { look, kind: Kind::Dots { points, dot: Dot::Full } });
    }

    /// The reading at the cursor, ringed.
    fn picked(&self, index: usize, against: Against, cursor: Cursor) -> Option<Highlight> {
        let timeline = self.timeline(index);
        let row = timeline.value_at(cursor.time_s).filter(|_| !cursor.planned)?;
        let shown = Shown::reading(timeline.unit, cursor.units);
        let value = row.value? * timeline.scale();
        let x = match against {
            Against::Time => row.time_s as f64,
            Against::Pressure => Shown::pressure(cursor.units).value(row.applied_pressure_kpa?),
        };
        let mark = mark_of(timeline, timeline.row_at(cursor.time_s));
        Some(Highlight {
            at: (x, shown.value(value)),
            token: mark.token(),
            label: shown.text(value),
        })
    }

    fn reading_hover(
        &self,
        index: usize,
        asked: &ReadingChart,
        picture: Picture,
        units: Units,
        mapping: &AxisMapping,
    ) -> Vec<HoverPoint> {
        let timeline = self.timeline(index);
        let shown = Shown::reading(timeline.unit, units);
        let scale = timeline.scale();
        let inside = |time_s: i64| match asked.range {
            Some((from_ms, to_ms)) => (from_ms..=to_ms).contains(&milliseconds(time_s)),
            None => true,
        };
        let points: Vec<Point> = timeline
            .rows
            .iter()
            .filter(|row| inside(row.time_s))
            .filter_map(|row| Some((row.time_s as f64, shown.value(row.value? * scale))))
            .collect();
        let mut hover = Vec::new();
        for point in thinned(&points, picture) {
            let time_s = point.0 as i64;
            let Some(row) = timeline.row_at(time_s) else { continue };
            let at = match asked.against {
                Against::Time => Some(point),
                Against::Pressure => {
                    row.applied_pressure_kpa.map(|kpa| (Shown::pressure(units).value(kpa), point.1))
                }
            };
            if let Some(at) = at {
                let words = self.row_words(timeline, row, shown, units);
                hover.extend(hover_point(mapping, at, time_s, words));
            }
        }
        hover
    }

    /// Time, value, band, load and trigger of a reading.
    fn row_words(&self, timeline: &Timeline, row: &Row, shown: Shown, units: Units) -> String {
        let scale = timeline.scale();
        let value =
            row.value.map_or_else(|| "no value".to_owned(), |value| shown.text(value * scale));
        let mut words = format!("{}: {value}", self.stamp(row.time_s));
        if row.data_state != DataState::Good {
            words += &format!(" ({})", row.data_state);
        }
        if let Some(band) = row.expected {
            words += &format!(
                ", expected {} ({})",
                shown.text(band.likely * scale),
                shown.range(band.low * scale, band.high * scale)
            );
        }
        words += &match (row.applied_pressure_kpa, row.liquid_level_m) {
            (Some(kpa), Some(level_m)) => format!(
                ", at {} applied pressure, {} of liquid",
                Shown::pressure(units).text(kpa),
                Shown::level(units).text(level_m)
            ),
            _ => ", load unknown".to_owned(),
        };
        match mark_of(timeline, Some(row)) {
            Mark::Fault => words,
            mark => format!("{words}; {}", mark.phrase()),
        }
    }
}

impl Hidden {
    fn hides(self, class: &str) -> bool {
        let hidden = match self {
            Self::Band => "band",
            Self::Expected => "likely",
            Self::Limits => "limit",
            Self::Raw => "raw",
        };
        hidden == class
    }
}

fn pressure_chart(timeline: &Timeline, shown: Shown, units: Units) -> Chart {
    let pressure = Shown::pressure(units);
    let mut drawn = against_pressure(timeline);
    drawn.quantity.unit = shown.unit().to_owned();
    drawn.quantity.decimals = shown.decimals();
    drawn.pressure_unit = pressure.unit().to_owned();
    convert_expected(&mut drawn.expected, shown);
    convert_limits(&mut drawn.limits, shown);
    drawn.expected.iter_mut().for_each(|one| one.x = pressure.value(one.x));
    for reading in &mut drawn.readings {
        (reading.x, reading.value) = (pressure.value(reading.x), shown.value(reading.value));
    }
    let limits = drawn.limits.iter_mut().flat_map(|limit| &mut limit.points);
    limits.for_each(|point| point.0 = pressure.value(point.0));
    drawn.chart()
}

fn convert_expected<X>(expected: &mut [chart::Expected<X>], shown: Shown) {
    for one in expected {
        one.low = shown.value(one.low);
        one.likely = shown.value(one.likely);
        one.high = shown.value(one.high);
    }
}

fn convert_limits<X>(limits: &mut [chart::Limit<X>], shown: Shown) {
    for point in limits.iter_mut().flat_map(|limit| &mut limit.points) {
        point.1 = shown.value(point.1);
    }
}

/// As many points as the pointer can tell apart.
fn thinned(points: &[Point], picture: Picture) -> Vec<Point> {
    thin(points, (picture.width / 4.0).max(1.0) as usize, None).concat()
}

/// None outside the plot.
fn hover_point(
    mapping: &AxisMapping,
    point: Point,
    time_s: i64,
    text: String,
) -> Option<HoverPoint> {
    let px = [mapping.x.px(point.0), mapping.y.px(point.1)];
    let inside = |scale: &ScaleMapping, px: f64| {
        let (low, high) = (scale.px0.min(scale.px1), scale.px0.max(scale.px1));
        (low - 0.5..=high + 0.5).contains(&px)
    };
    (inside(&mapping.x, px[0]) && inside(&mapping.y, px[1])).then(|| HoverPoint {
        px,
        text,
        time_ms: milliseconds(time_s),
    })
}

fn view(drawn: Rendered, hover: Vec<HoverPoint>, events: Vec<HoverPoint>) -> ChartView {
    let ends = |scale: ScaleMapping| [scale.px0, scale.px1, scale.v0, scale.v1];
    ChartView { svg: drawn.svg, x: ends(drawn.mapping.x), y: ends(drawn.mapping.y), hover, events }
}
