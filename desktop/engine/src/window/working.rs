//! The hand-check sheet of an expected reading, as a page of a calculation book.

use super::ahead::coarse_history;
use super::failure::WindowError;
use super::mathml::{mathml, written};
use super::session::Session;
use super::shown::Shown;
use super::views::{Units, WorkingLine, WorkingView};
use crate::working::{Line, number, sheet_of};

impl Session {
    /// Works out what an instrument is expected to read at the cursor, step by step. The sheet is
    /// in SI, so that its numbers can be put into its formulas; results also stand in the units
    /// asked for.
    ///
    /// # Errors
    /// An instrument that the site does not have, or of which nothing is expected.
    pub fn working(
        &self,
        id: &str,
        time_ms: f64,
        units: Units,
    ) -> Result<WorkingView, WindowError> {
        let index = self.index_of(id)?;
        let cursor = self.cursor(time_ms, units);
        let (from_s, to_s) = (self.site.baseline.time_s, self.span_s().1);
        let time_s = cursor.time_s.clamp(from_s, to_s);
        let planned =
            cursor.planned.then(|| coarse_history(&self.site, &self.comparison.history, to_s));
        let history = planned.as_ref().unwrap_or(&self.comparison.history);
        let sheet = sheet_of(&self.site, &self.comparison.model, history, index, time_s)?;
        let text = sheet.to_text();
        let lines = sheet.lines.iter().map(|line| view(line, units)).collect();
        Ok(WorkingView { title: sheet.title, lines, text })
    }
}

fn view(line: &Line, units: Units) -> WorkingLine {
    let inputs = line.inputs.iter();
    WorkingLine {
        name: line.name.clone(),
        formula_mathml: mathml(line.formula),
        formula_text: line.formula.to_owned(),
        inputs: inputs.map(|(symbol, value)| (written(symbol), number(*value))).collect(),
        value: value_words(line, units),
        source: line.source.to_owned(),
    }
}

fn value_words(line: &Line, units: Units) -> String {
    let si = format!("{} {}", number(line.value), line.unit);
    let also = match (units, line.unit) {
        (Units::UsCustomary, "kPa") => Shown::pressure(units).text(line.value),
        (Units::UsCustomary, "m") => Shown::settlement(units).small(line.value),
        _ => return si.trim_end().to_owned(),
    };
    format!("{si} ({also})")
}
