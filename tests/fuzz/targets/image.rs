//! Any bytes as an image: what loads must plan or be refused, and convert. The bytes after the header are also read with the
//! checksum made right, so that the fuzzer reaches the fields.
#![no_main]

use libfuzzer_sys::fuzz_target;
use ohmwright::chain::Inputs;
use ohmwright::image::Image;

/// CRC-32 of IEEE 802.3, written here again.
fn crc(bytes: &[u8]) -> u32 {
    let table = |byte: u32| (0..8).fold(byte, |c, _| if c & 1 == 1 { 0xedb8_8320 ^ (c >> 1) } else { c >> 1 });
    !bytes.iter().fold(u32::MAX, |c, byte| table((c ^ u32::from(*byte)) & 0xff) ^ (c >> 8))
}

fn load(bytes: &[u8]) {
    let Ok(image) = Image::new(bytes) else { return };
    for index in 0..image.len().min(4) {
        let Ok(entry) = image.entry(index) else { continue };
        let Ok(plan) = entry.chain.plan() else { continue };
        for reading in [0.0, 1e-3, 100.0, -5.0, f64::NAN, 1e300] {
            let inputs = Inputs { reading, supply: 2.5, celsius: 21.0, lead_celsius: 20.0, arm_celsius: [20.0; 4] };
            let outcome = plan.one(inputs);
            assert_eq!(outcome.word.has_number(), outcome.value.is_finite(), "{outcome:?}");
        }
    }
}

fuzz_target!(|bytes: &[u8]| {
    load(bytes);
    if let Some(body) = bytes.get(16..) {
        let mut whole = bytes.to_vec();
        whole[..6].copy_from_slice(b"OHMW\x01\0");
        whole[8..12].copy_from_slice(&u32::try_from(body.len()).unwrap_or(0).to_le_bytes());
        let summed = [whole.get(..12).unwrap_or_default(), body].concat();
        whole[12..16].copy_from_slice(&crc(&summed).to_le_bytes());
        load(&whole);
    }
});
