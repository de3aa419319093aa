"""The well: trajectory, hole, string and mud as arrays along depth."""
