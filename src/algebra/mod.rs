//! Exact algebra: monomials of scales (`monomial`), products of symbols, fields and
//! derivatives (`product`), what fields are made of (`quantities`) and the rules of
//! differentiation (`calculus`).
//!
//! It knows neither text nor settings: sizes are monomials, never numbers.

pub mod calculus;
pub mod monomial;
pub mod product;
pub mod quantities;
