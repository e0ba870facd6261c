//! A small deterministic generator for sample points: SplitMix64 (Steele, Lea & Flood 2014).
//!
//! Not for secrets. The same seed gives the same points on every machine.

use super::Field;

/// A stream of evenly distributed words.
#[derive(Clone, Debug)]
pub struct Random(u64);

impl Random {
    /// Starts a stream.
    pub fn new(seed: u64) -> Self {
        Self(seed)
    }

    /// The next word.
    pub fn word(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut mixed = self.0;
        mixed = (mixed ^ (mixed >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        mixed = (mixed ^ (mixed >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        mixed ^ (mixed >> 31)
    }

    /// A field element other than 0.
    pub fn unit(&mut self, field: &Field) -> u64 {
        loop {
            let value = self.word() % field.modulus();
            if value != 0 {
                return value;
            }
        }
    }
}
