//! Starts the driver and the window, and ends them again.

use std::path::{Path, PathBuf};
use std::process::{Child, Command, Stdio};
use std::time::Duration;
use thirtyfour::prelude::*;

pub type Outcome = Result<(), Box<dyn std::error::Error>>;

const PORT: u16 = 4944;
const NATIVE_PORT: u16 = 4945;

pub struct Driven {
    pub driver: WebDriver,
    process: Child,
}

/// The root of the project.
pub fn root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../..")
}

/// Where the built window is.
fn application() -> PathBuf {
    let target =
        std::env::var_os("CARGO_TARGET_DIR").map_or_else(|| root().join("target"), PathBuf::from);
    target.join("debug/brimstead-app")
}

impl Driven {
    pub async fn start() -> Result<Self, Box<dyn std::error::Error>> {
        let process = Command::new("tauri-driver")
            .args(["--port", &PORT.to_string(), "--native-port", &NATIVE_PORT.to_string()])
            // Without a graphics card the web view must draw in software, or stays blank.
            .env("WEBKIT_DISABLE_COMPOSITING_MODE", "1")
            .env("WEBKIT_DISABLE_DMABUF_RENDERER", "1")
            .env("LIBGL_ALWAYS_SOFTWARE", "1")
            .stdout(Stdio::null())
            .stderr(Stdio::null())
            .spawn()?;
        let mut capabilities = Capabilities::new();
        capabilities.set("browserName", "wry")?;
        let options = serde_json::json!({"application": application().canonicalize()?});
        capabilities.set("tauri:options", options)?;
        let mut last = None;
        for _ in 0..60 {
            match WebDriver::new(&format!("http://127.0.0.1:{PORT}"), capabilities.clone()).await {
                Ok(driver) => return Ok(Self { driver, process }),
                Err(error) => last = Some(error),
            }
            tokio::time::sleep(Duration::from_millis(500)).await;
        }
        Err(format!("no window: {last:?}").into())
    }

    pub async fn stop(mut self) {
        let _ = self.driver.quit().await;
        let _ = self.process.kill();
        let _ = self.process.wait();
    }
}
