//! The logger on the emulated board. For now it computes the conformance numbers at start-up and
//! prints their bits, so that a desktop can show that both compute the same.
#![no_std]
#![no_main]

use brimstead_logger::conformance;
use cortex_m_rt::entry;
use cortex_m_semihosting::{debug, hio};

#[entry]
fn main() -> ! {
    let written = hio::hstdout()
        .map_err(|()| core::fmt::Error)
        .and_then(|mut out| conformance::write_bits(&mut out));
    leave(written.is_ok())
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
