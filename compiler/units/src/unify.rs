//! Where types meet: sums, comparisons, and fitting an expression to the kind that is wanted.
//!
//! A free angle exponent goes with any fixed one, except where torque, energy and power would be taken for each
//! other: there a natural exponent of -1 is a torque and 0 an energy. Kinds of one family go together unless they
//! clash. This module must never know values.

use crate::confusion;
use crate::dimension::Dimension;
use crate::kind::{Kind, LengthRole};
use crate::mismatch::{FixHint, Mismatch, MismatchCode, TypeWarning, WarningCode};
use crate::rational::Ratio;
use crate::types::{ANONYMOUS, Angle, Type};

/// An expression fitted to a kind.
#[derive(Clone, PartialEq, Debug)]
pub struct Fit {
    /// The type of that kind.
    pub ty: Type,
    /// Cautions.
    pub warnings: Vec<TypeWarning>,
    /// The open length that found its role here.
    pub resolved: Option<(u32, LengthRole)>,
}

/// Two expressions joined by a sum or a comparison.
#[derive(Clone, PartialEq, Debug)]
pub struct Joined {
    /// The type of the whole.
    pub ty: Type,
    /// Cautions and notes.
    pub warnings: Vec<TypeWarning>,
    /// The open length that found its role here.
    pub resolved: Option<(u32, LengthRole)>,
}

#[derive(Copy, Clone, PartialEq, Eq)]
enum Join {
    Sum,
    Difference,
    Common,
}

impl Join {
    fn words(self) -> &'static str {
        match self {
            Join::Sum => "added",
            Join::Difference => "subtracted",
            Join::Common => "compared",
        }
    }
}

/// Does even a free angle exponent count at this dimension?
pub(crate) fn strict_about_angle(dim: &Dimension) -> bool {
    let bare = dim.without_angle();
    bare == Dimension::ENERGY || bare == Dimension::POWER
}

/// Does the angle exponent of `ty` go with that of `kind`? The dimensions are taken to agree otherwise.
pub(crate) fn angle_fits(ty: &Type, kind: Kind) -> bool {
    let def = kind.def();
    let target = def.dim.angle();
    if kind == Kind::Lead {
        // A plain length is no lead: there the turn would be lost without a trace.
        return ty.kind == Some(Kind::Lead) || ty.dim.angle() == target;
    }
    match (ty.angle, def.angle) {
        (Angle::Fixed, Angle::Fixed) => ty.dim.angle() == target,
        // sqrt(J / m) is a length as well as a radius of gyration.
        (Angle::Fixed, Angle::Free) if kind.root() == Kind::Length => {
            ty.dim.angle().is_zero() || ty.dim.angle() == Ratio::whole(-1)
        }
        (Angle::Fixed, Angle::Free) => ty.dim.angle().is_zero() || ty.dim.angle() == target,
        (Angle::Free, _) => meets(ty, target),
    }
}

/// Does a free exponent go with a fixed one of `target`?
fn meets(ty: &Type, target: Ratio) -> bool {
    if !strict_about_angle(&ty.dim) || ty.loose || ty.pi_length() {
        return true;
    }
    let range = ty.natural_range();
    let torque = Ratio::whole(-1);
    let other = if target == torque { Ratio::ZERO } else { torque };
    holds(range, target) || !holds(range, other)
}

fn holds((low, high): (Ratio, Ratio), exponent: Ratio) -> bool {
    low <= exponent && exponent <= high
}

impl Type {
    /// Does it fit the kind that is wanted? Then it is of that kind.
    pub fn fits(&self, wanted: Kind) -> Result<Type, Mismatch> {
        self.fit(wanted).map(|fit| fit.ty)
    }

    /// Does it fit the kind that is wanted? With cautions, and what open lengths turn out to be.
    pub fn fit(&self, wanted: Kind) -> Result<Fit, Mismatch> {
        if self.condition {
            let expected = Type::of_kind(wanted).words_and_unit();
            return Err(Mismatch::of_condition(&crate::mismatch::article(&expected), self));
        }
        let target = wanted.dimension();
        if self.dim.without_angle() != target.without_angle() {
            return Err(Mismatch::wanted(MismatchCode::Dimension, wanted, self));
        }
        if let Some(kind) = self.kind
            && kind != wanted
            && (kind.root() != wanted.root() || confusion::clash(kind, wanted))
        {
            return Err(Mismatch::wanted(kind_code(kind, wanted), wanted, self));
        }
        if !angle_fits(self, wanted) {
            return Err(Mismatch::wanted(MismatchCode::Angle, wanted, self));
        }
        Ok(Fit { ty: Type::of_kind(wanted), warnings: self.cautions(wanted), resolved: self.resolution(wanted) })
    }

    /// The natural angular frequency of a mass on a spring, or of an inertia on a torsion spring: built in, because
    /// `sqrt(k / m)` alone is in 1/s.
    pub fn natural_frequency(stiffness: &Type, inertia: &Type) -> Result<Type, Mismatch> {
        let torsional = stiffness.dim.without_angle() == Dimension::ENERGY;
        let (k, m) =
            if torsional { (Kind::TorsionalStiffness, Kind::MomentOfInertia) } else { (Kind::Stiffness, Kind::Mass) };
        stiffness.fits(k)?;
        inertia.fits(m)?;
        Ok(Type::of_kind(Kind::AngularVelocity))
    }

    /// Does it fit another expression's type, kind and angle exponent?
    pub fn fits_type(&self, wanted: &Type) -> Result<Type, Mismatch> {
        if let Some(kind) = wanted.kind {
            return self.fits(kind);
        }
        self.common(wanted)
    }

    /// What an open length is once the whole is of this kind.
    fn resolution(&self, wanted: Kind) -> Option<(u32, LengthRole)> {
        let (id, power) = self.open?;
        let tells = strict_about_angle(&self.dim)
            || !wanted.dimension().angle().is_zero()
            || matches!(wanted, Kind::Speed | Kind::Acceleration)
            || wanted.length_role() == Some(LengthRole::Path);
        if id == ANONYMOUS || !tells {
            return None;
        }
        role_at(self, power, wanted.dimension().angle()).map(|role| (id, role))
    }

    /// What passes as this kind but is likely meant otherwise.
    pub fn cautions(&self, kind: Kind) -> Vec<TypeWarning> {
        let mut found = Vec::new();
        let target = kind.dimension().angle();
        let one_pi = self.pi.abs() == 1;
        let turning = matches!(kind, Kind::AngularVelocity | Kind::AngularAcceleration | Kind::Angle | Kind::Torque);
        if turning && one_pi && self.pi_length() && self.lever.abs() <= 1 && self.dim.angle() == target {
            let fix = matches!(kind, Kind::AngularVelocity | Kind::Angle).then(|| FixHint::Append(" * 1 rev".into()));
            found.push(TypeWarning::new(
                WarningCode::CircumferenceAsRadius,
                format!("pi times a length is a circumference, so this {} is counted in turns", kind.words()),
                "multiply by `1 rev`, or use the radius without pi",
                fix,
            ));
        }
        let rate =
            matches!(kind.root(), Kind::Power | Kind::Speed | Kind::Energy | Kind::AngularVelocity | Kind::Angle);
        if rate && one_pi && self.omega == 1 && self.lever.abs() <= 1 {
            found.push(TypeWarning::new(
                WarningCode::TurnCountedTwice,
                "2*pi times an angular velocity counts the turn twice".into(),
                "an angular velocity in rpm holds the turn already: leave out 2*pi (and halve a diameter)",
                None,
            ));
        }
        let levered = match kind {
            Kind::Speed => self.omega == 1 && self.diameter == 1,
            Kind::Torque => self.diameter == 1,
            Kind::AngularVelocity | Kind::AngularAcceleration => self.diameter == -1,
            Kind::MomentOfInertia => self.diameter == 2,
            _ => false,
        };
        if levered && !self.scaled {
            let factor = if kind == Kind::MomentOfInertia { "four" } else { "two" };
            found.push(TypeWarning::new(
                WarningCode::DiameterAsLever,
                format!("a diameter stands where a radius makes the {}: a factor of {factor}", kind.words()),
                "use half the diameter",
                None,
            ));
        }
        found
    }

    /// The cautions for an expression whose kind nobody has said.
    pub fn warnings(&self) -> Vec<TypeWarning> {
        match (self.kind, self.readings().first()) {
            (None, Some(kind)) => self.cautions(*kind),
            _ => Vec::new(),
        }
    }

    /// The argument of exp or log: a pure number; radians pass with a note.
    pub fn pure_number(&self) -> Result<Vec<TypeWarning>, Mismatch> {
        if self.is_number() {
            return Ok(Vec::new());
        }
        if self.is_angle() {
            return Ok(vec![angle_as_number()]);
        }
        if self.condition {
            return Err(Mismatch::of_condition("a pure number", self));
        }
        let found = self.words_and_unit();
        let (help, fix) = confusion::advice(self, Kind::Ratio);
        let help = format!("{help} (exp and log take pure numbers)");
        Err(Mismatch {
            code: MismatchCode::Number,
            expected: "pure number or angle".into(),
            message: format!(
                "a pure number or an angle is wanted here, but this is {}",
                crate::mismatch::article(&found)
            ),
            found,
            help: Some(help),
            fix: fix.map(Box::new),
        })
    }

    /// The argument of a trigonometric function: an angle; a plain number passes with a note.
    pub fn trig_argument(&self) -> Result<Vec<TypeWarning>, Mismatch> {
        if self.is_angle() && !self.condition {
            return Ok(Vec::new());
        }
        if self.is_number() {
            return Ok(vec![TypeWarning::new(
                WarningCode::NumberAsAngle,
                "this plain number is read as an angle in radians".into(),
                "write its unit: `rad` or `deg`",
                Some(FixHint::Append(" * 1 rad".into())),
            )]);
        }
        self.fits(Kind::Angle).map(|_| Vec::new())
    }

    /// The sum.
    pub fn add(&self, other: &Type) -> Result<Type, Mismatch> {
        self.join(other, Join::Sum).map(|joined| joined.ty)
    }

    /// The difference.
    pub fn sub(&self, other: &Type) -> Result<Type, Mismatch> {
        self.join(other, Join::Difference).map(|joined| joined.ty)
    }

    /// What both are: for comparisons, `min`, `max` and the arms of a `choose`.
    pub fn common(&self, other: &Type) -> Result<Type, Mismatch> {
        self.join(other, Join::Common).map(|joined| joined.ty)
    }

    /// The sum, with notes and what open lengths turn out to be.
    pub fn add_noting(&self, other: &Type) -> Result<Joined, Mismatch> {
        self.join(other, Join::Sum)
    }

    /// The difference, with notes and what open lengths turn out to be.
    pub fn sub_noting(&self, other: &Type) -> Result<Joined, Mismatch> {
        self.join(other, Join::Difference)
    }

    /// What both are, with notes and what open lengths turn out to be.
    pub fn common_noting(&self, other: &Type) -> Result<Joined, Mismatch> {
        self.join(other, Join::Common)
    }

    fn join(&self, other: &Type, join: Join) -> Result<Joined, Mismatch> {
        let (a, b) = (self, other);
        if a.condition || b.condition {
            let odd = if a.condition { a } else { b };
            return Err(Mismatch::of_condition("a quantity", odd));
        }
        if (a.is_number() && b.is_angle() || a.is_angle() && b.is_number())
            && !(a.is_number() && b.is_number())
            && !(a.is_angle() && b.is_angle())
        {
            return Ok(Joined { ty: Type::number(), warnings: vec![angle_as_number()], resolved: None });
        }
        if a.dim.without_angle() != b.dim.without_angle() {
            return Err(Mismatch::joined(MismatchCode::Dimension, a, b, join.words()));
        }
        if let Some(kind) = levels(a, b, join)? {
            return Ok(Joined { ty: Type::of_kind(kind), warnings: Vec::new(), resolved: None });
        }
        let kind = join_kinds(a, b, join)?;
        let (dim, angle, loose) = join_angles(a, b, join)?;
        let resolved = join_resolution(a, b);
        let ty = match kind {
            Some(kind) if kind.length_role() != Some(LengthRole::Open) => Type::of_kind(kind),
            _ => {
                let open = match (a.open, b.open) {
                    (Some((i, p)), Some((j, q))) if p == q => Some((if i == j { i } else { ANONYMOUS }, p)),
                    _ => None,
                };
                let same = |x: i8, y: i8| if x == y { x } else { 0 };
                Type {
                    dim,
                    angle,
                    kind,
                    open: open.filter(|_| angle == Angle::Free),
                    pi: same(a.pi, b.pi),
                    omega: same(a.omega, b.omega),
                    diameter: same(a.diameter, b.diameter),
                    scaled: a.scaled || b.scaled,
                    rooted: a.rooted || b.rooted,
                    lever: if (a.lever.abs(), a.lever) < (b.lever.abs(), b.lever) { b.lever } else { a.lever },
                    loose,
                    ..Type::number()
                }
            }
        };
        Ok(Joined { ty, warnings: Vec::new(), resolved })
    }
}

fn angle_as_number() -> TypeWarning {
    TypeWarning::new(
        WarningCode::AngleAsNumber,
        "this angle is taken as a plain number, in radians".into(),
        "divide by `1 rad` to say so",
        Some(FixHint::Append(" / 1 rad".into())),
    )
}

fn kind_code(found: Kind, wanted: Kind) -> MismatchCode {
    let level = |kind| matches!(kind, Kind::Temperature | Kind::TemperatureDifference);
    if level(found) && level(wanted) {
        MismatchCode::Temperature
    } else if found.dimension().angle() != wanted.dimension().angle() && found.root() != wanted.root() {
        MismatchCode::Angle
    } else {
        MismatchCode::Kind
    }
}

/// Temperatures and pressures that count from somewhere: level minus level is a difference, and so on.
fn levels(a: &Type, b: &Type, join: Join) -> Result<Option<Kind>, Mismatch> {
    use Kind::{AbsolutePressure as Abs, GaugePressure as Gauge, Pressure, Temperature as Level};
    let difference = Kind::TemperatureDifference;
    if a.dim != Dimension::TEMPERATURE && a.dim != Dimension::PRESSURE {
        return Ok(None);
    }
    let refuse = |code, help: &str| Err(Mismatch::joined(code, a, b, join.words()).with_help(help, None));
    match (a.kind, b.kind, join) {
        (Some(Level), Some(Level), Join::Sum) => refuse(
            MismatchCode::Temperature,
            "one of the two must be a difference: write it in `K`, `delta_degC` or `delta_degF`",
        ),
        (Some(Level), Some(Level), Join::Difference) => Ok(Some(difference)),
        (Some(Level), Some(kind), Join::Sum | Join::Difference) if kind == difference => Ok(Some(Level)),
        (Some(kind), Some(Level), Join::Sum) if kind == difference => Ok(Some(Level)),
        (Some(Level), None, Join::Sum | Join::Difference) | (None, Some(Level), Join::Sum) => Ok(Some(Level)),
        (None, Some(Level), Join::Difference) => Ok(Some(difference)),
        (Some(kind), Some(Level), Join::Difference) if kind == difference => {
            refuse(MismatchCode::Temperature, "a level cannot be taken from a difference; turn the two round")
        }
        (Some(Abs), Some(Gauge), Join::Sum | Join::Difference) | (Some(Gauge), Some(Abs), Join::Sum) => Ok(Some(Abs)),
        (Some(Abs), Some(Abs), Join::Difference) => Ok(Some(Pressure)),
        _ => Ok(None),
    }
}

/// The kind of a sum.
fn join_kinds(a: &Type, b: &Type, join: Join) -> Result<Option<Kind>, Mismatch> {
    let (mine, theirs) = match (a.kind, b.kind) {
        (None, None) => return Ok(None),
        (Some(kind), None) | (None, Some(kind)) => {
            let plain = if a.kind.is_none() { a } else { b };
            if !angle_fits(plain, kind) {
                return Err(Mismatch::joined(MismatchCode::Angle, a, b, join.words()));
            }
            return Ok(match kind.length_role() {
                // A plain length beside a radius leaves it one; half a diameter beside it does not say which.
                Some(LengthRole::Lever) if plain.open.is_some() => Some(kind),
                Some(LengthRole::Lever | LengthRole::Open) => None,
                _ => Some(kind),
            });
        }
        (Some(mine), Some(theirs)) => (mine, theirs),
    };
    if mine == theirs {
        return Ok(Some(mine));
    }
    if mine.root() != theirs.root() || confusion::clash(mine, theirs) {
        return Err(Mismatch::joined(kind_code(theirs, mine), a, b, join.words()));
    }
    let role = |kind: Kind| kind.length_role();
    Ok(match (role(mine), role(theirs)) {
        (Some(LengthRole::Lever), Some(LengthRole::Open)) => Some(mine),
        (Some(LengthRole::Open), Some(LengthRole::Lever)) => Some(theirs),
        (Some(LengthRole::Open), Some(LengthRole::Open)) => Some(Kind::Length),
        (Some(LengthRole::Path), Some(LengthRole::Path)) => Some(Kind::PathLength),
        (Some(_), Some(_)) => None,
        _ if mine.is_a(theirs) => Some(theirs),
        _ if theirs.is_a(mine) => Some(mine),
        _ => Some(mine.root()),
    })
}

/// The angle exponent of a sum, whether it binds, and whether it still says anything.
fn join_angles(a: &Type, b: &Type, join: Join) -> Result<(Dimension, Angle, bool), Mismatch> {
    let refuse = || Err(Mismatch::joined(MismatchCode::Angle, a, b, join.words()));
    let loose = a.loose || b.loose;
    match (a.angle, b.angle) {
        (Angle::Fixed, Angle::Fixed) => {
            if a.dim == b.dim {
                Ok((a.dim, Angle::Fixed, false))
            } else {
                refuse()
            }
        }
        (Angle::Fixed, Angle::Free) => {
            if meets(b, a.dim.angle()) {
                Ok((a.dim, Angle::Fixed, false))
            } else {
                refuse()
            }
        }
        (Angle::Free, Angle::Fixed) => {
            if meets(a, b.dim.angle()) {
                Ok((b.dim, Angle::Fixed, false))
            } else {
                refuse()
            }
        }
        (Angle::Free, Angle::Free) => {
            let ((low, high), (least, most)) = (a.natural_range(), b.natural_range());
            // The path reading is the greater one; taking it keeps the sum the same from both sides.
            let greater = if a.dim.angle() < b.dim.angle() { b.dim } else { a.dim };
            if low <= most && least <= high {
                let settled = [a, b].into_iter().find(|ty| ty.open.is_none());
                let dim = settled.map_or(greater, |ty| ty.dim);
                let blurred = settled.is_none() && a.open.map(|(_, p)| p) != b.open.map(|(_, p)| p);
                return Ok((dim, Angle::Free, loose || blurred));
            }
            let tells = |ty: &Type| {
                let range = ty.natural_range();
                strict_about_angle(&ty.dim)
                    && !ty.loose
                    && !ty.pi_length()
                    && (holds(range, Ratio::ZERO) || holds(range, Ratio::whole(-1)))
            };
            if tells(a) && tells(b) { refuse() } else { Ok((greater, Angle::Free, true)) }
        }
    }
}

/// The open length of one side that the other side settles.
fn join_resolution(a: &Type, b: &Type) -> Option<(u32, LengthRole)> {
    let settle = |open: &Type, settled: &Type| {
        let (id, power) = open.open?;
        if id == ANONYMOUS || settled.open.is_some() || !strict_about_angle(&open.dim) {
            return None;
        }
        role_at(open, power, settled.dim.angle()).map(|role| (id, role))
    };
    settle(a, b).or_else(|| settle(b, a))
}

/// The role of an open length where the whole has this angle exponent.
fn role_at(ty: &Type, power: Ratio, target: Ratio) -> Option<LengthRole> {
    let path = ty.dim.angle();
    if path == target {
        return Some(LengthRole::Path);
    }
    (path.checked_sub(power) == Some(target)).then_some(LengthRole::Lever)
}
