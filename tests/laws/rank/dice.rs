//! Draws from strategies with a seed of their own, so that a case is told by its number.

use std::ops::Range;

use proptest::prelude::*;
use proptest::sample::select;
use proptest::strategy::ValueTree;
use proptest::test_runner::{Config, RngAlgorithm, TestRng, TestRunner};

pub(crate) struct Dice {
    runner: TestRunner,
}

impl Dice {
    pub(crate) fn new(seed: u64) -> Self {
        let mut bytes = [7; 32];
        bytes[..8].copy_from_slice(&seed.to_le_bytes());
        let rng = TestRng::from_seed(RngAlgorithm::ChaCha, &bytes);
        Self { runner: TestRunner::new_with_rng(Config::default(), rng) }
    }

    pub(crate) fn draw<S: Strategy>(&mut self, strategy: S) -> S::Value {
        strategy.new_tree(&mut self.runner).unwrap().current()
    }

    pub(crate) fn between(&mut self, range: Range<f64>) -> f64 {
        self.draw(range)
    }

    pub(crate) fn below(&mut self, count: usize) -> usize {
        self.draw(0..count)
    }

    /// True once in so many times.
    pub(crate) fn once_in(&mut self, times: usize) -> bool {
        self.below(times) == 0
    }

    pub(crate) fn one_of<T: Clone + std::fmt::Debug + 'static>(&mut self, of: &[T]) -> T {
        self.draw(select(of.to_vec()))
    }

    /// A value once in so many times.
    pub(crate) fn maybe(&mut self, times: usize, range: Range<f64>) -> Option<f64> {
        self.once_in(times).then(|| self.between(range))
    }
}
