"""The sheets of `energy.jsonl`, written out: `{name}` stands for the given of that name.

Cases with 9.81 m/s^2 cannot take the weight from a load's path, which uses standard gravity; their loads move on a level
path and the weight is a line of the ledger. Case EB-02 uses 9.80665 m/s^2 and takes the weight from the path.
"""

FALL = """
given drop : travel = {drop}                              cite "outside case"
given bearing : torque = {bearing_friction_torque}        cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
body drum_body = measured { mass = 1 kg, inertia = {drum_inertia} } cite "outside case; the mass is not used"
rotor drum about x { drum_body }
load weight { mass = {load}, path = PATH }
train hoist { rope line = drum -> weight { pitch_diameter = {drum_diameter} } }
ledger fall of hoist {
  start  at rest
  travel weight drop DIRECTION
  GAIN
  lose   bearing_heat = bearing * drum.angle
  wanted drum.speed within 0 rpm .. 5000 rpm
}
speed         = fall.weight.speed
drum_speed    = fall.drum.speed as rpm
acceleration  : acceleration = speed^2 / (2 * drop)
time          : time = speed / acceleration
rope_tension  : force = weight.mass * (gravity - acceleration)
friction_heat = fall.bearing_heat
kinetic_load  = fall.weight.kinetic
kinetic_drum  = fall.drum.kinetic
turns         = fall.drum.angle / 1 rev
"""

HAUL = """
given mass : mass = {mass}                        cite "outside case"
given slope = {slope}                             cite "outside case"
given friction = {friction}                       cite "outside case"
given rope_speed : speed = {rope_speed}           cite "outside case"
given drum : diameter = {drum_diameter}           cite "outside case"
given gear_ratio = {gear_ratio}                   cite "outside case"
given efficiency = {efficiency}                   cite "outside case"
rope_pull    : force = mass * g_n * (sin(slope) + friction * cos(slope))
drum_torque  : torque = rope_pull * drum/2
drum_speed   : angular_velocity = rope_speed / (drum/2)
motor_torque : torque = drum_torque / (gear_ratio * efficiency)
motor_speed  = drum_speed * gear_ratio            as rpm
motor_power  : power = motor_torque * motor_speed as W
loss_power   : power = motor_power - rope_pull * rope_speed as W
"""

PRESS = """
given work : work = {work_per_stroke}                     cite "outside case"
given strokes : frequency = {strokes}                     cite "outside case"
given working_time = {working_time}                       cite "outside case"
given mean : angular_velocity = {mean_speed}              cite "outside case"
given fluctuation = {coefficient_of_fluctuation}          cite "outside case"
given rim : gyration_radius = {rim_mean_radius}           cite "outside case"
motor_power_mean : power = work * strokes                 as W
energy_from_flywheel : energy = work - motor_power_mean * working_time
| The inertia is looked for, so that the wheel gives up that energy between the two speeds.
speed_max = mean * (1 + fluctuation/2)                    as rpm
speed_min = mean * (1 - fluctuation/2)                    as rpm
wanted inertia : moment_of_inertia within 0.1 kg*m^2 .. 10000 kg*m^2 where energy_between(inertia, speed_max, speed_min) == energy_from_flywheel
thin_rim_mass : mass = inertia / rim^2
"""

SPRING = """
given wound : angle = {wound_turns}                       cite "outside case"
given rubbing : torque = {friction_torque}                cite "outside case"
body arbor_body = measured { mass = 1 kg, inertia = 0 kg*m^2 }      cite "no inertia of its own"
body rotor_body = measured { mass = 1 kg, inertia = {inertia} }     cite "outside case; the mass is not used"
rotor arbor about x { arbor_body }
rotor wheel about x { rotor_body }
spring coil { rate = {torsion_rate} }
train drive { direct shaft = arbor -> wheel { } }
ledger unwinding of drive {
  start  at rest
  travel wheel wound forward
  spring coil from wound to 0 rev
  lose   friction = rubbing * wheel.angle
  wanted wheel.speed within 0 rpm .. 10000 rpm
}
stored_energy : energy = 1/2 * coil.rate * wound^2
friction_heat = unwinding.friction
speed = unwinding.wheel.speed as rpm
| Free vibration about the angle at which the spring just carries the friction.
shift : angle = rubbing / coil.rate
time  : time = acos(-shift / (wound - shift)) / natural(coil.rate, wheel.J)
"""

BRAKE = """
given inertia : moment_of_inertia = {inertia}             cite "outside case"
given speed : angular_velocity = {speed}                  cite "outside case"
given braking : torque = {brake_torque}                   cite "outside case"
given helping : torque = {load_torque_helping}            cite "outside case"
given disc_mass : mass = {disc_mass}                      cite "outside case"
given heat_capacity : specific_heat = {specific_heat}     cite "outside case"
time  : time = inertia * speed / (braking + helping)
angle : angle = speed/2 * time
turns = angle / 1 rev
kinetic_energy : energy = 1/2 * inertia * speed^2
brake_heat : heat = braking * angle
temperature_rise = heat_rise(brake_heat, disc_mass, heat_capacity)
"""

ATWOOD = """
given gravity : acceleration = {g}                        cite "outside case"
given bearing : torque = {bearing_friction_torque}        cite "outside case"
given way : travel = {travel}                             cite "outside case"
body disc_body = cylinder { diameter = 2 * {pulley_radius}, length = 40 mm, mass = {pulley_mass_solid_disc} } cite "outside case; the length is not used"
rotor pulley about x { disc_body }
load heavy { mass = {heavy}, path = level }
load light { mass = {light}, path = level }
train hoist {
  rope near = pulley -> heavy { pitch_diameter = 2 * {pulley_radius} }
  rope far  = pulley -> light { pitch_diameter = 2 * {pulley_radius} }
}
ledger fall of hoist {
  start  at rest
  travel heavy way forward
  gain   pull at heavy = heavy.mass * gravity * heavy.travel
  lose   lift at light = light.mass * gravity * light.travel
  lose   bearing_heat = bearing * pulley.angle
  wanted heavy.speed within 0 m/s .. 20 m/s
}
speed = fall.heavy.speed
pulley_speed = fall.pulley.speed as rpm
acceleration : acceleration = speed^2 / (2 * way)
time : time = speed / acceleration
tension_heavy_side : force = heavy.mass * (gravity - acceleration)
tension_light_side : force = light.mass * (gravity + acceleration)
"""

CLUTCH = """
given J_1 : moment_of_inertia = {driver_inertia}          cite "outside case"
given J_2 : moment_of_inertia = {driven_inertia}          cite "outside case"
given n_1 : angular_velocity = {driver_speed}             cite "outside case"
given n_2 : angular_velocity = {driven_speed}             cite "outside case"
given slipping : torque = {clutch_torque}                 cite "outside case"
| No torque from outside: the angular momentum stays.
wanted common_speed : angular_velocity within n_2 .. n_1 where (J_1 + J_2) * common_speed == J_1 * n_1 + J_2 * n_2
heat : heat = 1/2 * J_1 * n_1^2 + 1/2 * J_2 * n_2^2 - 1/2 * (J_1 + J_2) * common_speed^2
slip_time : time = J_1 * (n_1 - common_speed) / slipping
slip_turns = heat / slipping / 1 rev
"""

ENERGY = {
    "EB-01-falling-load": FALL.replace("PATH", "level").replace("DIRECTION", "forward").replace(
        "GAIN", "gain   pull at weight = weight.mass * gravity * weight.travel"),
    "EB-02-falling-load-frictionless": FALL.replace("PATH", "vertical").replace("DIRECTION", "down_path").replace("  GAIN\n", ""),
    "EB-03-winch-haul": HAUL,
    "EB-04-winch-level": HAUL,
    "EB-05-press": PRESS,
    "EB-06-shear": PRESS,
    "EB-07-spring-start": SPRING,
    "EB-08-spring-frictionless": SPRING,
    "EB-09-brake-stop": BRAKE,
    "EB-10-brake-no-load": BRAKE,
    "EB-11-two-stage-train": """
given load_torque : torque = {load_torque_last_shaft}     cite "outside case"
given drive_torque : torque = {motor_torque}              cite "outside case"
given reached : angular_velocity = {motor_speed_reached}  cite "outside case"
body a = measured { mass = 1 kg, inertia = {inertias_motor_to_load[0]} } cite "outside case; the mass is not used"
body b = measured { mass = 1 kg, inertia = {inertias_motor_to_load[1]} } cite "outside case; the mass is not used"
body c = measured { mass = 1 kg, inertia = {inertias_motor_to_load[2]} } cite "outside case; the mass is not used"
rotor motor about x { a }
rotor middle about x { b }
rotor last about x { c }
train gears {
  gear first  = motor -> middle { ratio = {ratios[0]}, efficiency = {efficiencies[0]} }
  gear second = middle -> last  { ratio = {ratios[1]}, efficiency = {efficiencies[1]} }
}
total_ratio = gears.ratio(motor, last)
inertia_at_motor_lossless    = gears.reflected(J, at = motor)
inertia_at_motor_with_losses = gears.reflected(J, at = motor, flow = forward)
load_torque_at_motor : torque = load_torque / (total_ratio * {efficiencies[0]} * {efficiencies[1]})
motor_acceleration : angular_acceleration = (drive_torque - load_torque_at_motor) / inertia_at_motor_with_losses
run_up_time : time = reached / motor_acceleration
""",
    "EB-12-speed-up-train": """
given load_torque : torque = {load_torque_last_shaft}     cite "outside case"
given drive_torque : torque = {motor_torque}              cite "outside case"
given reached : angular_velocity = {motor_speed_reached}  cite "outside case"
body a = measured { mass = 1 kg, inertia = {inertias_motor_to_load[0]} } cite "outside case; the mass is not used"
body b = measured { mass = 1 kg, inertia = {inertias_motor_to_load[1]} } cite "outside case; the mass is not used"
rotor motor about x { a }
rotor last about x { b }
train gears { gear up = motor -> last { ratio = {ratios[0]}, efficiency = {efficiencies[0]} } }
total_ratio = gears.ratio(motor, last)
inertia_at_motor_lossless    = gears.reflected(J, at = motor)
inertia_at_motor_with_losses = gears.reflected(J, at = motor, flow = forward)
load_torque_at_motor : torque = load_torque / (total_ratio * {efficiencies[0]})
motor_acceleration : angular_acceleration = (drive_torque - load_torque_at_motor) / inertia_at_motor_with_losses
run_up_time : time = reached / motor_acceleration
""",
    "EB-13-inclined-conveyor": """
given moving : mass = {moving_mass}                       cite "outside case"
given slope = {slope}                                     cite "outside case"
given coefficient = {resistance_coefficient}              cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
given drum_size : diameter = {drum_diameter}              cite "outside case"
given drive_torque : torque = {motor_torque}              cite "outside case"
given belt_speed : speed = {belt_speed}                   cite "outside case"
body pulley_body = measured { mass = 1 kg, inertia = {pulley_inertia_at_drum_shaft} } cite "outside case; the mass is not used"
body motor_body  = measured { mass = 1 kg, inertia = {motor_inertia} }                cite "outside case; the mass is not used"
rotor drum about x { pulley_body }
rotor motor about x { motor_body }
load goods { mass = moving, path = level }
train conveyor {
  gear box  = motor -> drum { ratio = {gear_ratio}, efficiency = {efficiency} }
  roll belt = drum -> goods { pitch_diameter = drum_size }
}
resistance : force = moving * gravity * (sin(slope) + coefficient * cos(slope))
steady_motor_torque : torque = resistance * drum_size/2 / ({gear_ratio} * {efficiency})
drum_speed : angular_velocity = belt_speed / (drum_size/2)
steady_motor_power : power = steady_motor_torque * drum_speed * {gear_ratio} as W
angular : angular_acceleration = (drive_torque - steady_motor_torque) / conveyor.reflected(J, at = motor, flow = forward)
belt_acceleration : acceleration = angular / {gear_ratio} * drum_size/2
start_time : time = belt_speed / belt_acceleration
start_distance : travel = belt_speed * start_time / 2
""",
    "EB-14-run-down": """
given inertia : moment_of_inertia = {inertia}             cite "outside case"
given rotor_mass : mass = {rotor_mass}                    cite "outside case"
given coefficient = {bearing_friction_coefficient}        cite "outside case"
given journal : diameter = {journal_diameter}             cite "outside case"
given speed : angular_velocity = {speed}                  cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
friction_torque = bearing_friction_torque(rotor_mass * gravity, coefficient, journal)
time  : time = inertia * speed / friction_torque
angle : angle = speed/2 * time
turns = angle / 1 rev
heat : heat = friction_torque * angle
initial_loss_power : power = friction_torque * speed as W
""",
    "EB-15-rolling-race": """
given slope = {slope}                                     cite "outside case"
given length : travel = {length}                          cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
| Mass and size cancel; any will do.
body ball   = sphere { diameter = 80 mm, mass = 2 kg }        cite demo
body roller = cylinder { diameter = 80 mm, length = 100 mm, mass = 2 kg } cite demo
body shell  = thin_sphere { diameter = 80 mm, mass = 2 kg }   cite demo
body hoop   = ring { diameter = 80 mm, mass = 2 kg }          cite demo
formula rolling(J : moment_of_inertia, mass : mass, diameter : diameter) : ratio = J / (mass * (diameter/2)^2) cite "definition"
formula rolling_acceleration(gravity : acceleration, slope : angle, c : ratio) : acceleration = gravity * sin(slope) / (1 + c) cite "mechanics handbooks"
formula rolling_time(length : travel, a : acceleration) : time = sqrt(2 * length / a) cite "mechanics handbooks"
formula rolling_speed(length : travel, a : acceleration) : speed = sqrt(2 * length * a) cite "mechanics handbooks"
formula least_friction(slope : angle, c : ratio) : ratio = tan(slope) * c / (1 + c) cite "mechanics handbooks"
c_1 = rolling(ball.J, ball.mass, ball.diameter)
c_2 = rolling(roller.J, roller.mass, roller.diameter)
c_3 = rolling(shell.J, shell.mass, shell.diameter)
c_4 = rolling(hoop.J, hoop.mass, hoop.diameter)
a_1 = rolling_acceleration(gravity, slope, c_1)
a_2 = rolling_acceleration(gravity, slope, c_2)
a_3 = rolling_acceleration(gravity, slope, c_3)
a_4 = rolling_acceleration(gravity, slope, c_4)
t_solid_sphere = rolling_time(length, a_1)
v_solid_sphere = rolling_speed(length, a_1)
mu_min_solid_sphere = least_friction(slope, c_1)
t_solid_cylinder = rolling_time(length, a_2)
v_solid_cylinder = rolling_speed(length, a_2)
mu_min_solid_cylinder = least_friction(slope, c_2)
t_hollow_sphere_thin = rolling_time(length, a_3)
v_hollow_sphere_thin = rolling_speed(length, a_3)
mu_min_hollow_sphere_thin = least_friction(slope, c_3)
t_hoop = rolling_time(length, a_4)
v_hoop = rolling_speed(length, a_4)
mu_min_hoop = least_friction(slope, c_4)
limit t_solid_sphere < t_solid_cylinder
limit t_solid_cylinder < t_hollow_sphere_thin
limit t_hollow_sphere_thin < t_hoop
""",
    "EB-16-atwood": ATWOOD,
    "EB-17-atwood-frictionless": ATWOOD,
    "EB-18-counterweight-hoist": """
given load : mass = {load}                                cite "outside case"
given counterweight : mass = {counterweight}              cite "outside case"
given sheave : diameter = {sheave_diameter}               cite "outside case"
given sheave_inertia : moment_of_inertia = {sheave_inertia} cite "outside case"
given gear_ratio = {gear_ratio}                           cite "outside case"
given efficiency = {efficiency}                           cite "outside case"
given motor_inertia : moment_of_inertia = {motor_inertia} cite "outside case"
given rate : acceleration = {acceleration}                cite "outside case"
given hoist_speed : speed = {speed}                       cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
angular : angular_acceleration = rate / (sheave/2)
out_of_balance : torque = (load - counterweight) * gravity * sheave/2
at_sheave : torque = out_of_balance + ((load + counterweight) * (sheave/2)^2 + sheave_inertia) * angular
motor_torque_steady : torque = out_of_balance / (gear_ratio * efficiency)
motor_torque_accelerating : torque = at_sheave / (gear_ratio * efficiency) + motor_inertia * angular * gear_ratio
motor_speed : angular_velocity = hoist_speed / (sheave/2) * gear_ratio
steady_power : power = motor_torque_steady * motor_speed as W
peak_power : power = motor_torque_accelerating * motor_speed as W
""",
    "EB-19-clutch": CLUTCH,
    "EB-20-clutch-both-turning": CLUTCH,
    "EB-21-trolley": """
given rolling = {rolling_coefficient}                     cite "outside case"
given slope = {up_slope}                                  cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
given start_speed : speed = {speed}                       cite "outside case"
body wheel = measured { mass = 1 kg, inertia = {wheel_inertia} } cite "outside case; the mass is in the total mass"
rotor wheels about x { wheel at 0 mm for k from 1 to 4 }
load trolley { mass = {total_mass}, path = level }
train running { roll contact = wheels -> trolley { pitch_diameter = {wheel_diameter} } }
equivalent_mass = running.reflected(J, at = trolley)
kinetic_energy : energy = 1/2 * equivalent_mass * start_speed^2
ledger coasting of running {
  start  trolley.speed = start_speed
  end    at rest
  travel trolley way forward
  lose   resistance = rolling * trolley.mass * gravity * cos(slope) * trolley.travel
  lose   climb at trolley = trolley.mass * gravity * sin(slope) * trolley.travel
  wanted way : travel within 0 m .. 100 m
}
coasting_distance = coasting.way
coasting_time : time = 2 * coasting_distance / start_speed
""",
    "EB-22-storage": """
given inertia : moment_of_inertia = {inertia}             cite "outside case"
given full_speed : angular_velocity = {speed}             cite "outside case"
given output : power = {output_power}                     cite "outside case"
given duration = {duration}                               cite "outside case"
given efficiency = {efficiency}                           cite "outside case"
energy_taken : energy = output * duration / efficiency
wanted final_speed : angular_velocity within 0 rpm .. full_speed where energy_between(inertia, full_speed, final_speed) == energy_taken
torque_start : torque = output / efficiency / full_speed
torque_end   : torque = output / efficiency / final_speed
""",
    "EB-23-trip-hammer": """
| The time of the fall has no elementary closed form; it is asked for where runs in time are checked.
given bar_length : length = {bar_length}                  cite "outside case"
given above = {start_angle_above_horizontal}              cite "outside case"
given hinge_friction : torque = {hinge_friction_torque}   cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
body bar  = rod { length = bar_length, mass = {bar_mass} }        cite "outside case"
body head = point_mass { mass = {end_mass} }                      cite "outside case"
| The hinge is the axis x; the bar lies along y.
rotor hammer about x {
  bar  at 0 mm { turned = [(z, 90 deg)] }
  head at (0 mm, bar_length, 0 mm)
}
inertia_about_hinge = hammer.J
fall : height = hammer.centre.y * (1 + sin(above))
friction_heat : heat = hinge_friction * (90 deg + above)
wanted angular_speed : angular_velocity within 0 rad/s .. 100 rad/s
  where 1/2 * hammer.J * angular_speed^2 == hammer.mass * gravity * fall - friction_heat
tip_speed : speed = angular_speed * bar_length
""",
    "EB-24-buffer": """
given free_drop : travel = {free_drop}                    cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
body drum_body = measured { mass = 1 kg, inertia = {drum_inertia} } cite "outside case; the mass is not used"
rotor drum about x { drum_body }
load weight { mass = {load}, path = level }
spring buffer { rate = {spring_rate} }
train hoist { rope line = drum -> weight { pitch_diameter = {drum_diameter} } }
equivalent_mass = hoist.reflected(J, at = weight)
ledger contact of hoist {
  start  at rest
  travel weight free_drop forward
  gain   pull at weight = weight.mass * gravity * weight.travel
  wanted weight.speed within 0 m/s .. 20 m/s
}
| The balance has two roots; the other one is negative, the spring pulled instead of pressed.
ledger stop of hoist {
  start  at rest
  end    at rest
  travel weight free_drop + pressed forward
  spring buffer from 0 mm to pressed
  gain   pull at weight = weight.mass * gravity * weight.travel
  wanted pressed : travel within 0 mm .. 2000 mm
}
speed_at_contact = contact.weight.speed
max_compression  = stop.pressed as mm
max_spring_force : force = buffer.rate * stop.pressed
""",
    "EB-25-lowering-stop": """
given load : mass = {load}                                cite "outside case"
given lowering : speed = {lowering_speed}                 cite "outside case"
given drum : diameter = {drum_diameter}                   cite "outside case"
given braking : torque = {brake_torque_at_drum}           cite "outside case"
given inertia : moment_of_inertia = {inertia_at_drum}     cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
holding_torque : torque = load * gravity * drum/2
angular : angular_acceleration = (braking - holding_torque) / (inertia + load * (drum/2)^2)
deceleration : acceleration = angular * drum/2
stop_time : time = lowering / deceleration
stop_distance : travel = lowering * stop_time / 2
brake_heat : heat = braking * (lowering / (drum/2)) * stop_time / 2
rope_force_while_stopping : force = load * (gravity + deceleration)
""",
    "EB-26-tackle": """
given load : mass = {load}                                cite "outside case"
given falls = {falls}                                     cite "outside case"
given sheave_efficiency = {sheave_efficiency}             cite "outside case"
given drum : diameter = {drum_diameter}                   cite "outside case"
given gear_ratio = {gear_ratio}                           cite "outside case"
given gear_efficiency = {gear_efficiency}                 cite "outside case"
given load_speed : speed = {load_speed}                   cite "outside case"
given gravity : acceleration = {g}                        cite "outside case"
reeving     = tackle_efficiency(falls, sheave_efficiency)
tackle_efficiency_found = reeving
rope_pull   = tackle_pull(load * gravity, falls, reeving)
drum_torque_found = drum_torque(rope_pull, drum)
drum_speed  : angular_velocity = load_speed * falls / (drum/2)
motor_torque : torque = drum_torque_found / (gear_ratio * gear_efficiency)
motor_power : power = motor_torque * drum_speed * gear_ratio as W
""",
    "EB-27-sticky-table": """
given table : moment_of_inertia = {table_inertia}         cite "outside case"
given before : angular_velocity = {speed}                 cite "outside case"
given dropped : mass = {dropped_mass}                     cite "outside case"
given at : radius = {radius}                              cite "outside case"
after : moment_of_inertia = table + dropped * at^2
speed_after : angular_velocity = before * table / after
energy_lost : energy = 1/2 * table * before^2 - 1/2 * after * speed_after^2
""",
    "EB-P1-flywheel-torque": """
given mass : mass = {mass}                                cite "printed example"
given gyration : gyration_radius = {gyration_radius}      cite "printed example"
given drive_torque : torque = {torque}                    cite "printed example"
given duration = {time}                                   cite "printed example"
inertia : moment_of_inertia = mass * gyration^2
acceleration : angular_acceleration = drive_torque / inertia
acceleration_rederived = acceleration
kinetic_energy : energy = 1/2 * inertia * (acceleration * duration)^2 as kJ
kinetic_energy_rederived = kinetic_energy as kJ
""",
    "EB-P2-fluctuation": """
given mass : mass = {mass}                                cite "printed example"
given gyration : gyration_radius = {gyration_radius}      cite "printed example"
given fluctuation : energy = {energy_fluctuation}         cite "printed example"
given mean : angular_velocity = {mean_speed}              cite "printed example"
inertia : moment_of_inertia = mass * gyration^2
wanted half : angular_velocity within 0 rpm .. 60 rpm where energy_between(inertia, mean + half, mean - half) == fluctuation
speed_max = mean + half as rpm
speed_min = mean - half as rpm
speed_max_rederived = speed_max as rpm
speed_min_rederived = speed_min as rpm
""",
    "EB-P3-punching-press": """
given holes : frequency = {holes}                         cite "printed example"
given work : work = {work}                                cite "printed example"
given punch_time = {punch_time}                           cite "printed example"
given gyration : gyration_radius = {gyration_radius}      cite "printed example"
given n_1 : angular_velocity = {n1}                       cite "printed example"
given n_2 : angular_velocity = {n2}                       cite "printed example"
motor_power : power = work * holes as kW
motor_power_rederived = motor_power as kW
out_of_wheel : energy = work - motor_power * punch_time
flywheel_mass : mass = flywheel_inertia(out_of_wheel, n_1, n_2) / gyration^2
flywheel_mass_rederived = flywheel_mass
""",
    "EB-P4-engine-flywheel": """
given power : power = {power}                             cite "printed example"
given speed : angular_velocity = {speed}                  cite "printed example"
given mass : mass = {mass}                                cite "printed example"
given gyration : gyration_radius = {gyration_radius}      cite "printed example"
given speed_fluctuation = 0.02                            cite "printed example: plus and minus 1 per cent"
given_up : energy = mass * gyration^2 * speed^2 * speed_fluctuation
work_per_turn : energy = power * (1 rev / speed)
coefficient_of_fluctuation_of_energy = given_up / work_per_turn
coefficient_of_fluctuation_of_energy_rederived = coefficient_of_fluctuation_of_energy
""",
    "EB-P5-riveter": """
given motor_power : power = {motor_power}                 cite "printed example"
given speed : angular_velocity = {speed}                  cite "printed example"
given mass : mass = {mass}                                cite "printed example"
given gyration : gyration_radius = {gyration_radius}      cite "printed example"
given rivet_time = {rivet_time}                           cite "printed example"
given rivet_power : power = {rivet_power}                 cite "printed example"
rivets_per_hour : frequency = motor_power / (rivet_power * rivet_time) as 1/h
rivets_per_hour_rederived = rivets_per_hour as 1/h
out_of_wheel : energy = (rivet_power - motor_power) * rivet_time
wanted speed_drop : angular_velocity within 0 rpm .. 900 rpm where energy_between(mass * gyration^2, speed, speed - speed_drop) == out_of_wheel
speed_drop_rederived = speed_drop as rpm
""",
    "EB-P6-hoist-brake": """
given weight : weight = {load_weight}                     cite "printed example"
given gravity : acceleration = {g}                        cite "printed example"
given start_speed : speed = {speed}                       cite "printed example"
given drum : diameter = {drum_diameter}                   cite "printed example"
given way : travel = {stop_distance}                      cite "printed example"
energy_to_take : energy = 1/2 * weight / gravity * start_speed^2 + weight * way
wanted brake_torque : torque within 0 N*m .. 100000 N*m where brake_torque * (way / (drum/2)) == energy_to_take
brake_torque_rederived = brake_torque
peak_power : power = brake_torque * (start_speed / (drum/2)) as kW
peak_power_rederived = peak_power as kW
""",
    "EB-P7-bicycle": """
given mass : mass = {mass}                                cite "printed example"
given start_speed : speed = {speed}                       cite "printed example"
given pad : force = {pad_force}                           cite "printed example"
given friction = {friction}                               cite "printed example"
given wheel : diameter = {wheel_diameter}                 cite "printed example"
wanted distance : travel within 0 m .. 1000 m where friction * pad * distance == 1/2 * mass * start_speed^2
distance_rederived = distance
turns = distance / (wheel/2) / 1 rev
turns_rederived = turns
""",
}
