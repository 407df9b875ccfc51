//! The logger on the emulated board. For now it computes the conformance numbers at start-up and
//! prints their bits, so that a desktop can show that both compute the same; then how much stack
//! that took.
#![no_std]
#![no_main]

mod stack;

use brimstead_logger::conformance;
use core::fmt::{self, Write};
use cortex_m_rt::entry;
use cortex_m_semihosting::{debug, hio};

#[entry]
fn main() -> ! {
    leave(report().is_ok())
}

fn report() -> fmt::Result {
    let mut out = hio::hstdout().map_err(|()| fmt::Error)?;
    conformance::write_bits(&mut out)?;
    writeln!(out, "stack bytes {}", stack::used_bytes())
}

/// Ends the emulation with an exit status; on a board this is where the processor would reset.
fn leave(well: bool) -> ! {
    debug::exit(if well { debug::EXIT_SUCCESS } else { debug::EXIT_FAILURE });
    loop {
        cortex_m::asm::wfi();
    }
}

#[panic_handler]
fn panic(_: &core::panic::PanicInfo<'_>) -> ! {
    leave(false)
}
