//! `brimstead predict`.

use crate::arguments::PredictArguments;
use crate::output;
use anyhow::{Context, ensure};
use brimstead_engine::compare::page::NamedChart;
use brimstead_engine::predict::{Prediction, predict};
use brimstead_engine::report::{Align, Cell, Column, Table};
use brimstead_engine::site;
use std::process::ExitCode;

pub fn run(given: &PredictArguments) -> anyhow::Result<ExitCode> {
    let site = site::read(&given.site)?;
    ensure!(
        !site.stages.is_empty(),
        "{} has no stages, so there is no plan to predict. Add them under \"stages\"",
        given.site.display()
    );
    let prediction = predict(&site)?;
    let json = serde_json::to_string_pretty(&prediction)?;
    if let Some(out) = &given.out {
        let zone = brimstead_engine::time::zone(&site.site.time_zone).context("time zone")?;
        output::folder(out)?;
        output::write(&out.join("prediction.json"), &json)?;
        let charts: Vec<NamedChart> = prediction.charts(&site, &zone);
        output::pictures(out, &charts)?;
    }
    if given.json {
        output::say(json)?;
    } else {
        print_table(&prediction)?;
        if let Some(out) = &given.out {
            output::say(format!("\nPrediction: {}", out.display()))?;
        }
    }
    Ok(ExitCode::SUCCESS)
}

fn print_table(prediction: &Prediction) -> anyhow::Result<()> {
    output::say(format!(
        "{}: expected readings along the plan, likely (low to high)",
        prediction.site
    ))?;
    if prediction.invented {
        output::say(brimstead_engine::report::INVENTED)?;
    }
    let mut columns = vec![Column::left("moment"), Column::right("level m"), Column::right("kPa")];
    for instrument in &prediction.instruments {
        columns.push(Column::right(&format!("{} {}", instrument.id, instrument.unit)));
    }
    let text = |text: String| Cell { text, tone: None };
    // Few instruments a block, so that lines stay readable.
    for block in prediction.instruments.chunks(4) {
        let mut columns = columns[..3].to_vec();
        columns.extend(block.iter().map(|one| Column {
            name: format!("{} {}", one.id, one.unit),
            align: Align::Right,
            may_be_cut: false,
        }));
        let rows = prediction.moments.iter().enumerate().map(|(place, moment)| {
            let mut row = vec![
                text(moment.name.clone()),
                text(format!("{:.2}", moment.liquid_level_m)),
                text(format!("{:.1}", moment.applied_pressure_kpa)),
            ];
            row.extend(block.iter().map(|one| text(one.text_at(place))));
            row
        });
        let table = Table { columns, rows: rows.collect() };
        output::say("")?;
        for line in table.lines(None, false) {
            output::say(line)?;
        }
    }
    output::say("")?;
    for caution in brimstead_engine::report::CAUTIONS {
        output::say(caution)?;
    }
    Ok(())
}
