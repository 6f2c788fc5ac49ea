//! Bodies that the language cannot say with formulas: turned and extruded
//! outlines, and parts known from a measurement.
//!
//! Polygon integrals are sums over the triangles between a reference point and
//! each edge; they are exact. (Green's theorem; Steger, "On the calculation of
//! arbitrary moments of polygons", 1996, from memory.)

use super::bodies::{Form, Properties, Solid};
use super::fields::Fields;
use super::space::{Arithmetic, Tensor};
use super::value::Value;
use super::{Env, Lowerer, Requirement};
use crate::codes;
use crate::results::Group;
use pintle_graph::{CompareOp, Function, NodeId, Op};
use pintle_text::{Diagnostic, Place};
use smol_str::SmolStr;

type Members = Vec<(SmolStr, Value)>;
type Points = Vec<[NodeId; 2]>;

/// Integrals over a polygon: area, first and second moments of its coordinates.
struct Area {
    area: NodeId,
    first: [NodeId; 2],
    /// uu, vv, uv
    second: [NodeId; 3],
}

impl<'s> Lowerer<'s, '_> {
    pub(super) fn built_in_form(
        &mut self,
        env: &mut Env,
        word: &str,
        fields: &mut Fields<'s>,
    ) -> Option<(Form, Members)> {
        match word {
            "measured" => self.measured(fields),
            "turned" => self.turned_form(fields),
            "extruded" => self.extruded_form(fields),
            _ => self.mesh_form(env, fields),
        }
    }

    fn measured(&mut self, fields: &mut Fields<'s>) -> Option<(Form, Members)> {
        let mass = self.need_number(fields, "mass", "mass", Group::Body);
        let inertia = self.need_number(fields, "inertia", "moment_of_inertia", Group::Body);
        let cross = self.take_number(fields, "cross_inertia", "moment_of_inertia", Group::Body);
        let reach = self.take_number(fields, "outer_diameter", "diameter", Group::Body);
        let centre = match self.take_expr(fields, "centre") {
            Some((mut env, expr)) => self.length_point(&mut env, expr)?,
            None => self.origin(),
        };
        let (mass, inertia) = (mass?, inertia?);
        let zero = self.num(0.0);
        let tensor: Option<Tensor> = cross.map(|cross| [inertia.node, cross.node, cross.node, zero, zero, zero]);
        let outer_radius = reach.map(|diameter| {
            let two = self.num(2.0);
            self.over(diameter.node, two)
        });
        let members = vec![("inertia".into(), Value::Number(inertia.clone()))];
        Some((
            Form::Measured(Properties { mass: mass.node, centre, axial: inertia.node, tensor, outer_radius }),
            members,
        ))
    }

    /// A list of points with two lengths each.
    fn outline(&mut self, value: Value, place: Place, what: &str) -> Option<Points> {
        let items = self.as_list(value, place, "a list of points")?;
        let mut points: Points = Vec::with_capacity(items.len());
        for item in items {
            match item {
                Value::Point(pair, at) if pair.len() == 2 => {
                    let mut nodes = [NodeId(0); 2];
                    for (slot, value) in nodes.iter_mut().zip(pair) {
                        let typed = self.as_number(value, at)?;
                        *slot = self.expect_length(&typed)?.node;
                    }
                    points.push(nodes);
                }
                Value::Failed => return None,
                other => {
                    self.report(Diagnostic::new(
                        codes::BAD_OUTLINE,
                        place,
                        format!("the {what} takes points of two lengths, but one member is {}", other.what()),
                    ));
                    return None;
                }
            }
        }
        if points.len() > 1 && points.first() == points.last() {
            points.pop();
        }
        if points.len() < 3 {
            self.report(Diagnostic::new(codes::BAD_OUTLINE, place, format!("the {what} needs at least three points")));
            return None;
        }
        let mut values = Vec::with_capacity(points.len());
        for point in &points {
            if let (Some(a), Some(b)) = (self.constant(point[0]), self.constant(point[1])) {
                values.push([a, b]);
            }
        }
        if values.len() == points.len() && crosses_itself(&values) {
            self.report(
                Diagnostic::new(codes::BAD_OUTLINE, place, format!("the {what} crosses itself"))
                    .with_help("list the corners in order round the outline"),
            );
            return None;
        }
        Some(points)
    }

    fn turned_form(&mut self, fields: &mut Fields<'s>) -> Option<(Form, Members)> {
        let Some((mut env, expr)) = self.take_expr(fields, "profile") else {
            self.missing(fields, "profile", "list of (axial, radial) points");
            return None;
        };
        let place = env.place(expr.span);
        let value = self.expr(&mut env, expr);
        let points = self.outline(value, place, "profile")?;
        let zero = self.num(0.0);
        for point in &points {
            if self.constant(point[1]).is_some_and(|radius| radius < 0.0) {
                self.report(
                    Diagnostic::new(
                        codes::BAD_OUTLINE,
                        place,
                        "the profile crosses the axis: a radial coordinate is negative",
                    )
                    .with_help("points are (axial, radial), with radial 0 on the axis"),
                );
                return None;
            }
        }
        let start = points[0][0];
        let n = points.len();
        let (mut volume, mut moment, mut axial, mut along) = (Vec::new(), Vec::new(), Vec::new(), Vec::new());
        let three = self.num(3.0);
        let two = self.num(2.0);
        for at in 0..n {
            let (p, q) = (points[at], points[(at + 1) % n]);
            let (x1, x2) = (self.minus(p[0], start), self.minus(q[0], start));
            let (r1, r2) = (p[1], q[1]);
            let (a, b) = (self.times(x1, r2), self.times(x2, r1));
            let cross = self.minus(a, b);
            if self.is_zero(cross) {
                continue;
            }
            let sum = self.plus(r1, r2);
            volume.push(self.times(cross, sum));
            let (x1r1, x2r2, x1r2, x2r1) =
                (self.times(x1, r1), self.times(x2, r2), self.times(x1, r2), self.times(x2, r1));
            let (d1, d2) = (self.times(two, x1r1), self.times(two, x2r2));
            let bracket = self.sum(&[d1, x1r2, x2r1, d2]);
            moment.push(self.times(cross, bracket));
            let (q1, q2) = (self.square(r1), self.square(r2));
            let squares = self.plus(q1, q2);
            let bracket = self.times(sum, squares);
            axial.push(self.times(cross, bracket));
            let (s1, s2, s12) = (self.square(x1), self.square(x2), self.times(x1, x2));
            let s12 = self.times(two, s12);
            let s12sum = self.times(s12, sum);
            let (t1, t2) = (self.times(s1, r1), self.times(s2, r2));
            let (t1, t2) = (self.times(three, t1), self.times(three, t2));
            let (u1, u2) = (self.times(s1, r2), self.times(s2, r1));
            let bracket = self.sum(&[t1, u1, u2, t2, s12sum]);
            along.push(self.times(cross, bracket));
        }
        let pi = self.out.model.graph.number(std::f64::consts::PI, "pi");
        let scaled = |this: &mut Self, terms: &[NodeId], divisor: f64| {
            let sum = this.sum(terms);
            let product = this.times(pi, sum);
            let divisor = this.num(divisor);
            this.over(product, divisor)
        };
        // 2 pi times triangle area times the mean: cross/2 * 1/3, 1/12, 1/10, 1/30.
        let (raw_volume, raw_moment) = (scaled(self, &volume, 3.0), scaled(self, &moment, 12.0));
        let (raw_axial, raw_along) = (scaled(self, &axial, 10.0), scaled(self, &along, 30.0));
        let volume = self.apply(Function::Abs, raw_volume);
        let centre = self.over(raw_moment, raw_volume);
        let axial = self.apply(Function::Abs, raw_axial);
        let along = self.apply(Function::Abs, raw_along);
        let half = self.over(axial, two);
        let square = self.square(centre);
        let transport = self.times(volume, square);
        let cross = self.sum(&[along, half]);
        let cross = self.minus(cross, transport);
        let x = self.plus(start, centre);
        let outer_radius = self.greatest(points.iter().map(|point| point[1]).collect());
        self.positive_volume(fields, volume);
        let solid =
            Solid { volume, centre: [x, zero, zero], second: [axial, cross, cross, zero, zero, zero], outer_radius };
        Some((Form::Solid(solid), Vec::new()))
    }

    fn polygon(&mut self, points: &Points, origin: [NodeId; 2]) -> Area {
        let n = points.len();
        let mut sums: [Vec<NodeId>; 6] = Default::default();
        let two = self.num(2.0);
        for at in 0..n {
            let (p, q) = (points[at], points[(at + 1) % n]);
            let (u1, v1) = (self.minus(p[0], origin[0]), self.minus(p[1], origin[1]));
            let (u2, v2) = (self.minus(q[0], origin[0]), self.minus(q[1], origin[1]));
            let (a, b) = (self.times(u1, v2), self.times(u2, v1));
            let cross = self.minus(a, b);
            if self.is_zero(cross) {
                continue;
            }
            sums[0].push(cross);
            let (us, vs) = (self.plus(u1, u2), self.plus(v1, v2));
            sums[1].push(self.times(cross, us));
            sums[2].push(self.times(cross, vs));
            let square = |this: &mut Self, a: NodeId, b: NodeId| {
                let (aa, bb, ab) = (this.square(a), this.square(b), this.times(a, b));
                let bracket = this.sum(&[aa, ab, bb]);
                this.times(cross, bracket)
            };
            let (uu, vv) = (square(self, u1, u2), square(self, v1, v2));
            sums[3].push(uu);
            sums[4].push(vv);
            let (m11, m22) = (self.times(u1, v1), self.times(u2, v2));
            let (m11, m22) = (self.times(two, m11), self.times(two, m22));
            let bracket = self.sum(&[m11, a, b, m22]);
            sums[5].push(self.times(cross, bracket));
        }
        let divisors = [2.0, 6.0, 6.0, 12.0, 12.0, 24.0];
        let mut raw = [NodeId(0); 6];
        for (at, (terms, divisor)) in sums.iter().zip(divisors).enumerate() {
            let sum = self.sum(terms);
            let divisor = self.num(divisor);
            raw[at] = self.over(sum, divisor);
        }
        // Either sense of the outline is fine: everything takes the area's sign.
        let sign = self.apply(Function::Sign, raw[0]);
        let area = self.apply(Function::Abs, raw[0]);
        let signed = |this: &mut Self, at: usize| this.times(sign, raw[at]);
        let first = [signed(self, 1), signed(self, 2)];
        let second = [signed(self, 3), signed(self, 4), signed(self, 5)];
        Area { area, first, second }
    }

    fn extruded_form(&mut self, fields: &mut Fields<'s>) -> Option<(Form, Members)> {
        let length = self.need_number(fields, "length", "length", Group::Body);
        let Some((mut env, expr)) = self.take_expr(fields, "outline") else {
            self.missing(fields, "outline", "list of (y, z) points");
            return None;
        };
        let place = env.place(expr.span);
        let value = self.expr(&mut env, expr);
        let outline = self.outline(value, place, "outline")?;
        let mut holes = Vec::new();
        if let Some((mut env, expr)) = self.take_expr(fields, "holes") {
            let place = env.place(expr.span);
            let value = self.expr(&mut env, expr);
            for hole in self.as_list(value, place, "a list of outlines")? {
                holes.push(self.outline(hole, place, "hole")?);
            }
        }
        let length = length?;
        let origin = outline[0];
        let mut total = self.polygon(&outline, origin);
        for hole in &holes {
            let hole = self.polygon(hole, origin);
            total.area = self.minus(total.area, hole.area);
            for at in 0..2 {
                total.first[at] = self.minus(total.first[at], hole.first[at]);
            }
            for at in 0..3 {
                total.second[at] = self.minus(total.second[at], hole.second[at]);
            }
        }
        let (u, v) = (self.over(total.first[0], total.area), self.over(total.first[1], total.area));
        let central = |this: &mut Self, second: NodeId, a: NodeId, first: NodeId| {
            let transport = this.times(a, first);
            this.minus(second, transport)
        };
        let uu = central(self, total.second[0], u, total.first[0]);
        let vv = central(self, total.second[1], v, total.first[1]);
        let uv = central(self, total.second[2], u, total.first[1]);
        let volume = self.times(total.area, length.node);
        let square = self.square(length.node);
        let twelve = self.num(12.0);
        let lengthwise = self.times(volume, square);
        let lengthwise = self.over(lengthwise, twelve);
        let (iyy, izz) = (self.times(vv, length.node), self.times(uu, length.node));
        let axial = self.plus(iyy, izz);
        let yy = self.plus(iyy, lengthwise);
        let zz = self.plus(izz, lengthwise);
        let yz = self.times(uv, length.node);
        let yz = self.negate(yz);
        let zero = self.num(0.0);
        let two = self.num(2.0);
        let middle = self.over(length.node, two);
        let centre = [middle, self.plus(origin[0], u), self.plus(origin[1], v)];
        let distances = outline
            .iter()
            .map(|point| {
                let (a, b) = (self.square(point[0]), self.square(point[1]));
                let sum = self.plus(a, b);
                self.root(sum)
            })
            .collect();
        let outer_radius = self.greatest(distances);
        self.positive_volume(fields, volume);
        let solid = Solid { volume, centre, second: [axial, yy, zz, zero, zero, yz], outer_radius };
        Some((Form::Solid(solid), vec![("length".into(), Value::Number(length))]))
    }

    fn mesh_form(&mut self, env: &mut Env, fields: &mut Fields<'s>) -> Option<(Form, Members)> {
        let file = match self.take_expr(fields, "file") {
            Some((mut env, expr)) => match self.expr(&mut env, expr) {
                Value::Text(text) => Some((text, env.place(expr.span))),
                Value::Failed => None,
                other => {
                    self.report(Diagnostic::new(
                        codes::NOT_A_QUANTITY,
                        env.place(expr.span),
                        format!("a file name in quotes is needed here, but this is {}", other.what()),
                    ));
                    None
                }
            },
            None => {
                self.missing(fields, "file", "name of an STL file, in quotes");
                None
            }
        };
        let scale = match self.take_expr(fields, "unit") {
            Some((env, expr)) => {
                let word = self.word(expr).unwrap_or("").to_string();
                let text = pintle_syntax::ast::UnitText { text: word.into(), span: expr.span };
                let unit = self.unit(&env, &text)?;
                if pintle_units::Type::of_unit(&unit).fits(pintle_units::Kind::Length).is_err() {
                    self.report(Diagnostic::new(
                        codes::UNIT_MISMATCH,
                        env.place(expr.span),
                        format!("the unit of a mesh is a length, found {}", unit.text),
                    ));
                    return None;
                }
                Some(unit.factor)
            }
            None => {
                self.missing(fields, "unit", "the unit of length of the file, such as mm; STL files do not say");
                None
            }
        };
        let (file, place) = file?;
        let scale = scale?;
        self.read_mesh(env, &file, place, scale)
    }

    fn positive_volume(&mut self, fields: &Fields<'_>, volume: NodeId) {
        let zero = self.num(0.0);
        let condition = self.out.model.graph.add(Op::Compare(CompareOp::Greater, volume, zero));
        self.out.requirements.push(Requirement {
            condition,
            sides: None,
            words: Some(("outline".into(), "the outline encloses an area".into())),
            results: Vec::new(),
            subject: fields.owner.clone(),
            place: fields.place,
            origin: fields.place,
        });
    }

    fn greatest(&mut self, nodes: Vec<NodeId>) -> NodeId {
        let mut result: Option<NodeId> = None;
        for node in nodes {
            result = Some(match result {
                None => node,
                Some(so_far) if so_far == node => node,
                Some(so_far) => self.out.model.graph.add(Op::Max(so_far, node)),
            });
        }
        result.unwrap_or_else(|| self.num(0.0))
    }

    /// Integrals of a closed mesh at unit density.
    fn read_mesh(&mut self, env: &Env, file: &str, place: Place, scale: f64) -> Option<(Form, Members)> {
        let sheet = self.sheet;
        let from = sheet.sources.file(env.item.file).map_or("", |source| source.path.as_str());
        let path = match from.rsplit_once('/') {
            Some((folder, _)) if !file.starts_with('/') => format!("{folder}/{file}"),
            _ => file.to_string(),
        };
        let bytes = match self.files.read(&path) {
            Ok(bytes) => bytes,
            Err(why) => {
                self.report(
                    Diagnostic::new(codes::UNREADABLE_FILE, place, format!("cannot read the mesh `{path}`: {why}"))
                        .with_help("the path counts from the folder of this sheet"),
                );
                return None;
            }
        };
        let mesh = match pintle_geometry::read_stl(&bytes) {
            Ok(mesh) => mesh,
            Err(fault) => {
                self.report(Diagnostic::new(codes::BAD_MESH, place, format!("`{path}` is no STL file: {fault}")));
                return None;
            }
        };
        let found = match pintle_geometry::mass_properties(&mesh) {
            Ok(found) => found,
            Err(fault) => {
                self.report(
                    Diagnostic::new(
                        codes::BAD_MESH,
                        place,
                        format!("`{path}` is not the closed surface of a body: {fault}"),
                    )
                    .with_help(
                        "mend the mesh where it was made; the volume of an open or inconsistent surface is not defined",
                    ),
                );
                return None;
            }
        };
        if found.inverted {
            self.report(
                Diagnostic::new(
                    codes::TURNED_MESH,
                    place,
                    format!("`{path}` is inside out; it is read as the body meant"),
                )
                .with_help("turn its triangles where it was made"),
            );
        }
        let cube = scale * scale * scale;
        let (volume, outer_radius) = (self.num(found.volume * cube), self.num(found.reach[0] * scale));
        let centre = found.centre.map(|component| self.num(component * scale));
        // Integrals of squares become moments: J_x = yy + zz; off-diagonal members carry the minus sign.
        let [xx, yy, zz, xy, xz, yz] = found.second.map(|member| member * cube * scale * scale);
        let second = [yy + zz, xx + zz, xx + yy, -xy, -xz, -yz].map(|member| self.num(member));
        Some((Form::Solid(Solid { volume, centre, second, outer_radius }), Vec::new()))
    }
}

/// Whether two edges of a closed polygon that do not meet cross each other.
fn crosses_itself(points: &[[f64; 2]]) -> bool {
    let n = points.len();
    let side = |a: [f64; 2], b: [f64; 2], c: [f64; 2]| (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
    for i in 0..n {
        let (a, b) = (points[i], points[(i + 1) % n]);
        for j in i + 2..n {
            if i == 0 && j == n - 1 {
                continue;
            }
            let (c, d) = (points[j], points[(j + 1) % n]);
            if side(a, b, c) * side(a, b, d) < 0.0 && side(c, d, a) * side(c, d, b) < 0.0 {
                return true;
            }
        }
    }
    false
}
