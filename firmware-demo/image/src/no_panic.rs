//! Proof by linking that the core cannot panic: the panic handler calls a function that exists
//! nowhere, so the link fails as long as one path to a panic is left in what is called here.
#![no_std]
#![no_main]
#![allow(unsafe_code, reason = "the missing function can only be declared, never defined")]

use brimstead_logger::conformance::{self, Inputs};
use core::hint::black_box;
use cortex_m_rt::entry;

unsafe extern "C" {
    safe fn a_panic_is_reachable_from_the_core() -> !;
}

#[panic_handler]
fn panic(_: &core::panic::PanicInfo<'_>) -> ! {
    a_panic_is_reachable_from_the_core()
}

#[entry]
fn main() -> ! {
    // Opaque inputs: with known ones the compiler would drop the very branches in question.
    if let Some(inputs) = Inputs::invented() {
        black_box(conformance::compute(&black_box(inputs), |name, value| {
            black_box((name, value));
        }));
    }
    loop {
        cortex_m::asm::wfi();
    }
}
