//! temporary
use num_rational::BigRational;
#[derive(Clone)]
pub struct Univariate(Vec<BigRational>);
impl Univariate {
    pub fn new(c: Vec<BigRational>) -> Self {
        Self(c)
    }
    pub fn degree(&self) -> usize {
        self.0.len().saturating_sub(1)
    }
    pub fn coefficients(&self) -> Vec<BigRational> {
        self.0.clone()
    }
    pub fn lowest_terms(a: &Self, b: &Self) -> (Self, Self) {
        (a.clone(), b.clone())
    }
}
