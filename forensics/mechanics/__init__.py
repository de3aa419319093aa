"""Loads along the string and the limits they are judged by: pure functions of arrays.

Where to find what:

- Critical loads: `critical` (published criteria by author and year), `selfconsistent` (a load that makes
  its own contact), `threshold` (what the replay judges by), `band` (how far past the published onsets),
  `torque` and `tool_joint` (what those change). Near vertical: `columns` (solver for any ends),
  `airy_column` (exact without side load), `eigen` (the shipped table of c), `runs` (the length that
  counts).
- After buckling: `sinusoid`, `helix`, `helix_shape`, `helix_limit`, and `buckled`, which chooses among
  them; `lockup` in closed form.
- What it does to the pipe: `pipe` (bodies and ratings), `stress`, `fatigue`, and `toll`, which applies them
  to a string.
- Weights and torque: `grid` (well and string as arrays), `criteria_table` (criteria over depth), `ground`
  (the hole as many strings march over it), `offbottom` (string weight by depth and friction), `departed`
  (the same for a well a little off), `free_point`, `hydraulics`, `hoisting`.
- Compiled: `kernels_march` (what all share), `kernels_lanes` (many strings side by side),
  `kernels_critical` and `kernels_judge` (thresholds and states), `kernels_memory` and `kernels_replay`
  (load memory, sample by sample).
"""
