//! Values made by outside libraries, with the scripts that made them.
