//! The slice loop compiled twice: for the baseline, and for processors with AVX2. The same source without fused
//! multiply-add, so the same bits (tests/batch.rs).
#![allow(unsafe_code, reason = "calling a function compiled for a feature that was just detected")]

use super::kernel;
use super::plan::{Columns, Plan};

/// Runs the loop in the widest form that the processor has; returns how many results are no number.
pub(super) fn convert(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    #[cfg(all(feature = "std", target_arch = "x86_64"))]
    if std::is_x86_feature_detected!("avx2") {
        // SAFETY: the processor has AVX2, just asked.
        return unsafe { convert_avx2(plan, columns, out) };
    }
    kernel::convert(plan, columns, out)
}

#[cfg(all(feature = "std", target_arch = "x86_64"))]
#[target_feature(enable = "avx2")]
fn convert_avx2(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    kernel::convert(plan, columns, out)
}

impl Plan {
    /// Runs the baseline form of the slice loop whatever the processor has: for tests of the same-bits promise.
    #[doc(hidden)]
    pub fn slice_baseline(&self, columns: &Columns<'_>, out: &mut [f64]) {
        kernel::convert(self, columns, out);
    }
}
