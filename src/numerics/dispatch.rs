//! Runs a kernel with the widest vector instructions this processor has.
//!
//! The binary is built for the oldest x86-64; the body of a [`Kernel`] is compiled a second time
//! for AVX2 and chosen when the program runs. No fused multiply-add is enabled, so both versions
//! do the same IEEE operations in the same order and give the same bits.

/// Work that is worth compiling for wider vectors. Implement `run` with `#[inline(always)]`, and
/// mark what it calls in the same way, or the wider instructions stop at the call.
pub trait Kernel {
    /// What the work returns.
    type Output;
    /// Does the work.
    fn run(self) -> Self::Output;
}

/// Runs `kernel` with AVX2 where the processor has it, else as compiled for the base target.
pub fn widest<K: Kernel>(kernel: K) -> K::Output {
    #[cfg(target_arch = "x86_64")]
    if std::arch::is_x86_feature_detected!("avx2") {
        #[expect(unsafe_code, reason = "AVX2 was detected on the line above")]
        return unsafe { with_avx2(kernel) };
    }
    kernel.run()
}

#[cfg(target_arch = "x86_64")]
#[target_feature(enable = "avx2")]
fn with_avx2<K: Kernel>(kernel: K) -> K::Output {
    kernel.run()
}
