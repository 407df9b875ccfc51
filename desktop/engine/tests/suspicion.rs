//! Mistakes that pass for readings: units, signs, rods and clocks. The invented demo terminal is
//! read with one mistake made on purpose, and the report must say so and change nothing.

use brimstead_engine::import::{self, Imported, Suspicion, SuspicionKind};
use brimstead_engine::site::{self, SiteFile};
use brimstead_engine::units::UnitName;
use std::path::{Path, PathBuf};

fn demo() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../../data-demo")
}

fn site() -> SiteFile {
    site::read(&demo().join("site.json")).unwrap_or_else(|problems| panic!("{problems}"))
}

/// One file of the good run: (name, text).
fn file(name: &str) -> (String, String) {
    let bytes = std::fs::read(demo().join("run-good").join(name)).unwrap();
    (name.to_owned(), bytes.iter().map(|&byte| byte as char).collect())
}

fn april() -> Vec<(String, String)> {
    ["daybook-2026-04.tsv", "logger-a-2026-04.csv", "logger-b-2026-04.csv", "perimeter-2026-04.csv"]
        .map(file)
        .into()
}

fn import(site: &SiteFile, files: &[(String, String)]) -> Imported {
    let latin: Vec<Vec<u8>> =
        files.iter().map(|(_, text)| text.chars().map(|c| c as u32 as u8).collect()).collect();
    let files: Vec<(&str, &[u8])> = files
        .iter()
        .zip(&latin)
        .map(|((name, _), bytes)| (name.as_str(), bytes.as_slice()))
        .collect();
    import::read_bytes(site, &files)
}

/// Changes the numbers of the columns whose header starts so.
fn change(text: &str, delimiter: char, headers: &[&str], change: impl Fn(f64) -> f64) -> String {
    let mut positions: Vec<usize> = Vec::new();
    let comma = delimiter == ';';
    let line = |line: &str| {
        let fields: Vec<&str> = line.split(delimiter).collect();
        let heads = |(at, field): (usize, &&str)| {
            headers.iter().any(|head| field.starts_with(head)).then_some(at)
        };
        if positions.is_empty() {
            positions = fields.iter().enumerate().filter_map(heads).collect();
            return line.to_owned();
        }
        let field = |(at, field): (usize, &&str)| {
            let number =
                field.replace(',', ".").parse::<f64>().ok().filter(|_| positions.contains(&at));
            let Some(number) = number.filter(|number| *number != -9999.0) else {
                return (*field).to_owned();
            };
            let changed = format!("{:.4}", change(number));
            if comma { changed.replace('.', ",") } else { changed }
        };
        fields.iter().enumerate().map(field).collect::<Vec<_>>().join(&delimiter.to_string())
    };
    text.lines().map(line).collect::<Vec<_>>().join("\n")
}

/// The April files with one of them changed.
fn april_with(name: &str, by: impl Fn(&str) -> String) -> Vec<(String, String)> {
    let with = |(file, text): (String, String)| {
        if file.starts_with(name) { (file, by(&text)) } else { (file, text) }
    };
    april().into_iter().map(with).collect()
}

fn messages(imported: &Imported) -> Vec<String> {
    imported.report.suspicions.iter().map(Suspicion::to_string).collect()
}

/// Suspicions other than the rod of SP1, which is part of the run.
fn others(imported: &Imported) -> Vec<&Suspicion> {
    let rod = |suspicion: &&Suspicion| !matches!(suspicion.kind, SuspicionKind::Rod { .. });
    imported.report.suspicions.iter().filter(rod).collect()
}

#[test]
fn the_good_run_raises_the_unbooked_rod_and_nothing_else() {
    let names = std::fs::read_dir(demo().join("run-good")).unwrap();
    let mut names: Vec<String> =
        names.map(|entry| entry.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    let files: Vec<_> = names.iter().map(|name| file(name)).collect();
    let imported = import(&site(), &files);
    assert_eq!(imported.report.suspicions.len(), 1, "{:?}", messages(&imported));
    let message = &messages(&imported)[0];
    assert!(message.starts_with("SP1: step of -0.998 m between 2026-04-13 03:30 +00:00 and 2026-04-14 03:30 +00:00 equals one rod of 1 m. Enter an extension?"), "{message}");
    assert!(imported.report.files.iter().all(|file| file.refused_count() == 0));
    assert_eq!(imported.report.duplicates_ignored, 0);
}

#[test]
fn the_bad_run_is_taken_as_it_is() {
    let paths: Vec<PathBuf> = std::fs::read_dir(demo().join("run-bad"))
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .collect();
    let imported = import::read_files(&site(), &paths).unwrap();
    assert!(
        imported.report.suspicions.is_empty(),
        "trouble of the ground is not a mistake of units: {:?}",
        messages(&imported)
    );
}

#[test]
fn psi_taken_for_kpa_is_suspected_and_not_applied() {
    let psi = |text: &str| change(text, ',', &["PC", "PE", "PS"], |kpa| kpa / 6.894_757);
    let imported = import(&site(), &april_with("logger-a", psi));
    let others = others(&imported);
    assert_eq!(others.len(), 1, "{:?}", messages(&imported));
    assert!(matches!(
        others[0].kind,
        SuspicionKind::Unit { given: UnitName::Kpa, fits: UnitName::Psi, .. }
    ));
    assert_eq!(others[0].instruments, ["PC1", "PC2", "PC3", "PE1", "PE2", "PE3", "PS1"]);
    let message = others[0].to_string();
    assert!(message.contains("values fit psi, not kPa (6.9 times too small against depth and load). Confirm the unit; nothing was changed."), "{message}");
    assert!(
        imported.instrument("PC2").unwrap().points[0].value < 25.0,
        "the reading stays as it was read"
    );
}

#[test]
fn metres_of_water_and_millibars_are_told_from_psi() {
    for (factor, unit) in
        [(1.0 / 9.806_65, UnitName::MetreWater), (10.0, UnitName::Mbar), (0.01, UnitName::Bar)]
    {
        let changed = |text: &str| change(text, ',', &["PC2", "PC3", "PE3"], |kpa| kpa * factor);
        let imported = import(&site(), &april_with("logger-a", changed));
        let fits: Vec<_> = others(&imported).iter().map(|s| s.kind.clone()).collect();
        assert!(
            matches!(&fits[..], [SuspicionKind::Unit { fits, .. }] if *fits == unit),
            "{unit}: {:?}",
            messages(&imported)
        );
    }
}

#[test]
fn feet_and_psi_together_are_both_named() {
    let changed = |text: &str| {
        let psi = change(
            text,
            ',',
            &["PB", "PC", "PE", "PF", "PM1", "PM3", "PN", "PO", "PS", "PW"],
            |kpa| kpa / 6.894_757,
        );
        change(&psi, ',', &["LG1"], |m| m / 0.3048)
    };
    let imported = import(&site(), &april_with("logger-a", changed));
    let kinds: Vec<_> = others(&imported).iter().map(|s| s.kind.clone()).collect();
    assert!(
        matches!(
            &kinds[..],
            [
                SuspicionKind::Unit { fits: UnitName::Foot, .. },
                SuspicionKind::Unit { fits: UnitName::Psi, .. }
            ]
        ),
        "{:?}",
        messages(&imported)
    );
    let level = &others(&imported)[0].message;
    assert!(
        level
            .contains("LG1: values fit ft, not m (3.3 times too large against the planned stages)"),
        "{level}"
    );
}

#[test]
fn inches_taken_for_millimetres_are_suspected() {
    let changed = |text: &str| change(text, ',', &["SV03", "SV12"], |mm| mm / 25.4);
    let imported = import(&site(), &april_with("perimeter", changed));
    let others = others(&imported);
    assert_eq!(others.len(), 1, "{:?}", messages(&imported));
    assert!(matches!(others[0].kind, SuspicionKind::Unit { fits: UnitName::Inch, .. }));
    assert_eq!(others[0].instruments, ["SV03", "SV12"]);
}

#[test]
fn reversed_signs_are_suspected_kind_by_kind() {
    let changed = |text: &str| change(text, ';', &["SC1", "SC2", "SC4"], |mm| -mm);
    let imported = import(&site(), &april_with("logger-b", changed));
    let others = others(&imported);
    assert_eq!(others.len(), 1, "{:?}", messages(&imported));
    assert_eq!(others[0].kind, SuspicionKind::Sign);
    assert_eq!(
        others[0].message,
        "Settlement cells rise while the tank fills. Sign may be reversed for 3 of 4 (SC1, SC2, SC4). \
         Confirm it; nothing was changed."
    );
}

#[test]
fn a_file_in_another_zone_is_suspected_by_whole_hours() {
    for (zone, late, word) in
        [("Etc/GMT-1", 60, "lag"), ("UTC", 120, "lag"), ("Etc/GMT-4", -120, "run ahead of")]
    {
        let mut site = site();
        for layout in site.readings.iter_mut().filter(|layout| layout.name == "Logger B") {
            zone.clone_into(&mut layout.time_zone);
        }
        let imported = import(&site, &april());
        let others = others(&imported);
        assert_eq!(others.len(), 1, "{:?}", messages(&imported));
        assert_eq!(others[0].kind, SuspicionKind::Clock { late_min: late });
        let message = &others[0].message;
        assert!(
            message.starts_with(&format!(
                "Logger B: readings {word} the fill by {} min (tested on LG2).",
                i64::abs(late)
            )),
            "{message}"
        );
    }
}

#[test]
fn all_piezometers_an_hour_late_point_at_file_and_level() {
    let mut site = site();
    // The second gauge gives the load, from the other logger.
    for instrument in &mut site.instruments {
        if instrument.id.starts_with("LG") {
            instrument.master = Some(instrument.id == "LG2");
        }
    }
    for layout in site.readings.iter_mut().filter(|layout| layout.name == "Logger A") {
        "Etc/GMT+1".clone_into(&mut layout.time_zone);
    }
    let imported = import(&site, &april());
    let others = others(&imported);
    assert_eq!(others.len(), 1, "{:?}", messages(&imported));
    assert!(
        others[0]
            .message
            .starts_with("Logger A: readings lag the fill by 60 min (tested on LG1, PC1"),
        "{}",
        others[0]
    );
    assert!(
        others[0].message.contains("Check the zone of these files and that of the liquid level.")
    );
}

#[test]
fn a_spike_as_long_as_a_rod_is_no_rod() {
    let spike = |text: &str| text.replacen("\t13\t", "\t1013\t", 1);
    let changed = april_with("daybook", spike);
    let before = import(&site(), &april()).report.suspicions.len();
    assert_eq!(import(&site(), &changed).report.suspicions.len(), before);
}

#[test]
fn without_a_level_nothing_is_tested_against_it() {
    let files: Vec<_> =
        april().into_iter().filter(|(name, _)| name.starts_with("perimeter")).collect();
    assert!(import(&site(), &files).report.suspicions.is_empty());
}
