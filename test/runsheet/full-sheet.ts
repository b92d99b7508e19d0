/** A run sheet with every key there is. */
export const FULL_SHEET = `title: Four-lane culture chip
drawing: { number: C-114, revision: B, drawn_by: AM }   # printed, not interpreted
unit: 1 mm                    # only if the drawing does not say
size: [76 mm, 26 mm]          # checked against the chip edge
outline: chip-edge
ports_layer: holes
ignore: ["dim-*", marks]      # names of elements or layers, * matches any run of characters
join_within: 1 um
joints: resolved              # or centreline
process: cast elastomer       # gives usual limits
fluid: water
temperature: 37 degC          # default 25 degC
depth: 50 um                  # every layer not named below
layers:
  lanes: { depth: 120 um, profile: rectangle }
  upper: { depth: 80 um, plane: top }
  control: ignore
ports:
  feed:  { pressure: 12 kPa, tubing: { bore: 0.5 mm, length: 300 mm } }   # gauge, at the far end of the tubing
  dose:  { flow: 2 uL/min, tubing: [ { bore: 0.5 mm, length: 300 mm, temperature: 22 degC }, { bore: 50 um, length: 80 mm } ] }
  vent:  { head: 40 mm }      # liquid level of an open reservoir above the chip, may be negative
  waste: { pressure: 0 Pa, expect: out }
  drain: open                 # 0 Pa
  spare: sealed
channels:                     # exact name first, then the longest pattern; a tie is an error
  "lane-*": { wall_shear: { min: 0.05 Pa, max: 0.5 Pa, over: 80 % }, residence_time: { min: 1 s, max: 60 s }, flow: { min: 1 uL/min }, walls: floor }
targets:                      # exactly one of channel | port | node, exactly one quantity
  - { channel: lane-1, wall_shear: 0.3 Pa, at: mean, by: feed }
  - { port: waste, flow: -5 uL/min, by: dose }
pump_limits: { feed: { max_pressure: 200 kPa, max_flow: 1 mL/min } }
limits: { min_width: 20 um, min_wall: 40 um, max_width_to_depth: 10, max_depth_to_width: 2, edge_margin: 1 mm, port_gap: 1 mm, port_diameter: [0.3 mm, 8 mm],
          port_grid: 1.5 mm, max_pressure: 150 kPa, min_pressure: -30 kPa, max_reynolds: 1000, min_corner_angle: 30 deg, stiffness: 1.5 MPa }
tolerances: { depth: 5 %, width: 2 um, temperature: 1 degC }
cases:                        # each is the sheet with these changes, solved and judged on its own
  seed:    { ports: { feed: { flow: 20 uL/min } }, channels: { "lane-*": { wall_shear: { max: 0.1 Pa } } } }
  culture: { temperature: 37 degC }
show: { flow: uL/min, pressure: mbar, wall_shear: dyn/cm^2 }
accept:                       # findings someone has looked at and takes on, up to a value
  - { rule: thin-wall, at: lane-1, up_to: 35 um, because: "measured on the last batch", by: AM, on: 2026-05-04 }
`;
