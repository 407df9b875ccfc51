//! What is wrong with a site file, where, and what to do about it.

use serde::Serialize;
use std::fmt;

/// One thing to put right.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Problem {
    /// Line in the file, counted from 1.
    pub line: u32,
    /// Column in the line, in characters, counted from 1.
    pub column: u32,
    /// Place in the document, such as `layers[1].thickness_m`; empty for the document itself.
    pub path: String,
    /// What stands there.
    pub found: String,
    /// What may stand there.
    pub allowed: String,
    /// What to look at; may be empty.
    pub remedy: String,
}

impl fmt::Display for Problem {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if !self.path.is_empty() {
            write!(f, "{}: ", self.path)?;
        }
        write!(f, "found {}; allowed: {}.", self.found, self.allowed)?;
        if self.remedy.is_empty() { Ok(()) } else { write!(f, " {}", self.remedy) }
    }
}

/// Every problem of one site file, in the order of its lines. Nothing of the file is used.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct SiteProblems {
    /// The file as it was named.
    pub file: String,
    /// The problems, at least one.
    pub problems: Vec<Problem>,
    /// Sections so incomplete that they could not be checked against the others; more problems
    /// may appear there once these are put right.
    pub not_cross_checked: Vec<String>,
}

impl fmt::Display for SiteProblems {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let count = self.problems.len();
        let noun = if count == 1 { "problem" } else { "problems" };
        writeln!(
            f,
            "{}: {count} {noun}; the file is not used until all are put right.",
            self.file
        )?;
        for problem in &self.problems {
            writeln!(f, "{}:{}:{}: {problem}", self.file, problem.line, problem.column)?;
        }
        if !self.not_cross_checked.is_empty() {
            writeln!(
                f,
                "Not yet checked against the other sections: {}.",
                self.not_cross_checked.join(", ")
            )?;
        }
        Ok(())
    }
}

impl std::error::Error for SiteProblems {}
