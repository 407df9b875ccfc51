//! Declares the window's own commands, so that each needs a permission like any other.

include!("src/names.rs");

fn main() {
    let manifest = tauri_build::AppManifest::new().commands(&COMMANDS);
    let attributes = tauri_build::Attributes::new().app_manifest(manifest);
    if let Err(error) = tauri_build::try_build(attributes) {
        panic!("the shell cannot be configured: {error:#}");
    }
}
