# Views are bound where they are used.

view warm
SELECT id, x, y, z, temp FROM hall WHERE temp > :limit
----
<nil>

plan
SELECT id FROM warm
----
columns: id
  columns: id, x, y, z, temp
    keep where: temp > 8.0
      read campaign hall: id, x, y, z, temp, area

plan
SELECT id, volume FROM CELLS OF warm WITHIN air OMITTING ('L17') BECAUSE 'moved'
----
columns: id, volume
  cells of warm within air omitting 'L17': id, x, y, z, temp, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face, hidden
    columns: id, x, y, z, temp
      keep where: temp > 8.0
        read campaign hall: id, x, y, z, temp, area

view unset
SELECT id FROM hall WHERE temp > :upper
----
<nil>

# The place of an error in a view is in the view.
plan
SELECT id FROM unset
----
view unset:1: the value :upper is not set (LET upper = …; before, or --let upper=…)
  SELECT id FROM hall WHERE temp > :upper
                                   ^^^^^^

view broken
SELECT id FROM
----
<nil>

plan
SELECT id FROM broken
----
view broken:1: expected a campaign, a table, a view, a relation or a query in brackets but found the end of the statement
  SELECT id FROM
                ^

view a
SELECT * FROM b
----
<nil>

view b
SELECT * FROM a
----
<nil>

plan
SELECT * FROM a
----
view b:1: the view 'a' uses itself: a uses b uses a
  SELECT * FROM a
                ^

# A name of WITH goes before one of the catalog, and a view never sees it.
plan
WITH hall AS (SELECT 1 AS one) SELECT one, id FROM hall CROSS JOIN warm
----
columns: one, id
  cross join
    compute: 1 AS one
      one row
    columns: id, x, y, z, temp
      keep where: temp > 8.0
        read campaign hall: id, x, y, z, temp, area

plan
WITH warm AS (SELECT id FROM warm) SELECT id FROM warm
----
columns: id
  columns: id
    columns: id, x, y, z, temp
      keep where: temp > 8.0
        read campaign hall: id, x, y, z, temp, area
