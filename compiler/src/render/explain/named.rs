//! The names that a statement of the sheet holds, read from its syntax: the `m`
//! of `5 m` is a unit and none of them.

use pintle_syntax::ast::{Definition, Expr, ExprKind, ItemKind, LedgerLineKind, Path, StateSpec, Wanted};

/// Dotted names in `text`, an item of the sheet, in order, each once.
pub(super) fn in_item(text: &str) -> Vec<String> {
    let file = pintle_syntax::parse(text);
    let mut names = Names { text, shifted: 0, found: Vec::new() };
    for item in &file.items {
        names.shifted = item.offset;
        match &item.kind {
            ItemKind::Wanted(wanted) => names.wanted(wanted),
            ItemKind::Limit { condition, .. } => names.expr(condition),
            ItemKind::Ledger { lines, .. } => {
                for line in lines {
                    names.line(&line.kind);
                }
            }
            _ => {}
        }
    }
    names.found
}

/// Dotted names in a condition.
pub(super) fn in_condition(text: &str) -> Vec<String> {
    in_item(&format!("limit {text}"))
}

struct Names<'t> {
    text: &'t str,
    shifted: u32,
    found: Vec<String>,
}

impl Names<'_> {
    fn wanted(&mut self, wanted: &Wanted) {
        for equation in &wanted.equations {
            self.expr(equation);
        }
        if let Some(range) = &wanted.range {
            self.expr(&range.low);
            self.expr(&range.high);
        }
    }

    fn line(&mut self, line: &LedgerLineKind) {
        match line {
            LedgerLineKind::Start(state) | LedgerLineKind::End(state) => {
                if let StateSpec::Speed { value, .. } = state {
                    self.expr(value);
                }
            }
            LedgerLineKind::Travel { distance, .. } => self.expr(distance),
            LedgerLineKind::Spring { from, to, .. } => {
                self.expr(from);
                self.expr(to);
            }
            LedgerLineKind::Gain(entry) | LedgerLineKind::Lose(entry) => self.definition(entry.field.value.as_ref()),
            LedgerLineKind::Local(field) => self.definition(field.value.as_ref()),
            LedgerLineKind::Wanted(wanted) => self.wanted(wanted),
            LedgerLineKind::Limit { .. } => {}
        }
    }

    fn definition(&mut self, definition: Option<&Definition>) {
        match definition {
            Some(Definition::Value(value)) => self.expr(value),
            Some(Definition::Choose(choose)) => {
                for arm in &choose.arms {
                    self.expr(&arm.value);
                    arm.condition.iter().for_each(|condition| self.expr(condition));
                }
            }
            None => {}
        }
    }

    fn path(&mut self, path: &Path) {
        let span = path.span.shifted(self.shifted);
        let name: String = self.text.get(span.range()).unwrap_or("").split_whitespace().collect();
        if !name.is_empty() && !self.found.contains(&name) {
            self.found.push(name);
        }
    }

    fn expr(&mut self, top: &Expr) {
        let mut open = vec![top];
        while let Some(expr) = open.pop() {
            let from = open.len();
            match &expr.kind {
                ExprKind::Path(path) => self.path(path),
                ExprKind::Call { arguments, function } => {
                    // A member that is a function, such as `drum.rim_speed(v)`, names its owner's quantity too.
                    if function.segments.len() > 1 {
                        self.path(function);
                    }
                    open.extend(arguments.iter().map(|argument| &argument.value));
                }
                ExprKind::Unary { operand, .. } => open.push(operand),
                ExprKind::Binary { left, right, .. } => open.extend([&**left, &**right]),
                ExprKind::About { value, .. } => open.push(value),
                ExprKind::Point(members) | ExprKind::List(members) => open.extend(members),
                ExprKind::Comprehension { body, .. } => open.push(body),
                ExprKind::Number(_) | ExprKind::Text(_) | ExprKind::Missing => {}
            }
            if let Some(new) = open.get_mut(from..) {
                new.reverse();
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check_names(text: &str, expected: &[&str]) {
        assert_eq!(in_item(text), expected);
    }

    #[test]
    fn units_are_no_names() {
        check_names("wanted x : length within 0 m .. 5 m where x * wheel.J == 4 kg*m^3", &["x", "wheel.J"]);
        check_names("limit every drum.rim_speed <= 25 m/s", &["drum.rim_speed"]);
        assert_eq!(in_condition("2 * m <= bound + 3 kg"), ["m", "bound"]);
    }

    #[test]
    fn ledgers_name_what_their_lines_use() {
        let text = "ledger a of t {\n  start drum.speed = n_0\n  travel load s down_path\n  lose heat = force * load.travel\n  wanted s within 0 m .. far\n}";
        check_names(text, &["n_0", "s", "force", "load.travel", "far"]);
    }

    #[test]
    fn half_typed_text_names_what_it_can() {
        check_names("wanted x where x * (a + == 3", &["x"]);
        check_names("", &[]);
    }
}
