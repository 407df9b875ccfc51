//! The log: what people decided, noted and changed, in the order of entry.

use super::failure::WindowError;
use super::records::{Decision, LogEntryView, LogView, Signature};
use super::session::{Session, seconds};
use super::shown::Shown;
use super::views::Units;
use crate::report::age_in_words;
use crate::store::{self, Chain, Change, DecisionBasis, DecisionEntry, Note, Recorded, Store};

/// Characters of a hash that are shown.
const HASH_SHOWN: usize = 8;

impl From<Decision> for store::Decision {
    fn from(decision: Decision) -> Self {
        match decision {
            Decision::Continue => Self::Continue,
            Decision::Hold => Self::Hold,
            Decision::Lower => Self::Lower,
            Decision::Empty => Self::Empty,
        }
    }
}

impl Session {
    /// Everything that was entered, the newest first.
    ///
    /// # Errors
    /// A store that cannot be read.
    pub fn log(&self, units: Units) -> Result<LogView, WindowError> {
        let store = self.store();
        let mut entries: Vec<(i64, LogEntryView)> = Vec::new();
        for decision in store.decisions()? {
            entries.push((decision.at_s, self.decision_entry(decision, units)));
        }
        for note in store.notes(i64::MIN, i64::MAX)? {
            let about = format!("about {}", self.stamp(note.what.moment_s));
            let entry = self.entry(&note, "note".to_owned(), note.what.text.clone());
            let instrument = note.what.instrument.clone();
            entries.push((note.at_s, LogEntryView { basis: Some(about), instrument, ..entry }));
        }
        for version in store.limit_versions()? {
            let from = format!("count from {}", self.stamp(version.what.effective_from_s));
            let entry = self.entry(&version, format!("limits {}", version.id), version.why.clone());
            entries.push((version.at_s, LogEntryView { basis: Some(from), ..entry }));
        }
        for version in store.site_versions()? {
            let what = format!("site file {}", version.id);
            entries.push((version.at_s, self.entry(&version, what, version.why.clone())));
        }
        for file in store.imports()? {
            let text = format!(
                "{}: {} readings. {}",
                file.what.name, file.what.outcome.accepted, file.why
            );
            entries.push((file.at_s, self.entry(&file, "import".to_owned(), text)));
        }
        for one in store.inhibitions()? {
            let what = format!("inhibited until {}", self.stamp(one.what.until_s));
            let entry = self.entry(&one, what, one.why.clone());
            let instrument = Some(one.what.instrument.clone());
            entries.push((one.at_s, LogEntryView { instrument, ..entry }));
        }
        // Entries of one instant stay in the order above.
        entries.sort_by_key(|(at_s, _)| std::cmp::Reverse(*at_s));
        let (chain, chain_whole) = chain_words(&store.verify_chain()?);
        let entries = entries.into_iter().map(|(_, entry)| entry).collect();
        Ok(LogView { entries, chain, chain_whole })
    }

    fn entry<T>(&self, recorded: &Recorded<T>, what: String, text: String) -> LogEntryView {
        LogEntryView {
            time_text: self.stamp(recorded.at_s),
            what,
            who: recorded.who.clone(),
            text,
            basis: None,
            instrument: None,
            hash: None,
        }
    }

    fn decision_entry(&self, entry: Recorded<DecisionEntry>, units: Units) -> LogEntryView {
        let what = format!("decision: {}", entry.what.decision);
        let view = self.entry(&entry, what, entry.why.clone());
        LogEntryView {
            basis: Some(self.basis_words(&entry.what.basis, units)),
            hash: Some(entry.what.hash.chars().take(HASH_SHOWN).collect()),
            ..view
        }
    }

    /// "18 May 2026, 10:20: 14.00 m, 154.1 kPa, oldest reading 25 min".
    fn basis_words(&self, basis: &DecisionBasis, units: Units) -> String {
        let level = basis.liquid_level_m.map(|level_m| Shown::level(units).text(level_m));
        let pressure = basis.applied_pressure_kpa.map(|kpa| Shown::pressure(units).text(kpa));
        let known: Vec<String> = level.into_iter().chain(pressure).collect();
        let load = if known.is_empty() { "load unknown".to_owned() } else { known.join(", ") };
        let age = match basis.data_age_s {
            Some(age_s) => format!("oldest reading {}", age_in_words(age_s)),
            None => "age of the readings unknown".to_owned(),
        };
        format!("{}: {load}, {age}", self.stamp(basis.moment_s))
    }

    /// Enters a decision of the person who signs, with what is known at the cursor.
    ///
    /// # Errors
    /// When the store refuses it, such as a decision without name or reason.
    pub fn decide(
        &self,
        decision: Decision,
        time_ms: f64,
        signature: &Signature,
        now_s: i64,
        units: Units,
    ) -> Result<LogView, WindowError> {
        let basis = self.basis(seconds(time_ms));
        let change = Change { who: &signature.who, at_s: now_s, why: &signature.why };
        self.store().decide(decision.into(), &basis, &change)?;
        self.log(units)
    }

    /// What is known at a moment; what is not is left out.
    fn basis(&self, moment_s: i64) -> DecisionBasis {
        let planned = moment_s > self.comparison.last_s;
        let load =
            self.comparison.load.at(moment_s).filter(|load| load.gauge.is_some() && !planned);
        let ages = self
            .comparison
            .timelines
            .iter()
            .map(|one| one.value_at(moment_s).map(|row| moment_s - row.time_s));
        // One that was never read makes the age unknown.
        let ages: Option<Vec<i64>> = ages.collect();
        DecisionBasis {
            moment_s,
            liquid_level_m: load.map(|load| load.liquid_level_m),
            applied_pressure_kpa: load.map(|load| load.applied_pressure_kpa),
            data_age_s: ages.filter(|_| !planned).and_then(|ages| ages.into_iter().max()),
        }
    }

    /// Enters a note about a moment, and an instrument where one is named.
    ///
    /// # Errors
    /// When the store refuses it, such as a note without name or text.
    pub fn note(
        &self,
        id: Option<&str>,
        time_ms: f64,
        (who, text): (&str, &str),
        now_s: i64,
        units: Units,
    ) -> Result<LogView, WindowError> {
        if let Some(id) = id {
            self.index_of(id)?;
        }
        let note = Note {
            moment_s: seconds(time_ms),
            instrument: id.map(str::to_owned),
            text: text.to_owned(),
        };
        let change = Change { who, at_s: now_s, why: "To be kept with the readings." };
        self.store().add_note(&note, &change)?;
        self.log(units)
    }
}

fn chain_words(chain: &Chain) -> (String, bool) {
    match chain {
        Chain::Whole { entries: 0, .. } => ("No decision was entered yet.".to_owned(), true),
        Chain::Whole { entries, last_hash } => {
            let hash: String = last_hash.chars().take(HASH_SHOWN).collect();
            let noun = if *entries == 1 { "decision" } else { "decisions" };
            (format!("Chain of {entries} {noun} whole; last {hash}."), true)
        }
        Chain::Broken { id, what } => (
            format!(
                "The chain of decisions is broken at entry {id}: {what}. Somebody changed the file outside this program; compare with earlier reports."
            ),
            false,
        ),
    }
}
