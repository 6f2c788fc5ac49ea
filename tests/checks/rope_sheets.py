"""The sheets of `rope.jsonl`, written out: `{name}` stands for the given of that name.

A result that shares its name with a library formula, which the sheet calls, is named `NAME_found`.
"""

CAPSTAN = """
given friction = {friction}                               cite "outside case"
given wrap : angle = {wrap}                               cite "outside case"
given hold : force = {holding_force}                      cite "outside case"
wrap_angle = wrap as rad
force_ratio = exp(friction * wrap)
load_held = capstan(hold, wrap, friction)
"""

LAYERS = """
given barrel : diameter = {drum_diameter}                 cite "outside case"
given face = {drum_width}                                 cite "outside case"
given rope : diameter = {rope_diameter}                   cite "outside case"
given pull : force = {rope_pull}                          cite "outside case"
given speed : angular_velocity = {drum_speed}             cite "outside case"
turns = turns_per_layer(face, rope)
turns_per_layer_found = turns
"""

ONE_LAYER = """
mean_diameter_K = layer_diameter(barrel, rope, K)
length_K = layer_length(mean_diameter_K, turns)
torque_K = drum_torque(pull, mean_diameter_K)
rope_speed_K : speed = speed * mean_diameter_K/2
"""

BELT = """
given small : diameter = {small_pulley_driving}           cite "outside case"
given large : diameter = {large_pulley}                   cite "outside case"
given centres = {centre_distance}                         cite "outside case"
given friction = {friction}                               cite "outside case"
given speed_small : angular_velocity = {speed_small}      cite "outside case"
given power : power = {power}                             cite "outside case"
given belt : linear_density = {belt_mass_per_length}      cite "outside case"
wrap_small  = open_belt_wrap(small, large, centres)       as deg
belt_length = open_belt_length(small, large, centres)     as mm
belt_speed  : speed = speed_small * small/2
effective_force : force = power / belt_speed
own_pull = centrifugal_tension(belt, belt_speed)
centrifugal_tension_found = own_pull
tight_side  = belt_tight_side(effective_force, wrap_small, friction, own_pull)
slack_side  = tight_side - effective_force
speed_large = speed_small * small / large                 as rpm
"""

TRACTION = """
given load : mass = {load}                                cite "outside case"
given counterweight : mass = {counterweight}              cite "outside case"
given friction = {friction}                               cite "outside case"
given wrap : angle = {wrap}                               cite "outside case"
given rate : acceleration = {acceleration}                cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
ratio_needed = load * (gravity + rate) / (counterweight * (gravity - rate))
ratio_limit  = exp(friction * wrap)
wanted greatest_acceleration : acceleration within -9 m/s^2 .. 9 m/s^2
  where load * (gravity + greatest_acceleration) == ratio_limit * counterweight * (gravity - greatest_acceleration)
| The ropes slip where this limit is not met.
limit ratio_needed <= ratio_limit
"""


def layers(n):
    text = LAYERS + "".join(ONE_LAYER.replace("K", str(k)) for k in range(1, n + 1))
    return text + "length_total = " + " + ".join(f"length_{k}" for k in range(1, n + 1)) + "\n"


ROPE = {
    "RP-01-capstan": CAPSTAN,
    "RP-02-capstan-half": CAPSTAN,
    "RP-03-capstan-groove": CAPSTAN.replace("force_ratio = exp(friction * wrap)", "force_ratio = load_held / hold").replace(
        "capstan(hold, wrap, friction)", "capstan_groove(hold, wrap, friction, groove)") + """
given groove : angle = {groove_angle}                     cite "outside case"
""",
    "RP-04-turns-needed": """
given friction = {friction}                               cite "outside case"
given pull : force = {load}                               cite "outside case"
given hold : force = {holding_force}                      cite "outside case"
wanted wrap : angle within 0 rad .. 100 rad where capstan(hold, wrap, friction) == pull
wrap_angle = wrap as rad
turns = wrap / 1 rev
whole_turns_needed = ceil(turns)
confirm wrap agrees wrap_needed(pull, hold, friction)
""",
    "RP-05-layers": layers(3),
    "RP-06-layers-part": layers(4),
    "RP-07-nested": """
given barrel : diameter = {drum_diameter}                 cite "outside case"
given face = {drum_width}                                 cite "outside case"
given rope : diameter = {rope_diameter}                   cite "outside case"
turns_first_layer = turns_per_layer(face, rope)
mean_1 = nested_layer_diameter(barrel, rope, 1)
mean_2 = nested_layer_diameter(barrel, rope, 2)
mean_3 = nested_layer_diameter(barrel, rope, 3)
length_total = layer_length(mean_1, turns_first_layer) + layer_length(mean_2, turns_first_layer - 1) + layer_length(mean_3, turns_first_layer)
outer_diameter : diameter = mean_3 + rope
""",
    "RP-08-band-brake": """
given drum : diameter = {drum_diameter}                   cite "outside case"
given friction = {friction}                               cite "outside case"
given wrap : angle = {wrap}                               cite "outside case"
given slack : force = {slack_side_force}                  cite "outside case"
tight_side_force = capstan(slack, wrap, friction)
brake_torque = band_brake_torque(slack, wrap, friction, drum)
drum_load = band_shaft_load(tight_side_force, slack, wrap)
""",
    "RP-09-belt": BELT,
    "RP-10-belt-equal": BELT,
    "RP-11-traction-hold": TRACTION,
    "RP-12-traction-slip": TRACTION,
    "RP-P1-hawser": """
given turns : angle = {turns}                             cite "printed example"
given hold : force = {hold}                               cite "printed example"
given load_1 : force = {load_1}                           cite "printed example"
given load_2 : force = {load_2}                           cite "printed example"
wanted friction : ratio within 0.01 .. 2 where capstan(hold, turns, friction) == load_1
friction_rederived = friction
wrap_2 : angle = wrap_needed(load_2, hold, friction)
turns_2 = wrap_2 / 1 rev
turns_2_rederived = turns_2
""",
}
