//! How deep the stack ever went: start-up paints it, and a word that lost its paint was used.

use cortex_m_rt::STACK_PAINT_VALUE;

#[allow(unsafe_code, reason = "the linker gives the ends of the stack as symbols, not as values")]
pub(crate) fn used_bytes() -> usize {
    unsafe extern "C" {
        static _stack_end: u32;
        static _stack_start: u32;
    }
    let mut word = &raw const _stack_end;
    let top = &raw const _stack_start;
    // SAFETY: between the two symbols lies memory that start-up wrote and nothing else owns; the
    // reads are volatile because the running stack writes there behind the compiler's back.
    while word < top && unsafe { word.read_volatile() } == STACK_PAINT_VALUE {
        word = word.wrapping_add(1);
    }
    (top as usize).saturating_sub(word as usize)
}
