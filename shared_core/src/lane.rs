//! Arithmetic over a fixed number of samples at once.
//!
//! The device evaluates one sample (`Lane<1>`), the replay 64. Each lane goes through the same
//! operations in the same order, so its numbers do not depend on the number of lanes. The sign of a
//! zero may: what no lane needs is left out, and a surface that does not reach a part adds a zero
//! of either sign. Only `+ - * /`, comparisons and the correctly rounded square root stand here:
//! these give the same bits on every IEEE 754 machine.
#![expect(
    clippy::inline_always,
    reason = "a call per operation would cost more than the operation"
)]

pub mod careless;

use core::ops::{Add, Div, Mul, Neg, Sub};

/// `N` numbers that go through the same arithmetic.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Lane<const N: usize>(pub [f32; N]);

impl<const N: usize> Lane<N> {
    /// Zero in every lane.
    pub const ZERO: Self = Self([0.0; N]);

    /// The same number in every lane.
    #[must_use]
    #[inline(always)]
    pub const fn splat(value: f32) -> Self {
        if N == 1 {
            let mut lane = [0.0; N];
            put_first(&mut lane, value);
            return Self(lane);
        }
        Self([value; N])
    }

    #[must_use]
    #[inline(always)]
    fn map(mut self, f: impl Fn(f32) -> f32) -> Self {
        if N == 1 {
            let value = f(self.lane(0));
            put_first(&mut self.0, value);
            return self;
        }
        for x in &mut self.0 {
            *x = f(*x);
        }
        self
    }

    #[must_use]
    #[inline(always)]
    fn zip(mut self, other: Self, f: impl Fn(f32, f32) -> f32) -> Self {
        if N == 1 {
            let value = f(self.lane(0), other.lane(0));
            put_first(&mut self.0, value);
            return self;
        }
        for (a, &b) in self.0.iter_mut().zip(&other.0) {
            *a = f(*a, b);
        }
        self
    }

    /// The larger of the two; `self` where both are equal or one is not a number.
    #[must_use]
    #[inline(always)]
    pub fn at_least(self, floor: Self) -> Self {
        self.zip(floor, at_least)
    }

    /// The smaller of the two; `self` where both are equal or one is not a number.
    #[must_use]
    #[inline(always)]
    pub fn at_most(self, ceiling: Self) -> Self {
        self.zip(ceiling, at_most)
    }

    /// `self` where positive, else zero: the ramp of the one formula.
    #[must_use]
    #[inline(always)]
    pub fn ramp(self) -> Self {
        self.map(ramp)
    }

    /// The absolute value.
    #[must_use]
    #[inline(always)]
    pub fn magnitude(self) -> Self {
        self.map(|x| if x < 0.0 { -x } else { x })
    }

    /// The correctly rounded square root.
    #[must_use]
    #[inline(always)]
    pub fn root(self) -> Self {
        self.map(root)
    }

    /// `then` where `self` is positive, else `otherwise`.
    #[must_use]
    #[inline(always)]
    pub fn positive_selects(self, then: Self, otherwise: Self) -> Self {
        if N == 1 {
            return if self.lane(0) > 0.0 { then } else { otherwise };
        }
        let mut chosen = otherwise;
        for ((slot, &yes), &switch) in chosen.0.iter_mut().zip(&then.0).zip(&self.0) {
            *slot = if switch > 0.0 { yes } else { *slot };
        }
        chosen
    }

    /// Whether every lane is greater than zero.
    #[must_use]
    #[expect(clippy::unnecessary_fold, reason = "the short form leaves a loop for one lane")]
    #[inline(always)]
    pub fn all_positive(self) -> bool {
        if N == 1 {
            return self.lane(0) > 0.0;
        }
        self.0.into_iter().fold(true, |all, x| all && x > 0.0)
    }

    /// Whether no lane is greater than zero.
    #[must_use]
    #[expect(clippy::unnecessary_fold, reason = "the short form leaves a loop for one lane")]
    #[inline(always)]
    pub fn none_positive(self) -> bool {
        if N == 1 {
            // What is not a number is not positive.
            return !self.all_positive();
        }
        !self.0.into_iter().fold(false, |any, x| any || x > 0.0)
    }

    /// The number in one lane; zero beyond the last.
    #[must_use]
    #[inline(always)]
    pub fn lane(&self, index: usize) -> f32 {
        self.0.get(index).copied().unwrap_or(0.0)
    }
}

/// One lane is written without a loop: compiled for size, a loop of one stays a loop.
#[inline(always)]
const fn put_first(lanes: &mut [f32], value: f32) {
    if let Some(first) = lanes.first_mut() {
        *first = value;
    }
}

/// The larger; `value` where both are equal or one is not a number.
#[must_use]
#[inline(always)]
pub fn at_least(value: f32, floor: f32) -> f32 {
    if careless::MAX {
        return careless::at_least(value, floor);
    }
    if floor > value { floor } else { value }
}

/// The smaller; `value` where both are equal or one is not a number.
#[must_use]
#[inline(always)]
pub fn at_most(value: f32, ceiling: f32) -> f32 {
    if careless::MAX {
        return careless::at_most(value, ceiling);
    }
    if ceiling < value { ceiling } else { value }
}

/// `value` where positive, else zero.
#[must_use]
#[inline(always)]
pub fn ramp(value: f32) -> f32 {
    if careless::MAX {
        return careless::at_least(value, 0.0);
    }
    if value > 0.0 { value } else { 0.0 }
}

#[inline(always)]
fn root(value: f32) -> f32 {
    if careless::ROOT {
        return careless::root(value);
    }
    libm::sqrtf(value)
}

impl<const N: usize> Add for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn add(self, other: Self) -> Self {
        self.zip(other, |a, b| a + b)
    }
}

impl<const N: usize> Sub for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn sub(self, other: Self) -> Self {
        self.zip(other, |a, b| a - b)
    }
}

impl<const N: usize> Mul for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn mul(self, other: Self) -> Self {
        self.zip(other, |a, b| a * b)
    }
}

impl<const N: usize> Div for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn div(self, other: Self) -> Self {
        self.zip(other, |a, b| a / b)
    }
}

impl<const N: usize> Neg for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn neg(self) -> Self {
        self.map(|x| -x)
    }
}

impl<const N: usize> Mul<f32> for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn mul(self, factor: f32) -> Self {
        self.map(|x| x * factor)
    }
}

impl<const N: usize> Add<f32> for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn add(self, other: f32) -> Self {
        self.map(|x| x + other)
    }
}

impl<const N: usize> Sub<f32> for Lane<N> {
    type Output = Self;
    #[inline(always)]
    fn sub(self, other: f32) -> Self {
        self.map(|x| x - other)
    }
}
