//! The slice loop compiled twice: for the baseline, and for processors with AVX2. The same source without fused
//! multiply-add, so the same bits (tests/batch.rs).
#![allow(unsafe_code, reason = "calling a function compiled for a feature that was just detected")]

use super::kernel;
use super::plan::{Columns, Plan};
use super::short::Kind;

/// Runs the loop in the widest form that the processor has; returns how many results are no number.
pub(super) fn convert(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    #[cfg(all(feature = "std", target_arch = "x86_64"))]
    if std::is_x86_feature_detected!("avx2") {
        // SAFETY: the processor has AVX2, just asked.
        return unsafe {
            if plan.short.kind == Kind::None { whole_avx2(plan, columns, out) } else { short_avx2(plan, columns, out) }
        };
    }
    baseline(plan, columns, out)
}

fn baseline(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    if plan.short.kind == Kind::None {
        whole(plan, columns, out)
    } else {
        kernel::convert_short(plan, columns, out, |columns, out| whole(plan, columns, out))
    }
}

#[inline(never)]
fn whole(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    kernel::convert(plan, columns, out)
}

#[cfg(all(feature = "std", target_arch = "x86_64"))]
#[target_feature(enable = "avx2")]
#[inline(never)]
fn whole_avx2(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    kernel::convert(plan, columns, out)
}

#[cfg(all(feature = "std", target_arch = "x86_64"))]
#[target_feature(enable = "avx2")]
#[inline(never)]
fn short_avx2(plan: &Plan, columns: &Columns<'_>, out: &mut [f64]) -> usize {
    kernel::convert_short(plan, columns, out, |columns, out| whole_avx2(plan, columns, out))
}

impl Plan {
    /// Runs the baseline form of the slice loop whatever the processor has: for tests of the same-bits promise.
    #[doc(hidden)]
    pub fn slice_baseline(&self, columns: &Columns<'_>, out: &mut [f64]) {
        baseline(self, columns, out);
    }
}
