//! Tells the linker where the board's memory lies.

fn main() {
    let here = std::env::var("CARGO_MANIFEST_DIR").unwrap_or_else(|_| ".".to_owned());
    println!("cargo:rustc-link-search={here}");
    println!("cargo:rustc-link-arg-bins=-Tlink.x");
    // Page alignment is for operating systems; here it would only pad the image.
    println!("cargo:rustc-link-arg-bins=--nmagic");
    println!("cargo:rerun-if-changed=memory.x");
}
