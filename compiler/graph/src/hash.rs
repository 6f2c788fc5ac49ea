//! A quick hash for small keys of whole numbers. The standard one guards
//! against keys chosen to collide, which node numbers are not.

use std::hash::{BuildHasherDefault, Hasher};

/// A map with the quick hash. Never iterate over it into output.
pub(crate) type QuickMap<K, V> = std::collections::HashMap<K, V, BuildHasherDefault<Quick>>;
/// The same as a set.
pub(crate) type QuickSet<K> = std::collections::HashSet<K, BuildHasherDefault<Quick>>;

/// Folds each number in by a multiplication of double width.
#[derive(Clone, Copy, Debug, Default)]
pub(crate) struct Quick(u64);

impl Quick {
    fn fold(&mut self, number: u64) {
        // An odd number without pattern: the golden ratio times 2^64.
        let product = u128::from(self.0 ^ number) * 0x9e37_79b9_7f4a_7c15_u128 + 0x2545_f491_4f6c_dd1d_u128;
        self.0 = (product as u64) ^ ((product >> 64) as u64);
    }
}

impl Hasher for Quick {
    fn finish(&self) -> u64 {
        self.0
    }

    fn write(&mut self, bytes: &[u8]) {
        for chunk in bytes.chunks(8) {
            let mut number = [0; 8];
            for (to, from) in number.iter_mut().zip(chunk) {
                *to = *from;
            }
            self.fold(u64::from_le_bytes(number));
        }
    }

    fn write_u8(&mut self, number: u8) {
        self.fold(u64::from(number));
    }

    fn write_u32(&mut self, number: u32) {
        self.fold(u64::from(number));
    }

    fn write_i32(&mut self, number: i32) {
        self.fold(u64::from(number as u32));
    }

    fn write_u64(&mut self, number: u64) {
        self.fold(number);
    }

    fn write_usize(&mut self, number: usize) {
        self.fold(number as u64);
    }

    fn write_isize(&mut self, number: isize) {
        self.fold(number as u64);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::hash::{BuildHasher, BuildHasherDefault};

    #[test]
    fn neighbouring_keys_spread() {
        let build = BuildHasherDefault::<Quick>::default();
        let hashes: QuickSet<u64> = (0..1000u32)
            .flat_map(|a| (0..100u32).map(move |b| (a, b)))
            .map(|pair| build.hash_one(pair) >> 40)
            .collect();
        // 100,000 balls in 2^24 boxes: about 300 meet.
        assert!(hashes.len() > 99_000, "{}", hashes.len());
        let low: QuickSet<u64> = (0..4096u32).map(|a| build.hash_one(a) & 0xffff).collect();
        assert!(low.len() > 3900, "{}", low.len());
    }
}
