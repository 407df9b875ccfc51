//! Collects the working of one calculation as JSON.

use brimstead_core::working::{Step, Working};
use serde_json::{Value, json};

/// The steps of one answer, kept only when they were asked for.
#[derive(Debug)]
pub struct Trail {
    steps: Option<Vec<Value>>,
}

impl Trail {
    pub fn new(wanted: bool) -> Self {
        Self { steps: wanted.then(Vec::new) }
    }

    pub fn into_json(self) -> Option<Value> {
        self.steps.map(Value::Array)
    }
}

impl Working for Trail {
    fn wanted(&self) -> bool {
        self.steps.is_some()
    }

    fn step(&mut self, step: Step<'_>) {
        if let Some(steps) = &mut self.steps {
            let inputs: Vec<String> =
                step.inputs.iter().map(|(symbol, value)| format!("{symbol} = {value}")).collect();
            let formula = if inputs.is_empty() {
                step.formula.to_string()
            } else {
                format!("{} with {}", step.formula, inputs.join(", "))
            };
            steps.push(json!({
                "name": step.name, "value": step.value, "unit": step.unit, "formula": formula,
            }));
        }
    }
}
