//! The faults of a model in words: the one `match` of this stage.

use crate::diagnostic::Diagnostic;
use crate::model::errors::{
    Alike, Clash, Missing, ModelError, Product, Relation, Shape, Unavailable,
};
use crate::source::Span;
use crate::units::Dimension;

/// Puts a fault into words.
pub(super) fn diagnostic(error: &ModelError) -> Diagnostic {
    use ModelError as E;
    let place = |code, span: &Option<Span>, message: String| match span {
        Some(span) => Diagnostic::error(code, *span, message),
        None => Diagnostic::without_place(code, message),
    };
    match error {
            E::NotAvailable { what, span } => not_available(*what, *span),
            E::UnknownName { name, span, nearest, missing, unit } => {
                let found = Diagnostic::error("unknown-name", *span, format!("nothing declares `{name}`"));
                match unit {
                    Some(unit) => found.with_help(format!(
                        "for the unit `{name}` write `{unit}`: a unit has no blank inside"
                    )),
                    None => with_nearest(found, nearest, &declare(name, *missing)),
                }
            }
            E::NotAFunction { name, span, is_declared, nearest } => {
                not_a_function(name, *span, *is_declared, nearest.as_ref())
            }
            E::ArgumentCount { function, expected, found, span } => Diagnostic::error(
                "unexpected-word",
                *span,
                format!("`{function}` takes {expected}, found {found}"),
            ),
            E::Unit { error, text, span, mend } => {
                let found = error.diagnostic(text, *span);
                match mend {
                    Some(mend) => found.with_help(mend),
                    None => found,
                }
            }
            E::UnitOrSymbol { number, unit, product, span } => Diagnostic::warning(
                "unit-or-symbol",
                *span,
                format!("`{number} {unit}` is read with the unit `{unit}`, though every name in it is declared"),
            )
            .with_label(format!("read as the unit `{unit}`"))
            .with_help(format!("for the product of the symbols write `{product}`")),
            E::OffsetUnit { unit, span } => Diagnostic::error(
                "offset-unit",
                *span,
                format!("`{unit}` is a reading on a scale with an offset"),
            )
            .with_label("a difference or a product is needed here")
            .with_help("write a difference in K; a reading may stand only as the plain value of a constant or the level of a field"),
            E::NameClash { name, span, first, what } => name_clash(name, *span, *first, *what),
            E::SecondValue { name, span, first } => {
                Diagnostic::error("second-value", *span, format!("`{name}` is given a second time"))
                    .with_label("given again here")
                    .with_related(*first, "given here first")
                    .with_help("keep one of the two; a phenomenon may override a value of the script")
            }
            E::ValueOverridden { name, span, first, phenomenon, is_opened } => {
                let whose = match phenomenon {
                    Some(phenomenon) => format!("phenomenon `{phenomenon}`"),
                    None => "the script".to_owned(),
                };
                let (message, label) = match is_opened {
                    true => (format!("{whose} leaves `{name}` open in place of its value"), "the value that is left out"),
                    false => (format!("{whose} overrides the value of `{name}`"), "the value it replaces"),
                };
                Diagnostic::note("value-overridden", *span, message).with_related(*first, label)
            }
            E::TwoProcesses { first, second } => Diagnostic::error(
                "name-clash",
                second.1,
                format!("one product would belong to two processes, `{}` and `{}`", first.0, second.0),
            )
            .with_label(format!("`{}`", second.0))
            .with_related(first.1, format!("`{}`", first.0))
            .with_help("name the whole product instead: `(...) as NAME`"),
            E::ProcessInside { span } => Diagnostic::error(
                "unexpected-word",
                *span,
                "expected no `as` inside an expression with a size of its own",
            )
            .with_help("name the whole expression: `(A + B ~ D) as NAME`"),
            E::VelocityCount { n_fields, n_coordinates, span } => Diagnostic::error(
                "unexpected-word",
                *span,
                format!("expected as many coordinates as components, found {n_coordinates} for {n_fields}"),
            ),
            E::OutOfPlace { name, kind, wanted, span } => Diagnostic::error(
                "unexpected-word",
                *span,
                format!("expected {wanted}, found the {kind} `{name}`"),
            ),
            E::WrongForm { found, wanted, span } => {
                Diagnostic::error("unexpected-word", *span, format!("expected {wanted}, found {found}"))
            }
            E::UnlikeDimensions {
                expected,
                expected_at,
                found,
                found_at,
                what,
            } => {
                let message = match what {
                    Alike::Terms => "terms of a sum have unlike dimensions".to_owned(),
                    Alike::Sides => "the sides of the equation have unlike dimensions".to_owned(),
                    Alike::Relation => {
                        "the sides of the relation have unlike dimensions".to_owned()
                    }
                    Alike::Value(name) => {
                        format!("the value of `{name}` has another dimension than its declaration")
                    }
                    Alike::Size => {
                        "the size has another dimension than what it stands for".to_owned()
                    }
                    Alike::Unit => "the unit has another dimension than what is shown".to_owned(),
                    Alike::Arguments => "the arguments have unlike dimensions".to_owned(),
                    Alike::Range => "the ends of the range have unlike dimensions".to_owned(),
                };
                Diagnostic::error(
                    "unlike-dimensions",
                    *found_at,
                    format!(
                        "{message}: {} and {}",
                        described(expected),
                        described(found)
                    ),
                )
                .with_label(described(found))
                .with_related(*expected_at, described(expected))
            }
            E::NotDimensionless {
                dimension,
                span,
                what,
            } => Diagnostic::error(
                "not-dimensionless",
                *span,
                format!(
                    "{what} must be a plain number, found {}",
                    described(dimension)
                ),
            )
            .with_label(described(dimension)),
            E::InexactExponent { span } => Diagnostic::error(
                "not-a-product",
                *span,
                "expected an exact rational number as exponent",
            )
            .with_help("write it as a number, `^(2/3)`"),
            E::NotPositive {
                name,
                value,
                unit,
                span,
            } => Diagnostic::error(
                "not-positive",
                *span,
                format!("`{name}` must be positive, found {value} {unit}")
                    .trim_end()
                    .to_owned(),
            )
            .with_help(if name == "tolerance" {
                "write a share such as `tolerance 10 %`"
            } else {
                "a scale is an amount; a number with a sign is a `constant`"
            }),
            E::ToleranceTooWide { span } => Diagnostic::error(
                "too-large",
                *span,
                "a tolerance of 100 % or more would drop every term",
            )
            .with_help("write a share such as `tolerance 10 %`"),
            E::RangeUpsideDown { span, is_factor } => {
                let (message, help) = if *is_factor {
                    (
                        "a factor below 1 turns the range upside down",
                        "write a factor above 1: `within 2`, `within 20 %`",
                    )
                } else {
                    (
                        "the lower end lies above the upper one",
                        "write the smaller number first",
                    )
                };
                Diagnostic::error("range-upside-down", *span, message).with_help(help)
            }
            E::RangeHoldsZero { name, span } => Diagnostic::error(
                "range-holds-zero",
                *span,
                format!("the range of `{name}` holds 0, so its size has no lower end"),
            )
            .with_help("take a range on one side of 0"),
            E::MarginTooWide { name, span } => Diagnostic::error(
                "margin-too-wide",
                *span,
                format!("the margin takes `{name}` to 0 or below"),
            )
            .with_help("take a smaller margin, or a factor: `within 2`"),
            E::ShareAsMargin { span, text } => Diagnostic::error(
                "unlike-dimensions",
                *span,
                "a margin behind `+-` has the unit of its value, found a share",
            )
            .with_help(format!("write `within {text}`")),
            E::DerivedScale { name, span } => Diagnostic::error(
                "derived-scale",
                *span,
                format!("`{name}` follows the names in its formula and takes no range of its own"),
            )
            .with_help("put the range on a factor: `scale k = 1 within 3`, then `k*...`"),
            E::MovesWithParts { name, span, parts } => moves_with_parts(name, *span, parts),
            E::MovesOthers { name, span, holders } => moves_others(name, *span, holders),
            E::NotAProduct { span, what } => not_a_product(*span, *what),
            E::TooLarge { span } => Diagnostic::error("too-large", *span, "a number or exponent here grows beyond the limit")
                .with_help(format!(
                    "exponents go up to {}, exact numbers up to {} binary digits, powers of sums up to {}, one equation up to {} terms, sizes from 1e-300 to 1e300",
                    crate::limits::EXPONENT,
                    crate::limits::NUMBER_BITS,
                    crate::limits::SUM_POWER,
                    crate::limits::TERMS
                )),
            E::TooManyGroups { n_symbols, span } => Diagnostic::error(
                "too-large",
                *span,
                format!("there are too many groups among {n_symbols} scales and constants"),
            )
            .with_help("ask in a script whose equations hold fewer of them"),
            E::DividesByZero { span } => Diagnostic::error("divides-by-zero", *span, "this divides by 0"),
            E::OutOfDomain { span, what } => Diagnostic::error("not-positive", *span, format!("expected {what}")),
            E::Circular { names, spans, is_split } => {
                let found = circular("circular-definition", "these need one another", names, spans);
                match names.as_slice() {
                    [name] if *is_split => found.with_help(format!("give the part another name, as `{name}'`")),
                    _ if *is_split => found.with_help("give one of the parts another name, and declare it as a field"),
                    _ => found,
                }
            }
            E::NothingToRank { span } => Diagnostic::error("nothing-to-rank", *span, "there is no equation and no request here")
                .with_help("declare an `equation`, or ask for something with `show` or `groups`"),
            E::OneTerm { equation, span } => Diagnostic::error(
                "one-term",
                *span,
                format!("`{equation}` is written with one term, which nothing can balance"),
            )
            .with_help("write the terms that balance it"),
            E::NoVelocity { span } => Diagnostic::error("no-velocity", *span, "`D_t` needs to know what carries")
                .with_help("declare `velocity (u, v, w) along (x, y, z)`"),
            E::NoTime { span } => Diagnostic::note(
                "zero-derivative",
                *span,
                "there is no coordinate `t`, so `D_t` has no tendency here",
            ),
            E::NoFrame { span } => {
                Diagnostic::error("no-frame", *span, "vectors need to know their coordinates")
                    .with_help("declare `frame cartesian (x, y, z)`, `cylindrical (r, theta, z)` or `spherical (lambda, phi, r)`")
            }
            E::WrongShape {
                wanted,
                found,
                span,
                because,
            } => wrong_shape(*wanted, *found, *span, *because),
            E::ComponentCount { found, span } => Diagnostic::error(
                "not-a-vector",
                *span,
                format!("expected three components, found {found}"),
            )
            .with_help("write 0 for a component that is missing; a symmetric stress has six, in the order 11 12 13 22 23 33"),
            E::DeepVectors { span } => Diagnostic::error(
                "too-deep",
                *span,
                format!(
                    "vector operations are nested more than {} deep",
                    crate::limits::VECTOR_NESTING
                ),
            ),
            E::TooManyTerms { span } => Diagnostic::error(
                "too-large",
                *span,
                "this vector expression comes to too many terms",
            )
            .with_help("name parts of it: a `field` of its own for each"),
            E::VectorEquation {
                name,
                span,
                components,
            } => Diagnostic::error(
                "unknown-equation",
                *span,
                format!("`{name}` is a vector equation, and one component is needed here"),
            )
            .with_help(format!("name one of its components: {}", listed(components))),
            E::NotSplit { span, function } => Diagnostic::error(
                "not-split",
                *span,
                format!("`{function}` of something that varies has no size by itself"),
            )
            .with_help("give the expression a size of its own, `(... ~ SIZE)`, or name a constant level"),
            E::RatioNotSmall {
                span,
                small,
                large,
                ratio,
                declared,
            } => {
                let found = Diagnostic::error(
                    "ratio-not-small",
                    *span,
                    format!("`{small}` is {ratio:.3} of `{large}`, too much to expand in it"),
                );
                let help = "an expansion needs a ratio of at most 0.316";
                match declared {
                    Some((name, place)) => found
                        .with_related(*place, format!("`{name}` is declared here"))
                        .with_help(format!("{help}: change the declaration of `{name}`")),
                    None => found.with_help(help),
                }
            }
            E::LevelNotSplit {
                name,
                span,
                declared,
            } => Diagnostic::error(
                "not-split",
                *span,
                format!("`{name}` has a level and varies by less, so it has no single size to expand with"),
            )
            .with_related(*declared, format!("`{name}` is declared here"))
            .with_help(format!(
                "split it into its level and what varies: `field {name} = {name}_0 + {name}'`"
            )),
            E::OrderTooHigh { span } => Diagnostic::error(
                "order-too-high",
                *span,
                format!(
                    "`expand` goes to order {} at most",
                    crate::limits::HIERARCHY_ORDER
                ),
            )
            .with_help("ask for a lower order"),
            E::SplitTooLarge { name, span } => Diagnostic::error(
                "too-large",
                *span,
                format!(
                    "`{name}` is split into more than {} parts, or more than {} times over",
                    crate::limits::SPLIT_PARTS,
                    crate::limits::SPLIT_DEPTH
                ),
            ),
            E::SingularExpansion { span, what } => Diagnostic::error(
                "singular-expansion",
                *span,
                format!("{what} has no expansion there"),
            )
            .with_help("take another origin, or give the expression a size of its own"),
            E::NotARelation { span, what } => match what {
                Relation::Combination => Diagnostic::error(
                    "not-a-relation",
                    *span,
                    "expected a linear combination of equations behind `from`",
                )
                .with_help("write sums of equations, their derivatives and means, each with a factor: `d_x(y_momentum) - d_y(x_momentum)`"),
                Relation::Using => Diagnostic::error(
                    "not-a-relation",
                    *span,
                    "the left side of this equation holds nothing to replace",
                )
                .with_help("write it with the wanted factor alone on the left: `equation no_divergence: ∂w/∂z = -∂u/∂x - ∂v/∂y`"),
            },
            E::SplitOnTheLeft { relation, field, parts, span, declared } => {
                let found = Diagnostic::error(
                    "not-a-product",
                    *span,
                    format!("`{field}` on the left of `{relation}` is a sum of its parts {}", listed(parts)),
                )
                .with_label("behind `using` a single product stands here")
                .with_related(*declared, format!("`{field}` is split here"));
                match parts.last() {
                    Some(part) => found.with_help(format!(
                        "write the relation for a part: `{part}` in place of `{field}` on the left, the other parts on the right"
                    )),
                    None => found,
                }
            }
            E::NothingReplaced { relation, left, equation, span } => Diagnostic::warning(
                "nothing-replaced",
                *span,
                format!("`{relation}` replaces nothing in `{equation}`: `{left}` does not occur there"),
            )
            .with_help(format!("leave it out, or put something on its left that `{equation}` holds")),
            E::HoldsItself { relation, span } => Diagnostic::error(
                "circular-definition",
                *span,
                format!("the right side of `{relation}` holds its left side"),
            )
            .with_help("write it with the wanted factor alone on the left"),
            E::ZeroDerivative { equation, texts, span } => Diagnostic::note(
                "zero-derivative",
                *span,
                format!("{} in `{equation}` {}: the field does not depend on the coordinate", listed(texts), vanish(texts)),
            ),
            E::ZeroConstant { equation, texts, names, phenomenon, span } => Diagnostic::note(
                "zero-constant",
                *span,
                format!(
                    "{} in `{equation}` {}{}: {} is 0",
                    listed(texts),
                    vanish(texts),
                    phenomenon.as_ref().map(|name| format!(" for {name}")).unwrap_or_default(),
                    listed(names)
                ),
            ),
            E::CancelsUpwards { span, size, largest, unit } => Diagnostic::error(
                "cancels-upwards",
                *span,
                format!("its size {size:.3e} {unit} is above its largest part, {largest:.3e} {unit}"),
            )
            .with_help("the size of a sum whose terms nearly cancel lies below its parts"),
            E::UnknownEquation {
                name,
                span,
                nearest,
            } => {
                let found = Diagnostic::error(
                    "unknown-equation",
                    *span,
                    format!("there is no equation `{name}`"),
                );
                with_nearest(found, nearest, "declare it, or check its spelling")
            }
            E::UnknownProcess {
                name,
                equation,
                span,
                known,
            } => Diagnostic::error(
                "unknown-process",
                *span,
                format!("`{equation}` has no process `{name}`"),
            )
            .with_help(format!("its processes are {}", listed(known))),
            E::UnknownPhenomenon {
                name,
                span,
                nearest,
            } => {
                let found = Diagnostic::error(
                    "unknown-phenomenon",
                    *span,
                    format!("there is no phenomenon `{name}`"),
                );
                with_nearest(found, nearest, "declare it, or check its spelling")
            }
            E::UnknownModule {
                name,
                span,
                nearest,
            } => {
                let found = place(
                    "unknown-module",
                    span,
                    format!("the library has no module `{name}`"),
                );
                with_nearest(
                    found,
                    nearest,
                    "`scalewright library` lists the modules; a file ends in `.scl` or holds a `/`",
                )
            }
            E::UnreadableFile { path, reason, span } => place(
                "unreadable-file",
                span,
                format!("cannot read `{path}`: {reason}"),
            ),
            E::NotUtf8 { path, offset, span } => place(
                "not-utf8",
                span,
                format!(
                    "`{path}` is no UTF-8 text: byte {} cannot be read",
                    offset + 1
                ),
            )
            .with_help("save it as UTF-8"),
            E::UseCycle { names, spans } => {
                circular("use-cycle", "these modules use one another", names, spans)
            }
            E::TooManyModules { span } => Diagnostic::error(
                "too-large",
                *span,
                format!("more than {} modules are used", crate::limits::MODULES),
            ),
            E::OutsideFolder { path, span } => Diagnostic::error(
                "outside-folder",
                *span,
                format!("`{path}` lies outside the folder of the script"),
            )
            .with_help("name a folder that holds both with `--root DIR`"),
    }
}

/// How to declare a name that nothing declares.
fn declare(name: &str, missing: Missing) -> String {
    let example = match missing {
        Missing::Value => match name {
            "L" | "H" | "D" | "h" | "l" | "d" => format!("scale {name} = 10 m"),
            "U" | "V" | "W" => format!("scale {name} = 10 m/s"),
            "T" | "t" => format!("scale {name} = 10 s"),
            "N" | "f" => format!("constant {name} = 1e-4 1/s"),
            _ => format!("scale {name} = VALUE"),
        },
        Missing::Quantity => {
            return "declare it as a field, a scale or a constant, or check its spelling"
                .to_owned();
        }
        Missing::Open => format!("scale {name} in UNIT"),
        Missing::Coordinate => format!("coordinate {name} ~ SCALE"),
        Missing::Group => format!("group {name} = EXPR"),
        Missing::Vector => format!("vector {name} = (u, v, w)"),
    };
    format!("declare it, as in `{example}`, or check its spelling")
}

fn wrong_shape(wanted: Shape, found: Shape, span: Span, because: Option<Span>) -> Diagnostic {
    let word = |shape: Shape| match shape {
        Shape::Scalar => "a scalar",
        Shape::Vector => "a vector",
        Shape::Stress => "a stress",
    };
    let message = format!("expected {}, found {}", word(wanted), word(found));
    let diagnostic = Diagnostic::error("not-a-vector", span, message).with_label(word(found));
    let diagnostic = match because {
        Some(because) => diagnostic.with_related(because, word(wanted)),
        None => diagnostic,
    };
    match (wanted, found) {
        (Shape::Vector, Shape::Scalar) => {
            diagnostic.with_help("write its components, `(u, v, w)`, or name a `vector`")
        }
        (Shape::Scalar, Shape::Vector) => {
            diagnostic.with_help("name a component, or make a scalar of it with `dot` or `div`")
        }
        (_, Shape::Stress) => diagnostic.with_help("of a stress only `div` can be taken"),
        (Shape::Scalar | Shape::Vector, _) | (Shape::Stress, _) => diagnostic,
    }
}

fn not_available(what: Unavailable, span: Span) -> Diagnostic {
    match what {
        Unavailable::Request(word) => Diagnostic::error(
            "not-available",
            span,
            format!("`{word}` is read, but not answered by this version"),
        ),
    }
}

fn not_a_function(
    name: &str,
    span: Span,
    is_declared: bool,
    nearest: Option<&String>,
) -> Diagnostic {
    let found = Diagnostic::error(
        "unknown-name",
        span,
        format!("there is no function `{name}`"),
    );
    match nearest {
        _ if is_declared => found.with_help(format!("for a product write `{name}*(...)`")),
        Some(nearest) => found.with_help(format!("did you mean `{nearest}`?")),
        None if name.starts_with("d_") => {
            found.with_help("a derivative needs a declared coordinate")
        }
        None => found.with_help("for a product write `*` before the bracket"),
    }
}

fn name_clash(name: &str, span: Span, first: Option<Span>, what: Clash) -> Diagnostic {
    let message = match what {
        Clash::Name => format!("`{name}` is declared twice, with two meanings"),
        Clash::Kind => format!("`{name}` is declared as a scale and as a constant"),
        Clash::BuiltIn => format!("`{name}` is built in and cannot be declared"),
        Clash::Equation => format!("there are two equations `{name}`"),
        Clash::Balance => format!("there are two balances `{name}`"),
        Clash::Phenomenon => format!("there are two phenomena `{name}`"),
        Clash::Derivative => {
            format!("`{name}` would also spell a derivative along a declared coordinate")
        }
    };
    let found = Diagnostic::error("name-clash", span, message).with_help("choose another name");
    match first {
        Some(first) => found
            .with_label("declared again here")
            .with_related(first, "declared here first"),
        None => found,
    }
}

fn moves_with_parts(name: &str, span: Span, parts: &[String]) -> Diagnostic {
    let found = Diagnostic::error(
        "derived-scale",
        span,
        format!("`{name}` follows its parts and cannot be moved alone"),
    );
    match quoted(parts) {
        listed if listed.is_empty() => found,
        listed => found.with_help(format!("take one of its parts: {listed}")),
    }
}

fn moves_others(name: &str, span: Span, holders: &[String]) -> Diagnostic {
    let named: Vec<String> = holders
        .iter()
        .filter(|holder| !holder.contains('('))
        .cloned()
        .collect();
    let help = match (named.as_slice(), holders.first()) {
        ([], Some(function)) => {
            format!("name the function, `constant k = {function}`, and take `k`")
        }
        (_, _) => format!("take {} instead", quoted(&named)),
    };
    Diagnostic::error(
        "not-a-product",
        span,
        format!(
            "`{name}` cannot be moved alone: {} would change along no power law",
            quoted(holders)
        ),
    )
    .with_help(help)
}

fn quoted(names: &[String]) -> String {
    let quoted: Vec<String> = names.iter().map(|name| format!("`{name}`")).collect();
    quoted.join(", ")
}

fn not_a_product(span: Span, what: Product) -> Diagnostic {
    let (message, help) = match what {
        Product::Size => (
            "a size must be a product of powers of scales and constants",
            "give the sum a name first: `scale V = U_1 + U_2`",
        ),
        Product::Group => (
            "a group must be a product of powers of scales and constants",
            "give a sum a name first: `constant g_r = g*(rho_2 - rho_1)/rho_2`",
        ),
        Product::Term => (
            "a term must be a product of powers",
            "give the expression a size of its own, `(... ~ SIZE)`, or name a constant",
        ),
        Product::Using => (
            "the left side of an equation behind `using` must be a single product",
            "write it with the wanted factor alone on the left: `equation no_divergence: ∂w/∂z = -∂u/∂x - ∂v/∂y`",
        ),
        Product::Expanded => (
            "a term that is expanded order by order must be a product of fields and derivatives",
            "leave its size out: the cancellation must come out by itself",
        ),
        Product::Limit => (
            "a limit must be a product of powers of named groups",
            "write `Ro`, or `Re^-1`",
        ),
    };
    Diagnostic::error("not-a-product", span, message).with_help(help)
}

fn circular(code: &'static str, message: &str, names: &[String], spans: &[Span]) -> Diagnostic {
    let ring: Vec<&str> = names
        .iter()
        .chain(names.first())
        .map(String::as_str)
        .collect();
    let message = format!("{message}: {}", ring.join(" → "));
    let Some((&first, others)) = spans.split_first() else {
        return Diagnostic::without_place(code, message);
    };
    let mut found = Diagnostic::error(code, first, message);
    for (span, name) in others.iter().zip(names.iter().skip(1)) {
        found = found.with_related(*span, format!("`{name}`"));
    }
    found
}

fn with_nearest(found: Diagnostic, nearest: &Option<String>, otherwise: &str) -> Diagnostic {
    match nearest {
        Some(nearest) => found.with_help(format!("did you mean `{nearest}`?")),
        None => found.with_help(otherwise),
    }
}

/// A dimension by name and in base units: `acceleration (m s⁻²)`.
fn described(dimension: &Dimension) -> String {
    if dimension.is_one() {
        return "a number".to_owned();
    }
    match dimension.name() {
        Some(name) => format!("{name} ({})", dimension.base_units()),
        None => dimension.base_units(),
    }
}

fn listed(texts: &[String]) -> String {
    let quoted: Vec<String> = texts.iter().map(|text| format!("`{text}`")).collect();
    quoted.join(", ")
}

fn vanish(texts: &[String]) -> &'static str {
    if texts.len() == 1 {
        "vanishes"
    } else {
        "vanish"
    }
}
