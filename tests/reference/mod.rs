//! Values made by outside libraries (SymPy, SciPy, NumPy) and by gfan, against what the program answers.
//!
//! The scripts that made them stand here too; `python NAME.py --check` makes the values anew
//! and compares them with the stored ones (Python 3.11, `requirements.txt`):
//!
//! - `frames.py`: vector expressions in curved frames, from Cartesian coordinates with SymPy;
//! - `nondimensional.py`: random equations, scaled by the rules of `scaling.py` with SymPy;
//! - `expansions.py`: random splits and expansions, order by order with SymPy;
//! - `shares.py`: shares over boxes of scales, by linear programs;
//! - `bounds.py`: intervals over which reduced systems stand, by scanning;
//! - `cells.py`: dominant balances of random systems of terms, by gfan.

mod bounds;
mod cells;
mod expansions;
mod frames;
mod nondimensional;
mod shares;
