//! What the command line does with the machine, beside reading scripts.

pub(crate) mod writing;
