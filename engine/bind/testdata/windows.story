# Windows: where they stand, what they share, and how misuse is refused.

plan
SELECT logger, t, AVG(temp) OVER (PARTITION BY logger ORDER BY t RANGE INTERVAL '1' HOUR PRECEDING) FROM log
----
columns: logger, t, "AVG(temp) OVER (PARTITION BY logger ORDER BY t RANGE INTERVAL '1' HOUR PRECEDING)"
  window by logger, ordered by t: AVG(temp) over range from 01:00:00 before to the current
    read table log: logger, t, temp, co2, n, ok

plan
SELECT RANK() OVER (ORDER BY temp) AS r, ROW_NUMBER() OVER (ORDER BY temp) AS n, SUM(temp) OVER () AS s, MAX(temp) OVER (ORDER BY temp) AS m FROM hall ORDER BY RANK() OVER (ORDER BY temp) DESC
----
sort: r DESC
  columns: "RANK() OVER (ORDER BY temp)" AS r, "ROW_NUMBER() OVER (ORDER BY temp)" AS n, "SUM(temp) OVER ()" AS s, "MAX(temp) OVER (ORDER BY temp)" AS m
    window over all rows: SUM(temp)
      window over all rows, ordered by temp: RANK, ROW_NUMBER, MAX(temp)
        read campaign hall: id, x, y, z, temp, area

plan
SELECT area, SUM(temp) / SUM(SUM(temp)) OVER () AS share FROM hall GROUP BY area HAVING COUNT(*) > 1
----
compute: area, "SUM(temp)" / "SUM(SUM(temp)) OVER ()" AS share
  window over all rows: SUM("SUM(temp)")
    keep having: "COUNT(*)" > 1
      group by area: SUM(temp), COUNT(*)
        read campaign hall: id, x, y, z, temp, area

columns
SELECT h.temp - LAG(h.temp) OVER (ORDER BY z) AS step, VAR_POP(h.temp) OVER () AS spread, COUNT(*) OVER () AS n, LAG(t, 2, t) OVER (ORDER BY t) AS before FROM hall h CROSS JOIN log
----
step REAL [°C]
spread REAL [°C²]
n INTEGER
before TIMESTAMP

plan
SELECT SUM(temp) FILTER (WHERE n > 1) WEIGHTED BY n OVER (PARTITION BY logger) FROM log
----
columns: "SUM(temp) FILTER (WHERE n > 1) WEIGHTED BY n OVER (PARTITION BY logger)"
  window by logger: SUM(temp) where n > 1 weighted by CAST(n AS REAL)
    read table log: logger, t, temp, co2, n, ok

plan
SELECT id FROM hall WHERE RANK() OVER (ORDER BY temp) = 1
----
input:1: RANK with OVER cannot stand in WHERE: windows are computed after it (name it in a query of its own, and ask there: FROM (SELECT …, RANK() OVER (ORDER BY temp) AS w …) AS q WHERE q.w …)
  SELECT id FROM hall WHERE RANK() OVER (ORDER BY temp) = 1
                            ^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT COUNT(*) FROM hall GROUP BY RANK() OVER (ORDER BY temp)
----
input:1: RANK with OVER cannot stand in GROUP BY: windows are computed after it (name it in a query of its own, and ask there: FROM (SELECT …, RANK() OVER (ORDER BY temp) AS w …) AS q WHERE q.w …)
  SELECT COUNT(*) FROM hall GROUP BY RANK() OVER (ORDER BY temp)
                                     ^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT COUNT(*) FROM hall HAVING RANK() OVER (ORDER BY COUNT(*)) = 1
----
input:1: RANK with OVER cannot stand in HAVING: windows are computed after it (name it in a query of its own, and ask there: FROM (SELECT …, RANK() OVER (ORDER BY COUNT(*)) AS w …) AS q WHERE q.w …)
  SELECT COUNT(*) FROM hall HAVING RANK() OVER (ORDER BY COUNT(*)) = 1
                                   ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT AVG(RANK() OVER (ORDER BY temp)) FROM hall
----
input:1: RANK with OVER stands inside AVG, and an aggregate cannot hold a window (compute the window in a query of its own: FROM (SELECT …))
  SELECT AVG(RANK() OVER (ORDER BY temp)) FROM hall
             ^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT AVG(LAG(temp) OVER (ORDER BY z)) OVER () FROM hall
----
input:1: LAG with OVER stands inside the window of AVG, and a window cannot hold another (compute the inner one in a query of its own: FROM (SELECT …))
  SELECT AVG(LAG(temp) OVER (ORDER BY z)) OVER () FROM hall
             ^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT COUNT(*) FILTER (WHERE LAG(temp) OVER (ORDER BY z) > 1) OVER () FROM hall
----
input:1: LAG with OVER stands inside the window of COUNT, and a window cannot hold another (compute the inner one in a query of its own: FROM (SELECT …))
  SELECT COUNT(*) FILTER (WHERE LAG(temp) OVER (ORDER BY z) > 1) OVER () FROM hall
                                ^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT h.id FROM hall h JOIN log l ON ROW_NUMBER() OVER () = 1
----
input:1: ROW_NUMBER with OVER cannot stand in ON: windows are computed after it (name it in a query of its own, and ask there: FROM (SELECT …, ROW_NUMBER() OVER () AS w …) AS q WHERE q.w …)
  SELECT h.id FROM hall h JOIN log l ON ROW_NUMBER() OVER () = 1
                                        ^^^^^^^^^^^^^^^^^^^^

plan
SELECT LAG(temp) FROM hall
----
input:1: LAG needs OVER (…), which says among which rows (LAG(x [, rows [, otherwise]]) OVER (… ORDER BY …))
  SELECT LAG(temp) FROM hall
         ^^^^^^^^^

plan
SELECT LAG(temp) OVER (PARTITION BY area) FROM hall
----
input:1: LAG needs an order: without ORDER BY in OVER no row comes before another (LAG(x [, rows [, otherwise]]) OVER (… ORDER BY …))
  SELECT LAG(temp) OVER (PARTITION BY area) FROM hall
                        ^^^^^^^^^^^^^^^^^^^

plan
SELECT LAG(temp, 1, 'none') OVER (ORDER BY z) FROM hall
----
input:1: LAG needs arguments of one type, not REAL and TEXT
  SELECT LAG(temp, 1, 'none') OVER (ORDER BY z) FROM hall
                      ^^^^^^

plan
SELECT LAG(temp, 1.5) OVER (ORDER BY z) FROM hall
----
input:1: LAG needs a constant whole number of 0 or more here
  SELECT LAG(temp, 1.5) OVER (ORDER BY z) FROM hall
                   ^^^

plan
SELECT ABS(temp) OVER () FROM hall
----
input:1: OVER follows aggregates and window functions, and 'ABS' is a function of one row
  SELECT ABS(temp) OVER () FROM hall
                        ^^

plan
SELECT SUM(temp) OVER (ORDER BY z ROWS BETWEEN 1 FOLLOWING AND CURRENT ROW) FROM hall
----
input:1: the frame ends before it begins (a frame runs from what precedes to what follows: BETWEEN 2 PRECEDING AND CURRENT ROW)
  SELECT SUM(temp) OVER (ORDER BY z ROWS BETWEEN 1 FOLLOWING AND CURRENT ROW) FROM hall
                                    ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT SUM(temp) OVER (ORDER BY z ROWS 1.5 PRECEDING) FROM hall
----
input:1: ROWS counts rows, with a whole number and not REAL (RANGE goes by differences of the key: RANGE INTERVAL '1' HOUR PRECEDING)
  SELECT SUM(temp) OVER (ORDER BY z ROWS 1.5 PRECEDING) FROM hall
                                         ^^^

plan
SELECT SUM(temp) OVER (ORDER BY z ROWS -1 PRECEDING) FROM hall
----
input:1: an offset of a frame is not negative (PRECEDING and FOLLOWING give the direction)
  SELECT SUM(temp) OVER (ORDER BY z ROWS -1 PRECEDING) FROM hall
                                         ^^

plan
SELECT SUM(temp) OVER (ORDER BY t RANGE 2 PRECEDING) FROM log
----
input:1: the offset is INTEGER, and the key of ORDER BY is TIMESTAMP (write INTERVAL '15' MINUTE)
  SELECT SUM(temp) OVER (ORDER BY t RANGE 2 PRECEDING) FROM log
                                          ^

plan
SELECT SUM(temp) OVER (ORDER BY t, logger RANGE INTERVAL '1' HOUR PRECEDING) FROM log
----
input:1: RANGE with an offset needs exactly one key in ORDER BY, not 2 (ROWS counts rows, whatever the order)
  SELECT SUM(temp) OVER (ORDER BY t, logger RANGE INTERVAL '1' HOUR PRECEDING) FROM log
                                            ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT SUM(temp) OVER (ORDER BY logger RANGE 1 PRECEDING) FROM log
----
input:1: RANGE with an offset needs a key with differences: numbers, TIMESTAMP or INTERVAL, not TEXT (ROWS counts rows, whatever the order)
  SELECT SUM(temp) OVER (ORDER BY logger RANGE 1 PRECEDING) FROM log
                                         ^^^^^^^^^^^^^^^^^

plan
SELECT RANK() OVER (ORDER BY temp ROWS 1 PRECEDING) FROM hall
----
input:1: RANK looks at the whole partition and takes no frame (leave out ROWS 1 PRECEDING)
  SELECT RANK() OVER (ORDER BY temp ROWS 1 PRECEDING) FROM hall
                                    ^^^^^^^^^^^^^^^^

plan
SELECT COUNT(DISTINCT area) OVER (ORDER BY temp) FROM hall
----
input:1: DISTINCT stands over whole partitions only: not with ORDER BY or a frame in OVER (leave out ORDER BY and the frame, or DISTINCT)
  SELECT COUNT(DISTINCT area) OVER (ORDER BY temp) FROM hall
         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT FIRST_VALUE(DISTINCT area) OVER (ORDER BY temp) FROM hall
----
input:1: FIRST_VALUE takes no DISTINCT (FIRST_VALUE(x) OVER (…))
  SELECT FIRST_VALUE(DISTINCT area) OVER (ORDER BY temp) FROM hall
         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT RANK() OVER (ORDER BY 1) FROM hall
----
input:1: in OVER, ORDER BY 1 is no position but a number that is the same for all rows (name the column)
  SELECT RANK() OVER (ORDER BY 1) FROM hall
                               ^

plan
SELECT RANC() OVER (ORDER BY temp) FROM hall
----
input:1: there is no function 'RANC' (did you mean 'RANK'?)
  SELECT RANC() OVER (ORDER BY temp) FROM hall
         ^^^^

plan
SELECT RANK() OVER (ORDER BY temp)
----
input:1: 'temp' is a column, but there are no columns here (FROM says where it comes from)
  SELECT RANK() OVER (ORDER BY temp)
                               ^^^^
