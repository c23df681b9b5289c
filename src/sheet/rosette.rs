//! `[rosette.*]`: three grids into the plane state of strain.

use std::string::String;
use std::vec::Vec;

use crate::measurement::RosetteSource;

/// What a rosette's channel does, in words.
pub(super) fn describe(_rosette: &RosetteSource, _name: &dyn Fn(usize) -> String) -> Vec<String> {
    Vec::new()
}
