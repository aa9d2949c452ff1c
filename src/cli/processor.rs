//! Checks that the processor has the instructions that this binary was compiled for.

/// Says in words what is missing, instead of an illegal instruction later on.
///
/// The standard library's detection macro folds to a constant for features that the build
/// already assumes, so CPUID is asked directly: AVX2 (leaf 7, EBX bit 5), FMA (leaf 1, ECX bit
/// 12), and that the operating system saves the wide registers (OSXSAVE, leaf 1, ECX bit 27;
/// XCR0 bits 1 and 2).
///
/// # Errors
///
/// The sentence to print.
#[cfg(target_arch = "x86_64")]
pub fn check() -> Result<(), String> {
    use std::arch::x86_64::{__cpuid, __cpuid_count};
    let highest = __cpuid(0).eax;
    let first = __cpuid(1).ecx;
    let seventh = if highest >= 7 {
        __cpuid_count(7, 0).ebx
    } else {
        0
    };
    let mut missing = Vec::new();
    if first & (1 << 12) == 0 {
        missing.push("FMA");
    }
    if seventh & (1 << 5) == 0 {
        missing.push("AVX2");
    }
    if first & (1 << 27) == 0 {
        missing.push("XSAVE (enabled by the operating system)");
    }
    if missing.is_empty() {
        return Ok(());
    }
    Err(format!(
        "this binary needs a processor of the level x86-64-v3 (Intel Haswell, AMD Zen, or later); \
         this one lacks {}",
        missing.join(", ")
    ))
}

/// Other architectures need no check: what they lack they lack at compile time.
#[cfg(not(target_arch = "x86_64"))]
pub fn check() -> Result<(), String> {
    Ok(())
}
