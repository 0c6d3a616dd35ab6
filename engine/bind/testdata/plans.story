# Plans as they are bound, before any rule.

plan
SELECT 1 + 1
----
project: 1 + 1
  one row

plan
SELECT id, temp FROM hall WHERE temp > 8 ORDER BY temp DESC LIMIT 3
----
limit 3
  sort: temp DESC
    project: id, temp
      filter where: temp > 8
        scan campaign hall: id, x, y, z, temp, area

plan
SELECT * FROM hall
----
project: id, x, y, z, temp, area
  scan campaign hall: id, x, y, z, temp, area

plan
SELECT DISTINCT area FROM hall ORDER BY area
----
sort: area
  distinct
    project: area
      scan campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall ORDER BY temp, 1 LIMIT 2 OFFSET 1
----
limit 2 offset 1
  project: id
    sort: temp, id
      project: id, temp
        scan campaign hall: id, x, y, z, temp, area

plan
SELECT AVG(temp) AS plain, AVG(temp) WEIGHTED BY volume AS by_space, SHARE(temp > :limit) WEIGHTED BY volume AS over_limit, SUM(volume) AS room
FROM CELLS OF hall
----
project: "AVG(temp)" AS plain, "AVG(temp) WEIGHTED BY volume" AS by_space, "SHARE(temp > :limit) WEIGHTED BY volume" AS over_limit, "SUM(volume)" AS room
  aggregate: AVG(temp), AVG(temp) WEIGHTED BY volume, SHARE(temp > :limit) WEIGHTED BY volume, SUM(volume)
    cells of hall: id, x, y, z, temp, own_area, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face
      scan campaign hall: id, x, y, z, temp, area

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
  project: t, "AVG(temp) WEIGHTED BY volume" AS mean
    aggregate: AVG(temp) WEIGHTED BY volume by t
      cells of (query): id, x, y, z, t, temp, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face
        project: id, x, y, z, t, temp
          filter where: temp IS NOT NULL
            inner join; where logger = id
              scan campaign hall: id, x, y, z, temp, area
              scan table log: logger, t, temp, co2, n, ok

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
project: id, volume
  cells of (query): id, x, y, z, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face
    project: id, x, y, z
      scan campaign hall: id, x, y, z, temp, area
note: CELLS OF (query) has no WITHIN, so its cells end nowhere: only a campaign named after OF brings its solid along

# A campaign without a solid says nothing here: its unbounded cells will.
plan
SELECT id, volume FROM CELLS OF walk
----
project: id, volume
  cells of walk: id, x, y, z, dust, pass, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face
    scan campaign walk: id, x, y, z, dust, pass

plan
SELECT logger, COUNT(temp) AS got FROM log GROUP BY logger HAVING COUNT(temp) < 0.99 * 672 ORDER BY got
----
sort: got
  project: logger, "COUNT(temp)" AS got
    filter having: "COUNT(temp)" < 0.99 * 672
      aggregate: COUNT(temp) by logger
        scan table log: logger, t, temp, co2, n, ok

plan
SELECT FLOOR_TO(t, INTERVAL '6' HOUR) AS since, MAX(temp) - MIN(temp) AS spread FROM log GROUP BY FLOOR_TO(t, INTERVAL '6' HOUR) ORDER BY since
----
sort: since
  project: "FLOOR_TO(t, INTERVAL '6' HOUR)" AS since, "MAX(temp)" - "MIN(temp)" AS spread
    aggregate: MAX(temp), MIN(temp) by FLOOR_TO(t, INTERVAL '6' HOUR)
      scan table log: logger, t, temp, co2, n, ok

plan
SELECT logger AS l, COUNT(*) FROM log GROUP BY 1 HAVING COUNT(*) > 3 ORDER BY COUNT(*) DESC, AVG(temp)
----
project: l, "COUNT(*)" AS COUNT(*)
  sort: "COUNT(*)" DESC, "AVG(temp)"
    project: logger AS l, "COUNT(*)" AS COUNT(*), "AVG(temp)" AS AVG(temp)
      filter having: "COUNT(*)" > 3
        aggregate: COUNT(*), AVG(temp) by logger
          scan table log: logger, t, temp, co2, n, ok

# An alias stands for its expression in GROUP BY, HAVING and ORDER BY, where no column has its name.
plan
SELECT temp > 8 AS warm, COUNT(*) AS many FROM log GROUP BY warm HAVING many > 3 ORDER BY many + 1
----
project: warm, many
  sort: "many + 1"
    project: "temp > 8" AS warm, "COUNT(*)" AS many, "COUNT(*)" + 1 AS many + 1
      filter having: "COUNT(*)" > 3
        aggregate: COUNT(*) by temp > 8
          scan table log: logger, t, temp, co2, n, ok

# … where a column has it, that is meant, and it is said.
plan
SELECT FLOOR_TO(t, INTERVAL '1' HOUR) AS t, COUNT(*) FROM log GROUP BY t
----
project: FLOOR_TO(t, INTERVAL '1' HOUR) AS t, "COUNT(*)" AS COUNT(*)
  aggregate: COUNT(*) by t
    scan table log: logger, t, temp, co2, n, ok
note: GROUP BY t groups by the column t of log, not by the item of SELECT that is called so

plan
SELECT COUNT(DISTINCT logger), SUM(n) FILTER (WHERE ok) AS good, FIRST(temp ORDER BY t DESC) FROM log
----
project: "COUNT(DISTINCT logger)" AS COUNT(DISTINCT logger), "SUM(n) FILTER (WHERE ok)" AS good, "FIRST(temp ORDER BY t DESC)" AS FIRST(temp ORDER BY t DESC)
  aggregate: COUNT(DISTINCT logger), SUM(n) FILTER (WHERE ok), FIRST(temp ORDER BY t DESC)
    scan table log: logger, t, temp, co2, n, ok

plan
SELECT SUM(temp * n) / SUM(n) + SUM(n) FROM log
----
project: "SUM(temp * n)" / "SUM(n)" + "SUM(n)" AS SUM(temp * n) / SUM(n) + SUM(n)
  aggregate: SUM(temp * n), SUM(n)
    scan table log: logger, t, temp, co2, n, ok

plan
SELECT h.id, l.temp, h.temp AS other FROM hall AS h LEFT JOIN log l ON h.id = l.logger AND l.temp > 5
----
project: id, temp, temp AS other
  left join; where id = logger AND temp > 5
    scan campaign hall: id, x, y, z, temp, area
    scan table log: logger, t, temp, co2, n, ok

plan
SELECT * FROM hall JOIN (SELECT logger AS id, AVG(temp) AS mean FROM log GROUP BY logger) m USING (id)
----
project: id, x, y, z, temp, area, mean
  inner join; where id = id
    scan campaign hall: id, x, y, z, temp, area
    project: logger AS id, "AVG(temp)" AS mean
      aggregate: AVG(temp) by logger
        scan table log: logger, t, temp, co2, n, ok

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
project: id, id
  filter where: id < id
    inner join
      scan campaign hall: id, x, y, z, temp, area
      scan campaign hall: id, x, y, z, temp, area

plan
WITH warm (who, degrees) AS (SELECT id, temp FROM hall WHERE temp > 5), two AS (SELECT who FROM warm) SELECT COUNT(*) FROM two CROSS JOIN warm
----
project: "COUNT(*)" AS COUNT(*)
  aggregate: COUNT(*)
    inner join
      project: who
        project: id, temp
          filter where: temp > 5
            scan campaign hall: id, x, y, z, temp, area
      project: id, temp
        filter where: temp > 5
          scan campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall UNION ALL SELECT logger FROM log ORDER BY id LIMIT 5
----
limit 5
  sort: id
    union
      project: id
        scan campaign hall: id, x, y, z, temp, area
      project: logger
        scan table log: logger, t, temp, co2, n, ok

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
project: a
  filter where: b > 1
    project: id, x
      scan campaign hall: id, x, y, z, temp, area

# The campaign's own column called area is read as own_area.
columns
SELECT own_area, area FROM CELLS OF hall
----
own_area TEXT
area REAL [m²]

plan
SELECT c.id, k.b FROM CELLS OF hall AS c JOIN CONTACTS OF hall AS k ON k.a = c.id WHERE c.volume > 5
----
project: id, b
  filter where: volume > 5
    inner join; where a = id
      cells of hall: id, x, y, z, temp, own_area, volume, area, faces, edges, vertices, neighbours, bounded, clipped, wall_area, cx, cy, cz, farthest, nearest_face
        scan campaign hall: id, x, y, z, temp, area
      contacts of hall: a, b, distance, area, mx, my, mz
        scan campaign hall: id, x, y, z, temp, area

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
project: number
  project: id AS number
    scan campaign hall: id, x, y, z, temp, area

plan
SELECT "Temp", Temp, temp FROM "Cases"
----
project: Temp, Temp, temp
  scan table Cases: Temp, temp, "x

# AVG(temp) is what is called temp where single readings have no meaning any more.
plan
SELECT logger, AVG(temp) AS temp FROM log GROUP BY logger HAVING temp > 5 ORDER BY ABS(temp - 5)
----
project: logger, temp
  sort: "ABS(temp - 5)"
    project: logger, "AVG(temp)" AS temp, ABS("AVG(temp)" - 5) AS ABS(temp - 5)
      filter having: "AVG(temp)" > 5
        aggregate: AVG(temp) by logger
          scan table log: logger, t, temp, co2, n, ok
