//! What is open behind the window, and the work that is under way. Everything that takes time runs
//! off the window's thread; whatever fails there, a panic too, becomes a message.

use brimstead_engine::window::records::WorkStep;
use brimstead_engine::window::views::{Failure, Opened};
use brimstead_engine::window::{Progress, Session, WindowError};
use std::collections::HashSet;
use std::path::PathBuf;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Mutex, PoisonError, RwLock};
use std::time::{SystemTime, UNIX_EPOCH};
use tauri::async_runtime::spawn_blocking;
use tauri::ipc::Channel;

/// The open site, and the work under way.
#[derive(Default)]
pub struct Desk {
    session: RwLock<Option<Arc<Session>>>,
    work: Mutex<Arc<Work>>,
    follower: Arc<Mutex<Option<Channel<WorkStep>>>>,
    /// Files that the person chose in a dialog: the page may name no others.
    chosen: Mutex<HashSet<PathBuf>>,
}

/// One piece of long work.
#[derive(Default)]
struct Work {
    cancel: AtomicBool,
}

/// The clock of this machine, Unix s; the only place that reads it.
pub fn now_s() -> i64 {
    let since = SystemTime::now().duration_since(UNIX_EPOCH);
    since.map_or(0, |since| i64::try_from(since.as_secs()).unwrap_or(i64::MAX))
}

/// Runs work off the window's thread.
pub async fn aside<T: Send + 'static>(
    work: impl FnOnce() -> Result<T, WindowError> + Send + 'static,
) -> Result<T, Failure> {
    match spawn_blocking(work).await {
        Ok(done) => done.map_err(Failure::from),
        Err(broken) => Err(Failure {
            code: "panic".to_owned(),
            message: format!(
                "The program failed inside itself ({broken}). Nothing was changed by it; what is shown may be incomplete. Keep what you did before it and report this."
            ),
        }),
    }
}

impl Desk {
    /// What is open.
    pub fn session(&self) -> Result<Arc<Session>, Failure> {
        let session = self.session.read().unwrap_or_else(PoisonError::into_inner);
        session.clone().ok_or_else(|| WindowError::NothingOpen.into())
    }

    /// Asks what is open.
    pub async fn ask<T: Send + 'static>(
        &self,
        question: impl FnOnce(&Session) -> Result<T, WindowError> + Send + 'static,
    ) -> Result<T, Failure> {
        let session = self.session()?;
        aside(move || question(&session)).await
    }

    /// Does work that ends in a new session, which then takes the place of the old one.
    pub async fn replace<T: Send + 'static>(
        &self,
        work: impl FnOnce(Progress<'_>) -> Result<(T, Session), WindowError> + Send + 'static,
    ) -> Result<(T, Opened), Failure> {
        let under_way = self.start();
        let follower = Arc::clone(&self.follower);
        let (answer, session) = aside(move || {
            let tell = |what: &str, done: f64| tell(&follower, what, done);
            work(Progress { tell: &tell, cancel: &under_way.cancel })
        })
        .await?;
        let session = Arc::new(session);
        *self.session.write().unwrap_or_else(PoisonError::into_inner) = Some(Arc::clone(&session));
        let opened = session.opened();
        // A question that needs what is prepared waits for it or makes it itself.
        drop(spawn_blocking(move || session.prepare()));
        Ok((answer, opened))
    }

    /// New work takes the place of older work, which is told to stop.
    fn start(&self) -> Arc<Work> {
        let mut work = self.work.lock().unwrap_or_else(PoisonError::into_inner);
        work.cancel.store(true, Ordering::Relaxed);
        *work = Arc::default();
        Arc::clone(&work)
    }

    /// Tells the work under way to stop.
    pub fn cancel(&self) {
        let work = self.work.lock().unwrap_or_else(PoisonError::into_inner);
        work.cancel.store(true, Ordering::Relaxed);
    }

    /// Keeps what the person chose in a dialog.
    pub fn remember(&self, paths: Vec<PathBuf>) -> Vec<PathBuf> {
        let mut chosen = self.chosen.lock().unwrap_or_else(PoisonError::into_inner);
        chosen.extend(paths.iter().cloned());
        paths
    }

    /// Refuses a path that nobody chose.
    pub fn was_chosen(&self, paths: &[PathBuf]) -> Result<(), Failure> {
        let chosen = self.chosen.lock().unwrap_or_else(PoisonError::into_inner);
        match paths.iter().find(|path| !chosen.contains(*path)) {
            None => Ok(()),
            Some(path) => Err(Failure {
                code: "not-chosen".to_owned(),
                message: format!("{} was not chosen. Choose it again.", path.display()),
            }),
        }
    }

    /// From now on steps of long work go to this channel.
    pub fn follow(&self, channel: Channel<WorkStep>) {
        *self.follower.lock().unwrap_or_else(PoisonError::into_inner) = Some(channel);
    }
}

fn tell(follower: &Mutex<Option<Channel<WorkStep>>>, what: &str, done: f64) {
    let follower = follower.lock().unwrap_or_else(PoisonError::into_inner);
    if let Some(channel) = follower.as_ref() {
        // A page that has gone away does not hear it, and nothing is lost.
        let _ = channel.send(WorkStep { what: what.to_owned(), done });
    }
}
