//! The companion in its real window, driven through WebDriver on a virtual screen.
//!
//! `bash tests/run.sh` builds the window, starts the screen and runs this. By hand: a display, a
//! built `target/debug/brimstead-app`, `tauri-driver` and WebKitWebDriver, then
//! `cargo test -p brimstead-window-tests`.

mod driven;
mod page;

use driven::{Driven, Outcome};
use thirtyfour::prelude::*;

const SIZES: [(u32, u32); 2] = [(1280, 800), (1920, 1080)];
const VIEWS: [&str; 9] =
    ["section", "reading", "working", "instruments", "faults", "limits", "import", "log", "site"];

/// One window for all: starting it is the slow part.
#[tokio::test(flavor = "current_thread")]
async fn the_companion_serves_a_newcomer() -> Outcome {
    let driven = Driven::start().await?;
    let result = everything(&driven.driver).await;
    driven.stop().await;
    result
}

async fn everything(driver: &WebDriver) -> Outcome {
    first_minute(driver).await?;
    cursor_by_keyboard(driver).await?;
    units_at_a_click(driver).await?;
    every_view_in_both_sizes(driver).await
}

/// What went wrong, where and what to do stand in the first window.
async fn first_minute(driver: &WebDriver) -> Outcome {
    page::wait_for(driver, "Brackmoor").await?;
    let text = page::text(driver).await?;
    for expected in ["invented", "water above floor", "applied pressure", "Advice only"] {
        assert!(text.contains(expected), "the first window says \"{expected}\":\n{text}");
    }
    let raised = ["Stop", "Review", "Watch"].iter().any(|word| text.contains(word));
    assert!(raised, "the bad run shows raised triggers:\n{text}");
    assert!(text.contains("Site plan") || text.contains("Site's plan"), "what to do:\n{text}");
    Ok(())
}

/// The cursor of the fill line moves by keys, and the moment follows.
async fn cursor_by_keyboard(driver: &WebDriver) -> Outcome {
    let slider = driver.query(By::Css("[role=slider]")).first().await?;
    let before = page::moment(driver).await?;
    slider.focus().await?;
    for _ in 0..3 {
        slider.send_keys(Key::Left + "").await?;
    }
    page::until(driver, "the moment follows the cursor", async |driver| {
        Ok(page::moment(driver).await? != before)
    })
    .await
}

async fn units_at_a_click(driver: &WebDriver) -> Outcome {
    let units = driver.query(By::Css("button[aria-label^='Units']")).first().await?;
    units.click().await?;
    page::until(driver, "levels in feet", async |driver| {
        Ok(page::moment(driver).await?.contains(" ft"))
    })
    .await?;
    units.click().await?;
    page::until(driver, "levels in metres", async |driver| {
        Ok(page::moment(driver).await?.contains(" m"))
    })
    .await
}

/// Each view in each size and colour: a picture, no cut text, nothing serious for axe.
async fn every_view_in_both_sizes(driver: &WebDriver) -> Outcome {
    for (width, height) in SIZES {
        driver.set_window_rect(0, 0, width, height).await?;
        for theme in ["light", "dark"] {
            page::set_theme(driver, theme).await?;
            for view in VIEWS {
                page::go(driver, view).await?;
                page::save(driver, &format!("{view}-{width}-{theme}")).await?;
                let cut = page::cut_texts(driver).await?;
                assert!(cut.is_empty(), "{view} at {width}x{height}, {theme}: cut text {cut:?}");
                if width == 1280 {
                    let found = page::axe(driver).await?;
                    assert!(found.is_empty(), "{view}, {theme}: {found:?}");
                }
            }
        }
    }
    Ok(())
}
