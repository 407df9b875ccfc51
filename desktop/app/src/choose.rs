//! Choosing files: the only way by which a path comes in.

use brimstead_engine::window::views::Failure;
use std::path::PathBuf;
use tauri::AppHandle;

#[cfg(not(feature = "e2e"))]
mod dialog {
    use super::{AppHandle, Failure, PathBuf};
    use crate::desk::aside;
    use tauri_plugin_dialog::{DialogExt, FilePath};

    fn paths(chosen: Vec<FilePath>) -> Vec<PathBuf> {
        chosen.into_iter().filter_map(|path| path.into_path().ok()).collect()
    }

    pub async fn readings(app: AppHandle) -> Result<Vec<PathBuf>, Failure> {
        aside(move || {
            let dialog = app.dialog().file().set_title("Files of readings");
            let dialog = dialog.add_filter("Delimited text", &["csv", "tsv", "txt", "dat"]);
            Ok(paths(dialog.blocking_pick_files().unwrap_or_default()))
        })
        .await
    }

    pub async fn store(app: AppHandle) -> Result<Option<PathBuf>, Failure> {
        aside(move || {
            let chosen = app.dialog().file().set_title("Open a site").blocking_pick_file();
            Ok(paths(chosen.into_iter().collect()).pop())
        })
        .await
    }

    pub async fn new_store(app: AppHandle) -> Result<Option<PathBuf>, Failure> {
        aside(move || {
            let dialog = app.dialog().file().set_title("Keep a new site in");
            let chosen = dialog.set_file_name("site.brimstead").blocking_save_file();
            Ok(paths(chosen.into_iter().collect()).pop())
        })
        .await
    }
}

#[cfg(feature = "e2e")]
mod dialog {
    use super::{AppHandle, Failure, PathBuf};

    fn chosen() -> Vec<PathBuf> {
        let given = std::env::var_os("BRIMSTEAD_CHOOSE").unwrap_or_default();
        std::env::split_paths(&given).collect()
    }

    pub async fn readings(_: AppHandle) -> Result<Vec<PathBuf>, Failure> {
        Ok(chosen())
    }

    pub async fn store(_: AppHandle) -> Result<Option<PathBuf>, Failure> {
        Ok(chosen().pop())
    }

    pub async fn new_store(_: AppHandle) -> Result<Option<PathBuf>, Failure> {
        Ok(chosen().pop())
    }
}

pub use dialog::{new_store, readings, store};
