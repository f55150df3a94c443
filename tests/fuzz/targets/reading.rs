//! Bytes as a patch set: read or refused, and all that is found can be shown.
#![no_main]

use chordwise::patch_set::PatchSet;
use libfuzzer_sys::fuzz_target;

fuzz_target!(|bytes: &[u8]| {
    match PatchSet::from_bytes(bytes.to_vec(), "fuzz.ron") {
        Ok(reading) => {
            assert!(!reading.set.pieces().is_empty());
            for warning in &reading.warnings {
                assert!(!warning.render("fuzz.ron", true).is_empty());
            }
        }
        Err(faults) => {
            assert!(!faults.list.is_empty());
            assert!(!faults.render(true).is_empty() && !faults.to_string().is_empty());
        }
    }
});
