# Queries inside expressions, set operations, all joins, WITH used twice.

plan
SELECT * FROM hall h RIGHT JOIN log l ON h.id = l.logger
----
columns: id, x, y, z, temp, area, logger, t, temp, co2, n, ok
  columns: id, x, y, z, temp, area, logger, t, temp, co2, n, ok
    left join on id = logger
      read table log: logger, t, temp, co2, n, ok
      read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall EXCEPT SELECT logger FROM log
----
except
  columns: id
    read campaign hall: id, x, y, z, temp, area
  columns: logger
    read table log: logger, t, temp, co2, n, ok

plan
SELECT id FROM hall INTERSECT SELECT logger FROM log
----
intersect
  columns: id
    read campaign hall: id, x, y, z, temp, area
  columns: logger
    read table log: logger, t, temp, co2, n, ok

plan
SELECT (SELECT 1) FROM hall
----
compute: (query) AS (SELECT 1)
  read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall WHERE id IN (SELECT logger FROM log)
----
columns: id
  keep where: id IN (query of log)
    read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall WHERE EXISTS (SELECT * FROM log)
----
columns: id
  keep where: EXISTS (query of log)
    read campaign hall: id, x, y, z, temp, area

plan
SELECT t AT TIME ZONE 'Europe/Zurich' FROM log
----
compute: t AT TIME ZONE 'Europe/Zurich'
  read table log: logger, t, temp, co2, n, ok

plan
SELECT * FROM hall FULL JOIN log ON id = logger
----
columns: id, x, y, z, temp, area, logger, t, temp, co2, n, ok
  union all
    left join on id = logger
      read campaign hall: id, x, y, z, temp, area
      read table log: logger, t, temp, co2, n, ok
    compute: NULL AS id, NULL AS x, NULL AS y, NULL AS z, NULL AS temp, NULL AS area, logger, t, temp, co2, n, ok
      keep rows without a match on id = logger
        read table log: logger, t, temp, co2, n, ok
        read campaign hall: id, x, y, z, temp, area


plan
WITH a AS (SELECT id FROM hall), b AS (SELECT a.id FROM a JOIN a a2 USING (id)), c AS (SELECT b.id FROM b JOIN b b2 USING (id)),
  d AS (SELECT c.id FROM c JOIN c c2 USING (id)), e AS (SELECT d.id FROM d JOIN d d2 USING (id)), f AS (SELECT e.id FROM e JOIN e e2 USING (id)),
  g AS (SELECT f.id FROM f JOIN f f2 USING (id)), h AS (SELECT g.id FROM g JOIN g g2 USING (id)), i AS (SELECT h.id FROM h JOIN h h2 USING (id)),
  j AS (SELECT i.id FROM i JOIN i i2 USING (id)), k AS (SELECT j.id FROM j JOIN j j2 USING (id)), l AS (SELECT k.id FROM k JOIN k k2 USING (id))
SELECT * FROM l
----
columns: id
  columns: id
    columns: id, id
      inner join on id = id
        rows of k
        rows of k

plan
SELECT h.id, (SELECT AVG(l.temp) FROM log l WHERE l.logger = h.id) AS mean FROM hall h
----
compute: id, (query of log) AS mean
  read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall h WHERE EXISTS (SELECT * FROM log WHERE logger = h.id AND t > :since)
----
columns: id
  keep where: EXISTS (query of log)
    read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall WHERE temp > (SELECT AVG(temp) FROM hall)
----
columns: id
  keep where: temp > (query of hall)
    read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall h WHERE h.id NOT IN (SELECT logger FROM log WHERE temp > h.temp)
----
columns: id
  keep where: id NOT IN (query of log)
    read campaign hall: id, x, y, z, temp, area

plan
SELECT area, COUNT(*) FROM hall h GROUP BY area HAVING COUNT(*) > (SELECT COUNT(*) FROM walk w WHERE w.dust > MAX(h.temp))
----
columns: area, "COUNT(*)"
  keep having: "COUNT(*)" > (query of walk)
    group by area: COUNT(*), MAX(h.temp)
      read campaign hall: id, x, y, z, temp, area

plan
SELECT id, (SELECT COUNT(*) FROM walk w WHERE EXISTS (SELECT * FROM log WHERE logger = h.id AND n = w.id)) FROM hall h
----
compute: id, (query of log, walk) AS (SELECT COUNT(*) FROM walk w WHERE EXISTS (SELECT * FROM log WHERE logger = h.id AND n = w.id))
  read campaign hall: id, x, y, z, temp, area

plan
SELECT CASE WHEN ok THEN (SELECT MAX(temp) FROM hall) ELSE 0 END FROM log
----
compute: CASE WHEN ok THEN (query of hall) ELSE 0 END AS CASE WHEN ok THEN (SELECT MAX(temp) FROM hall) ELSE 0 END
  read table log: logger, t, temp, co2, n, ok

plan
SELECT a.id FROM hall a JOIN hall b ON a.temp = (SELECT MAX(c.temp) FROM hall c WHERE c.id <> b.id)
----
columns: id
  inner join on temp = (query of hall)
    read campaign hall: id, x, y, z, temp, area
    read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall UNION SELECT logger FROM log INTERSECT ALL SELECT 'L1'
----
distinct rows
  union all
    columns: id
      read campaign hall: id, x, y, z, temp, area
    intersect all
      columns: logger
        read table log: logger, t, temp, co2, n, ok
      compute: 'L1'
        one row

plan
SELECT * FROM hall FULL JOIN (SELECT logger AS id, n FROM log) l USING (id)
----
columns: id, x, y, z, temp, area, n
  compute: COALESCE(id, id) AS id, id, x, y, z, temp, area, id, n
    union all
      left join on id = id
        read campaign hall: id, x, y, z, temp, area
        rows of right side of FULL JOIN
      compute: NULL AS id, NULL AS x, NULL AS y, NULL AS z, NULL AS temp, NULL AS area, id, n
        keep rows without a match on id = id
          rows of right side of FULL JOIN
          read campaign hall: id, x, y, z, temp, area

plan
SELECT j.id, j.n FROM (hall LEFT JOIN (SELECT logger AS id, n FROM log) l USING (id)) AS j
----
columns: id, n
  columns: id, x, y, z, temp, area, id, n
    left join on id = id
      read campaign hall: id, x, y, z, temp, area
      columns: logger AS id, n
        read table log: logger, t, temp, co2, n, ok

plan
WITH w AS (SELECT id, temp FROM hall) SELECT * FROM w a JOIN w b ON a.temp < b.temp
----
columns: id, temp, id, temp
  inner join on temp < temp
    rows of w
    rows of w

plan
WITH w AS (SELECT id, temp FROM hall) SELECT id FROM w WHERE temp > 5
----
columns: id
  keep where: temp > 5
    columns: id, temp
      read campaign hall: id, x, y, z, temp, area

plan
SELECT t AT TIME ZONE INTERVAL '1' HOUR, TRIM('0' FROM logger) FROM log
----
compute: t AT TIME ZONE INTERVAL '1' HOUR, TRIM('0' FROM logger)
  read table log: logger, t, temp, co2, n, ok

plan
SELECT (SELECT MAX(v) FROM (VALUES (h.temp), (h.x)) AS m (v)) FROM hall h
----
compute: (query) AS (SELECT MAX(v) FROM (VALUES (h.temp), (h.x)) AS m (v))
  read campaign hall: id, x, y, z, temp, area

plan
SELECT id FROM hall h WHERE EXISTS (SELECT * FROM log WHERE tmep > 5)
----
input:1: there is no column 'tmep' in log, nor outside in hall (did you mean 'temp'?)
  SELECT id FROM hall h WHERE EXISTS (SELECT * FROM log WHERE tmep > 5)
                                                              ^^^^

plan
SELECT id FROM hall h WHERE EXISTS (SELECT * FROM log WHERE q.temp > 5)
----
input:1: no source here is called 'q', nor outside of the query (there is log)
  SELECT id FROM hall h WHERE EXISTS (SELECT * FROM log WHERE q.temp > 5)
                                                              ^

plan
SELECT id FROM hall h WHERE EXISTS (SELECT * FROM log l WHERE l.x > 5)
----
input:1: there is no column 'x' in log (VERTICES OF log has it)
  SELECT id FROM hall h WHERE EXISTS (SELECT * FROM log l WHERE l.x > 5)
                                                                  ^

plan
SELECT (SELECT id, temp FROM hall)
----
input:1: a query that stands for a value has one column, and this one has 2 (name the one column that is meant)
  SELECT (SELECT id, temp FROM hall)
         ^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall WHERE id IN (SELECT id, temp FROM hall)
----
input:1: the query of IN has one column, and this one has 2 (name the one column that is meant)
  SELECT id FROM hall WHERE id IN (SELECT id, temp FROM hall)
                                   ^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall WHERE id IN (SELECT temp FROM hall)
----
input:1: id (TEXT) cannot be compared with temp (REAL) (CAST(id AS REAL) reads a text as a number)
  SELECT id FROM hall WHERE id IN (SELECT temp FROM hall)
                            ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall WHERE temp IN (SELECT co2 FROM log)
----
input:1: temp is in °C and co2 in ppm: they cannot be compared with each other (CAST(co2 AS REAL) drops the unit)
  SELECT id FROM hall WHERE temp IN (SELECT co2 FROM log)
                            ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT area, (SELECT MAX(n) FROM log WHERE logger = h.id) FROM hall h GROUP BY area
----
input:1: the column 'id' has many values where SELECT has one row for each group (add it to GROUP BY, or take MIN(id), MAX(id) …)
  SELECT area, (SELECT MAX(n) FROM log WHERE logger = h.id) FROM hall h GROUP BY area
                                                      ^^^^

plan
SELECT id FROM hall LIMIT (SELECT 1)
----
input:1: a query cannot stand here (here a value is needed before any query runs: LET n = (SELECT …); before, and :n here)
  SELECT id FROM hall LIMIT (SELECT 1)
                            ^^^^^^^^^^

plan
SELECT (WITH w AS (SELECT h.temp AS v) SELECT COUNT(*) FROM w WHERE EXISTS (SELECT * FROM w x WHERE x.v > 5)) FROM hall h
----
input:1: a name of WITH that depends on a row outside, in a query further inside, is not there yet (put its query there)
  … FROM w WHERE EXISTS (SELECT * FROM w x WHERE x.v > 5)) FROM hall h
                                       ^

plan
SELECT t AT TIME ZONE 'Europe/Nowhere' FROM log
----
input:1: there is no time zone 'Europe/Nowhere' (zones are called as in 'Europe/Zurich', or '+01:00' and the like)
  SELECT t AT TIME ZONE 'Europe/Nowhere' FROM log
                        ^^^^^^^^^^^^^^^^

plan
SELECT n AT TIME ZONE 'UTC' FROM log
----
input:1: AT TIME ZONE needs TIMESTAMP here, not INTEGER
  SELECT n AT TIME ZONE 'UTC' FROM log
         ^

plan
SELECT TRIM(logger, ' ') FROM log
----
input:1: TRIM is written TRIM(text), or TRIM(' ' FROM text) for a character of its own
  SELECT TRIM(logger, ' ') FROM log
         ^^^^^^^^^^^^^^^^^

plan
SELECT id, temp FROM hall EXCEPT SELECT logger FROM log
----
input:1: EXCEPT joins rows of equal columns, but its sides have 2 columns and 1
  SELECT id, temp FROM hall EXCEPT SELECT logger FROM log
                                   ^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall INTERSECT SELECT temp FROM hall
----
input:1: column 1 of INTERSECT is TEXT ('id') on one side and REAL ('temp') on the other (CAST one of them)
  SELECT id FROM hall INTERSECT SELECT temp FROM hall
                                ^^^^^^^^^^^^^^^^^^^^^

plan
SELECT * FROM hall RIGHT JOIN log USING (id)
----
input:1: there is no column 'id' in log (it has logger, t, temp, co2, n, ok)
  SELECT * FROM hall RIGHT JOIN log USING (id)
                                           ^^

columns
SELECT * FROM walk RIGHT JOIN (SELECT n AS id, ok FROM log) l USING (id)
----
id INTEGER
x REAL [m]
y REAL [m]
z REAL [m]
dust REAL
pass INTEGER
ok BOOLEAN

columns
SELECT (SELECT MAX(temp) FROM hall) AS top, EXISTS (SELECT * FROM log) AS some, id IN (SELECT logger FROM log) AS logged FROM hall
----
top REAL [°C]
some BOOLEAN
logged BOOLEAN
