//! The tests of the public library, in one binary; folders by what they prove.

mod polyhedra;
