~Version
 VERS. 2.0 : v
~Curve
 TIME.S : t
