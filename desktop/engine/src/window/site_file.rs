//! The site file: its text, what is wrong with a text, and saving it as a new version.

use super::failure::WindowError;
use super::records::{ProblemView, Signature, SiteCheckView, SitePoint, SiteTextView};
use super::section::{Place, section_of};
use super::session::{Progress, Session};
use super::views::{EntryView, Units};
use crate::compare::words::kind_word;
use crate::site::{self, SiteFile};
use crate::store::{Change, Store};

impl Session {
    /// The site file in force, and its versions, the newest first.
    ///
    /// # Errors
    /// A store that cannot be read.
    pub fn site_text(&self) -> Result<SiteTextView, WindowError> {
        let mut versions = self.store().site_versions()?;
        versions.reverse();
        let newest = versions.first();
        Ok(SiteTextView {
            text: newest.map(|version| version.what.clone()).unwrap_or_default(),
            version: newest.map_or(0, |version| u32::try_from(version.id).unwrap_or(u32::MAX)),
            versions: versions
                .iter()
                .map(|version| EntryView {
                    time_text: self.stamp(version.at_s),
                    what: format!("site file {}", version.id),
                    who: version.who.clone(),
                    text: version.why.clone(),
                })
                .collect(),
        })
    }

    /// Saves a new version of the site file and compares everything again.
    ///
    /// # Errors
    /// All problems of the text, or when the store refuses it, such as a change of limits.
    pub fn site_save(
        &self,
        text: &str,
        signature: &Signature,
        now_s: i64,
        progress: Progress<'_>,
    ) -> Result<(SiteTextView, Self), WindowError> {
        progress.step("Checking the site file", 0.0)?;
        site::parse(text, "site file")?;
        let change = Change { who: &signature.who, at_s: now_s, why: &signature.why };
        self.store().add_site_version(text, &change)?;
        let again = self.again(now_s, progress)?;
        Ok((again.site_text()?, again))
    }
}

/// What is wrong with the text of a site file, by line; its drawing when nothing is.
#[must_use]
pub fn site_check(text: &str, units: Units) -> SiteCheckView {
    match site::parse(text, "site file") {
        Ok(site) => SiteCheckView {
            problems: Vec::new(),
            not_cross_checked: Vec::new(),
            section: Some(section_of(&site, units)),
            instruments: points(&site),
        },
        Err(found) => SiteCheckView {
            problems: found
                .problems
                .into_iter()
                .map(|problem| ProblemView {
                    line: problem.line,
                    column: problem.column,
                    path: problem.path,
                    found: problem.found,
                    allowed: problem.allowed,
                    remedy: problem.remedy,
                })
                .collect(),
            not_cross_checked: found.not_cross_checked,
            section: None,
            instruments: Vec::new(),
        },
    }
}

fn points(site: &SiteFile) -> Vec<SitePoint> {
    let each = site.instruments.iter().map(|given| {
        let at = Place::of(site, given);
        SitePoint {
            id: given.id.clone(),
            kind: kind_word(given.kind).to_owned(),
            section_x_m: at.x_m,
            depth_m: at.depth_m,
        }
    });
    each.collect()
}
