//! The hand-check trail: any calculation can write its intermediate values, one line a step, into
//! a sink lent by the caller, so that a sceptic can follow it with a calculator. Nothing is
//! allocated and nothing is computed differently when nobody listens.

/// One line of a hand-check sheet.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Step<'a> {
    /// What was computed, in terms of the trade.
    pub name: &'a str,
    /// Its value.
    pub value: f64,
    /// Its unit; empty for a pure number.
    pub unit: &'static str,
    /// The formula, in plain ASCII, with the symbols named in `inputs`.
    pub formula: &'static str,
    /// The numbers put in, by symbol, in the order of the formula.
    pub inputs: &'a [(&'static str, f64)],
    /// Source of the method, once per method ("Terzaghi 1943"); empty where obvious.
    pub source: &'static str,
}

/// Receives the steps of a calculation in order.
pub trait Working {
    /// Whether steps are wanted; lets a calculation skip work done only for the trail.
    fn wanted(&self) -> bool {
        true
    }
    /// Takes one step.
    fn step(&mut self, step: Step<'_>);
}

/// Nobody listens.
#[derive(Debug, Clone, Copy, Default)]
pub struct Silent;

impl Working for Silent {
    fn wanted(&self) -> bool {
        false
    }
    fn step(&mut self, _: Step<'_>) {}
}
