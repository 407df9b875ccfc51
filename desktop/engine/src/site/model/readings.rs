//! How files of readings are written.

use super::super::reader::{ByName, List, Maybe, Nested, OneOf, Whole, choices, record, union};
use super::{FREE, NAME, SHORT};
use crate::units::UnitName;
use std::collections::BTreeMap;

choices! {
    /// What parts the columns of a file.
    pub enum Delimiter {
        /// Comma.
        Comma = ",",
        /// Semicolon.
        Semicolon = ";",
        /// Tabulator.
        Tab = "\t",
        /// Vertical bar.
        Bar = "|",
    }
}

choices! {
    /// What stands before the decimals of a number.
    pub enum Decimal {
        /// A point.
        Point = ".",
        /// A comma.
        Comma = ",",
    }
}

choices! {
    /// How characters are written as bytes.
    pub enum FileEncoding {
        /// UTF-8, with or without byte order mark.
        Utf8 = "utf-8",
        /// UTF-16, low byte first.
        Utf16Le = "utf-16le",
        /// UTF-16, high byte first.
        Utf16Be = "utf-16be",
        /// Western single bytes; reads Latin-1 too.
        Windows1252 = "windows-1252",
    }
}

choices! {
    /// What a column of an instrument holds.
    pub enum Signal {
        /// What the gauge gives, before calibration.
        Digits = "digits",
        /// A value in a unit.
        Engineering = "engineering",
    }
}

union! {
    /// What a column is.
    pub enum Column {
        words {}
        forms {
            /// The readings of an instrument.
            Instrument {
                /// Which one.
                instrument: String => NAME,
                /// Unit in the file, converted to that of the instrument.
                unit: UnitName => OneOf::new(),
                /// Raw digits or engineering values; engineering when left out.
                raw: Option<Signal> => Maybe(OneOf::new()),
            }
            /// Something else that a reduction needs.
            Channel {
                /// "barometer", "temperature:air", or "temperature:" and the id of an instrument.
                channel: String => SHORT,
                /// Unit in the file.
                unit: UnitName => OneOf::new(),
            }
        }
    }
}

record! {
    /// How one kind of file of readings is written.
    pub struct ReadingsLayout {
        /// Name of this layout.
        name: String => SHORT,
        /// Patterns of file names, such as "P*.csv".
        files: Vec<String> => List(SHORT, 1..=100),
        /// Lines before the line of column headers.
        skip_lines: u32 => Whole(0..=1000),
        /// What parts the columns.
        delimiter: Delimiter => OneOf::new(),
        /// What stands before the decimals.
        decimal: Decimal => OneOf::new(),
        /// Encoding; found out when left out.
        encoding: Option<FileEncoding> => Maybe(OneOf::new()),
        /// Header of the time column.
        time_column: String => SHORT,
        /// Format of the times, in the conversions of strptime.
        time_format: String => SHORT,
        /// Zone of the times: IANA name, or a fixed offset such as +08:00.
        time_zone: String => SHORT,
        /// Marks that stand for a missing value; an empty field always does.
        missing: Vec<String> => List(FREE, 0..=100),
        /// What each column is, by its header.
        columns: BTreeMap<String, Column> => ByName(Nested::new()),
    }
}
