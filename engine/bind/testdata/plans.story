# Plans as they are bound, before any rule.

plan
SELECT 1 + 1
----
compute: 1 + 1
  one row

plan
SELECT id, temp FROM hall WHERE temp > 8 ORDER BY temp DESC LIMIT 3
----
limit 3
  sort: temp DESC
    columns: id, temp
      keep where: temp > 8
        read campaign hall: id, x, y, z, temp, area

plan
SELECT * FROM hall
----
columns: id, x, y, z, temp, area
  read campaign hall: id, x, y, z, temp, area

plan
SELECT DISTINCT area FROM hall ORDER BY area
----
sort: area
  distinct rows
    columns: area
      read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall ORDER BY temp, 1 LIMIT 2 OFFSET 1
----
limit 2 offset 1
  columns: id
    sort: temp, id
      columns: id, temp
        read campaign hall: id, x, y, z, temp, area

plan
SELECT AVG(temp) AS plain, AVG(temp) WEIGHTED BY volume AS by_space, SHARE(temp > :limit) WEIGHTED BY volume AS over_limit, SUM(volume) AS room
FROM CELLS OF hall
----
columns: "AVG(temp)" AS plain, "AVG(temp) WEIGHTED BY volume" AS by_space, "SHARE(temp > :limit) WEIGHTED BY volume" AS over_limit, "SUM(volume)" AS room
  aggregate all rows: AVG(temp), AVG(temp) WEIGHTED BY volume, SHARE(temp > :limit) WEIGHTED BY volume, SUM(volume)
    cells of hall within air: id, x, y, z, temp, own_area, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face, hidden
      read campaign hall: id, x, y, z, temp, area

columns
SELECT AVG(temp) AS plain, AVG(temp) WEIGHTED BY volume AS by_space, SHARE(temp > :limit) WEIGHTED BY volume AS over_limit, SUM(volume) AS room
FROM CELLS OF hall
----
plain REAL [°C]
by_space REAL [°C]
over_limit REAL
room REAL [m³]

plan
SELECT t, AVG(temp) WEIGHTED BY volume AS mean
FROM CELLS OF (SELECT s.id, s.x, s.y, s.z, l.t, l.temp FROM hall s JOIN log l ON l.logger = s.id WHERE l.temp IS NOT NULL) FOR EACH t WITHIN air
GROUP BY t ORDER BY t
----
sort: t
  columns: t, "AVG(temp) WEIGHTED BY volume" AS mean
    group by t: AVG(temp) WEIGHTED BY volume
      cells of (query) within air for each t: id, x, y, z, t, temp, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face, hidden
        columns: id, x, y, z, t, temp
          keep where: temp IS NOT NULL
            inner join on logger = id
              read campaign hall: id, x, y, z, temp, area
              read table log: logger, t, temp, co2, n, ok

columns
SELECT * FROM CELLS OF hall
----
id TEXT
x REAL [m]
y REAL [m]
z REAL [m]
temp REAL [°C]
own_area TEXT
volume REAL [m³]
area REAL [m²]
faces INTEGER
edges INTEGER
vertices INTEGER
neighbours INTEGER
bounded BOOLEAN
clipped BOOLEAN
wall_area REAL [m²]
cx REAL [m]
cy REAL [m]
cz REAL [m]
farthest REAL [m]
nearest_face REAL [m]
note: SELECT * leaves out hidden, which cost much: name them to get them

columns
SELECT * FROM CONTACTS OF walk FOR EACH pass UNCLIPPED
----
pass INTEGER
a INTEGER
b INTEGER
distance REAL [m]
area REAL [m²]
mx REAL [m]
my REAL [m]
mz REAL [m]

# A query has no solid but the one that it is given.
plan
SELECT id, volume FROM CELLS OF (SELECT id, x, y, z FROM hall)
----
columns: id, volume
  cells of (query): id, x, y, z, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face, hidden
    columns: id, x, y, z
      read campaign hall: id, x, y, z, temp, area
note: CELLS OF (query) has no WITHIN, so its cells end nowhere: only a campaign named after OF brings its solid along

# A campaign without a solid says nothing here: its unbounded cells will.
plan
SELECT id, volume FROM CELLS OF walk
----
columns: id, volume
  cells of walk: id, x, y, z, dust, pass, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face, hidden
    read campaign walk: id, x, y, z, dust, pass

plan
SELECT logger, COUNT(temp) AS got FROM log GROUP BY logger HAVING COUNT(temp) < 0.99 * 672 ORDER BY got
----
sort: got
  columns: logger, "COUNT(temp)" AS got
    keep having: "COUNT(temp)" < 0.99 * 672
      group by logger: COUNT(temp)
        read table log: logger, t, temp, co2, n, ok

plan
SELECT FLOOR_TO(t, INTERVAL '6' HOUR) AS since, MAX(temp) - MIN(temp) AS spread FROM log GROUP BY FLOOR_TO(t, INTERVAL '6' HOUR) ORDER BY since
----
sort: since
  compute: "FLOOR_TO(t, INTERVAL '6' HOUR)" AS since, "MAX(temp)" - "MIN(temp)" AS spread
    group by FLOOR_TO(t, INTERVAL '6' HOUR): MAX(temp), MIN(temp)
      read table log: logger, t, temp, co2, n, ok

plan
SELECT logger AS l, COUNT(*) FROM log GROUP BY 1 HAVING COUNT(*) > 3 ORDER BY COUNT(*) DESC, AVG(temp)
----
columns: l, "COUNT(*)"
  sort: "COUNT(*)" DESC, "AVG(temp)"
    columns: logger AS l, "COUNT(*)", "AVG(temp)"
      keep having: "COUNT(*)" > 3
        group by logger: COUNT(*), AVG(temp)
          read table log: logger, t, temp, co2, n, ok

# An alias stands for its expression in GROUP BY, HAVING and ORDER BY, where no column has its name.
plan
SELECT temp > 8 AS warm, COUNT(*) AS many FROM log GROUP BY warm HAVING many > 3 ORDER BY many + 1
----
columns: warm, many
  sort: "many + 1"
    compute: "temp > 8" AS warm, "COUNT(*)" AS many, "COUNT(*)" + 1 AS many + 1
      keep having: "COUNT(*)" > 3
        group by temp > 8: COUNT(*)
          read table log: logger, t, temp, co2, n, ok

# … where a column has it, that is meant, and it is said.
plan
SELECT FLOOR_TO(t, INTERVAL '1' HOUR) AS t, COUNT(*) FROM log GROUP BY t
----
compute: FLOOR_TO(t, INTERVAL '1' HOUR) AS t, "COUNT(*)"
  group by t: COUNT(*)
    read table log: logger, t, temp, co2, n, ok
note: GROUP BY t groups by the column t of log, not by the item of SELECT that is called so

plan
SELECT COUNT(DISTINCT logger), SUM(n) FILTER (WHERE ok) AS good, FIRST(temp ORDER BY t DESC) FROM log
----
columns: "COUNT(DISTINCT logger)", "SUM(n) FILTER (WHERE ok)" AS good, "FIRST(temp ORDER BY t DESC)"
  aggregate all rows: COUNT(DISTINCT logger), SUM(n) FILTER (WHERE ok), FIRST(temp ORDER BY t DESC)
    read table log: logger, t, temp, co2, n, ok

plan
SELECT SUM(temp * n) / SUM(n) + SUM(n) FROM log
----
compute: "SUM(temp * n)" / "SUM(n)" + "SUM(n)" AS SUM(temp * n) / SUM(n) + SUM(n)
  aggregate all rows: SUM(temp * n), SUM(n)
    read table log: logger, t, temp, co2, n, ok

plan
SELECT h.id, l.temp, h.temp AS other FROM hall AS h LEFT JOIN log l ON h.id = l.logger AND l.temp > 5
----
columns: id, temp, temp AS other
  left join on id = logger AND temp > 5
    read campaign hall: id, x, y, z, temp, area
    read table log: logger, t, temp, co2, n, ok

plan
SELECT * FROM hall JOIN (SELECT logger AS id, AVG(temp) AS mean FROM log GROUP BY logger) m USING (id)
----
columns: id, x, y, z, temp, area, mean
  columns: id, x, y, z, temp, area, id, mean
    inner join on id = id
      read campaign hall: id, x, y, z, temp, area
      columns: logger AS id, "AVG(temp)" AS mean
        group by logger: AVG(temp)
          read table log: logger, t, temp, co2, n, ok

columns
SELECT * FROM hall JOIN (SELECT logger AS id, AVG(temp) AS mean FROM log GROUP BY logger) m USING (id)
----
id TEXT
x REAL [m]
y REAL [m]
z REAL [m]
temp REAL [°C]
area TEXT
mean REAL [°C]

plan
SELECT a.id, b.id FROM hall a, hall b WHERE a.id < b.id
----
columns: id, id
  keep where: id < id
    cross join
      read campaign hall: id, x, y, z, temp, area
      read campaign hall: id, x, y, z, temp, area

plan
WITH warm (who, degrees) AS (SELECT id, temp FROM hall WHERE temp > 5), two AS (SELECT who FROM warm) SELECT COUNT(*) FROM two CROSS JOIN warm
----
columns: "COUNT(*)"
  aggregate all rows: COUNT(*)
    cross join
      columns: who
        rows of warm
      rows of warm

plan
SELECT id FROM hall UNION ALL SELECT logger FROM log ORDER BY id LIMIT 5
----
limit 5
  sort: id
    union all
      columns: id
        read campaign hall: id, x, y, z, temp, area
      columns: logger
        read table log: logger, t, temp, co2, n, ok

columns
SELECT n FROM log UNION SELECT temp FROM log
----
n REAL

plan
VALUES (1, 'a'), (2.5, NULL)
----
values: 2 rows

columns
SELECT column1 AS n, column2 FROM (VALUES (1, 'a'), (2.5, NULL)) AS v
----
n REAL
column2 TEXT

columns
SELECT CASE WHEN temp > 8 THEN 'warm' END AS word, CAST(n AS REAL) r, EXTRACT(HOUR FROM t) AS hour, n / 2 AS half, temp * temp, NOT ok, -n FROM log
----
word TEXT
r REAL
hour INTEGER
half REAL
temp * temp REAL [°C²]
NOT ok BOOLEAN
-n INTEGER

plan
SELECT id FROM (hall JOIN walk ON hall.x = walk.x) AS j (id, x) 
----
input:1: 2 names for the 12 columns of hall or walk
  SELECT id FROM (hall JOIN walk ON hall.x = walk.x) AS j (id, x)
                                                           ^^^^^

plan
SELECT j.a FROM (SELECT id, x FROM hall) AS j (a, b) WHERE j.b > 1
----
columns: a
  keep where: b > 1
    columns: id, x
      read campaign hall: id, x, y, z, temp, area

# The campaign's own column called area is read as own_area.
columns
SELECT own_area, area FROM CELLS OF hall
----
own_area TEXT
area REAL [m²]

plan
SELECT c.id, k.b FROM CELLS OF hall AS c JOIN CONTACTS OF hall AS k ON k.a = c.id WHERE c.volume > 5
----
columns: id, b
  keep where: volume > 5
    inner join on a = id
      cells of hall within air: id, x, y, z, temp, own_area, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face, hidden
        read campaign hall: id, x, y, z, temp, area
      contacts of hall within air: a, b, distance, area, mx, my, mz
        read campaign hall: id, x, y, z, temp, area

# Words of relations and clauses are ordinary names.
columns
SELECT id AS number, temp AS count, x AS cells FROM hall
----
number TEXT
count REAL [°C]
cells REAL [m]

plan
SELECT number FROM (SELECT id AS number FROM hall) AS each
----
columns: number
  columns: id AS number
    read campaign hall: id, x, y, z, temp, area

plan
SELECT "Temp", Temp, temp FROM "Cases"
----
columns: Temp, Temp, temp
  read table Cases: Temp, temp, "x

# AVG(temp) is what is called temp where single readings have no meaning any more.
plan
SELECT logger, AVG(temp) AS temp FROM log GROUP BY logger HAVING temp > 5 ORDER BY ABS(temp - 5)
----
columns: logger, temp
  sort: "ABS(temp - 5)"
    compute: logger, "AVG(temp)" AS temp, ABS("AVG(temp)" - 5) AS ABS(temp - 5)
      keep having: "AVG(temp)" > 5
        group by logger: AVG(temp)
          read table log: logger, t, temp, co2, n, ok
