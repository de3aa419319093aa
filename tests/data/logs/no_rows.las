~Version
 VERS. 2.0 : v
 WRAP. NO : one line a step
~Well
 NULL. -999.25 : null
~Curve
 TIME.S : Time index
 BDEP.M : Bit depth
 HKLD.KDAN : Hookload
~ASCII
