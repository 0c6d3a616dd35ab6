# Nearest-site search: only rows that can be among the first ones by distance reach the
# sort, which decides their order as it would over all rows.
ask
EXPLAIN SELECT id FROM hall WHERE level = 'top' ORDER BY DISTANCE(POINT(x, y, z), POINT(3, 4, 1)) LIMIT 3;
----
rows  step
  ~3  limit 3
  ~3    columns: id
  ~3      sort: "DISTANCE(POINT(x, y, z), POINT(3, 4, 1))", first 3
  ~3        compute: id, DISTANCE(POINT(x, y, z), POINT(3, 4, 1))
  ~3          nearest-site search: 3 of hall by DISTANCE(POINT(x, y, z), POINT(3, 4, 1)), where level = 'top'
  54            read campaign hall: id, x, y, z, level

# The answer is that of the sort over all rows.
ask
SELECT id, DISTANCE(POINT(x, y, z), POINT(3, 4, 1)) AS away FROM hall WHERE level = 'top' ORDER BY away LIMIT 3;
----
id      away
           m
────────────
L03  6.23626
L12  7.12885
L09  8.22447

# The nearest other logger of each.
ask
EXPLAIN SELECT o.id, (SELECT s.id FROM hall s WHERE s.id <> o.id ORDER BY DISTANCE(POINT(s.x, s.y, s.z), POINT(o.x, o.y, o.z)) LIMIT 1) AS near FROM hall o;
----
rows  step
  54  compute: id, (query of hall) AS near
  54    read campaign hall: id, x, y, z
        (query of hall), computed for each different row outside:
  ~1      limit 1
  ~1        columns: id
  ~1          sort: "DISTANCE(POINT(s.x, s.y, s.z), POINT(o.x, o.y, o.z))", first 1
  ~1            compute: id, DISTANCE(POINT(x, y, z), POINT(outer(x), outer(y), outer(z))) AS DISTANCE(POINT(s.x, s.y, s.z), POINT(o.x, o.y, o.z))
  ~1              nearest-site search: 1 of hall by DISTANCE(POINT(x, y, z), POINT(outer(x), outer(y), outer(z))), where id <> outer(id)
  54                read campaign hall: id, x, y, z

# A bound on the distance spares a join the pairs that are too far apart.
ask
EXPLAIN MEASURED SELECT COUNT(*) FROM hall a JOIN hall b ON DISTANCE(POINT(a.x, a.y, a.z), POINT(b.x, b.y, b.z)) < 3 AND a.id < b.id;
----
estimated  rows  seconds     MB  step
        1     1   ?.????         columns: "COUNT(*)"
        1     1   ?.????  ?.???    aggregate all rows: COUNT(*)
     ~324    13   ?.????  ?.???      inner join, pairs by nearest-site search: POINT(x, y, z) within 3 of POINT(x, y, z) on id < id AND DISTANCE(POINT(x, y, z), POINT(x, y, z)) < 3
       54    54   ?.????               read campaign hall: id, x, y, z
       54    54   ?.????               read campaign hall: id, x, y, z

# So does the least distance.
ask
EXPLAIN SELECT o.id, s.id FROM hall o JOIN hall s ON DISTANCE(POINT(s.x, s.y, s.z), POINT(o.x, o.y, o.z))
  = (SELECT MIN(DISTANCE(POINT(t.x, t.y, t.z), POINT(o.x, o.y, o.z))) FROM hall t WHERE t.id <> o.id);
----
rows  step
  ~1  columns: id, id
  ~1    inner join, pairs by nearest-site search: POINT(x, y, z) within (query of hall) of POINT(x, y, z) on DISTANCE(POINT(x, y, z), POINT(x, y, z)) = (query of hall)
  54      read campaign hall: id, x, y, z
  54      read campaign hall: id, x, y, z
          (query of hall), computed for each different row outside:
   1        columns: "MIN(DISTANCE(POINT(t.x, t.y, t.z), POINT(o.x, o.y, o.z)))"
   1          aggregate all rows: MIN(DISTANCE(POINT(t.x, t.y, t.z), POINT(o.x, o.y, o.z)))
  ~1            nearest-site search: 1 of hall by DISTANCE(POINT(x, y, z), POINT(outer(x), outer(y), outer(z))), where id <> outer(id)
  54              read campaign hall: id, x, y, z

# Farthest first is no such search.
ask
EXPLAIN SELECT id FROM hall ORDER BY DISTANCE(POINT(x, y, z), POINT(3, 4, 1)) DESC LIMIT 3;
----
rows  step
   3  limit 3
   3    columns: id
   3      sort: "DISTANCE(POINT(x, y, z), POINT(3, 4, 1))" DESC, first 3
  54        compute: id, DISTANCE(POINT(x, y, z), POINT(3, 4, 1))
  54          read campaign hall: id, x, y, z

# A bound of the other side's rows: the farthest that one of them reaches bounds all pairs.
ask
EXPLAIN SELECT o.id, s.id FROM hall o JOIN hall s ON DISTANCE(POINT(s.x, s.y, s.z), POINT(o.x, o.y, o.z))
  = (SELECT MIN(DISTANCE(POINT(t.x, t.y, t.z), POINT(s.x, s.y, s.z))) FROM hall t WHERE t.id <> s.id);
----
rows  step
  ~1  columns: id, id
  ~1    inner join, pairs by nearest-site search: POINT(x, y, z) within the farthest (query of hall) of POINT(x, y, z) on DISTANCE(POINT(x, y, z), POINT(x, y, z)) = (query of hall)
  54      read campaign hall: id, x, y, z
  54      read campaign hall: id, x, y, z
          (query of hall), computed for each different row outside:
   1        columns: "MIN(DISTANCE(POINT(t.x, t.y, t.z), POINT(s.x, s.y, s.z)))"
   1          aggregate all rows: MIN(DISTANCE(POINT(t.x, t.y, t.z), POINT(s.x, s.y, s.z)))
  ~1            nearest-site search: 1 of hall by DISTANCE(POINT(x, y, z), POINT(outer(x), outer(y), outer(z))), where id <> outer(id)
  54              read campaign hall: id, x, y, z

# A condition that can fail is asked of rows that are near alone.
ask
EXPLAIN SELECT id FROM hall WHERE 1 / x < 2 ORDER BY DISTANCE(POINT(x, y, z), POINT(3, 4, 1)) LIMIT 3;
----
rows  step
  ~3  limit 3
  ~3    columns: id
  ~3      sort: "DISTANCE(POINT(x, y, z), POINT(3, 4, 1))", first 3
  ~3        compute: id, DISTANCE(POINT(x, y, z), POINT(3, 4, 1))
  ~3          nearest-site search: 3 of hall by DISTANCE(POINT(x, y, z), POINT(3, 4, 1)), where 1 / x < 2
  54            read campaign hall: id, x, y, z
