//! `brimstead-demo FOLDER`: reads `FOLDER/site.json` and writes the runs beside it.

use brimstead_demo::{Error, read_site, run, write_run};
use std::path::Path;
use std::process::ExitCode;

fn main() -> ExitCode {
    let Some(folder) = std::env::args().nth(1) else {
        eprintln!("Name the folder that holds site.json.");
        return ExitCode::from(2);
    };
    match write_all(Path::new(&folder)) {
        Ok(()) => ExitCode::SUCCESS,
        Err(error) => {
            eprintln!("{error}");
            ExitCode::FAILURE
        }
    }
}

fn write_all(folder: &Path) -> Result<(), Error> {
    let site = read_site(&folder.join("site.json"))?;
    for run in [run::good(), run::bad()] {
        println!("{}", write_run(&site, &run, folder)?.display());
    }
    Ok(())
}
