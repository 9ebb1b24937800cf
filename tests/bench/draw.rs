//! Numbers that only look random, the same in every run.

/// A linear congruential generator.
pub(crate) struct Draw(pub(crate) u64);

impl Draw {
    /// A whole number from 0 up to, not including, `end`.
    pub(crate) fn below(&mut self, end: u64) -> u64 {
        let next = self.0.wrapping_mul(6_364_136_223_846_793_005);
        self.0 = next.wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 33) % end
    }
}
