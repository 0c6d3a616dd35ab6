# Solids, and the text that the catalog keeps of them.

solid
BOX (0,0,0) TO (30,18,7.5)
----
4050 m³
BOX (0, 0, 0) TO (30, 18, 7.5)

solid
BOX (30, 18, 7.5) TO (0, -1, (0.1 + 0.2))
----
4104 m³
BOX (30, 18, 7.5) TO (0, -1, 0.30000000000000004)

solid
PRISM ((0,0), (30,0), (30,12), (18,12), (18,18), (0,18)) HOLE ((0,0), (4,0), (4,3), (0,3)) FROM 0 TO 7.5
----
3420 m³
PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) HOLE ((0, 0), (4, 0), (4, 3), (0, 3)) FROM 0 TO 7.5

solid
PRISM 'plan.csv' FROM 0 TO :limit
----
400 m³
PRISM ((0, 0), (10, 0), (10, 5), (0, 5)) FROM 0 TO 8

solid
air
----
3510 m³
PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5

solid
(air)
----
3510 m³
PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5

solid
ENVELOPE OF hall MARGIN 1
----
1276 m³
BOX (0, 1, 0) TO (29, 12, 4)

solid
ENVELOPE OF walk
----
input:1: the envelope of 'walk' has no extent along z (widen it: ENVELOPE OF walk MARGIN 1)
  ENVELOPE OF walk
  ^^^^^^^^^^^^^^^^

solid
ENVELOPE OF log
----
input:1: 'log' is a table, not a campaign
  ENVELOPE OF log
              ^^^

solid
ENVELOPE OF hall MARGIN -1
----
input:1: MARGIN must not be negative
  ENVELOPE OF hall MARGIN -1
                          ^^

solid
BOX (0,0,0) TO (30,18,0)
----
input:1: this solid has no volume: it has no extent along z
  BOX (0,0,0) TO (30,18,0)
  ^^^^^^^^^^^^^^^^^^^^^^^^

solid
BOX (0,0,0) TO (('a'),18,1)
----
input:1: a coordinate must be a number, not TEXT
  BOX (0,0,0) TO (('a'),18,1)
                   ^^^

solid
PRISM ((0,0), (10,10), (10,0), (0,11)) FROM 0 TO 1
----
input:1: side 1 of the outline and side 3 of the outline cross at (5.2381, 5.2381) (are the corners in the order in which one walks around?)
  PRISM ((0,0), (10,10), (10,0), (0,11)) FROM 0 TO 1
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM ((0,0), (10,0), (10,10), (0,10)) HOLE ((1,1), (3,1), (3,3)) HOLE ((2,1), (3,1), (3,3)) FROM 0 TO 1
----
input:1: hole 1 and hole 2 of this prism overlap near (2.5, 1)
  PRISM ((0,0), (10,0), (10,10), (0,10)) HOLE ((1,1), (3,1), (3,3)) HOLE ((2,1), (3,1), (3,3)) FROM 0 TO 1
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM ((0,0), (10,10), (10,0), (0,10)) FROM 0 TO 1
----
input:1: the outline of this prism encloses no area
  PRISM ((0,0), (10,10), (10,0), (0,10)) FROM 0 TO 1
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM ((0,0), (10,0)) FROM 0 TO 1
----
input:1: the outline of this prism has 2 distinct corners; a ring needs three
  PRISM ((0,0), (10,0)) FROM 0 TO 1
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM ((0,0), (10,0), (20,0)) FROM 0 TO 1
----
input:1: the outline of this prism encloses no area
  PRISM ((0,0), (10,0), (20,0)) FROM 0 TO 1
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM ((0,0), (10,0), (10,10), (0,10)) HOLE ((20,20), (21,20), (21,21)) FROM 0 TO 1
----
input:1: hole 1 of this prism lies outside its outline near (20.5, 20)
  PRISM ((0,0), (10,0), (10,10), (0,10)) HOLE ((20,20), (21,20), (21,21)) FROM 0 TO 1
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM ((0,0), (10,0), (10,10), (0,10)) HOLE ((0,0), (10,0), (10,10), (0,10)) FROM 0 TO 1
----
input:1: the holes of this prism leave nothing of its plan
  PRISM ((0,0), (10,0), (10,10), (0,10)) HOLE ((0,0), (10,0), (10,10), (0,10)) FROM 0 TO 1
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM ((0,0), (10,0), (10,10), (0,10)) FROM 3 TO 3
----
input:1: this solid has no volume: it has no extent along z
  PRISM ((0,0), (10,0), (10,10), (0,10)) FROM 3 TO 3
  ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

solid
PRISM 'nowhere.csv' FROM 0 TO 1
----
input:1: the plan 'nowhere.csv' cannot be read: no such file or directory
  PRISM 'nowhere.csv' FROM 0 TO 1
        ^^^^^^^^^^^^^

solid
PRISM 'bad.csv' FROM 0 TO 1
----
input:1: the plan 'bad.csv' has no column y of numbers (a plan has the columns x and y, a corner on each line)
  PRISM 'bad.csv' FROM 0 TO 1
        ^^^^^^^^^

solid
PRISM 'gap.csv' FROM 0 TO 1
----
input:1: corner 2 of the plan 'gap.csv' has no y
  PRISM 'gap.csv' FROM 0 TO 1
        ^^^^^^^^^

solid
air MINUS BOX (0,0,0) TO (4,3,7.5)
----
3420 m³
PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5 MINUS BOX (0, 0, 0) TO (4, 3, 7.5)

solid
MESH 'hall.stl'
----
input:1: there is no file 'hall.stl' (a relative path starts at the script's folder)
  MESH 'hall.stl'
       ^^^^^^^^^^

solid
BOXES 'racks.csv'
----
input:1: there is no file 'racks.csv' (a relative path starts at the script's folder)
  BOXES 'racks.csv'
        ^^^^^^^^^^^

solid
TERRAIN 'bed.csv' TO 0
----
input:1: there is no file 'bed.csv' (did you mean 'bad.csv'?)
  TERRAIN 'bed.csv' TO 0
          ^^^^^^^^^

solid
hall
----
input:1: 'hall' is a campaign, not a solid (ENVELOPE OF hall is the box around its sites)
  hall
  ^^^^
