//! Exact algebra: monomials of scales (`monomial`), products of symbols, fields and
//! derivatives (`product`), what fields are made of (`quantities`), the rules of
//! differentiation (`calculus`) and expansions in small ratios (`series`).
//!
//! It knows neither text nor settings: sizes are monomials, never numbers.

pub mod calculus;
pub mod monomial;
pub mod product;
pub mod quantities;
pub mod series;
