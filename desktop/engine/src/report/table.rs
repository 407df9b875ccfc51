//! A table of text that lines up in a terminal, whatever letters are in it.

use crate::chart::Token;
use unicode_width::UnicodeWidthStr;

/// Where the text of a column stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Align {
    Left,
    Right,
}

/// A column.
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    pub name: String,
    pub align: Align,
    /// May be cut, with an ellipsis, when the table is too wide. Never for a value or a verdict.
    pub may_be_cut: bool,
}

/// One entry.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Cell {
    pub text: String,
    /// Colour, beside what the text says by itself.
    pub tone: Option<Token>,
}

/// Columns and rows.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Table {
    pub columns: Vec<Column>,
    pub rows: Vec<Vec<Cell>>,
}

/// Narrowest a cut column gets.
const LEAST_WIDTH: usize = 8;
const GAP: &str = "  ";

impl Column {
    pub fn left(name: &str) -> Self {
        Self { name: name.to_owned(), align: Align::Left, may_be_cut: false }
    }

    pub fn right(name: &str) -> Self {
        Self { align: Align::Right, ..Self::left(name) }
    }

    pub fn cut(name: &str) -> Self {
        Self { may_be_cut: true, ..Self::left(name) }
    }
}

impl From<String> for Cell {
    fn from(text: String) -> Self {
        Self { text, tone: None }
    }
}

impl From<&str> for Cell {
    fn from(text: &str) -> Self {
        Self::from(text.to_owned())
    }
}

impl Table {
    /// The table as lines; `width` is the room of the terminal, where there is one.
    pub fn lines(&self, width: Option<usize>, colour: bool) -> Vec<String> {
        let widths = self.widths(width);
        let names = self.columns.iter().map(|column| Cell::from(column.name.as_str()));
        let rule = widths.iter().map(|width| "─".repeat(*width)).collect::<Vec<_>>().join(GAP);
        let mut lines = vec![self.line(&names.collect::<Vec<_>>(), &widths, false), rule];
        lines.extend(self.rows.iter().map(|row| self.line(row, &widths, colour)));
        lines
    }

    fn widths(&self, width: Option<usize>) -> Vec<usize> {
        let mut widths: Vec<usize> = self
            .columns
            .iter()
            .enumerate()
            .map(|(index, column)| {
                let cells = self.rows.iter().filter_map(|row| row.get(index));
                let widest = cells.map(|cell| plain(&cell.text).width()).max().unwrap_or(0);
                widest.max(column.name.width())
            })
            .collect();
        let Some(room) = width else { return widths };
        for (index, column) in self.columns.iter().enumerate().filter(|(_, c)| c.may_be_cut) {
            let total = widths.iter().sum::<usize>() + GAP.len() * (widths.len() - 1);
            let over = total.saturating_sub(room);
            let least = LEAST_WIDTH.max(column.name.width()).min(widths[index]);
            widths[index] = widths[index].saturating_sub(over).max(least);
        }
        widths
    }

    fn line(&self, row: &[Cell], widths: &[usize], colour: bool) -> String {
        let cells = row.iter().zip(&self.columns).zip(widths);
        let cells: Vec<String> = cells
            .map(|((cell, column), width)| {
                let text = cut(&plain(&cell.text), *width);
                let air = " ".repeat(width - text.width().min(*width));
                let text = match cell.tone {
                    Some(tone) if colour => painted(&text, tone),
                    _ => text,
                };
                match column.align {
                    Align::Left => text + &air,
                    Align::Right => air + &text,
                }
            })
            .collect();
        cells.join(GAP).trim_end().to_owned()
    }
}

/// Text without letters that steer a terminal: a name from a file must not move the cursor.
pub(super) fn plain(text: &str) -> String {
    text.chars().map(|letter| if letter.is_control() { '\u{fffd}' } else { letter }).collect()
}

/// Text in the colour of a token.
pub(super) fn painted(text: &str, tone: Token) -> String {
    let code = match tone {
        Token::Normal => "32",
        Token::Watch => "33",
        Token::Review => "38;5;208",
        Token::Stop => "1;31",
        Token::Fault => "35",
        Token::Water => "36",
        _ => return text.to_owned(),
    };
    format!("\u{1b}[{code}m{text}\u{1b}[0m")
}

fn cut(text: &str, width: usize) -> String {
    if text.width() <= width {
        return text.to_owned();
    }
    let mut kept = text.to_owned();
    while !kept.is_empty() && kept.width() + 1 > width {
        kept.pop();
    }
    kept + "…"
}

/// Lines of at most `width` columns, broken between words.
pub(super) fn wrapped(text: &str, width: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in plain(text).split(' ') {
        match lines.last_mut() {
            Some(line) if line.width() + 1 + word.width() <= width => {
                line.push(' ');
                line.push_str(word);
            }
            _ => lines.push(word.to_owned()),
        }
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table() -> Table {
        let row = |id: &str, place: &str, value: &str| -> Vec<Cell> {
            vec![id.into(), place.into(), Cell { text: value.to_owned(), tone: Some(Token::Stop) }]
        };
        Table {
            columns: vec![Column::left("point"), Column::cut("where"), Column::right("reading")],
            rows: vec![
                row("P9", "east edge", "91.6 kPa"),
                row("測点1", "nördlicher Rand der Tasse, tief", "–"),
            ],
        }
    }

    #[test]
    fn columns_line_up_whatever_the_letters() {
        let lines = table().lines(None, false);
        let widths: Vec<_> = lines.iter().map(|line| line.width()).collect();
        assert!(widths.iter().all(|width| *width == widths[0]), "{lines:#?}");
        assert!(lines[2].starts_with("P9     "));
    }

    #[test]
    fn only_a_column_that_may_be_cut_is_cut() {
        let lines = table().lines(Some(30), false);
        assert!(lines.iter().all(|line| line.width() <= 30), "{lines:#?}");
        assert!(lines[3].contains('…') && lines[2].ends_with("91.6 kPa"));
    }

    #[test]
    fn colour_adds_nothing_but_colour() {
        let (bare, coloured) = (table().lines(None, false), table().lines(None, true));
        assert_ne!(bare, coloured);
        let stripped: Vec<_> = coloured
            .iter()
            .map(|line| line.replace("\u{1b}[1;31m", "").replace("\u{1b}[0m", ""))
            .collect();
        assert_eq!(bare, stripped);
    }

    #[test]
    fn a_name_cannot_steer_the_terminal() {
        let mut table = table();
        table.rows[0][0] = "\u{1b}[2JP9\r\n".into();
        let text = table.lines(None, false).join("");
        assert!(!text.contains(|letter: char| letter.is_control()));
    }

    #[test]
    fn sentences_break_between_words() {
        assert_eq!(wrapped("one two three", 7), ["one two", "three"]);
    }
}
