//! A small reader of expressions, so that laws can stand as text: numbers with units, names, `+ - * / ^`, calls.
//! It builds types only.

use std::collections::BTreeMap;

use pintle_units::{Kind, Mismatch, Ratio, Type, parse};

/// What went wrong: the law itself, or the text of the test.
#[derive(Debug)]
pub enum Trouble {
    /// The types do not go together.
    Mismatch(Box<Mismatch>),
    /// The test's text is wrong.
    Text(String),
}

impl From<Mismatch> for Trouble {
    fn from(mismatch: Mismatch) -> Trouble {
        Trouble::Mismatch(Box::new(mismatch))
    }
}

/// A declared name and its type.
pub type Names = BTreeMap<String, Type>;

/// `T : torque, omega : angular_velocity`.
pub fn declarations(text: &str) -> Result<Names, String> {
    let mut names = Names::new();
    for (id, part) in text.split(',').map(str::trim).filter(|part| !part.is_empty()).enumerate() {
        let (name, kind) = part.split_once(':').ok_or_else(|| format!("no kind in `{part}`"))?;
        let (name, kind) = (name.trim(), kind.trim());
        if pintle_units::lookup(name).is_some() {
            return Err(format!("`{name}` is a unit and cannot be a name"));
        }
        let kind = Kind::from_name(kind).ok_or_else(|| format!("no kind `{kind}`"))?;
        let id = u32::try_from(id).map_err(|e| e.to_string())?;
        names.insert(name.into(), Type::of_kind(kind).with_source(id));
    }
    names.insert("g_n".into(), Type::of_kind(Kind::Acceleration));
    names.insert("pi".into(), Type::pi());
    Ok(names)
}

/// The type of an expression.
pub fn type_of(text: &str, names: &Names) -> Result<Type, Trouble> {
    let mut reader = Reader { rest: text.trim(), names };
    let ty = reader.sum()?;
    if reader.rest.is_empty() { Ok(ty) } else { Err(Trouble::Text(format!("`{}` is left over", reader.rest))) }
}

struct Reader<'a> {
    rest: &'a str,
    names: &'a Names,
}

impl<'a> Reader<'a> {
    fn eat(&mut self, mark: char) -> bool {
        match self.rest.strip_prefix(mark) {
            Some(rest) => {
                self.rest = rest.trim_start();
                true
            }
            None => false,
        }
    }

    fn take(&mut self, keep: impl Fn(char) -> bool) -> &'a str {
        let end = self.rest.find(|c| !keep(c)).unwrap_or(self.rest.len());
        let (taken, rest) = self.rest.split_at(end);
        self.rest = rest;
        taken
    }

    fn sum(&mut self) -> Result<Type, Trouble> {
        let mut ty = self.product()?;
        loop {
            if self.eat('+') {
                ty = ty.add(&self.product()?)?;
            } else if self.eat('-') {
                ty = ty.sub(&self.product()?)?;
            } else {
                return Ok(ty);
            }
        }
    }

    fn product(&mut self) -> Result<Type, Trouble> {
        let mut ty = self.power()?;
        loop {
            if self.eat('*') {
                ty = ty.mul(&self.power()?)?;
            } else if self.eat('/') {
                ty = ty.div(&self.power()?)?;
            } else {
                return Ok(ty);
            }
        }
    }

    fn power(&mut self) -> Result<Type, Trouble> {
        let base = self.atom()?;
        if !self.eat('^') {
            return Ok(base);
        }
        let digits = self.take(|c| c.is_ascii_digit());
        self.rest = self.rest.trim_start();
        let power: i16 = digits.parse().map_err(|_| Trouble::Text(format!("`{digits}` is no power")))?;
        Ok(base.pow(Ratio::whole(power))?)
    }

    fn atom(&mut self) -> Result<Type, Trouble> {
        if self.eat('(') {
            let ty = self.sum()?;
            return if self.eat(')') { Ok(ty) } else { Err(Trouble::Text("no `)`".into())) };
        }
        if self.rest.starts_with(|c: char| c.is_ascii_digit()) {
            return self.number();
        }
        let name = self.take(|c| c.is_alphanumeric() || c == '_');
        if self.rest.starts_with('(') && !name.is_empty() {
            return self.call(name);
        }
        self.rest = self.rest.trim_start();
        self.names.get(name).copied().ok_or_else(|| Trouble::Text(format!("`{name}` is not declared")))
    }

    fn number(&mut self) -> Result<Type, Trouble> {
        self.take(|c| c.is_ascii_digit() || c == '.');
        let after = self.rest.trim_start();
        let mut depth = 0;
        let end = after
            .find(|c: char| {
                depth += match c {
                    '(' => 1,
                    ')' => -1,
                    _ => 0,
                };
                c.is_whitespace() || c == ',' || depth < 0
            })
            .unwrap_or(after.len());
        let word = &after[..end];
        let unit_like = word.starts_with(|c: char| c.is_alphabetic() || c == '%' || c == '°');
        if !unit_like && !word.starts_with("1/") {
            self.rest = after;
            return Ok(Type::number());
        }
        let unit = parse(word, &|_| None).map_err(|e| Trouble::Text(e.to_string()))?;
        self.rest = after[end..].trim_start();
        Ok(Type::of_unit(&unit))
    }

    fn call(&mut self, name: &str) -> Result<Type, Trouble> {
        self.eat('(');
        let first = self.sum()?;
        let second = if self.eat(',') { Some(self.sum()?) } else { None };
        if !self.eat(')') {
            return Err(Trouble::Text(format!("no `)` after `{name}(`")));
        }
        match (name, second) {
            ("sqrt", None) => Ok(first.sqrt()?),
            ("min" | "max", Some(second)) => Ok(first.common(&second)?),
            ("exp" | "ln", None) => {
                first.pure_number()?;
                Ok(Type::number())
            }
            ("sin" | "cos" | "tan", None) => {
                first.trig_argument()?;
                Ok(Type::number())
            }
            _ => Err(Trouble::Text(format!("no function `{name}`"))),
        }
    }
}
