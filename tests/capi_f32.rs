//! The single-precision entry: within half a unit in the last place of what the double-precision one gives for the same inputs.
#![cfg(feature = "capi")]
#![allow(unsafe_code, reason = "calls the C interface as C does")]

mod support;

use core::ffi::c_void;

use ohmwright::capi::{OwInputs, OwInputsF32, ow_convert, ow_convert_f32, ow_model_load, ow_model_size};
use ohmwright::image::write;
use support::chains;

#[test]
fn single_precision_is_rounded_once() {
    let cases = chains::all();
    let bytes = write(cases.iter().map(|c| (c.name, "", &c.chain))).unwrap();
    let mut room = vec![0_u64; ow_model_size().div_ceil(8)];
    let mut compared = 0;
    for (i, case) in cases.iter().enumerate() {
        let storage = room.as_mut_ptr().cast::<c_void>();
        // SAFETY: the storage has the size that is asked for and the alignment of a double; the bytes are an image
        let status = unsafe { ow_model_load(storage, ow_model_size(), bytes.as_ptr(), bytes.len(), i) };
        assert_eq!(status, 0, "{}", case.name);
        let plan = case.chain.plan().unwrap();
        for share in [0.05, 0.3, 0.5, 0.77, 0.95] {
            let quantity = case.span[0] + share * (case.span[1] - case.span[0]);
            let reading = plan.forward(quantity, case.inputs).unwrap() as f32;
            let i = case.inputs;
            let single = OwInputsF32 {
                reading,
                supply: i.supply as f32,
                celsius: i.celsius as f32,
                lead_celsius: i.lead_celsius as f32,
                arm_celsius: i.arm_celsius.map(|t| t as f32),
            };
            let double = OwInputs {
                reading: f64::from(reading),
                supply: f64::from(single.supply),
                celsius: f64::from(single.celsius),
                lead_celsius: f64::from(single.lead_celsius),
                arm_celsius: single.arm_celsius.map(f64::from),
            };
            let (mut small, mut large) = (0.0_f32, 0.0_f64);
            // SAFETY: a model, inputs and a number of this frame
            let words =
                unsafe { (ow_convert_f32(storage, &single, &mut small), ow_convert(storage, &double, &mut large)) };
            assert_eq!(words.0, words.1, "{}", case.name);
            if words.0 != 0 {
                continue;
            }
            compared += 1;
            let ulp = f64::from(small.abs().next_up()) - f64::from(small.abs());
            assert!((f64::from(small) - large).abs() <= 0.5 * ulp, "{}: {small} {large}", case.name);
        }
    }
    assert!(compared > 4 * cases.len(), "{compared}");
}
