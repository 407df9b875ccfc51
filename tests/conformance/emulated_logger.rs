//! The logger image, run on the emulated board, must compute what this machine computes.

use brimstead_logger::conformance;
use std::process::Command;

/// Stack the logger may use for any of these numbers: half of its memory.
const STACK_BUDGET_BYTES: u64 = 64 * 1024;

/// Long enough for a busy machine; a hung image must not hang the tests.
const LIMIT_S: &str = "300";

#[test]
#[ignore = "needs the image and the emulator; `bash tests/run.sh` builds it and runs this"]
fn logger_and_desktop_compute_the_same_bits() {
    let image = brimstead_tests::root().join("target/logger/thumbv7em-none-eabihf/release/logger");
    assert!(image.is_file(), "no image: run `bash firmware-demo/build.sh image`");
    let run = Command::new("timeout")
        .args([LIMIT_S, "qemu-system-arm", "-machine", "mps2-an386", "-cpu", "cortex-m4"])
        .args(["-nographic", "-monitor", "none", "-serial", "none"])
        .args(["-semihosting-config", "enable=on,target=native", "-kernel"])
        .arg(&image)
        .output()
        .expect("timeout and qemu-system-arm start");
    let emulated = String::from_utf8_lossy(&run.stdout);
    assert!(
        run.status.success(),
        "the image stopped with {}: {}",
        run.status,
        String::from_utf8_lossy(&run.stderr)
    );

    let (numbers, stack) =
        emulated.trim_end().rsplit_once("\nstack bytes ").expect("the last line is the stack used");
    let stack: u64 = stack.parse().expect("a number of bytes");
    assert!(
        (1..=STACK_BUDGET_BYTES).contains(&stack),
        "the stack went {stack} bytes deep; the budget is {STACK_BUDGET_BYTES}"
    );

    let mut here = String::new();
    conformance::write_bits(&mut here).expect("the desktop computes every number");
    let mut compared = 0;
    for (logger, desktop) in numbers.lines().zip(here.lines()) {
        assert_eq!(logger, desktop, "logger (left) and desktop (right) differ");
        compared += 1;
    }
    assert_eq!(numbers.lines().count(), here.lines().count(), "lines missing on one side");
    println!("{compared} numbers agree to the last bit; the stack went {stack} bytes deep");
}
