~Version
 VERS. 2.0 : v
 WRAP. NO : one line a step
~Well
 STRT.S 0 : Start
 STOP.S 115 : Stop
 STEP.S 5 : Step
 NULL. -999.25 : null
 DATE. 14-May-31 : Date
 STIM. 10:00:00 : Start time
~Curve
 TIME.S : Time index
 STAT. : status
 BDEP.M : Bit depth
 HKLD.KDAN : Hookload
~ASCII
0 "in slips, pumps off" 2000.000 120.000
5 "in slips, pumps off" 2000.050 120.450
10 "in slips, pumps off" 2000.100 120.600
15 "in slips, pumps off" 2000.150 120.450
20 "in slips, pumps off" 2000.200 120.900
25 "in slips, pumps off" 2000.250 121.050
30 "in slips, pumps off" 2000.300 120.900
35 "in slips, pumps off" 2000.350 121.350
40 "in slips, pumps off" 2000.400 121.500
45 "in slips, pumps off" 2000.450 121.350
50 "in slips, pumps off" 2000.500 121.800
55 "in slips, pumps off" 2000.550 121.950
60 "in slips, pumps off" 2000.600 121.800
65 "in slips, pumps off" 2000.650 122.250
70 "in slips, pumps off" 2000.700 122.400
75 "in slips, pumps off" 2000.750 122.250
80 "in slips, pumps off" 2000.800 122.700
85 "in slips, pumps off" 2000.850 122.850
90 "in slips, pumps off" 2000.900 122.700
95 "in slips, pumps off" 2000.950 123.150
100 "in slips, pumps off" 2001.000 123.300
105 "in slips, pumps off" 2001.050 123.150
110 "in slips, pumps off" 2001.100 123.600
115 "in slips, pumps off" 2001.150 123.750
