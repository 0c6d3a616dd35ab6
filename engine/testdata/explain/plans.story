# Plans are read from the bottom: what a step takes its rows from stands below
# it, further in. Rows with ~ are estimates, others are counted. Times are masked.

# A table as it lies.
ask
EXPLAIN SELECT * FROM log;
----
 rows  step
36047  columns: t, logger, temp
36047    read table log: t, logger, temp

# What a condition leaves is estimated; the condition moves to the rows.
ask
EXPLAIN SELECT l.logger, l.temp FROM (SELECT * FROM log) l WHERE l.temp IS NOT NULL AND l.logger = 'L17' AND temp > :upper;
----
 rows  step
 ~222  columns: logger, temp
 ~222    columns: logger, temp
 ~222      keep where: temp IS NOT NULL AND logger = 'L17' AND temp > 8
36047        read table log: logger, temp

ask
EXPLAIN SELECT COUNT(*) FROM log WHERE logger IN ('L01', 'L02', 'L03') AND t BETWEEN TIMESTAMP '2031-04-07' AND TIMESTAMP '2031-04-08';
----
 rows  step
    1  columns: "COUNT(*)"
    1    aggregate all rows: COUNT(*)
 ~501      keep where: logger IN ('L01', 'L02', 'L03') AND t BETWEEN TIMESTAMP '2031-04-07 00:00:00' AND TIMESTAMP '2031-04-08 00:00:00'
36047        read table log: t, logger

# Nothing can be left.
ask
EXPLAIN SELECT * FROM log WHERE 1 = 2;
----
 rows  step
    0  columns: t, logger, temp
    0    keep where: FALSE
36047      read table log: t, logger, temp

# One site by its identifier: one cell, of a partition that all make.
ask
EXPLAIN SELECT id, volume FROM CELLS OF hall WHERE id = 'L18';
----
rows  step
   1  columns: id, volume
   1    cells of hall within air: id, volume; only id = 'L18'
            geometry: volume of 1 cell, one by one, TIME
  54      read campaign hall: id, x, y, z

# All cells; one site lies outside the solid.
ask
EXPLAIN SELECT * FROM CELLS OF hall;
----
rows  step
  53  columns: id, x, y, z, level, place, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face
  53    cells of hall within air: id, x, y, z, level, place, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face
            geometry: volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face of 53 cells, one by one, TIME
  54      read campaign hall: id, x, y, z, level, place

# Only which sites have a cell.
ask
EXPLAIN SELECT COUNT(*) FROM CELLS OF hall;
----
rows  step
   1  columns: "COUNT(*)"
   1    aggregate all rows: COUNT(*)
  53      cells of hall within air: no columns
              geometry: nothing but which sites have a cell
  54        read campaign hall: id, x, y, z

ask
EXPLAIN SELECT b, area FROM CONTACTS OF placed WITHIN air WHERE a = 'L23' ORDER BY area DESC, b LIMIT 6;
----
rows  step
  ~6  limit 6
  ~6    sort: area DESC, b, first 6
 ~16      columns: b, area
 ~16        contacts of placed within air: b, area; only a = 'L23'
                geometry: contacts of 1 cell, one by one, TIME
  54          compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
  54            read campaign hall: id, x, y, z

# Partitions of equal sites are computed once.
ask
EXPLAIN SELECT FLOOR_TO(t, INTERVAL '6' HOUR) AS since, AVG(temp) WEIGHTED BY volume AS mean
FROM CELLS OF readings FOR EACH t WITHIN air OMITTING ('L23') BECAUSE 'drifts' GROUP BY FLOOR_TO(t, INTERVAL '6' HOUR) ORDER BY since;
----
  rows  step
   ~28  sort: since
   ~28    columns: "FLOOR_TO(t, INTERVAL '6' HOUR)" AS since, "AVG(temp) WEIGHTED BY volume" AS mean
   ~28      group by FLOOR_TO(t, INTERVAL '6' HOUR): AVG(temp) WEIGHTED BY volume
 35339        cells of readings within air for each t omitting 'L23': id, t, temp, volume
                  geometry: volume of 1654 cells in 672 partitions, 32 of them different, one by one, TIME
~36010          columns: id, x, y, z, t, temp
~36010            inner join by hash: id = logger
    54              compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
    54                read campaign hall: id, x, y, z
~36010              keep where: temp IS NOT NULL
 36047                read table log: t, logger, temp

# One instant of them.
ask
EXPLAIN SELECT SUM(volume) FROM CELLS OF readings FOR EACH t WITHIN air WHERE t = TIMESTAMP '2031-04-09 12:00:00';
----
  rows  step
     1  columns: "SUM(volume)"
     1    aggregate all rows: SUM(volume)
    54      cells of readings within air for each t: id, volume; only t = TIMESTAMP '2031-04-09 12:00:00'
                geometry: volume of 54 cells, one by one, TIME
~36010        columns: id, x, y, z, t
~36010          inner join by hash: id = logger
    54            compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
    54              read campaign hall: id, x, y, z
~36010            keep where: temp IS NOT NULL
 36047              read table log: t, logger, temp

# The groups of a column are counted, those of several at most their product.
ask
EXPLAIN SELECT logger, AVG(temp) FROM log GROUP BY logger HAVING COUNT(*) < 600;
----
 rows  step
  ~18  columns: logger, "AVG(temp)"
  ~18    keep having: "COUNT(*)" < 600
   54      group by logger: AVG(temp), COUNT(*)
36047        read table log: logger, temp

ask
EXPLAIN SELECT DISTINCT level FROM hall;
----
rows  step
   3  distinct rows
  54    columns: level
  54      read campaign hall: level

ask
EXPLAIN SELECT level, EXTRACT(HOUR FROM t) AS hour, MAX(temp) FROM readings GROUP BY level, EXTRACT(HOUR FROM t);
----
  rows  step
   ~72  columns: level, "EXTRACT(HOUR FROM t)" AS hour, "MAX(temp)"
   ~72    group by level, EXTRACT(HOUR FROM t): MAX(temp)
~36010      columns: level, t, temp
~36010        columns: level, t, temp
~36010          inner join by hash: logger = id
~36010            keep where: temp IS NOT NULL
 36047              read table log: t, logger, temp
    54            columns: id, level
    54              read campaign hall: id, level

# Joins: by hash, of pairs, to the left.
ask
EXPLAIN SELECT c.id, c.volume, g.over_limit FROM CELLS OF placed WITHIN air AS c JOIN loggers g ON g.id = c.id ORDER BY g.over_limit DESC, id LIMIT 8;
----
  rows  step
    ~8  limit 8
    ~8    sort: over_limit DESC, id, first 8
   ~54      columns: id, volume, over_limit
   ~54        inner join by hash: id = id
    54          cells of placed within air: id, volume
                    geometry: volume of 54 cells, one by one, TIME
    54            compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
    54              read campaign hall: id, x, y, z
   ~54          columns: id, "SHARE(temp > :upper)" AS over_limit
   ~54            group by id: SHARE(temp > :upper)
~36010              columns: id, temp
~36010                columns: id, temp
~36010                  inner join by hash: logger = id
~36010                    keep where: temp IS NOT NULL
 36047                      read table log: logger, temp
    54                    columns: id
    54                      read campaign hall: id

ask
EXPLAIN SELECT a.id, b.id FROM hall a CROSS JOIN hall b;
----
rows  step
2916  columns: id, id
2916    cross join
  54      read campaign hall: id
  54      read campaign hall: id

ask
EXPLAIN SELECT a.id, b.id FROM hall a LEFT JOIN hall b ON b.x < a.x AND b.level = 'top';
----
rows  step
~324  columns: id, id
~324    left join on x < x
  54      read campaign hall: id, x
 ~18      keep on: level = 'top'
  54        read campaign hall: id, x, level

# The cells of a query that itself asks for cells are not looked at.
ask
EXPLAIN SELECT COUNT(*), SUM(volume) FROM CELLS OF (SELECT id, x, y, z FROM CELLS OF hall WHERE volume > 50) WITHIN air;
----
rows  step
   1  columns: "COUNT(*)", "SUM(volume)"
   1    aggregate all rows: COUNT(*), SUM(volume)
 ~18      cells of (query) within air: volume
              geometry: volume of about 18 cells, one by one, TIME
 ~18        columns: id, x, y, z
 ~18          keep where: volume > 50
  53            cells of hall within air: id, x, y, z, volume
                    geometry: volume of 53 cells, one by one, TIME
  54              read campaign hall: id, x, y, z

# Nothing below LIMIT 0 runs.
ask
EXPLAIN MEASURED SELECT * FROM hall LIMIT 0;
----
estimated     rows  seconds  MB  step
        0        0   ?.????      limit 0
       54  not run                 columns: id, x, y, z, level, place
       54  not run                   read campaign hall: id, x, y, z, level, place

ask
EXPLAIN SELECT 1 + 1 AS two UNION ALL SELECT 3;
----
rows  step
   2  union all
   1    compute: 2 AS two
   1      one row
   1    compute: 3
   1      one row

# What cannot be bound cannot be explained, and neither what cannot be run.
ask
EXPLAIN SELECT volmue FROM CELLS OF hall;
----
input:1: there is no column 'volmue' in CELLS OF hall (did you mean 'volume'?)
  EXPLAIN SELECT volmue FROM CELLS OF hall;
                 ^^^^^^

ask
EXPLAIN SELECT id, volume FROM CELLS OF hall OMITTING ('L99') BECAUSE 'moved';
----
input:1: there is no site 'L99' in hall to leave out (did you mean 'L09'?)
  EXPLAIN SELECT id, volume FROM CELLS OF hall OMITTING ('L99') BECAUSE 'moved';
                                                         ^^^^^

# Rows that are no sites: as many as there usually are.
ask
EXPLAIN SELECT COUNT(*) FROM TETRAHEDRA OF placed;
----
rows  step
   1  columns: "COUNT(*)"
   1    aggregate all rows: COUNT(*)
~366      tetrahedra of placed: no columns
              geometry: tetrahedra of about 54 sites, all at once, TIME
  54        compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
  54          read campaign hall: id, x, y, z

ask
EXPLAIN SELECT MAX(radius) FROM GAPS OF readings FOR EACH t WITHIN air WHERE t < TIMESTAMP '2031-04-08';
----
  rows  step
     1  columns: "MAX(radius)"
     1    aggregate all rows: MAX(radius)
~10358      gaps of readings within air for each t: radius; only t < TIMESTAMP '2031-04-08 00:00:00'
                geometry: gaps of about 319 sites in 96 partitions, 6 of them different, all at once, TIME
~36010        columns: id, x, y, z, t
~36010          inner join by hash: id = logger
    54            compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
    54              read campaign hall: id, x, y, z
~36010            keep where: temp IS NOT NULL
 36047              read table log: t, logger, temp

# Join order: what nothing ties together yet waits; the order of the rows stays.
ask
EXPLAIN SELECT a.logger, b.t, h.level FROM log a, log b, hall h WHERE a.logger = h.id AND b.logger = h.id AND h.id = 'L05' AND b.temp = a.temp;
----
 rows  step
 ~459  columns: logger, t, level
 ~459    columns: logger, t, level
 ~459      sort: "row of log", "row of log", "row of hall"
 ~459        inner join by hash: temp = temp, id = logger
 ~668          inner join by hash: logger = id
36047            number the rows
36047              read table log: logger, temp
   ~1            keep where: id = 'L05'
   54              number the rows
   54                read campaign hall: id, level
36047          number the rows
36047            read table log: t, logger, temp

ask
EXPLAIN SELECT COUNT(*) FROM log a, log b, hall h WHERE a.logger = h.id AND h.id = b.logger AND h.level = 'floor';
----
    rows  step
       1  columns: "COUNT(*)"
       1    aggregate all rows: COUNT(*)
~8020903      no columns
~8020903        inner join by hash: id = logger
  ~12016          inner join by hash: logger = id
   36047            read table log: logger
     ~18            keep where: level = 'floor'
      54              read campaign hall: id, level
   36047          read table log: logger

# A LIMIT over cells computes no more cells than it takes.
ask
EXPLAIN SELECT id, volume FROM CELLS OF placed WITHIN air LIMIT 3 OFFSET 2;
----
rows  step
   3  limit 3 offset 2
   5    columns: id, volume
   5      cells of placed within air: id, volume; first 5
              geometry: volume of 5 cells, one by one, TIME
  54        compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
  54          read campaign hall: id, x, y, z
