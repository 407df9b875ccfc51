//! The shell of the desktop companion: one window, the commands it may ask, and nothing else. All
//! that is shown comes from the engine.

// No console beside the window where the system would open one.
#![cfg_attr(not(debug_assertions), windows_subsystem = "windows")]

mod choose;
mod commands;
mod desk;

use std::process::ExitCode;

fn main() -> ExitCode {
    let started = tauri::Builder::default()
        .plugin(tauri_plugin_dialog::init())
        .plugin(tauri_plugin_window_state::Builder::default().build())
        .manage(desk::Desk::default())
        .invoke_handler(tauri::generate_handler![
            commands::open_demo,
            commands::open_store,
            commands::new_store,
            commands::opened,
            commands::follow_work,
            commands::cancel_work,
            commands::choose_readings,
            commands::choose_store,
            commands::moment,
            commands::section,
            commands::contours,
            commands::fill_line,
            commands::reading,
            commands::reading_chart,
            commands::working,
            commands::faults,
            commands::instruments,
            commands::log,
            commands::decide,
            commands::note,
            commands::limits,
            commands::propose_limits,
            commands::import_preview,
            commands::import_commit,
            commands::site_text,
            commands::site_check,
            commands::site_save,
        ])
        .run(tauri::generate_context!());
    match started {
        Ok(()) => ExitCode::SUCCESS,
        Err(error) => {
            eprintln!("The window could not be opened: {error}. Is there a display?");
            ExitCode::FAILURE
        }
    }
}
