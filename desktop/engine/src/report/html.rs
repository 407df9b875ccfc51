//! The report as one page: no script, nothing from elsewhere, readable for years. Drawings and
//! fonts are inside. Dark where the reader's system asks for it, light on paper.

use super::table::{Align, Table};
use super::{
    CAUTIONS, ChartSection, FaultRow, INCOMPLETE, INVENTED, ImportFile, InstrumentRow,
    LoadAtReading, ReportPage, age_in_words, words,
};
use crate::chart::theme::{LIGHT, stylesheet};
use crate::chart::{Mark, band_bar, escape, font, stamp};
use base64::Engine;
use base64::prelude::BASE64_STANDARD;
use std::fmt::Write;

/// How the page is made.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct HtmlOptions {
    /// Puts the font into the page (45 kB), so that it looks the same everywhere.
    pub embed_font: bool,
}

const STYLE: &str = include_str!("page.css");

/// Nothing may be loaded or run, even if markup were to slip in.
const POLICY: &str = "default-src 'none'; style-src 'unsafe-inline'; font-src data:";

impl ReportPage {
    /// The report as a page of HTML.
    pub fn to_html(&self, options: HtmlOptions) -> String {
        let title = escape(&format!("{}, {}", self.title, self.site));
        let fonts = if options.embed_font { font_faces() } else { String::new() };
        let mut page = format!(
            "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n<meta http-equiv=\"Content-Security-Policy\" content=\"{POLICY}\">\n<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n<title>{title}</title>\n<style>\n{fonts}{}{STYLE}</style>\n</head>\n<body>\n",
            stylesheet()
        );
        page.push_str(&self.header());
        page.push_str(&self.headline_section());
        page.push_str(&self.instruments_section());
        page.push_str(&self.faults_section());
        page.push_str(&section("Charts", self.charts.iter().map(figure)));
        page.push_str(&section("Import", self.import.iter().map(import_file)));
        let _ = write!(
            page,
            "<footer><p>Judged at {}. Times are local to the site. {}</p></footer>\n</body>\n</html>\n",
            escape(&stamp(self.moment_s, &self.zone)),
            CAUTIONS[0]
        );
        page
    }

    fn header(&self) -> String {
        let mut part = format!(
            "<header>\n<h1>{}</h1>\n<p>{}, <strong>{}</strong></p>\n",
            escape(&self.title),
            escape(&self.site),
            escape(&stamp(self.moment_s, &self.zone))
        );
        if self.invented {
            let _ = writeln!(part, "<p class=\"invented\">{INVENTED}</p>");
        }
        if !self.load.is_empty() {
            part.push_str("<dl class=\"load\">");
            for fact in &self.load {
                let (name, value) = (escape(&fact.name), escape(&fact.value));
                let _ = write!(part, "<div><dt>{name}</dt><dd>{value}</dd></div>");
            }
            part.push_str("</dl>\n");
        }
        part + "</header>\n"
    }

    fn headline_section(&self) -> String {
        let mut part = String::from("<section class=\"headline\">\n");
        for sentence in self.headline.iter().chain([&self.counts()]) {
            let _ = writeln!(part, "<p>{}</p>", escape(sentence));
        }
        if self.is_incomplete() {
            let _ = writeln!(part, "<p class=\"incomplete\">{INCOMPLETE}</p>");
        }
        let cautions = CAUTIONS.map(escape).join(" ");
        let _ = write!(part, "<div class=\"cautions\"><p>{cautions}</p></div>\n</section>\n");
        part
    }

    fn instruments_section(&self) -> String {
        let common = self.common_load();
        let mut part = String::from("<section>\n<h2>Instruments</h2>\n");
        if let Some(load) = common {
            let load = escape(&words::load(load));
            let _ = writeln!(part, "<p class=\"soft\">{}{load}</p>", words::READ_AT);
        }
        part.push_str(
            "<div class=\"wide\"><table>\n<thead><tr><th>Trigger</th><th>Point</th><th class=\"number\">Reading</th><th class=\"number\">Expected</th><th>Band and limits</th><th>Margin</th><th>Data</th></tr></thead>\n<tbody>\n",
        );
        for row in &self.instruments {
            part.push_str(&instrument_row(row, common));
        }
        part + "</tbody></table></div>\n</section>\n"
    }

    fn faults_section(&self) -> String {
        if self.faults.is_empty() {
            return "<section>\n<h2>Equipment faults</h2>\n<p>None known.</p>\n</section>\n"
                .to_owned();
        }
        let mut part = String::from(
            "<section>\n<h2>Equipment faults</h2>\n<div class=\"wide\"><table>\n<thead><tr><th>Point</th><th>Where</th><th>Data</th><th>Since</th><th>Evidence</th><th>Next step</th></tr></thead>\n<tbody>\n",
        );
        for fault in &self.faults {
            part.push_str(&self.fault_row(fault));
        }
        part + "</tbody></table></div>\n</section>\n"
    }

    fn fault_row(&self, fault: &FaultRow) -> String {
        let since = fault.since_s.map(|since_s| stamp(since_s, &self.zone));
        format!(
            "<tr><td class=\"verdict\">{}{}<small>{}</small></td><td>{}</td><td class=\"whole ink-fault\">{}</td><td>{}</td><td>{}</td><td>{}</td></tr>\n",
            Mark::Fault.svg(18.0, &LIGHT),
            escape(&fault.id),
            escape(&fault.kind),
            escape(&fault.place),
            escape(&fault.data_state),
            escape(since.as_deref().unwrap_or("–")),
            escape(&fault.evidence),
            escape(&fault.next_step)
        )
    }
}

/// A section of its parts; nothing where there are none.
fn section(heading: &str, parts: impl Iterator<Item = String>) -> String {
    let parts: String = parts.collect();
    if parts.is_empty() {
        return String::new();
    }
    format!("<section>\n<h2>{heading}</h2>\n{parts}</section>\n")
}

fn instrument_row(row: &InstrumentRow, common: Option<&LoadAtReading>) -> String {
    let unconfirmed = if row.mark.is_unconfirmed() { small("unconfirmed") } else { String::new() };
    let other_load = row.load.as_ref().filter(|load| Some(*load) != common);
    let load = other_load.map(|load| small(&format!("at {}", words::load(load))));
    let (margin, to) = words::margin(row).unwrap_or_else(|| ("–".to_owned(), String::new()));
    format!(
        "<tr><td class=\"verdict ink-{}\">{}{}{unconfirmed}</td><td><strong>{}</strong> {}{}</td><td class=\"number\"><strong>{}</strong>{}</td><td class=\"number\">{}</td><td class=\"whole\">{}{}</td><td class=\"whole\">{}{}</td><td class=\"whole\">{}{}</td></tr>\n",
        row.mark.token().name(),
        row.mark.svg(18.0, &LIGHT),
        row.mark.word(),
        escape(&row.id),
        escape(&row.kind),
        small(&row.place),
        escape(&words::value(row.reading, row)),
        load.unwrap_or_default(),
        escape(&words::value(row.expected, row)),
        escape(&words::band(row)),
        bar(row),
        escape(&margin),
        small(&to),
        escape(&row.data_state),
        small(&row.age_s.map(|age_s| format!("{} old", age_in_words(age_s))).unwrap_or_default())
    )
}

fn bar(row: &InstrumentRow) -> String {
    let (Some(low), Some(high)) = (row.band_low, row.band_high) else { return String::new() };
    let name = format!("reading {}, band {}", words::value(row.reading, row), words::band(row));
    let limits: Vec<_> = row.limits.iter().map(|limit| (limit.trigger, limit.value)).collect();
    band_bar((low, high), &limits, row.reading, &name, &LIGHT)
}

/// A second, smaller line; nothing where there is nothing to say.
fn small(text: &str) -> String {
    if text.is_empty() { String::new() } else { format!("<small>{}</small>", escape(text)) }
}

fn figure(chart: &ChartSection) -> String {
    let values = chart.values.as_ref().map(values_table).unwrap_or_default();
    format!(
        "<figure>\n{}<figcaption>{}</figcaption>\n{values}</figure>\n",
        chart.svg,
        escape(&chart.caption)
    )
}

fn values_table(table: &Table) -> String {
    let class = |align| if align == Align::Right { " class=\"number\"" } else { "" };
    let mut part =
        String::from("<details><summary>Values</summary><div class=\"wide\"><table><thead><tr>");
    for column in &table.columns {
        let _ = write!(part, "<th{}>{}</th>", class(column.align), escape(&column.name));
    }
    part.push_str("</tr></thead><tbody>\n");
    for row in &table.rows {
        part.push_str("<tr>");
        for (cell, column) in row.iter().zip(&table.columns) {
            let _ = write!(part, "<td{}>{}</td>", class(column.align), escape(&cell.text));
        }
        part.push_str("</tr>\n");
    }
    part + "</tbody></table></div></details>\n"
}

fn import_file(file: &ImportFile) -> String {
    let mut part = format!("<p>{}</p>\n", escape(&words::import(file)));
    if !file.messages.is_empty() {
        part.push_str("<ul>\n");
        for message in &file.messages {
            let class = if message.lost_data { " class=\"lost\"" } else { "" };
            let _ = writeln!(part, "<li{class}>{}</li>", escape(&words::import_message(message)));
        }
        part.push_str("</ul>\n");
    }
    part
}

fn font_faces() -> String {
    let weights = font::WEB_FILES.iter().zip(["400", "600"]);
    weights.fold(String::new(), |mut css, (file, weight)| {
        let _ = writeln!(
            css,
            "@font-face{{font-family:\"{}\";font-weight:{weight};src:url(data:font/woff2;base64,{}) format(\"woff2\")}}",
            font::FAMILY,
            BASE64_STANDARD.encode(file)
        );
        css
    })
}
