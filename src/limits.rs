//! Every limit of the program, in one place. Meeting one is an ordinary error
//! (`too-deep`, `too-long`, `too-large`), never a panic or a hang.

/// Largest script, in bytes. A longer one is `too-long`.
pub const SCRIPT_BYTES: usize = 1 << 20;

/// Deepest nesting of brackets and of expressions. Walking and dropping a tree of
/// this depth is safe on a small stack.
pub const NESTING: usize = 200;

/// Largest number of tokens in one statement outside a `phenomenon`.
pub const STATEMENT_TOKENS: usize = 4_000;

/// Longest unit, in bytes: several times the longest that anybody writes.
pub const UNIT_BYTES: usize = 1_000;

/// Largest numerator and denominator of an exponent. Sums and products of two such
/// exponents fit 64 bits with room to spare, so plain arithmetic on them is exact.
pub const EXPONENT: i64 = 1_000_000;

/// Largest size of an exact number, in bits of its numerator or denominator (about
/// 1,200 decimal digits).
pub const NUMBER_BITS: u64 = 4_096;

/// Largest power of ten of a literal, either way: what a floating-point size can hold.
pub const LITERAL_DECADES: i64 = 300;

/// Most terms that one equation may have once its products are multiplied out.
pub const TERMS: usize = 2_000;

/// Most sets of scales that are tried to match groups.
pub const MATCHING_SETS: usize = 20_000;

/// Highest whole power of a sum that is multiplied out.
pub const SUM_POWER: i64 = 12;

/// Most columns that are reduced in the search for dimensionless groups: about 60 scales of
/// two dimensions, 25 of four.
pub const CIRCUIT_STEPS: usize = 200_000;
/// Deepest nesting of vector operations, `curl(curl(V))`.
pub const VECTOR_NESTING: usize = 8;

/// Most nodes of the tree that one component of a vector expression may come to.
pub const VECTOR_NODES: usize = 20_000;

/// Most modules and files that one script may bring in.
pub const MODULES: usize = 200;

/// Most ranges that matter to balances and are searched through; beyond them balances are
/// looked for at the nominal values.
pub const RANGES: usize = 10;

/// Most balances that are listed.
pub const BALANCES: usize = 10_000;

/// Most cells of log-space that one search for balances looks at.
pub const CELLS: usize = 200_000;

/// Most corners and directions of one cell in a search for balances.
pub const CELL_RAYS: usize = 2_000;

/// Most parts of one split field, those of split parts counted instead of them.
pub const SPLIT_PARTS: usize = 64;

/// Deepest nesting of splits.
pub const SPLIT_DEPTH: usize = 20;

/// The order in small ratios to which `rank`, `reduce` and their like expand.
pub const EXPANSION_ORDER: u32 = 2;

/// Highest order of `expand`.
pub const HIERARCHY_ORDER: i64 = 8;

/// Highest order in small ratios that `expand` goes to for an order that it is asked for.
pub const HIERARCHY_DEPTH: u32 = 16;

/// Most coefficients of fields, over all orders.
pub const SERIES_FIELDS: usize = 10_000;
