//! The rows of one file to readings by column.

use super::clock::Clock;
use super::number;
use super::report::{FileReport, Reason};
use super::series::{NoValue, NotRead, Sample};
use crate::site::{Decimal, Delimiter, ReadingsLayout};
use crate::units::UnitName;
use csv::{ByteRecord, ReaderBuilder};

/// One column that is taken.
#[derive(Debug)]
pub(super) struct TakenColumn {
    /// Position in the row.
    pub position: usize,
    /// Header, for messages.
    pub header: String,
    /// Unit in the file.
    pub unit: UnitName,
    /// Unit of the series.
    pub to: UnitName,
    /// The values stand for themselves: keep them as raw values too.
    pub keep_raw: bool,
    /// The readings, in the order of the file.
    pub points: Vec<Sample>,
    /// Times without a value.
    pub not_read: Vec<NotRead>,
}

/// A missing-value mark, as it stands and as a number.
#[derive(Debug)]
struct Mark {
    text: String,
    value: Option<f64>,
}

/// What the rows of a file have in common.
#[derive(Debug)]
pub(super) struct RowReader<'l> {
    layout: &'l ReadingsLayout,
    clock: Clock<'l>,
    marks: Vec<Mark>,
    time_position: usize,
    fields: usize,
    source: u32,
}

impl<'l> RowReader<'l> {
    pub(super) fn new(
        layout: &'l ReadingsLayout,
        clock: Clock<'l>,
        time_position: usize,
        fields: usize,
        source: u32,
    ) -> Self {
        let mark = |text: &String| {
            let text = text.trim().to_owned();
            let value = number::read(text.as_bytes(), layout.decimal).ok();
            Mark { text, value }
        };
        let marks = layout.missing.iter().map(mark).filter(|mark| !mark.text.is_empty()).collect();
        Self { layout, clock, marks, time_position, fields, source }
    }

    /// Reads all rows of `body`, whose first line is line `first_line` of the file.
    pub(super) fn read(
        &self,
        body: &str,
        first_line: u32,
        columns: &mut [TakenColumn],
        report: &mut FileReport,
    ) {
        let mut latest = i64::MIN;
        each_record(body, first_line, self.layout.delimiter, report, |line, record, report| {
            report.rows += 1;
            if let Some(time_s) = self.row(line, record, columns, report) {
                report.rows_accepted += 1;
                note_time(report, time_s, &mut latest);
            }
        });
    }

    /// Takes one row; the time when the row was accepted.
    fn row(
        &self,
        line: u32,
        record: &ByteRecord,
        columns: &mut [TakenColumn],
        report: &mut FileReport,
    ) -> Option<i64> {
        // A delimiter at the end of the row adds an empty field.
        let ended = record.len() == self.fields + 1
            && record.get(self.fields).is_some_and(<[u8]>::is_empty);
        if record.len() != self.fields && !ended {
            report.refuse(line, "", &joined(record, self.layout.delimiter), Reason::FieldCount);
            return None;
        }
        let time_text = record.get(self.time_position)?.trim_ascii();
        let time_s = match self.clock.instant(time_text) {
            Ok(time_s) => time_s,
            Err(reason) => {
                report.refuse(line, &self.layout.time_column, time_text, reason);
                return None;
            }
        };
        for column in columns {
            let field = record.get(column.position).unwrap_or_default().trim_ascii();
            self.field(time_s, line, field, column, report);
        }
        Some(time_s)
    }

    fn field(
        &self,
        time_s: i64,
        line: u32,
        field: &[u8],
        column: &mut TakenColumn,
        report: &mut FileReport,
    ) {
        let mut no_value =
            |reason| column.not_read.push(NotRead { time_s, reason, source: self.source, line });
        if field.is_empty() || self.is_mark(field) {
            report.missing += 1;
            return no_value(NoValue::Missing);
        }
        match number::read(field, self.layout.decimal) {
            Ok(value) if self.marks.iter().any(|mark| mark.value == Some(value)) => {
                report.missing += 1;
                no_value(NoValue::Missing);
            }
            Ok(written) => {
                // The dimensions were compared when the column was taken.
                let value = column.unit.convert(written, column.to).unwrap_or(written);
                let raw = (column.keep_raw || column.unit != column.to).then_some(written);
                report.readings += 1;
                column.points.push(Sample { time_s, value, source: self.source, line, raw });
            }
            Err(reason) => {
                no_value(NoValue::Refused);
                report.refuse(line, &column.header, field, Reason::Number(reason));
            }
        }
    }

    fn is_mark(&self, field: &[u8]) -> bool {
        self.marks.iter().any(|mark| field.eq_ignore_ascii_case(mark.text.as_bytes()))
    }
}

fn note_time(report: &mut FileReport, time_s: i64, latest: &mut i64) {
    if time_s < *latest {
        report.out_of_order += 1;
        report.latest_by_s = report.latest_by_s.max(*latest - time_s);
    }
    *latest = time_s.max(*latest);
    let (first, last) = report.times_s.unwrap_or((time_s, time_s));
    report.times_s = Some((first.min(time_s), last.max(time_s)));
}

fn joined(record: &ByteRecord, delimiter: Delimiter) -> Vec<u8> {
    let fields: Vec<&[u8]> = record.iter().collect();
    fields.join(delimiter.word().as_bytes())
}

/// The single byte of a delimiter.
fn delimiter_byte(delimiter: Delimiter) -> u8 {
    delimiter.word().as_bytes().first().copied().unwrap_or(b',')
}

/// Hands out every record with its line. A quotation mark that is not closed on its line would
/// swallow the lines below it: that line alone is refused and reading goes on below it.
pub(super) fn each_record(
    body: &str,
    first_line: u32,
    delimiter: Delimiter,
    report: &mut FileReport,
    mut take: impl FnMut(u32, &ByteRecord, &mut FileReport),
) {
    let (mut rest, mut line_before) = (body, first_line.saturating_sub(1));
    while let Some(open_at) = records(rest, line_before, delimiter, report, &mut take) {
        let (skipped, below) = split_after_line(rest, open_at);
        let line = line_before + 1 + count_lines(&rest[..open_at]);
        let text = &rest[open_at..skipped];
        report.rows += 1;
        report.refuse(line, "", text.trim_end().as_bytes(), Reason::OpenQuote);
        (rest, line_before) = (below, line);
    }
}

/// Reads records until the end (`None`) or until one that spans lines: the byte where it begins.
fn records(
    text: &str,
    line_before: u32,
    delimiter: Delimiter,
    report: &mut FileReport,
    take: &mut impl FnMut(u32, &ByteRecord, &mut FileReport),
) -> Option<usize> {
    let mut reader = csv_reader(text, delimiter);
    let mut record = ByteRecord::new();
    while reader.read_byte_record(&mut record).unwrap_or(false) {
        let place = record.position()?.clone();
        let from = place.byte() as usize;
        let begins = skip_blank_lines(text, from);
        if record.as_slice().contains(&b'\n') {
            return Some(begins);
        }
        if record.len() == 1 && record.as_slice().trim_ascii().is_empty() {
            continue;
        }
        let line = line_before + place.line() as u32 + count_lines(&text[from..begins]);
        take(line, &record, report);
    }
    None
}

/// Position and line of a record are those of the first byte after the record before, which may be
/// a line break.
fn skip_blank_lines(text: &str, from: usize) -> usize {
    let breaks =
        text.as_bytes().iter().skip(from).take_while(|byte| matches!(byte, b'\r' | b'\n')).count();
    from + breaks
}

/// The end of the line that holds `at`, and the text below it.
fn split_after_line(text: &str, at: usize) -> (usize, &str) {
    let end = text[at..].find('\n').map_or(text.len(), |length| at + length + 1);
    (end, &text[end..])
}

fn count_lines(text: &str) -> u32 {
    text.bytes().filter(|&byte| byte == b'\n').count() as u32
}

/// Skips lines; the rest of the text, or `None` when there are not so many.
pub(super) fn below(text: &str, lines: u32) -> Option<&str> {
    let mut rest = text;
    for _ in 0..lines {
        rest = &rest[rest.find('\n')? + 1..];
    }
    Some(rest)
}

/// The header line of a text and what stands below it.
pub(super) fn headers(text: &str, delimiter: Delimiter) -> Option<(Vec<String>, &str)> {
    let (end, below) = split_after_line(text, 0);
    let mut headers = fields(text.get(..end)?, delimiter);
    // A delimiter at the end of the line is not a column.
    while headers.last().is_some_and(String::is_empty) {
        headers.pop();
    }
    (!headers.is_empty()).then_some((headers, below))
}

/// The fields of one line, without surrounding space.
pub(super) fn fields(line: &str, delimiter: Delimiter) -> Vec<String> {
    let mut record = ByteRecord::new();
    let found = csv_reader(line, delimiter).read_byte_record(&mut record).unwrap_or(false);
    let text = |field: &[u8]| String::from_utf8_lossy(field).trim().to_owned();
    if found { record.iter().map(text).collect() } else { Vec::new() }
}

fn csv_reader(text: &str, delimiter: Delimiter) -> csv::Reader<&[u8]> {
    ReaderBuilder::new()
        .has_headers(false)
        .flexible(true)
        .delimiter(delimiter_byte(delimiter))
        .from_reader(text.as_bytes())
}

/// Whether a file with this decimal mark may hold this field as a number; for guessing.
pub(super) fn is_number(field: &str, decimal: Decimal) -> bool {
    number::read(field.trim().as_bytes(), decimal).is_ok()
}
