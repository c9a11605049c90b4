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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numerics::lanes::Lanes;

    /// Sums of products, a quotient, a root and an exponential: what a fused multiply-add or an
    /// approximate instruction would change.
    struct Mixed<'a>(&'a [f64]);

    impl Kernel for Mixed<'_> {
        type Output = Vec<u64>;

        #[inline(always)]
        fn run(self) -> Vec<u64> {
            let mut sum = 0.0;
            let mut bits = Vec::with_capacity(2 * self.0.len());
            for &x in self.0 {
                sum = sum * 0.999 + x * x / (1.0 + x.abs()).sqrt();
                bits.push(sum.to_bits());
                bits.push(Lanes::splat(-x).exp().0[1].to_bits());
            }
            bits
        }
    }

    #[test]
    fn wider_instructions_give_the_same_bits() {
        let numbers: Vec<f64> = (0..1000)
            .map(|i| (f64::from(i) * 0.37).sin() * 7.0)
            .collect();
        assert_eq!(widest(Mixed(&numbers)), Mixed(&numbers).run());
    }
}
