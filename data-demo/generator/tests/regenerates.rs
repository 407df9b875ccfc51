//! The committed readings are what the generator writes today, byte for byte.

use brimstead_demo::{read_site, run, write_run};
use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

fn demo_folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("..")
}

fn files_in(folder: &Path) -> BTreeMap<String, Vec<u8>> {
    fs::read_dir(folder)
        .unwrap()
        .map(|entry| {
            let path = entry.unwrap().path();
            (path.file_name().unwrap().to_string_lossy().into_owned(), fs::read(&path).unwrap())
        })
        .collect()
}

fn compare(run: &run::Run) {
    let site = read_site(&demo_folder().join("site.json")).unwrap();
    let fresh_folder = tempfile::tempdir().unwrap();
    let fresh = files_in(&write_run(&site, run, fresh_folder.path()).unwrap());
    let committed = files_in(&demo_folder().join(format!("run-{}", run.name)));
    assert_eq!(
        fresh.keys().collect::<Vec<_>>(),
        committed.keys().collect::<Vec<_>>(),
        "the same files are written; run data-demo/generate.sh"
    );
    for (name, bytes) in &fresh {
        assert!(bytes == &committed[name], "{name} differs; run data-demo/generate.sh");
        assert!(bytes.len() < 1 << 20, "{name} stays below 1 MiB");
    }
}

#[test]
fn good_run_is_regenerated_bit_for_bit() {
    compare(&run::good());
}

#[test]
fn bad_run_is_regenerated_bit_for_bit() {
    compare(&run::bad());
}

#[test]
fn column_heads_stand_where_the_site_file_says() {
    let text = fs::read_to_string(demo_folder().join("site.json")).unwrap();
    let site: serde_json::Value = serde_json::from_str(&text).unwrap();
    for source in site["readings"].as_array().unwrap() {
        let skip = source["skip_lines"].as_u64().unwrap() as usize;
        let start = source["files"][0].as_str().unwrap().split('*').next().unwrap();
        for folder in ["run-good", "run-bad"] {
            let files = files_in(&demo_folder().join(folder));
            let mut seen = 0;
            for (_, bytes) in files.iter().filter(|(name, _)| name.starts_with(start)) {
                let head = bytes.split(|b| *b == b'\n').nth(skip).unwrap();
                let time_column = source["time_column"].as_str().unwrap();
                assert!(head.starts_with(time_column.as_bytes()), "{folder} {start}");
                seen += 1;
            }
            assert!(seen > 0, "{folder} has files of {start}");
        }
    }
}
