//! `brimstead eval`: the batch interface for scripts, spreadsheets and outside checks. One JSON
//! request a line in, one JSON answer a line out, in order, full double precision. It maps JSON to
//! the core and back; it computes nothing itself.

mod consolidation;
mod forecast;
mod instrument;
mod layered;
mod request;
mod settlement;
mod shell;
mod stability;
mod stress;
mod trail;

use anyhow::Context;
use request::{Refusal, Request};
use serde_json::Value;
use serde_json::value::RawValue;
use std::fs::File;
use std::io::{self, BufRead, BufReader, Write};
use std::path::Path;
use std::process::ExitCode;
use trail::Trail;

/// How a batch ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Outcome {
    /// Every line gave a result.
    AllGood,
    /// At least one line gave an error.
    SomeRefused,
}

/// A longer line is refused unread: it is not a request but a mistake.
const MAX_LINE_BYTES: usize = 64 << 20;

/// Answers every request of `input` on `output`.
///
/// # Errors
/// When the input cannot be read or the output cannot be written.
pub fn run(input: impl BufRead, mut output: impl Write) -> io::Result<Outcome> {
    let mut outcome = Outcome::AllGood;
    for (index, line) in input.lines().enumerate() {
        let line = line?;
        if line.trim().is_empty() {
            continue;
        }
        let (text, good) = answer(&line, index + 1);
        if !good {
            outcome = Outcome::SomeRefused;
        }
        writeln!(output, "{text}")?;
    }
    output.flush()?;
    Ok(outcome)
}

/// One answer line and whether it is a result.
fn answer(line: &str, number: usize) -> (String, bool) {
    if line.len() > MAX_LINE_BYTES {
        let refusal = Refusal::new("", format!("line {number} is longer than 64 MiB. Split it."));
        return (render(None, Err(refusal), None), false);
    }
    let request = match Request::parse(line, number) {
        Ok(request) => request,
        Err((id, refusal)) => return (render(id.as_deref(), Err(refusal), None), false),
    };
    let mut trail = Trail::new(request.working);
    let result = dispatch(&request.quantity, request.input, &mut trail);
    let good = result.is_ok();
    (render(request.id, result, Some(trail)), good)
}

fn render(id: Option<&RawValue>, result: Result<Value, Refusal>, trail: Option<Trail>) -> String {
    let id = id.map_or("null", RawValue::get);
    match result {
        Ok(value) => match trail.and_then(Trail::into_json) {
            Some(steps) => format!(r#"{{"id":{id},"result":{value},"working":{steps}}}"#),
            None => format!(r#"{{"id":{id},"result":{value}}}"#),
        },
        Err(refusal) => format!(r#"{{"id":{id},"error":{}}}"#, refusal.into_json()),
    }
}

/// What `eval` can answer, by the name of the quantity.
const QUANTITIES: &[(&str, request::Handler)] = &[
    ("disc_stress", stress::disc_stress),
    ("disc_displacement", stress::disc_displacement),
    ("ring_stress", stress::ring_stress),
    ("ring_displacement", stress::ring_displacement),
    ("rigid_disc_stress", stress::rigid_disc_stress),
    ("rigid_disc_settlement", stress::rigid_disc_settlement),
    ("westergaard_disc_stress", stress::westergaard_disc_stress),
    ("layered_response", layered::layered_response),
    ("site_stress", stress::site_stress),
    ("undrained_pore_pressure", layered::undrained_pore_pressure),
    ("consolidation", consolidation::consolidation),
    ("terzaghi", consolidation::terzaghi),
    ("drain_consolidation", consolidation::drain_consolidation),
    ("primary_settlement", settlement::primary),
    ("schmertmann", settlement::schmertmann),
    ("circular_bearing", stability::circular_bearing),
    ("edge_stability", stability::edge_stability),
    ("strength_gain", stability::strength_gain),
    ("perimeter_fit", shell::perimeter_fit),
    ("asaoka", forecast::asaoka),
    ("hyperbolic", forecast::hyperbolic),
    ("wire_pressure", instrument::wire_pressure),
];

fn dispatch(quantity: &str, input: &RawValue, trail: &mut Trail) -> Result<Value, Refusal> {
    match QUANTITIES.iter().find(|(name, _)| *name == quantity) {
        Some((_, handler)) => handler(input, trail),
        None => {
            let known: Vec<&str> = QUANTITIES.iter().map(|(name, _)| *name).collect();
            Err(Refusal::new(
                "quantity",
                format!(
                    "\"{quantity}\" is not built or not known; nothing was computed. Known \
                     quantities: {}.",
                    known.join(", ")
                ),
            ))
        }
    }
}

/// Answers the requests of a file, or of standard input for `-`.
///
/// # Errors
/// When the input cannot be opened or read to its end.
pub fn run_file(file: &Path) -> anyhow::Result<ExitCode> {
    let output = io::BufWriter::new(io::stdout().lock());
    let outcome = if file == Path::new("-") {
        run(io::stdin().lock(), output).context("standard input could not be read")?
    } else {
        let input = File::open(file).with_context(|| {
            format!("{} could not be opened. Check the path and its permissions", file.display())
        })?;
        run(BufReader::new(input), output)
            .with_context(|| format!("{} could not be read to its end", file.display()))?
    };
    Ok(match outcome {
        Outcome::AllGood => ExitCode::SUCCESS,
        Outcome::SomeRefused => ExitCode::from(1),
    })
}
