/** The example of a run sheet in the contract, word for word: every key there is, but for those that FULL_SHEET adds. */
export const CONTRACT_SHEET = `title: Four-lane culture chip
drawing: { number: C-114, revision: B, drawn_by: AM }   # printed, not interpreted
unit: 1 mm                    # only if the drawing does not say
size: [76 mm, 26 mm]          # checked against the chip edge
outline: chip-edge
ports_layer: holes
ignore: ["dim-*", marks]      # names of elements or layers, * matches any run of characters
join_within: 1 um
joints: resolved              # or centreline, or computed (physics/fields.md)
process: cast elastomer       # gives usual limits; see below
fluid: water                  # or { viscosity: 0.94 mPa s, density: 1003 kg/m^3 } or { glycerol: 30 % by mass } (or by volume)
temperature: 37 degC          # default 25 degC
depth: 50 um                  # every layer not named below
layers:
  lanes: { depth: 120 um, profile: rectangle }
  upper: { depth: 80 um, plane: top }
  control: ignore
ports:
  feed:  { pressure: 12 kPa, tubing: { bore: 0.5 mm, length: 300 mm } }   # gauge, at the far end of the tubing
  dose:  { flow: 2 uL/min, tubing: [ { bore: 0.5 mm, length: 300 mm, temperature: 22 degC }, { bore: 50 um, length: 80 mm } ] }   # into the chip is positive
  vent:  { head: 40 mm }      # liquid level of an open reservoir above the chip, may be negative
  waste: { pressure: 0 Pa, expect: out }   # expect: in | out, what the port is for
  drain: open                 # 0 Pa
  spare: sealed
channels:                     # exact name first, then the longest pattern; a tie is an error
  "lane-*": { wall_shear: { min: 0.05 Pa, max: 0.5 Pa, over: 80 % }, residence_time: { min: 1 s, max: 60 s }, flow: { min: 1 uL/min }, walls: floor }
  "branch-*": { even: 5 % }   # |flow| (largest reach) of every channel that matches this name, whatever other entry it has, within ±5 % of their mean; one channel: not run
solutes:                      # what the fluids carry; the unit is printed, not converted
  drug: { diffusion: 5e-10 m^2/s, unit: uM }
# a port: { flow: 1 uL/min, concentration: { drug: 10 } }     a channel: { concentration: { drug: { min: 2, max: 4, over: 95 % } }, mixing: { drug: { min: 90 % } } }
junctions: laminar            # streams stay side by side and diffuse (default), or mixed
switch: { from: [feed], reach: "lane-*", to: 95 %, within: 2 min }   # default: all supplies at once, nothing asked
fields: [chamber]             # strokes or filled shapes whose floor is computed in 2-D
pillars: [posts]              # layers whose filled shapes stand in the chambers, besides holes of the shape itself; they and chambers are never ports, channels or outlines, even when round
                              # a field's name stands under channels: too (wall_shear, residence_time); a chamber stroke has no reach; reaches run full length to its mouth, no joint correction and no trimming there
targets:                      # exactly one of channel | port | node, exactly one quantity
  - { channel: lane-1, wall_shear: 0.3 Pa, at: mean, by: feed }
  - { port: waste, flow: -5 uL/min, by: dose }
  - { port: out-3, concentration: { drug: 3 }, by: dose }
pump_limits: { feed: { max_pressure: 200 kPa, max_flow: 1 mL/min } }
limits: { min_width: 20 um, min_wall: 40 um, max_width_to_depth: 10, max_depth_to_width: 2, edge_margin: 1 mm, port_gap: 1 mm, port_diameter: [0.3 mm, 8 mm],
          port_grid: 1.5 mm, max_pressure: 150 kPa, min_pressure: -30 kPa, max_reynolds: 1000, min_corner_angle: 30 deg, stiffness: 1.5 MPa }
tolerances: { depth: 5 %, width: 2 um, temperature: 1 degC }
# patterns: ports and channels: exact first, then the longest, a tie is an error; targets: must match exactly one, \`by\` takes none; accept: all entries that match are tried, bare * is refused, each match is printed
cases:                        # each is the sheet with these changes, solved and judged on its own; one PDF, one verdict
  seed:    { ports: { feed: { flow: 20 uL/min } }, channels: { "lane-*": { wall_shear: { max: 0.1 Pa } } } }
  culture: { temperature: 37 degC }
                              # a case changes keys: a port keeps its tubing whatever condition the case gives it; tubing: none takes it away
show: { flow: uL/min, pressure: mbar, wall_shear: dyn/cm^2 }   # units on screen and paper (default µL/min, kPa, Pa); data files stay SI
accept:                       # findings someone has looked at and takes on, up to a value
  - { rule: thin-wall, at: lane-1, up_to: 35 um, because: "measured on the last batch", by: AM, on: 2026-05-04 }
`;

/** The same with what the contract only writes in comments: a run sheet with every key there is. */
export const FULL_SHEET = CONTRACT_SHEET.replace(
  'spare: sealed',
  'spare: sealed\n  carrier: { flow: 1 uL/min, concentration: { drug: 10 }, tubing: none }',
).replace(
  'solutes:',
  '  mixer: { concentration: { drug: { min: 2, max: 4, over: 95 % } }, mixing: { drug: { min: 90 % } } }\nsolutes:',
);
