//! Types of expressions: dimension, angle exponent (fixed or free) and kind, and how products and powers build them.
//!
//! The rules are those of the language design: plane angle is a dimension for checking; a lever-like length (radius,
//! diameter, lever arm, radius of gyration, lead) leaves the angle exponent free and counts as rad^-1 a power in the
//! *natural* exponent; a path (travel, height) is fixed at 0; an unkinded length is open until its first use.
//! Sums and fitting stand in `unify`. This module must never know values.

use crate::dimension::{Base, Dimension};
use crate::kind::{Kind, LengthRole};
use crate::mismatch::Mismatch;
use crate::rational::Ratio;
use crate::unit::Unit;

/// Is an angle exponent binding?
#[derive(Copy, Clone, PartialEq, Eq, Hash, Debug)]
pub enum Angle {
    /// It must be equal to what is wanted.
    Fixed,
    /// A lever-like or open length takes part; only torque, energy and power still look at it.
    Free,
}

/// The id of an open length that is a literal, or one of several.
pub const ANONYMOUS: u32 = u32::MAX;

/// What an expression is.
#[derive(Copy, Clone, PartialEq, Eq, Hash, Debug)]
pub struct Type {
    /// The dimension; its angle slot is the natural exponent, open lengths counted as paths.
    pub dim: Dimension,
    /// Is the angle exponent binding?
    pub angle: Angle,
    /// The kind, where one is known.
    pub kind: Option<Kind>,
    /// An unresolved length that takes part: its quantity and its power.
    pub open: Option<(u32, Ratio)>,
    /// The net power of pi among the factors.
    pub(crate) pi: i8,
    /// The net power of angular velocities among the factors.
    pub(crate) omega: i8,
    /// The net power of diameters among the factors.
    pub(crate) diameter: i8,
    /// A number has been multiplied in: even the 2 of `d / 2` shows that the factor was thought of.
    pub(crate) scaled: bool,
    /// A root has been taken: a 1/s that comes from one is in radians, not in turns.
    pub(crate) rooted: bool,
    /// The net power of lever-like lengths.
    pub(crate) lever: i8,
    /// Sums of differing natural exponents: the exponent says nothing any more.
    pub(crate) loose: bool,
    /// A temperature level written in place, such as `20 degC`.
    pub(crate) level_literal: bool,
    /// A condition, true or false.
    pub(crate) condition: bool,
}

impl Type {
    const BLANK: Type = Type {
        dim: Dimension::NONE,
        angle: Angle::Fixed,
        kind: None,
        open: None,
        pi: 0,
        omega: 0,
        diameter: 0,
        scaled: false,
        rooted: false,
        lever: 0,
        loose: false,
        level_literal: false,
        condition: false,
    };

    /// A pure number.
    pub fn number() -> Type {
        Type::BLANK
    }

    /// The number pi; what it multiplies is watched for turns counted twice.
    pub fn pi() -> Type {
        Type { pi: 1, ..Type::BLANK }
    }

    /// True or false.
    pub fn condition() -> Type {
        Type { condition: true, ..Type::BLANK }
    }

    /// A kind of quantity.
    pub fn of_kind(kind: Kind) -> Type {
        let def = kind.def();
        let role = kind.length_role();
        let lever = def.angle == Angle::Free && !def.dim.angle().is_zero();
        Type {
            dim: def.dim,
            angle: def.angle,
            kind: Some(kind),
            open: (role == Some(LengthRole::Open)).then_some((ANONYMOUS, Ratio::ONE)),
            omega: i8::from(kind == Kind::AngularVelocity),
            diameter: i8::from(kind == Kind::Diameter),
            lever: if lever { def.dim.angle().checked_neg().map_or(0, |power| small(power.num())) } else { 0 },
            ..Type::BLANK
        }
    }

    /// A number written with a unit.
    pub fn of_unit(unit: &Unit) -> Type {
        let mut ty = match unit.kind {
            Some(kind) if kind.dimension() == unit.dim || kind.def().angle == Angle::Free => Type::of_kind(kind),
            _ => Type { dim: unit.dim, kind: None, ..Type::BLANK },
        };
        if ty.kind.is_none() && is_open(unit) {
            ty.angle = Angle::Free;
            ty.open = Some((ANONYMOUS, unit.length_power));
        }
        ty.level_literal = unit.has_offset();
        ty
    }

    /// The same, with `quantity` named as the one open length that takes part; no change where none does.
    pub fn with_source(mut self, quantity: u32) -> Type {
        if let Some((id, _)) = &mut self.open {
            *id = quantity;
        }
        self.level_literal = false;
        self
    }

    /// The same after an open length has found its role.
    pub fn resolve(mut self, quantity: u32, role: LengthRole) -> Type {
        let Some((id, power)) = self.open else { return self };
        if id != quantity || role == LengthRole::Open {
            return self;
        }
        if role == LengthRole::Lever
            && let Some(natural) = self.dim.angle().checked_sub(power)
        {
            self.dim = self.dim.with_angle(natural);
            self.lever = self.lever.saturating_add(small_ratio(power));
        }
        self.open = None;
        if role == LengthRole::Path && self.lever == 0 {
            self.angle = Angle::Fixed;
        }
        self
    }

    /// Is it true or false?
    pub fn is_condition(&self) -> bool {
        self.condition
    }

    /// Does pi multiply a length in it, so that a circumference may be meant?
    pub fn pi_length(&self) -> bool {
        self.pi != 0 && (self.lever != 0 || self.open.is_some())
    }

    /// Is it a pure number: no dimension, no binding angle exponent?
    pub fn is_number(&self) -> bool {
        let exponent_counts = self.angle == Angle::Fixed && !self.dim.angle().is_zero();
        !self.condition && self.dim.without_angle().is_none() && !exponent_counts
    }

    /// Is it a plain angle?
    pub fn is_angle(&self) -> bool {
        !self.condition && self.dim == Dimension::ANGLE
    }

    /// The least and the greatest natural angle exponent, open lengths counted as paths or as levers.
    pub(crate) fn natural_range(&self) -> (Ratio, Ratio) {
        let path = self.dim.angle();
        let lever = self.open.and_then(|(_, power)| path.checked_sub(power)).unwrap_or(path);
        if lever < path { (lever, path) } else { (path, lever) }
    }

    /// The product.
    pub fn mul(&self, other: &Type) -> Result<Type, Mismatch> {
        self.combine(other, 1)
    }

    /// The quotient.
    pub fn div(&self, other: &Type) -> Result<Type, Mismatch> {
        self.combine(other, -1)
    }

    fn combine(&self, other: &Type, sign: i8) -> Result<Type, Mismatch> {
        for factor in [self, other] {
            factor.check_factor()?;
        }
        let dim = if sign > 0 { self.dim.mul(&other.dim) } else { self.dim.div(&other.dim) };
        let Some(dim) = dim else { return Err(Mismatch::exponent_range()) };
        let free = self.angle == Angle::Free || other.angle == Angle::Free;
        let counted = |mine: i8, theirs: i8| mine.saturating_add(theirs.saturating_mul(sign));
        let mut product = Type {
            dim,
            angle: if free { Angle::Free } else { Angle::Fixed },
            open: combine_open(self.open, other.open, sign),
            pi: counted(self.pi, other.pi),
            omega: counted(self.omega, other.omega),
            diameter: counted(self.diameter, other.diameter),
            scaled: self.scaled || other.scaled || self.is_number() || other.is_number(),
            rooted: self.rooted || other.rooted,
            lever: counted(self.lever, other.lever),
            loose: self.loose || other.loose,
            ..Type::BLANK
        };
        product.keep_kind(self, other, sign);
        Ok(product)
    }

    /// A kind times a pure number keeps its kind, except for those where the number changes what it is.
    fn keep_kind(&mut self, a: &Type, b: &Type, sign: i8) {
        let kept = match (a.kind, b.kind) {
            (Some(kind), _) if b.is_number() => kind,
            (_, Some(kind)) if sign > 0 && a.is_number() => kind,
            _ => return,
        };
        match kept.length_role() {
            // Twice a radius is as well a diameter.
            Some(LengthRole::Lever) => return,
            Some(LengthRole::Open) => {
                self.kind = Some(Kind::Length);
                return;
            }
            Some(LengthRole::Path) | None => {}
        }
        // A quarter of GD² is a moment of inertia; twice a temperature level is nothing that has a name.
        if matches!(kept, Kind::Temperature | Kind::Ratio | Kind::FlywheelEffectMass) {
            return;
        }
        let def = kept.def();
        if def.dim != self.dim {
            return;
        }
        self.kind = Some(if matches!(kept, Kind::Weight | Kind::Work | Kind::Heat) { kept.base() } else { kept });
        self.angle = def.angle;
    }

    fn check_factor(&self) -> Result<(), Mismatch> {
        if self.condition {
            return Err(Mismatch::of_condition("a quantity", self));
        }
        if self.level_literal { Err(Mismatch::level_in_product(self)) } else { Ok(()) }
    }

    /// The power.
    pub fn pow(&self, power: Ratio) -> Result<Type, Mismatch> {
        if power == Ratio::ONE {
            return Ok(*self);
        }
        self.check_factor()?;
        let raise = || {
            let dim = self.dim.pow(power)?;
            let open = match self.open {
                Some((id, p)) => Some((id, p.checked_mul(power)?)),
                None => None,
            };
            Some((dim, open))
        };
        let Some((dim, open)) = raise() else { return Err(Mismatch::exponent_range()) };
        let counted = |count: i8| Ratio::whole(i16::from(count)).checked_mul(power).map_or(0, small_ratio);
        Ok(Type {
            dim,
            angle: self.angle,
            open: open.filter(|(_, p)| !p.is_zero()),
            pi: counted(self.pi),
            omega: counted(self.omega),
            diameter: counted(self.diameter),
            scaled: self.scaled,
            rooted: self.rooted || !power.is_whole(),
            lever: counted(self.lever),
            loose: self.loose,
            ..Type::BLANK
        })
    }

    /// The square root.
    pub fn sqrt(&self) -> Result<Type, Mismatch> {
        self.pow(Ratio::HALF)
    }

    /// The negative.
    pub fn neg(&self) -> Result<Type, Mismatch> {
        if self.condition {
            return Err(Mismatch::of_condition("a quantity", self));
        }
        Ok(*self)
    }

    /// The absolute value.
    pub fn abs(&self) -> Result<Type, Mismatch> {
        self.neg()
    }
}

/// Does a length in the unit leave the angle exponent open? Not where the whole has one reading: `m/s`, `N/mm`.
fn is_open(unit: &Unit) -> bool {
    if !unit.length_power.is_positive() {
        return false;
    }
    let bare = unit.dim.without_angle();
    let only_length = Dimension::LENGTH.pow(bare.exponent(Base::Length)) == Some(bare);
    let products = [
        Dimension::of(1, 1, 0, 0),
        Dimension::of(2, 1, 0, 0),
        Dimension::of(2, 1, -1, 0),
        Dimension::ENERGY,
        Dimension::of(3, 1, -2, 0),
    ];
    only_length || products.contains(&bare)
}

fn combine_open(a: Option<(u32, Ratio)>, b: Option<(u32, Ratio)>, sign: i8) -> Option<(u32, Ratio)> {
    let signed = |power: Ratio| if sign > 0 { Some(power) } else { power.checked_neg() };
    let (id, power) = match (a, b) {
        (None, None) => return None,
        (Some(open), None) => open,
        (None, Some((id, power))) => (id, signed(power)?),
        (Some((i, p)), Some((j, q))) => (if i == j { i } else { ANONYMOUS }, p.checked_add(signed(q)?)?),
    };
    (!power.is_zero()).then_some((id, power))
}

fn small(count: i32) -> i8 {
    i8::try_from(count.clamp(-100, 100)).unwrap_or(0)
}

fn small_ratio(power: Ratio) -> i8 {
    if power.is_whole() { small(power.num()) } else { 0 }
}
