//! One part of a scan: a preference, not a contract.

/// Every `of`-th point, beginning with the `number`-th.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Shard {
    number: usize,
    of: usize,
}

impl Shard {
    /// Shard `number` of `of`, counted from 1; none where that does not exist.
    pub fn new(number: usize, of: usize) -> Option<Self> {
        (1 <= number && number <= of).then_some(Self { number, of })
    }

    /// Whether the point with this index belongs to it.
    pub fn holds(self, index: usize) -> bool {
        index % self.of == self.number - 1
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_point_is_in_exactly_one_shard() {
        let shards: Vec<Shard> = (1..=3).filter_map(|k| Shard::new(k, 3)).collect();
        assert_eq!(shards.len(), 3);
        for index in 0..10 {
            assert_eq!(shards.iter().filter(|shard| shard.holds(index)).count(), 1);
        }
        assert_eq!((Shard::new(0, 2), Shard::new(3, 2), Shard::new(1, 0)), (None, None, None));
    }
}
