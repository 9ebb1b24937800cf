//! Exact algebra: monomials of scales (`monomial`), products of symbols, fields and
//! derivatives (`product`), what fields are made of (`quantities`), the rules of
//! differentiation (`calculus`), expansions in small ratios (`series`) and matrices of
//! polynomials (`polynomial`).
//!
//! It knows neither text nor settings: sizes are monomials, never numbers.

pub mod calculus;
pub mod monomial;
pub mod polynomial;
pub mod product;
pub mod quantities;
pub mod series;
