//! What is open: the site in force, its readings compared once, and the store behind them. Made in
//! the background; every question after that is answered from memory.

use super::ahead::Ahead;
use super::contours::{Ground, Stress};
use super::failure::WindowError;
use super::records::Signature;
use super::section::Place;
use super::views::Opened;
use crate::compare::words::{kind_word, place_words};
use crate::compare::{CompareError, Comparison, Timeline, compare, nothing_compared};
use crate::expect::ExpectError;
use crate::import::{Imported, read_bytes};
use crate::report::CAUTIONS;
use crate::site::{self, Instrument, SiteFile};
use crate::store::{Change, SqliteStore, Store, keep};
use jiff::tz::TimeZone;
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Mutex, MutexGuard, OnceLock, PoisonError};
use tempfile::TempDir;

/// Runs of the demo: name, and what it shows.
const RUNS: [(&str, &str); 2] = [
    ("bad", "The east edge begins to yield in the last rise."),
    ("good", "Nothing is wrong in the ground; instruments misbehave."),
];

/// Who enters what no person entered.
const PROGRAM: &str = "Brimstead";

/// Follows long work and can stop it.
#[derive(Clone, Copy)]
pub struct Progress<'a> {
    /// Told what is being done, and how much of the whole is done, 0 to 1.
    pub tell: &'a (dyn Fn(&str, f64) + Sync),
    /// Stops the work at the next step when true.
    pub cancel: &'a AtomicBool,
}

impl std::fmt::Debug for Progress<'_> {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Progress").field("cancel", self.cancel).finish_non_exhaustive()
    }
}

impl Progress<'_> {
    /// Says what comes next, unless the work is to stop.
    ///
    /// # Errors
    /// [`WindowError::Cancelled`].
    pub fn step(&self, what: &str, done: f64) -> Result<(), WindowError> {
        if self.cancel.load(Ordering::Relaxed) {
            return Err(WindowError::Cancelled);
        }
        (self.tell)(what, done);
        Ok(())
    }
}

/// The store that stays open while sessions over it come and go.
#[derive(Debug)]
struct Keeper {
    store: Mutex<SqliteStore>,
    origin: Origin,
}

#[derive(Debug)]
enum Origin {
    /// The demo: its store lives in a folder that goes with it.
    Demo { run: &'static str, _folder: TempDir },
    /// A store of the person.
    File(PathBuf),
}

/// One instrument with what never changes about it.
#[derive(Debug)]
pub(super) struct Known {
    pub kind: &'static str,
    pub place: String,
    pub at: Place,
}

/// A site that is open.
#[derive(Debug)]
pub struct Session {
    keeper: Arc<Keeper>,
    pub(super) site: SiteFile,
    pub(super) zone: TimeZone,
    pub(super) imported: Imported,
    pub(super) comparison: Comparison,
    /// What keeps the readings from being compared.
    note: Option<String>,
    pub(super) known: Vec<Known>,
    pub(super) ahead: OnceLock<Ahead>,
    pub(super) ground: OnceLock<Result<Ground, String>>,
    pub(super) stress: OnceLock<Result<Stress, String>>,
}

impl Session {
    /// Opens a run of the demo, the first one when none is named. What is entered into it is
    /// forgotten when it is closed.
    ///
    /// # Errors
    /// When the demo's files are not there, and as [`Session::open_store`].
    pub fn open_demo(
        folder: &Path,
        run: Option<&str>,
        now_s: i64,
        progress: Progress<'_>,
    ) -> Result<Self, WindowError> {
        let run = run_named(run)?;
        progress.step("Reading the demo's files", 0.0)?;
        let missing = |path: &Path, error: std::io::Error| WindowError::Demo {
            path: path.to_owned(),
            detail: error.to_string(),
        };
        let site_path = folder.join("site.json");
        let text =
            std::fs::read_to_string(&site_path).map_err(|error| missing(&site_path, error))?;
        let site = site::parse(&text, "site.json")?;
        let temporary = TempDir::new().map_err(|error| missing(folder, error))?;
        let change = Change { who: PROGRAM, at_s: now_s, why: "The demo, as it comes." };
        let mut store = SqliteStore::create(&temporary.path().join("demo"), &text, &change)?;
        let of_run = folder.join(format!("run-{run}"));
        let files = files_of(&of_run).map_err(|error| missing(&of_run, error))?;
        for (done, path) in files.iter().enumerate() {
            let share = 0.3 * done as f64 / files.len() as f64;
            progress.step("Reading the demo's files", share)?;
            let bytes = std::fs::read(path).map_err(|error| missing(path, error))?;
            let name = path.file_name().unwrap_or_default().to_string_lossy();
            let imported = read_bytes(&site, &[(&name, &bytes)]);
            keep(&mut store, &imported, 0, &bytes, &change)?;
        }
        let origin = Origin::Demo { run, _folder: temporary };
        Self::over(Arc::new(Keeper { store: Mutex::new(store), origin }), now_s, progress)
    }

    /// Opens a store.
    ///
    /// # Errors
    /// When it is not a store of this program, or its readings cannot be compared.
    pub fn open_store(
        path: &Path,
        now_s: i64,
        progress: Progress<'_>,
    ) -> Result<Self, WindowError> {
        progress.step("Opening the store", 0.0)?;
        let store = SqliteStore::open(path, now_s)?;
        let origin = Origin::File(path.to_owned());
        Self::over(Arc::new(Keeper { store: Mutex::new(store), origin }), now_s, progress)
    }

    /// Makes a store for a site and opens it.
    ///
    /// # Errors
    /// When the file is there already or cannot be written, and all problems of the site file.
    pub fn new_store(
        path: &Path,
        text: &str,
        signature: &Signature,
        now_s: i64,
        progress: Progress<'_>,
    ) -> Result<Self, WindowError> {
        site::parse(text, "site file")?;
        let change = Change { who: &signature.who, at_s: now_s, why: &signature.why };
        let store = SqliteStore::create(path, text, &change)?;
        let origin = Origin::File(path.to_owned());
        Self::over(Arc::new(Keeper { store: Mutex::new(store), origin }), now_s, progress)
    }

    /// The same store again, after something in it changed.
    ///
    /// # Errors
    /// As [`Session::open_store`].
    pub fn again(&self, now_s: i64, progress: Progress<'_>) -> Result<Self, WindowError> {
        Self::over(Arc::clone(&self.keeper), now_s, progress)
    }

    /// Compares what a store holds. Readings are judged by the limits in force at the last of
    /// them.
    fn over(keeper: Arc<Keeper>, now_s: i64, progress: Progress<'_>) -> Result<Self, WindowError> {
        progress.step("Reading the store", 0.3)?;
        let (site, imported) = {
            let store = locked(&keeper.store);
            let text = store.site_at(now_s)?.map_or(String::new(), |version| version.what);
            let site = site::parse(&text, "site file")?;
            let imported = store.imported(&site, i64::MIN, i64::MAX)?;
            let last_s = imported
                .series
                .iter()
                .filter_map(|series| series.points.last())
                .map(|point| point.time_s)
                .max();
            let limits = match last_s {
                Some(last_s) => store.limits_at(last_s)?,
                None => None,
            };
            let site =
                limits.map_or_else(|| site.clone(), |found| found.what.limits.put_into(&site));
            (site, imported)
        };
        progress.step("Comparing readings with what is expected", 0.4)?;
        let (comparison, note) = compared(&site, &imported)?;
        progress.step("Drawing", 1.0)?;
        let zone = crate::time::zone(&site.site.time_zone).unwrap_or(TimeZone::UTC);
        let known = site.instruments.iter().map(|given| known(&site, given)).collect();
        Ok(Self {
            keeper,
            site,
            zone,
            imported,
            comparison,
            note,
            known,
            ahead: OnceLock::new(),
            ground: OnceLock::new(),
            stress: OnceLock::new(),
        })
    }

    /// Works out what takes longer and is asked for later: contours of pore pressure and
    /// settlement, and what is expected along the plan. To be called in the background; a question
    /// that comes before waits for it.
    pub fn prepare(&self) {
        self.ahead();
        let _ = self.ground();
    }

    /// What is open.
    #[must_use]
    pub fn opened(&self) -> Opened {
        let (from_s, to_s) = self.span_s();
        let tank = self.site.tanks.first();
        let (path, run) = match &self.keeper.origin {
            Origin::Demo { run, .. } => ("demo".to_owned(), Some((*run).to_owned())),
            Origin::File(path) => (path.display().to_string(), None),
        };
        Opened {
            path,
            site: self.site.site.name.clone(),
            tank: tank.map_or(String::new(), |tank| tank.name.clone()),
            invented: self.site.site.invented,
            zone: self.site.site.time_zone.clone(),
            from_ms: milliseconds(from_s),
            to_ms: milliseconds(to_s),
            last_ms: milliseconds(self.comparison.last_s),
            runs: RUNS.map(|(name, words)| (name.to_owned(), words.to_owned())).to_vec(),
            run,
            note: self.note.clone(),
            cautions: CAUTIONS.map(str::to_owned).to_vec(),
        }
    }

    /// From the baseline or the first reading to the end of the plan or the last reading.
    pub(super) fn span_s(&self) -> (i64, i64) {
        let first = self.comparison.load.points().first().map(|point| point.time_s);
        let planned = self.site.stages.last().map(|stage| stage.hold_until.time_s);
        let from_s = first.unwrap_or(i64::MAX).min(self.site.baseline.time_s);
        (from_s, planned.unwrap_or(i64::MIN).max(self.comparison.last_s))
    }

    /// The place of an instrument in the site file.
    pub(super) fn index_of(&self, id: &str) -> Result<usize, WindowError> {
        let place = self.site.instruments.iter().position(|given| given.id == id);
        place.ok_or_else(|| WindowError::UnknownInstrument { id: id.to_owned() })
    }

    pub(super) fn timeline(&self, index: usize) -> &Timeline {
        &self.comparison.timelines[index]
    }

    pub(super) fn store(&self) -> MutexGuard<'_, SqliteStore> {
        locked(&self.keeper.store)
    }

    /// The instant in words, with its zone.
    pub(super) fn stamp(&self, time_s: i64) -> String {
        crate::chart::stamp(time_s, &self.zone)
    }
}

/// A store whose last user panicked is as good as before: each of its calls is one transaction.
fn locked(store: &Mutex<SqliteStore>) -> MutexGuard<'_, SqliteStore> {
    store.lock().unwrap_or_else(PoisonError::into_inner)
}

/// The readings compared; where that cannot be yet, the plan alone and what is missing.
fn compared(
    site: &SiteFile,
    imported: &Imported,
) -> Result<(Comparison, Option<String>), WindowError> {
    let missing = match compare(site, imported) {
        Ok(comparison) => return Ok((comparison, None)),
        Err(CompareError::NoReadings) => {
            "There are no readings yet: import the files of the loggers. Until then the plan is shown."
        }
        Err(CompareError::Expect(ExpectError::NoLevel)) => {
            "Readings are there, but no liquid level, so no load: import the readings of a level gauge. Until then the plan is shown."
        }
        Err(refused) => return Err(refused.into()),
    };
    Ok((nothing_compared(site)?, Some(missing.to_owned())))
}

fn known(site: &SiteFile, given: &Instrument) -> Known {
    Known {
        kind: kind_word(given.kind),
        place: place_words(site, given),
        at: Place::of(site, given),
    }
}

fn run_named(run: Option<&str>) -> Result<&'static str, WindowError> {
    let Some(run) = run else { return Ok(RUNS[0].0) };
    let found = RUNS.iter().find(|(name, _)| *name == run);
    found.map(|(name, _)| *name).ok_or_else(|| WindowError::UnknownRun {
        run: run.to_owned(),
        known: RUNS.map(|(name, _)| name).join(" and "),
    })
}

fn files_of(folder: &Path) -> std::io::Result<Vec<PathBuf>> {
    let mut paths = Vec::new();
    for entry in std::fs::read_dir(folder)? {
        let path = entry?.path();
        if path.is_file() {
            paths.push(path);
        }
    }
    paths.sort();
    Ok(paths)
}

/// Unix seconds as the window counts.
pub(super) fn milliseconds(time_s: i64) -> f64 {
    time_s as f64 * 1000.0
}

/// And back, to the second at or before.
pub(super) fn seconds(time_ms: f64) -> i64 {
    (time_ms / 1000.0).floor() as i64
}
