//! Diagnostics of the later stages, each declared once.

use pintle_text::{Code, Severity};

macro_rules! codes {
    ($($constant:ident = $severity:ident $name:literal, $summary:literal;)*) => {
        $(
            #[doc = $summary]
            pub const $constant: Code = Code { name: $name, severity: Severity::$severity, summary: $summary };
        )*
        /// All of them.
        pub const ALL: &[Code] = &[$($constant),*];
    };
}

codes! {
    UNKNOWN_LIBRARY = Error "unknown-library", "a `use` line names a library that does not exist";
    UNREADABLE_FILE = Error "unreadable-file", "a file that the sheet names cannot be read";
    NOT_SUPPORTED_YET = Warning "not-supported-yet", "a construct that is read but not computed in this version";
    DUPLICATE_NAME = Error "duplicate-name", "one name is defined twice";
    CIRCULAR_DEFINITION = Error "circular-definition", "definitions need each other in a circle";
    UNKNOWN_NAME = Error "unknown-name", "a name that nothing defines";
    UNKNOWN_MEMBER = Error "unknown-member", "a thing has no member of that name";
    UNKNOWN_UNIT = Error "unknown-unit", "a word after a number is no unit";
    AMBIGUOUS_UNIT = Error "ambiguous-unit", "a unit word with several meanings, or a quotient that can be read two ways";
    UNKNOWN_KIND = Error "unknown-kind", "a kind of quantity that does not exist";
    UNKNOWN_FUNCTION = Error "unknown-function", "a call of something that is no function or formula";
    WRONG_ARGUMENTS = Error "wrong-arguments", "a call with too few, too many or unknown arguments";
    UNIT_MISMATCH = Error "unit-mismatch", "two sides have different dimensions";
    KIND_MISMATCH = Error "kind-mismatch", "two sides have equal dimensions but are different kinds of quantity";
    NOT_A_QUANTITY = Error "not-a-quantity", "a thing stands where a number is needed";
    NOT_A_NUMBER_FOR_CERTAIN = Error "count-not-known", "a count depends on an unknown or is not a whole number";
    SUSPECT_FACTOR = Warning "suspect-factor", "a factor of 2 or 2*pi is probably wrong";
    OPEN_KIND = Hint "open-kind", "a value could be two kinds of quantity";
    LENGTH_ROLE = Hint "length-role", "a length serves as a lever arm in one line and as a path in another";
    MISSING_FIELD = Error "missing-field", "something that must be stated is not";
    UNKNOWN_FIELD = Error "unknown-field", "a field that means nothing here";
    CONFLICTING_FIELDS = Error "conflicting-fields", "two fields say different things about one quantity";
    REQUIREMENT_BROKEN = Error "requirement-broken", "a size or value breaks a requirement of its shape or formula";
    BAD_MESH = Error "bad-mesh", "a mesh is not the closed surface of a body";
    TURNED_MESH = Warning "inverted-mesh", "a mesh was inside out and has been turned";
    BAD_OUTLINE = Error "bad-outline", "a profile or outline is not that of a body";
    NOT_CONNECTED = Error "not-connected", "a member is linked to no other";
    LOOP_DISAGREES = Error "loop-disagrees", "two paths through a train give different ratios";
    SELF_LOCKING = Error "self-locking", "a self-locking link would have to be driven backwards";
    FLOW_DIRECTION = Error "flow-direction", "the power flow through a link changes its direction within a ledger";
    SLACK_ROPE = Warning "slack-rope", "a rope would have to push";
    LEDGER_OPEN = Error "ledger-open", "a ledger leaves a state open or does not close";
    WEIGHT_TWICE = Warning "weight-twice", "gravity enters a line although the load's path already brings it";
    EXPECTED_EQUATION = Error "expected-equation", "a condition that must be an equation is not";
    NOT_DETERMINED = Error "not-determined", "an unknown is fixed by no equation";
    OVER_DETERMINED = Error "over-determined", "an equation has nothing left to determine";
    NO_SOLUTION = Error "no-solution", "no value in the range satisfies the equations";
    SEVERAL_SOLUTIONS = Error "several-solutions", "several values in the range satisfy the equations";
    RANGE_INFERRED = Hint "range-inferred", "an unknown has no declared range";
    DIVISION_BY_ZERO = Error "division-by-zero", "a divisor is zero";
    OVERFLOW = Error "number-overflow", "a number is too large to hold";
    UNDEFINED_VALUE = Error "undefined-value", "an operation has no value for its operands";
    STATE_WITHOUT_PROBLEM = Error "state-without-problem", "a state is named without the problem it belongs to";
    CONFIRM_DISAGREES = Error "confirm-disagrees", "a second route gives another value";
    UNKNOWN_CASE = Error "unknown-case", "a case that is not declared";
    UNKNOWN_OVERRIDE = Error "unknown-override", "a case changes something that does not exist";
    OPEN_ASSUMPTION = Error "open-assumption", "an assumption is not confirmed (strict)";
    UNCITED_GIVEN = Error "uncited-given", "a given has no source (strict)";
    TOLERANCE_REFUSED = Error "tolerance-refused", "a tolerance that has no clear meaning";
    EFFICIENCY_RANGE = Error "efficiency-range", "an efficiency outside 0 .. 1";
    STATE_BACKWARD = Hint "backward-efficiency", "a lossy link takes the same efficiency backwards because none is stated";
    INTERNAL_FAULT = Error "internal-fault", "a fault of the program itself; please report it";
}
