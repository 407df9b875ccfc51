//! What a person sees and does in the window.

use crate::driven::{Outcome, root};
use std::time::Duration;
use thirtyfour::prelude::*;

type Found<T> = Result<T, Box<dyn std::error::Error>>;

/// All text of the window.
pub async fn text(driver: &WebDriver) -> Found<String> {
    Ok(driver.find(By::Tag("body")).await?.text().await?)
}

/// The text of the moment strip.
pub async fn moment(driver: &WebDriver) -> Found<String> {
    let strip = driver.query(By::Css("[aria-label='Moment of the cursor']")).first().await?;
    Ok(strip.text().await?)
}

/// Waits, half a minute at most, until something is so.
pub async fn until(
    driver: &WebDriver,
    what: &str,
    so: impl AsyncFn(&WebDriver) -> Found<bool>,
) -> Outcome {
    for _ in 0..150 {
        if so(driver).await.unwrap_or(false) {
            return Ok(());
        }
        tokio::time::sleep(Duration::from_millis(200)).await;
    }
    let shown = text(driver).await.unwrap_or_default();
    Err(format!("not seen within half a minute: {what}. The window says:\n{shown}").into())
}

pub async fn wait_for(driver: &WebDriver, words: &str) -> Outcome {
    until(driver, words, async |driver| Ok(text(driver).await?.contains(words))).await
}

/// Goes to a view by its link.
pub async fn go(driver: &WebDriver, view: &str) -> Outcome {
    let link = driver.query(By::Css(format!("a[href='#/{view}']"))).first().await?;
    link.click().await?;
    until(driver, view, async |_| Ok(link.attr("aria-current").await?.is_some())).await?;
    // Pictures are asked for once the view knows its size.
    tokio::time::sleep(Duration::from_millis(700)).await;
    Ok(())
}

pub async fn set_theme(driver: &WebDriver, theme: &str) -> Outcome {
    let button = driver.query(By::Css("button[aria-label^='Colours']")).first().await?;
    for _ in 0..3 {
        if button.attr("aria-label").await?.is_some_and(|label| label.contains(theme)) {
            return Ok(());
        }
        button.click().await?;
        tokio::time::sleep(Duration::from_millis(150)).await;
    }
    Err(format!("no colours named {theme}").into())
}

/// Keeps a picture of the window under `target/window`.
pub async fn save(driver: &WebDriver, name: &str) -> Outcome {
    let folder = root().join("target/window");
    std::fs::create_dir_all(&folder)?;
    driver.screenshot(&folder.join(format!("{name}.png"))).await?;
    Ok(())
}

/// Texts that are cut off by their own box, or that leave the window sideways.
pub async fn cut_texts(driver: &WebDriver) -> Found<Vec<String>> {
    let found = driver
        .execute(
            r"const cut = [];
            for (const element of document.querySelectorAll('body *')) {
              if (element.closest('svg') || element.closest('[hidden]')) continue;
              const own = [...element.childNodes].some(
                (node) => node.nodeType === 3 && node.textContent.trim() !== '');
              if (!own) continue;
              const style = getComputedStyle(element);
              if (style.visibility === 'hidden' || style.display === 'none') continue;
              const box = element.getBoundingClientRect();
              if (box.width < 2 || box.height < 2) continue;
              const hides = style.overflowX === 'hidden' || style.overflowX === 'clip';
              const cutInside = hides && element.scrollWidth > element.clientWidth + 1;
              let scrolls = false;
              for (let up = element.parentElement; up; up = up.parentElement) {
                const flow = getComputedStyle(up);
                if (['auto', 'scroll'].includes(flow.overflowX)) scrolls = true;
              }
              const leaves = !scrolls && box.right > innerWidth + 1 && box.left < innerWidth;
              if (cutInside || leaves) cut.push(element.textContent.trim().slice(0, 60));
            }
            return cut;",
            Vec::new(),
        )
        .await?;
    Ok(found.convert()?)
}

/// Serious and critical findings of axe in the window as it stands.
pub async fn axe(driver: &WebDriver) -> Found<Vec<String>> {
    let source =
        std::fs::read_to_string(root().join("desktop/ui/node_modules/axe-core/axe.min.js"))?;
    driver.execute(&source, Vec::new()).await?;
    let found = driver
        .execute_async(
            r"const done = arguments[arguments.length - 1];
            axe.run(document, {resultTypes: ['violations']}).then(
              (result) => done(result.violations
                .filter((one) => ['serious', 'critical'].includes(one.impact))
                .map((one) => one.id + ': ' + one.nodes.map((node) => node.html.slice(0, 120)).join(' | '))),
              (reason) => done(['axe failed: ' + reason]));",
            Vec::new(),
        )
        .await?;
    Ok(found.convert()?)
}
