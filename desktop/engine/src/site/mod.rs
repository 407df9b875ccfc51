//! The site file: one JSON document that says everything about a site that is not a reading.
//!
//! Reading is strict: a key that is not known, a number outside its range, an entry that does not
//! fit another one, and every one of them is listed with its line, and the file is not used until
//! all are put right. Nothing is repaired or guessed. The file stays the source; writing it back
//! ([`SiteFile::to_json`]) gives the same content.
//!
//! Each key is declared once, in `model`; the JSON Schema published beside this crate as
//! `site.schema.json` comes from the same declarations ([`schema`]).

pub mod bounds;
pub(crate) mod check;
mod convert;
mod model;
mod problem;
pub(crate) mod reader;

pub use convert::ConversionError;
pub use model::{
    Band, BandCase, Base, BaseDrainage, BaseStiffness, Calibration, Column, Compressibility,
    Decimal, Delimiter, Direction, DrainPattern, Drains, FileEncoding, Format, Instrument,
    InstrumentKind, InstrumentUnit, Layer, Limit, LimitDefaults, LimitRule, Liquid, Persistence,
    Preconsolidation, ReadingsLayout, Signal, Site, SiteFile, Stage, Tank, Trigger, Water,
};
pub use problem::{Problem, SiteProblems};
pub use reader::InstantText;

use jsonc_parser::{CollectOptions, ParseOptions, parse_to_ast};
use reader::{Definitions, Nested, Node, Reading, Record, Rule};
use std::path::Path;

/// Largest site file that is opened, bytes.
const LARGEST_FILE: u64 = 16 << 20;

/// Reads a site file.
///
/// # Errors
/// All problems of the file, by line; also when it cannot be opened.
pub fn read(path: &Path) -> Result<SiteFile, SiteProblems> {
    let file = path.display().to_string();
    let size = std::fs::metadata(path).map_or(0, |about| about.len());
    if size > LARGEST_FILE {
        let found = format!("a file of {size} bytes");
        let allowed = format!("at most {LARGEST_FILE} bytes");
        return Err(alone(&file, 1, 1, found, allowed, "This is not a site file."));
    }
    let bytes = std::fs::read(path).map_err(|error| {
        alone(
            &file,
            1,
            1,
            format!("no readable file ({error})"),
            "a site file".to_owned(),
            "Check name and rights.",
        )
    })?;
    match std::str::from_utf8(&bytes) {
        Ok(text) => parse(text, &file),
        Err(error) => {
            let line =
                1 + bytes.iter().take(error.valid_up_to()).filter(|&&byte| byte == b'\n').count();
            let found = "bytes that are not UTF-8".to_owned();
            let allowed = "JSON text in UTF-8".to_owned();
            Err(alone(&file, line as u32, 1, found, allowed, "Save the file in UTF-8."))
        }
    }
}

/// Reads the text of a site file; `file` is its name in messages.
///
/// # Errors
/// All problems of the text, by line.
pub fn parse(text: &str, file: &str) -> Result<SiteFile, SiteProblems> {
    document(text, file, core_checks)
}

/// Reads a document of its kind; `last_word` checks what could be read without a problem.
pub(crate) fn document<T: Record>(
    text: &str,
    file: &str,
    last_word: impl FnOnce(&Reading<'_>, &T),
) -> Result<T, SiteProblems> {
    // Some editors begin a UTF-8 file with a byte order mark.
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let parsed = parse_to_ast(text, &CollectOptions::default(), &strict()).map_err(|error| {
        let (line, column) = (error.line_display() as u32, error.column_display() as u32);
        let found = format!("\"{}\"", error.kind());
        alone(
            file,
            line,
            column,
            found,
            "a JSON document".to_owned(),
            "Nothing after this place was read.",
        )
    })?;
    let Some(root) = parsed.value else {
        let allowed = "a JSON document".to_owned();
        return Err(alone(file, 1, 1, "an empty file".to_owned(), allowed, ""));
    };
    let reading = Reading::new(text);
    let read = T::read_record(&Node::new(&reading, &root, String::new()));
    if let Some(read) = read.as_ref().filter(|_| reading.is_clean()) {
        last_word(&reading, read);
    }
    let (problems, not_cross_checked) = reading.into_problems();
    match read {
        Some(read) if problems.is_empty() => Ok(read),
        _ => Err(SiteProblems { file: file.to_owned(), problems, not_cross_checked }),
    }
}

/// The core has the last word on what it calculates with.
fn core_checks(reading: &Reading<'_>, site: &SiteFile) {
    let allowed = "what the calculation takes";
    let ground = site.ground().map_err(|error| error.to_string());
    if let Err(reason) = ground.and_then(|ground| ground.check().map_err(|error| error.to_string()))
    {
        reading.report("layers", "a ground profile that was refused", allowed, reason);
    }
    let tanks = site.tanks().map_err(|error| error.to_string());
    for (index, tank) in tanks.iter().flatten().enumerate() {
        if let Err(error) = tank.check() {
            let path = format!("tanks[{index}]");
            reading.report(&path, "a tank that was refused", allowed, error.to_string());
        }
    }
}

fn strict() -> ParseOptions {
    ParseOptions {
        allow_comments: false,
        allow_loose_object_property_names: false,
        allow_trailing_commas: false,
        allow_missing_commas: false,
        allow_single_quoted_strings: false,
        allow_hexadecimal_numbers: false,
        allow_unary_plus_numbers: false,
        allow_bare_decimal_point_numbers: false,
        allow_non_finite_numbers: false,
        allow_extended_string_escapes: false,
    }
}

fn alone(
    file: &str,
    line: u32,
    column: u32,
    found: String,
    allowed: String,
    remedy: &str,
) -> SiteProblems {
    let problem =
        Problem { line, column, path: String::new(), found, allowed, remedy: remedy.to_owned() };
    SiteProblems { file: file.to_owned(), problems: vec![problem], not_cross_checked: Vec::new() }
}

impl SiteFile {
    /// The document as JSON text.
    ///
    /// # Errors
    /// When a number is not finite, which reading never lets in.
    pub fn to_json(&self) -> Result<String, serde_json::Error> {
        Ok(serde_json::to_string_pretty(self)? + "\n")
    }
}

/// The JSON Schema (draft 2020-12) of a site file. It says what a single value may be; what must
/// hold between values only [`parse`] says.
#[must_use]
pub fn schema() -> serde_json::Value {
    let mut definitions = Definitions::new();
    let root = Nested::<SiteFile>::new().schema(&mut definitions);
    serde_json::json!({
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Site file",
        "$ref": root["$ref"],
        "$defs": definitions,
    })
}
