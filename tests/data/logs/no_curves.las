~Version
 VERS. 2.0 : v
~ASCII
0 1 2
