//! The report as text for a terminal.

use super::table::{painted, plain, wrapped};
use super::{
    CAUTIONS, Cell, Column, INCOMPLETE, INVENTED, InstrumentRow, ReportPage, Table, words,
};
use crate::chart::{Mark, stamp};

/// What the terminal can do.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct TerminalOptions {
    /// Room in columns, where it is known.
    pub width: Option<usize>,
    /// Whether colours may be used, see [`colour_wanted`].
    pub colour: bool,
}

/// Whether colours are wanted: on a terminal, unless the variable `NO_COLOR` is set and not empty
/// (the convention of no-color.org).
pub fn colour_wanted(is_terminal: bool) -> bool {
    is_terminal && std::env::var_os("NO_COLOR").is_none_or(|value| value.is_empty())
}

/// The mark as a letter: it fills like the ring of the drawings; squares are not the ground.
fn sign(mark: Mark) -> String {
    let sign = match mark {
        Mark::Normal => "○",
        Mark::Watch { .. } => "◔",
        Mark::Review { .. } => "◕",
        Mark::Stop { .. } => "●",
        Mark::Fault => "▨",
        Mark::NotJudged => "□",
    };
    format!("{sign} {}", mark.phrase())
}

impl ReportPage {
    /// The report as text, ending with a line break.
    pub fn to_text(&self, options: TerminalOptions) -> String {
        let width = options.width.unwrap_or(100).clamp(40, 100);
        let mut lines = vec![plain(&format!("{}, {}", self.site, self.title))];
        lines.push(stamp(self.moment_s, &self.zone));
        if self.invented {
            lines.push(INVENTED.to_owned());
        }
        let load: Vec<_> =
            self.load.iter().map(|fact| format!("{} {}", fact.name, fact.value)).collect();
        lines.extend(wrapped(&load.join(" · "), width));
        lines.push(String::new());
        for sentence in self.headline.iter().chain([&self.counts()]) {
            lines.extend(wrapped(sentence, width));
        }
        if self.is_incomplete() {
            lines.extend(wrapped(INCOMPLETE, width));
        }
        lines.push(String::new());
        if let Some(load) = self.common_load() {
            lines.push(plain(&format!("{}{}", words::READ_AT, words::load(load))));
        }
        lines.extend(self.instrument_table().lines(options.width, options.colour));
        if !self.faults.is_empty() {
            lines.push(String::new());
            lines.push("Equipment faults".to_owned());
            lines.extend(self.fault_lines(options, width));
        }
        if !self.import.is_empty() {
            lines.push(String::new());
            lines.push("Import".to_owned());
            lines.extend(self.import_lines(width));
        }
        lines.push(String::new());
        lines.extend(wrapped(&CAUTIONS.join(" "), width));
        lines.join("\n") + "\n"
    }

    /// The instruments as a table.
    pub fn instrument_table(&self) -> Table {
        let common = self.common_load();
        let load = |row: &InstrumentRow| match (&row.load, common) {
            (Some(load), Some(common)) if load != common => words::load(load),
            _ => String::new(),
        };
        let rows = self.instruments.iter().map(|row| {
            let verdict = Cell { text: sign(row.mark), tone: Some(row.mark.token()) };
            vec![
                verdict,
                row.id.clone().into(),
                row.kind.clone().into(),
                row.place.clone().into(),
                words::value(row.reading, row).into(),
                words::value(row.expected, row).into(),
                words::band(row).into(),
                words::margin(row)
                    .map_or_else(|| "–".to_owned(), |(by, to)| format!("{by} {to}"))
                    .into(),
                row.data_state.clone().into(),
                words::age(row.age_s).into(),
                load(row).into(),
            ]
        });
        let mut table = Table {
            columns: vec![
                Column::left("trigger"),
                Column::left("point"),
                Column::cut("kind"),
                Column::cut("where"),
                Column::right("reading"),
                Column::right("expected"),
                Column::right("band"),
                Column::left("margin"),
                Column::left("data"),
                Column::right("age"),
                Column::left("at another load"),
            ],
            rows: rows.collect(),
        };
        // Only where there is one.
        if table.rows.iter().all(|row| row.last().is_none_or(|cell| cell.text.is_empty())) {
            table.columns.pop();
            table.rows.iter_mut().for_each(|row| drop(row.pop()));
        }
        table
    }

    fn fault_lines(&self, options: TerminalOptions, width: usize) -> Vec<String> {
        let mut lines = Vec::new();
        for fault in &self.faults {
            let since =
                fault.since_s.map(|since_s| format!(" since {}", stamp(since_s, &self.zone)));
            let text = format!(
                "{} {}, {}: {}{}. {} {}",
                fault.id,
                fault.kind,
                fault.place,
                fault.data_state,
                since.unwrap_or_default(),
                fault.evidence,
                fault.next_step
            );
            for (index, line) in wrapped(&text, width - 2).into_iter().enumerate() {
                let sign = if options.colour {
                    painted("▨", Mark::Fault.token())
                } else {
                    "▨".to_owned()
                };
                let lead = if index == 0 { sign + " " } else { "  ".to_owned() };
                lines.push(lead + line.trim_end());
            }
        }
        lines
    }

    fn import_lines(&self, width: usize) -> Vec<String> {
        let mut lines = Vec::new();
        for file in &self.import {
            lines.extend(wrapped(&words::import(file), width));
            for message in &file.messages {
                let text = words::import_message(message);
                lines.extend(wrapped(&text, width - 2).into_iter().map(|line| format!("  {line}")));
            }
        }
        lines
    }
}
