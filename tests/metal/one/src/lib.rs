//! One platinum thermometer by its face: no chain, no image, so that no other law is linked.
#![no_std]

use core::panic::PanicInfo;

use ohmwright::platinum::{IEC_60751, Platinum};

/// Temperature in °C of a 100 Ω element with this resistance in Ω; NaN where there is none.
#[unsafe(no_mangle)]
pub extern "C" fn one_celsius(ohms: f64) -> f64 {
    Platinum::new(IEC_60751).and_then(|element| element.celsius_from_ohms(ohms)).unwrap_or(f64::NAN)
}

// defined by nobody: a program in which a panic can be reached does not link
unsafe extern "C" {
    safe fn panic_was_reached() -> !;
}

#[panic_handler]
fn panicked(_: &PanicInfo<'_>) -> ! {
    panic_was_reached()
}
