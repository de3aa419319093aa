"""The bit's own witnesses: pressure, gauges near the bit and drilling rate, asked for the load on the bit."""
