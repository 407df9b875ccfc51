//! Which room may use which.

use brimstead_tests::{Source, source, sources};
use std::collections::BTreeSet;

/// Rooms of the core that stand aside from the line and may use only these.
const NARROW: [(&str, &[&str]); 3] = [
    ("shell", &["config", "units", "quantity", "working", "math"]),
    ("instrument", &["config", "units", "quantity", "working", "math"]),
    ("forecast", &["config", "units", "quantity", "working", "math"]),
];

/// Rooms that hold formulas of the ground; the name is taken, so that nobody opens a second one.
/// Ground and load are inputs, which a site file and a window handle too.
const FORMULA_ROOMS: [&str; 5] = ["stress", "consolidation", "settlement", "stability", "shell"];

/// Beside the core itself: the demo site's readings come from a ground of their own (made with the
/// core, they would agree with it whatever it computes), and the batch interface hands requests to
/// the core's rooms under the names of these.
const MAY_HAVE_NAMESAKES: [&str; 3] =
    ["core-nostd/", "data-demo/generator/", "desktop/cli/src/eval/"];

/// Powers and logarithms that are no formula of the ground: axes and colours of drawings, sampling
/// of an uncertain ground, statistics by which an import doubts its readings.
const MAY_USE_CURVES: [&str; 4] = [
    "desktop/engine/src/chart/",
    "desktop/engine/src/series/",
    "desktop/engine/src/ensemble",
    "desktop/engine/src/import/suspicion/",
];

/// Calls by which a formula of the ground gives itself away outside the core.
const CURVES: [&str; 8] =
    [".exp()", ".ln()", ".log10()", ".powf(", "Math.exp(", "Math.log(", "Math.log10(", "Math.pow("];

/// How digits are counted, to print a number or to mark an axis.
const DIGITS: [&str; 2] = [".log10().floor()", ".log10().ceil()"];

/// The order of the rooms, from the sentence in the core's own front page.
fn order() -> Vec<String> {
    let front = source("core-nostd/src/lib.rs");
    let list = front
        .text
        .split("none below:")
        .nth(1)
        .and_then(|rest| rest.split("//!\n").next())
        .expect("core-nostd/src/lib.rs lists the rooms after `none below:`");
    list.split('`').skip(1).step_by(2).map(str::to_owned).collect()
}

fn room_of(core_file: &str) -> &str {
    let inside = core_file.trim_start_matches("core-nostd/src/");
    inside.split(['/', '.']).next().unwrap_or(inside)
}

/// Rooms named after `crate::`, also inside `crate::{…}`.
fn rooms_used(text: &str) -> BTreeSet<String> {
    let code: String = text
        .lines()
        .map(|line| line.split("//").next().unwrap_or_default())
        .flat_map(|line| [line, "\n"])
        .collect();
    let mut used = BTreeSet::new();
    for after in code.split("crate::").skip(1) {
        match after.strip_prefix('{') {
            Some(group) => used.extend(top_level_names(group)),
            None => used.extend(leading_name(after)),
        }
    }
    used
}

fn leading_name(text: &str) -> Option<String> {
    let name: String = text.chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect();
    (!name.is_empty()).then_some(name)
}

/// The first names of the items of a `use` group whose opening brace is already taken.
fn top_level_names(group: &str) -> Vec<String> {
    let mut depth = 0usize;
    let mut items = vec![String::new()];
    for c in group.chars() {
        match c {
            '{' => depth += 1,
            '}' if depth == 0 => break,
            '}' => depth -= 1,
            ',' if depth == 0 => items.push(String::new()),
            _ if depth == 0 => items.last_mut().expect("never empty").push(c),
            _ => {}
        }
    }
    items.iter().filter_map(|item| leading_name(item.trim_start())).collect()
}

fn core_files() -> Vec<Source> {
    let mut files = sources();
    files.retain(|file| file.path.starts_with("core-nostd/src/") && file.has_extension(&["rs"]));
    files.retain(|file| file.path != "core-nostd/src/lib.rs");
    assert!(!files.is_empty(), "the core has files");
    files
}

#[test]
fn use_groups_are_read_as_well_as_single_uses() {
    let text =
        "use crate::{config::{A, B}, load::Tank}; // crate::watch\nlet x = crate::math::sqrt(y);";
    let used: Vec<_> = rooms_used(text).into_iter().collect();
    assert_eq!(used, ["config", "load", "math"]);
}

#[test]
fn every_room_of_the_core_stands_in_its_list() {
    let order = order();
    for file in core_files() {
        let room = room_of(&file.path);
        assert!(
            order.iter().any(|listed| listed == room),
            "{}: add room `{room}` to the list in core-nostd/src/lib.rs, below all it uses",
            file.path
        );
    }
}

#[test]
fn a_room_of_the_core_uses_only_rooms_above_it() {
    let order = order();
    let place = |room: &str| order.iter().position(|listed| listed == room);
    for file in core_files() {
        let room = room_of(&file.path);
        for used in rooms_used(file.without_unit_tests()) {
            let allowed = used == room
                || match NARROW.iter().find(|(narrow, _)| *narrow == room) {
                    Some((_, may_use)) => may_use.contains(&used.as_str()),
                    None => place(&used) < place(room),
                };
            assert!(
                allowed,
                "{}: room `{room}` may not use `{used}`; the data flows the other way",
                file.path
            );
        }
    }
}

#[test]
fn formulas_of_the_ground_have_no_second_home() {
    for file in sources() {
        let code = file.has_extension(&["rs", "ts", "svelte"]);
        if !code || MAY_HAVE_NAMESAKES.iter().any(|folder| file.path.starts_with(folder)) {
            continue;
        }
        for part in file.path.split('/') {
            let stem = part.split('.').next().unwrap_or(part);
            assert!(
                !FORMULA_ROOMS.contains(&stem),
                "{}: `{stem}` is a room of the core; formulas of the ground live only there",
                file.path
            );
        }
    }
}

#[test]
fn desktop_does_no_engineering_arithmetic() {
    for file in sources() {
        let code = file.has_extension(&["rs", "ts", "svelte"]);
        let other = MAY_USE_CURVES.iter().any(|folder| file.path.starts_with(folder));
        // A test may work a number out by hand to hold it against the core's.
        let test = file.path.contains("/tests/");
        if !code || other || test || !file.path.starts_with("desktop/") {
            continue;
        }
        let mut arithmetic = file.without_unit_tests().to_owned();
        for digits in DIGITS {
            arithmetic = arithmetic.replace(digits, "");
        }
        for curve in CURVES {
            assert!(
                !arithmetic.contains(curve),
                "{}: `{curve}` looks like a formula; the core computes, the desktop asks it",
                file.path
            );
        }
    }
}

#[test]
fn only_the_app_knows_the_window_shell() {
    for file in sources() {
        let rust = file.has_extension(&["rs"]) || file.path.ends_with("Cargo.toml");
        if rust && !file.path.starts_with("desktop/app/") && !file.path.starts_with("tests/") {
            assert!(
                !file.text.contains("tauri"),
                "{}: only desktop/app may use the window shell",
                file.path
            );
        }
        let front_end = file.path.starts_with("desktop/ui/src/")
            && !file.path.starts_with("desktop/ui/src/backend/");
        assert!(
            !(front_end && file.text.contains("@tauri-apps")),
            "{}: only desktop/ui/src/backend may import the window shell",
            file.path
        );
    }
}

/// The image's link check declares a symbol that does not exist, which the language calls unsafe.
const MAY_ALLOW_UNSAFE: [&str; 1] = ["firmware-demo/image/"];

#[test]
fn every_crate_forbids_unsafe_code() {
    let manifests: Vec<_> =
        sources().into_iter().filter(|file| file.path.ends_with("Cargo.toml")).collect();
    assert!(manifests.len() >= 3, "the manifests are found");
    for manifest in manifests.iter().filter(|file| file.text.contains("[package]")) {
        let strict = manifest.text.contains("unsafe_code = \"forbid\"")
            || manifest.text.contains("[lints]\nworkspace = true");
        let allowed = MAY_ALLOW_UNSAFE.iter().any(|folder| manifest.path.starts_with(folder))
            && manifest.text.contains("unsafe_code = \"deny\"");
        assert!(
            strict || allowed,
            "{}: add `[lints]` with `workspace = true`, which forbids unsafe code",
            manifest.path
        );
    }
}
