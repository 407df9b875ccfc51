//! A hand-check sheet that tests can read.

#![allow(dead_code, reason = "shared by several tests, each of which uses a part of it")]

use brimstead_core::working::{Step, Working};

/// Keeps the steps by name.
#[derive(Default)]
pub struct Sheet {
    steps: Vec<(String, f64, &'static str)>,
}

impl Working for Sheet {
    fn step(&mut self, step: Step<'_>) {
        self.steps.push((step.name.to_owned(), step.value, step.source));
    }
}

impl Sheet {
    /// Value of the first step of a name.
    pub fn value(&self, name: &str) -> f64 {
        let found = self.steps.iter().find(|(n, ..)| n == name);
        found.unwrap_or_else(|| panic!("no step {name}")).1
    }

    /// Sum over the steps of a name.
    pub fn sum(&self, name: &str) -> f64 {
        self.steps.iter().filter(|(n, ..)| n == name).map(|(_, value, _)| value).sum()
    }

    /// Source that came with the first step.
    pub fn source(&self) -> &'static str {
        self.steps.first().expect("a step").2
    }
}
