//! What is answered, and how faults are told: the first page worked by hand, the rules of
//! the language one by one, bad input, and the README's own script.

mod bad_input;
mod expansions;
mod frames;
mod hierarchies;
mod made_equations;
mod readme;
mod rules;
mod worked_example;
