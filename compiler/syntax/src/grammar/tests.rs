//! Expressions and literals of small texts, printed as prefix forms.

use crate::ast::{Definition, Expr, ExprKind, ItemKind, Literal, Tolerance, UnaryOp};
use crate::parse;

fn show(expr: &Expr) -> String {
    match &expr.kind {
        ExprKind::Number(literal) => show_literal(literal),
        ExprKind::Text(text) => format!("{:?}", text.text),
        ExprKind::Path(path) => show_path(path),
        ExprKind::Call { function, arguments } => {
            let arguments: Vec<String> = arguments
                .iter()
                .map(|argument| match &argument.name {
                    Some(name) => format!("{}={}", name.text, show(&argument.value)),
                    None => show(&argument.value),
                })
                .collect();
            format!("{}({})", show_path(function), arguments.join(" "))
        }
        ExprKind::Unary { op, operand } => {
            let op = match op {
                UnaryOp::Minus => "-",
                UnaryOp::Plus => "+",
                UnaryOp::Not => "not",
            };
            format!("({op} {})", show(operand))
        }
        ExprKind::Binary { op, left, right, .. } => format!("({} {} {})", op.symbol(), show(left), show(right)),
        ExprKind::About { value, axis } => format!("(about {} {})", show(value), axis.text),
        ExprKind::Point(members) => format!("point{:?}", members.iter().map(show).collect::<Vec<_>>()).replace('"', ""),
        ExprKind::List(members) => format!("list{:?}", members.iter().map(show).collect::<Vec<_>>()).replace('"', ""),
        ExprKind::Comprehension { body, repeat } => {
            format!("(for {} {}..{} {})", repeat.variable.text, show(&repeat.from), show(&repeat.to), show(body))
        }
        ExprKind::Missing => "?".to_owned(),
    }
}

fn show_path(path: &crate::ast::Path) -> String {
    let segments: Vec<String> = path
        .segments
        .iter()
        .map(|segment| match &segment.index {
            Some(index) => format!("{}[{}]", segment.name.text, show(index)),
            None => segment.name.text.to_string(),
        })
        .collect();
    segments.join(".")
}

fn show_literal(literal: &Literal) -> String {
    let mut text = literal.number.to_string();
    if let Some(unit) = &literal.unit {
        text += &format!("<{}>", unit.text);
    }
    match &literal.tolerance {
        Some(Tolerance::Symmetric(by)) => text += &format!("±{}", show_literal(by)),
        Some(Tolerance::Limits { upper, lower, unit, .. }) => {
            let unit = unit.as_ref().map_or(String::new(), |unit| format!("<{}>", unit.text));
            text += &format!("±({upper},{lower}){unit}");
        }
        Some(Tolerance::Within(range)) => text += &format!("[{}..{}]", show(&range.low), show(&range.high)),
        Some(Tolerance::Standard(by)) => text += &format!("u{}", show_literal(by)),
        Some(Tolerance::Class(class)) => text += &format!("~{}", class.text),
        None => {}
    }
    if let Some(distribution) = &literal.distribution {
        text += &format!("!{}", distribution.text);
    }
    text
}

fn value_of(text: &str) -> (String, Vec<String>) {
    let file = parse(&format!("q = {text}"));
    let errors = file.items.iter().flat_map(|item| &item.errors).map(|fault| fault.message.clone()).collect();
    let value = match file.items.first().map(|item| &item.kind) {
        Some(ItemKind::Derived { value: Definition::Value(expr), .. }) => show(expr),
        other => format!("{other:?}"),
    };
    (value, errors)
}

#[track_caller]
fn check_value(text: &str, expected: &str) {
    let (value, errors) = value_of(text);
    assert!(errors.is_empty(), "{text:?}: {errors:?}");
    assert_eq!(value, expected, "{text:?}");
}

#[track_caller]
fn check_fault(text: &str, message: &str) {
    let (_, errors) = value_of(text);
    assert_eq!(errors, [message], "{text:?}");
}

#[test]
fn operators_bind_as_in_a_hand_calculation() {
    check_value("1 + 2 * x - y / z", "(- (+ 1 (* 2 x)) (/ y z))");
    check_value("a - b - c", "(- (- a b) c)");
    check_value("a / b * c", "(* (/ a b) c)");
    check_value("a · b", "(* a b)");
    check_value("(a + b) * c", "(* (+ a b) c)");
}

#[test]
fn powers_bind_tighter_than_signs_and_to_the_right() {
    check_value("-x^2", "(- (^ x 2))");
    check_value("2^-3", "(^ 2 (- 3))");
    check_value("2^-3 * 4", "(* (^ 2 (- 3)) 4)");
    check_value("a^b^c", "(^ a (^ b c))");
    check_value("-x²", "(- (^ x 2))");
    check_value("r⁻¹²", "(^ r (- 12))");
    check_value("2^x²", "(^ 2 (^ x 2))");
    check_value("- - x", "(- (- x))");
    check_value("a * -b", "(* a (- b))");
}

#[test]
fn conditions_bind_looser_than_arithmetic() {
    check_value("a + 1 < b and not c == d or e", "(or (and (< (+ a 1) b) (not (== c d))) e)");
}

#[test]
fn about_takes_a_whole_sum() {
    check_value("a.J + b.J about trunnion", "(about (+ a.J b.J) trunnion)");
    check_value("a about t <= b", "(<= (about a t) b)");
}

#[test]
fn comparisons_do_not_chain() {
    check_fault("a < b < c", "comparisons cannot be chained");
    check_value("(a < b) == c", "(== (< a b) c)");
}

#[test]
fn paths_calls_and_points() {
    check_value("layer[2].J", "layer[2].J");
    check_value("layer[k + 1].J", "layer[(+ k 1)].J");
    check_value("haul.reflected(J, at = motor)", "haul.reflected(J at=motor)");
    check_value("f()", "f()");
    check_value("sum(layer[k].J for k from 1 to 3)", "sum((for k 1..3 layer[k].J))");
    check_value("[a, b,]", "list[a, b]");
    check_value("[a[k] for k from 1 to n]", "list[(for k 1..n a[k])]");
    check_value("[]", "list[]");
    check_value("(1 mm, 2 mm)", "point[1<mm>, 2<mm>]");
    check_value("(a)", "a");
    check_value("pi/4 * (d^2 - b^2)", "(* (/ pi 4) (- (^ d 2) (^ b 2)))");
}

#[test]
fn line_ends_inside_round_and_square_brackets_are_blanks() {
    check_value("f(\n  a,\n\n  at = b # why\n)", "f(a at=b)");
    check_value("[\r\n1 mm,\r\n2 mm\r\n]", "list[1<mm>, 2<mm>]");
    // A unit never stands on the next line.
    check_fault("(3\nkg)", "expected `)`, found `kg`");
}

#[test]
fn a_unit_is_one_run_without_blanks() {
    check_value("3.2 kg*m^2", "3.2<kg*m^2>");
    check_value("3.2 kg·m²", "3.2<kg·m²>");
    check_value("9.81 m/s^2", "9.81<m/s^2>");
    check_value("40 N*m/(rad/s)", "40<N*m/(rad/s)>");
    check_value("24 1/min", "24<1/min>");
    check_value("5 m^(1/2)", "5<m^(1/2)>");
    check_value("5 s^-1", "5<s^-1>");
    check_value("90°", "90<°>");
    check_value("20 °C", "20<°C>");
    check_value("4 %", "4<%>");
    check_value("4%", "4<%>");
    check_value("3 kJ/(kg*K)", "3<kJ/(kg*K)>");
}

#[test]
fn blanks_round_an_operator_mean_arithmetic() {
    check_value("3 kg * x", "(* 3<kg> x)");
    check_value("3 kg*x", "3<kg*x>");
    check_value("3 kg /x", "(/ 3<kg> x)");
    check_value("3 m*(a + b)", "(* 3<m> (+ a b))");
    check_value("6 m/2", "(/ 6<m> 2)");
    check_value("1/2 * m", "(* (/ 1 2) m)");
    check_value("3 m^n", "(^ 3<m> n)");
}

#[test]
fn clause_words_are_no_units() {
    check_value("sum(k for k from 1 to 3)", "sum((for k 1..3 k))");
    check_value("3 u", "3<u>");
    check_value("12.30 kg u 0.05 kg", "12.30<kg>u0.05<kg>");
    check_value("3 in", "3<in>");
}

#[test]
fn tolerances_stand_behind_a_literal() {
    check_value("60 mm ± 0.1 mm", "60<mm>±0.1<mm>");
    check_value("60 mm +/- 5 %", "60<mm>±5<%>");
    check_value("60 mm ± (+0.2, -0.0) mm", "60<mm>±(0.2,-0)<mm>");
    check_value("260 N*m ± (+0, -20) %", "260<N*m>±(0,-20)<%>");
    check_value("0.12 within 0.08 .. 0.16", "0.12[0.08..0.16]");
    check_value("0.12 within low .. 2 * high", "0.12[low..(* 2 high)]");
    check_value("60 mm h6", "60<mm>~h6");
    check_value("60 mm JS12 normal", "60<mm>~JS12!normal");
    check_value("6 kg ± 1 kg triangular", "6<kg>±1<kg>!triangular");
    check_value("-20 °C ± 2 K", "(- 20<°C>±2<K>)");
}

#[test]
fn older_spellings_offer_the_present_one() {
    check_fault("60 mm ~ 0.1 mm", "`~` is written `±`");
    check_fault("0.12 in 0.08 .. 0.16", "bounds are written with `within`; `in` is the inch");
    check_fault("60 mm +0.2/-0.1 mm", "two limits are written in brackets behind `±`");
}

#[test]
fn what_is_missing_is_named_with_what_stood_before() {
    check_fault("", "expected a value after `=`");
    check_fault("3 +", "expected a value after `+`");
    check_fault("3 + * 4", "expected a value after `+`, found `*`");
    check_fault("f(3,, 4)", "expected a value after `,`, found `,`");
    check_fault("a.", "expected a name after `.`");
    check_fault("3 4", "did not expect `4` after `3`");
    check_fault("0.1 within 0.2", "expected `..` after `0.2`");
    check_fault("3 cite", "expected a source in quotes, or one of common_practice, from_memory, demo after `cite`");
}

#[test]
fn a_fault_in_a_value_leaves_the_clauses_behind_it() {
    let file = parse("given a = 3 + * 4 cite \"x\" as kg");
    let item = file.items.first();
    assert!(item.is_some_and(|item| item.clauses.cite.is_some() && item.clauses.display.is_some()));
}

#[track_caller]
fn check_fast(text: &str) {
    let start = std::time::Instant::now();
    parse(text);
    let took = start.elapsed();
    assert!(took.as_secs_f64() < 2.0, "{took:?} for {:?}...", text.get(..20));
}

#[test]
fn nested_brackets_of_every_form_take_no_exponential_time() {
    for (open, close) in [
        ("(", ")"),
        ("[", "]"),
        ("f(", ")"),
        ("(1, ", ")"),
        ("a[", "]"),
        ("f(at = ", ")"),
        ("[k for k from 1 to ", "]"),
        ("2^(", ")"),
        ("-(", ")"),
        ("1 within 1 .. (", ")"),
        ("not (", ")"),
        ("(a < ", ")"),
    ] {
        check_fast(&format!("q = {}1{}", open.repeat(100), close.repeat(100)));
        check_fast(&format!("q = {}", open.repeat(100)));
        check_fast(&format!("q = {}+{}", open.repeat(100), close.repeat(100)));
    }
}
