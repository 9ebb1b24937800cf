//! What is answered, and how faults are told: the first page worked by hand, the rules of
//! the language one by one, bad input, and the README's own script.

mod bad_input;
mod rules;
mod worked_example;
