"""A lumped elastic string in a crooked hole, and the rig that watches it: makes logs with known truth.

It shares nothing with the analysis: loads come from springs, lumped weights and Coulomb sliders stepped in
time, not from integrating equations along the hole.
"""
