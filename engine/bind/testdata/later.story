# What the language has and the engine lacks is refused by its name.

plan
SELECT hidden FROM CELLS OF hall
----
columns: hidden
  cells of hall within air: id, x, y, z, temp, own_area, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face, hidden
    read campaign hall: id, x, y, z, temp, area

plan
SELECT * FROM VERDICTS
----
input:1: there is no campaign, table or view 'VERDICTS'
  SELECT * FROM VERDICTS
                ^^^^^^^^

plan
SELECT * FROM hall NATURAL JOIN log
----
syntax: there is no NATURAL JOIN (say which columns: JOIN … USING (…), or ON condition)
