//! The integration tests, one binary; folders by what they prove.

mod language;
