# What users get wrong, and what they are told.

plan
SELECT id, tmep FROM CELLS OF hall
----
input:1: there is no column 'tmep' in CELLS OF hall (did you mean 'temp'?)
  SELECT id, tmep FROM CELLS OF hall
             ^^^^

plan
SELECT id, humidity FROM hall
----
input:1: there is no column 'humidity' in hall (it has id, x, y, z, temp, area)
  SELECT id, humidity FROM hall
             ^^^^^^^^

plan
SELECT id, volume FROM hall
----
input:1: there is no column 'volume' in hall (CELLS OF hall has it)
  SELECT id, volume FROM hall
             ^^^^^^

plan
SELECT a, volume FROM CONTACTS OF hall
----
input:1: there is no column 'volume' in CONTACTS OF hall (CELLS OF hall has it)
  SELECT a, volume FROM CONTACTS OF hall
            ^^^^^^

plan
SELECT avg temp FROM hall
----
input:1: there is no column 'avg' in hall (a function is written with brackets: AVG([DISTINCT] x))
  SELECT avg temp FROM hall
         ^^^

plan
SELECT STDDEV(temp), LEN(id) FROM hall
----
input:1: there is no function 'STDDEV' (write STDDEV_SAMP(x), or STDDEV_POP(x) of all there is)
  SELECT STDDEV(temp), LEN(id) FROM hall
         ^^^^^^

plan
SELECT id FROM hal
----
input:1: there is no campaign, table or view 'hal' (did you mean 'hall'?)
  SELECT id FROM hal
                 ^^^

plan
SELECT id FROM CELLS OF hal
----
input:1: there is no campaign, table or view 'hal' (did you mean 'hall'?)
  SELECT id FROM CELLS OF hal
                          ^^^

plan
SELECT id FROM CELS OF hall
----
input:1: there is no relation 'CELS' (did you mean 'CELLS'?)
  SELECT id FROM CELS OF hall
                 ^^^^

plan
SELECT id FROM cells
----
input:1: there is no campaign, table or view 'cells' (a relation is made of sites: CELLS OF campaign)
  SELECT id FROM cells
                 ^^^^^

plan
SELECT * FROM air
----
input:1: 'air' is a solid, not a campaign, a table or a view (a solid stands after WITHIN)
  SELECT * FROM air
                ^^^

plan
SELECT * FROM CELLS OF air
----
input:1: 'air' is a solid, not a campaign, a table or a view (a solid stands after WITHIN)
  SELECT * FROM CELLS OF air
                         ^^^

plan
SELECT * FROM CELLS OF log
----
input:1: CELLS needs the columns id, x, y, z: log has no id, x, y, z, it gives logger, t, temp, co2, n, ok (join the sites: CELLS OF (SELECT s.id, s.x, s.y, s.z, … FROM campaign s JOIN log l ON …))
  SELECT * FROM CELLS OF log
                         ^^^

plan
SELECT * FROM CELLS OF (SELECT id, x, y FROM hall)
----
input:1: CELLS needs the columns id, x, y, z: (query) has no z, it gives id, x, y (name them in SELECT, with AS where they are called otherwise)
  SELECT * FROM CELLS OF (SELECT id, x, y FROM hall)
                          ^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT * FROM CELLS OF points
----
input:1: the coordinate 'x' of points is TEXT, not a number (CAST(x AS REAL) AS x)
  SELECT * FROM CELLS OF points
                         ^^^^^^

plan
SELECT * FROM CELLS OF mixed
----
input:1: x, y, z of mixed are in mm, m, m: a position has one unit
  SELECT * FROM CELLS OF mixed
                         ^^^^^

plan
SELECT * FROM CELLS OF hall WITHIN hall
----
input:1: 'hall' is a campaign, not a solid (ENVELOPE OF hall is the box around its sites)
  SELECT * FROM CELLS OF hall WITHIN hall
                                     ^^^^

plan
SELECT * FROM CELLS OF hall WITHIN ari
----
input:1: there is no solid 'ari' (did you mean 'air'?)
  SELECT * FROM CELLS OF hall WITHIN ari
                                     ^^^

plan
SELECT * FROM CELLS OF hall WITHIN BOX (0,0,0) TO (30,18,0)
----
input:1: this solid has no volume: it has no extent along z
  SELECT * FROM CELLS OF hall WITHIN BOX (0,0,0) TO (30,18,0)
                                     ^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT * FROM CELLS OF hall WITHIN air UNCLIPPED
----
input:1: WITHIN and UNCLIPPED say the opposite of each other
  SELECT * FROM CELLS OF hall WITHIN air UNCLIPPED
                                         ^^^^^^^^^

plan
SELECT * FROM CELLS OF hall METHOD SIBSON
----
input:1: CELLS takes no METHOD (it takes WITHIN, UNCLIPPED, FOR EACH, OMITTING, MEASURED IN, STRETCHED, DISTANCES, ACROSS, UNCERTAINTY)
  SELECT * FROM CELLS OF hall METHOD SIBSON
                              ^^^^^^^^^^^^^

plan
SELECT * FROM CELLS OF hall AT z = 1.1
----
input:1: CELLS takes no AT (it takes WITHIN, UNCLIPPED, FOR EACH, OMITTING, MEASURED IN, STRETCHED, DISTANCES, ACROSS, UNCERTAINTY)
  SELECT * FROM CELLS OF hall AT z = 1.1
                              ^^^^^^^^^^

plan
SELECT * FROM CELLS OF hall UNCERTAINTY temp
----
input:1: UNCERTAINTY of CELLS says of which reading, and whether of EACH instrument or COMMON to all (UNCERTAINTY (temp (u) EACH): the reading, and in parentheses the column of uncertainties)
  SELECT * FROM CELLS OF hall UNCERTAINTY temp
                              ^^^^^^^^^^^^^^^^

plan
SELECT * FROM CELLS OF hall FOR EACH hour
----
input:1: there is no column 'hour' in hall (it has id, x, y, z, temp, area)
  SELECT * FROM CELLS OF hall FOR EACH hour
                                       ^^^^

plan
SELECT * FROM CELLS OF hall FOR EACH id
----
input:1: FOR EACH id would make a partition of every single site (FOR EACH takes an instant or a pass)
  SELECT * FROM CELLS OF hall FOR EACH id
                                       ^^

plan
SELECT id FROM hall h JOIN log l ON h.id = l.logger WHERE temp > 8
----
input:1: 'temp' may be any of 2 columns (write h.temp or l.temp)
  SELECT id FROM hall h JOIN log l ON h.id = l.logger WHERE temp > 8
                                                            ^^^^

plan
SELECT hall.id FROM hall h
----
input:1: no source here is called 'hall' (there is h)
  SELECT hall.id FROM hall h
         ^^^^

plan
SELECT k.volume FROM CELLS OF hall
----
input:1: no source here is called 'k' (give it a name: CELLS OF hall AS k)
  SELECT k.volume FROM CELLS OF hall
         ^

plan
SELECT id FROM hall, hall
----
input:1: two sources are called 'hall' (give one of them another name: hall AS other)
  SELECT id FROM hall, hall
                       ^^^^

plan
SELECT id, temp FROM hall WHERE AVG(temp) > 8
----
input:1: AVG cannot stand in WHERE, where rows are still single (conditions on groups stand in HAVING)
  SELECT id, temp FROM hall WHERE AVG(temp) > 8
                                  ^^^^^^^^^

plan
SELECT id, AVG(temp) FROM hall
----
input:1: the column 'id' has many values where SELECT has one row for each group (an aggregate makes one row of all: write GROUP BY id, or take MIN(id), MAX(id) …)
  SELECT id, AVG(temp) FROM hall
         ^^

plan
SELECT logger, t, AVG(temp) FROM log GROUP BY logger
----
input:1: the column 't' has many values where SELECT has one row for each group (add it to GROUP BY, or take MIN(t), MAX(t) …)
  SELECT logger, t, AVG(temp) FROM log GROUP BY logger
                 ^

plan
SELECT logger FROM log GROUP BY logger ORDER BY temp
----
input:1: the column 'temp' has many values where ORDER BY has one row for each group (add it to GROUP BY, or take AVG(temp), MAX(temp) …)
  SELECT logger FROM log GROUP BY logger ORDER BY temp
                                                  ^^^^

plan
SELECT AVG(MAX(temp)) FROM hall
----
input:1: MAX stands inside AVG, and an aggregate cannot hold another (compute the inner one in a query of its own: FROM (SELECT …))
  SELECT AVG(MAX(temp)) FROM hall
             ^^^^^^^^^

plan
SELECT temp + 1 AS warm FROM hall WHERE warm > 8
----
input:1: 'warm' names an item of SELECT, which WHERE does not know yet (repeat the expression, or put the query into FROM (SELECT …))
  SELECT temp + 1 AS warm FROM hall WHERE warm > 8
                                          ^^^^

plan
SELECT id FROM hall WHERE temp
----
input:1: WHERE needs a condition, which is TRUE or FALSE, but this is REAL (compare it with something: … > 0)
  SELECT id FROM hall WHERE temp
                            ^^^^

plan
SELECT id FROM hall WHERE temp > 'warm'
----
input:1: temp (REAL) cannot be compared with 'warm' (TEXT) (CAST(temp AS TEXT) makes a text of the number)
  SELECT id FROM hall WHERE temp > 'warm'
                                   ^^^^^^

plan
SELECT temp + co2 FROM log
----
input:1: temp is in °C and co2 in ppm: they cannot be added to each other (CAST(co2 AS REAL) drops the unit)
  SELECT temp + co2 FROM log
                ^^^

plan
SELECT area + 1 FROM hall
----
input:1: + needs numbers, not area (TEXT) (CAST(area AS REAL) reads a text as a number)
  SELECT area + 1 FROM hall
         ^^^^

plan
SELECT id FROM hall WHERE area = "north"
----
input:1: there is no column 'north' in hall (a text stands between single quotes: 'north')
  SELECT id FROM hall WHERE area = "north"
                                   ^^^^^^^

plan
SELECT AVG(area) FROM hall
----
input:1: AVG needs a number here, not TEXT
  SELECT AVG(area) FROM hall
             ^^^^

plan
SELECT MAX(temp) WEIGHTED BY volume FROM CELLS OF hall
----
input:1: MAX cannot be weighted (WEIGHTED BY may follow AVG, CORR, DIRECTION_AVG, LEVEL_AVG, MEDIAN, MKT, QUANTILE, SHARE, STDDEV_POP, STDDEV_SAMP, SUM, VAR_POP, VAR_SAMP)
  SELECT MAX(temp) WEIGHTED BY volume FROM CELLS OF hall
                               ^^^^^^

plan
SELECT AVG(temp) WEIGHTED BY id FROM CELLS OF hall
----
input:1: a weight is a number, not TEXT
  SELECT AVG(temp) WEIGHTED BY id FROM CELLS OF hall
                               ^^

plan
SELECT SQRT(temp, 2) FROM hall
----
input:1: SQRT takes 1 argument, not 2
  SELECT SQRT(temp, 2) FROM hall
         ^^^^^^^^^^^^^

plan
SELECT SQTR(temp) FROM hall
----
input:1: there is no function 'SQTR' (did you mean 'SQRT'?)
  SELECT SQTR(temp) FROM hall
         ^^^^

plan
SELECT SUM(*) FROM hall
----
input:1: SUM(*) has no meaning: * stands in COUNT only (SUM([DISTINCT] x))
  SELECT SUM(*) FROM hall
         ^^^^^^

plan
SELECT ROUND(DISTINCT temp) FROM hall
----
input:1: ROUND takes no DISTINCT: it is a function of one row, not an aggregate
  SELECT ROUND(DISTINCT temp) FROM hall
         ^^^^^^^^^^^^^^^^^^^^

plan
SELECT FIRST(temp) FROM log
----
input:1: FIRST needs an order (FIRST(x ORDER BY t))
  SELECT FIRST(temp) FROM log
         ^^^^^^^^^^^

plan
SELECT :limt FROM hall
----
input:1: the value :limt is not set (did you mean :limit?)
  SELECT :limt FROM hall
         ^^^^^

plan
SELECT :other FROM hall
----
input:1: the value :other is not set (LET other = …; before, or --let other=…)
  SELECT :other FROM hall
         ^^^^^^

plan
SELECT id FROM hall ORDER BY 3
----
input:1: ORDER BY 3 is no position: SELECT has 1 column
  SELECT id FROM hall ORDER BY 3
                               ^

plan
SELECT id FROM hall GROUP BY 2
----
input:1: GROUP BY 2 is no position: SELECT has 1 item
  SELECT id FROM hall GROUP BY 2
                               ^

plan
SELECT DISTINCT id FROM hall ORDER BY temp
----
input:1: with DISTINCT, ORDER BY needs columns that are shown (add 'temp' to SELECT)
  SELECT DISTINCT id FROM hall ORDER BY temp
                                        ^^^^

plan
SELECT id FROM hall LIMIT -1
----
input:1: LIMIT needs a whole number of at least 0
  SELECT id FROM hall LIMIT -1
                            ^^

plan
SELECT id FROM hall LIMIT 1.5
----
input:1: LIMIT needs a whole number of at least 0
  SELECT id FROM hall LIMIT 1.5
                            ^^^

plan
SELECT id FROM hall UNION ALL SELECT id, temp FROM hall
----
input:1: UNION joins rows of equal columns, but its sides have 1 column and 2
  SELECT id FROM hall UNION ALL SELECT id, temp FROM hall
                                ^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall UNION ALL SELECT temp FROM hall
----
input:1: column 1 of UNION is TEXT ('id') on one side and REAL ('temp') on the other (CAST one of them)
  SELECT id FROM hall UNION ALL SELECT temp FROM hall
                                ^^^^^^^^^^^^^^^^^^^^^

plan
SELECT temp FROM log UNION ALL SELECT co2 FROM log
----
input:1: column 1 of UNION is in °C ('temp') on one side and in ppm ('co2') on the other
  SELECT temp FROM log UNION ALL SELECT co2 FROM log
                                 ^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall UNION ALL SELECT logger FROM log ORDER BY logger
----
input:1: there is no column 'logger' in the columns of this query (it has id)
  SELECT id FROM hall UNION ALL SELECT logger FROM log ORDER BY logger
                                                                ^^^^^^

plan
WITH a AS (SELECT tmep FROM hall) SELECT 1
----
input:1: there is no column 'tmep' in hall (did you mean 'temp'?)
  WITH a AS (SELECT tmep FROM hall) SELECT 1
                    ^^^^

plan
WITH a AS (SELECT 1), a AS (SELECT 2) SELECT 1
----
input:1: WITH names 'a' twice
  WITH a AS (SELECT 1), a AS (SELECT 2) SELECT 1
                        ^

plan
WITH a (x, y) AS (SELECT 1) SELECT x FROM a
----
input:1: 2 names for the 1 column of a
  WITH a (x, y) AS (SELECT 1) SELECT x FROM a
          ^^^^

plan
SELECT *
----
input:1: * needs a source: FROM …
  SELECT *
         ^

plan
SELECT k.* FROM hall h
----
input:1: no source here is called 'k' (there is h)
  SELECT k.* FROM hall h
         ^

plan
SELECT * FROM hall GROUP BY id
----
input:1: the column 'x' has many values where SELECT has one row for each group (add it to GROUP BY, or take AVG(x), MAX(x) …)
  SELECT * FROM hall GROUP BY id
         ^

plan
SELECT CAST(temp AS INTGER) FROM hall
----
input:1: there is no type 'INTGER' (did you mean 'INTEGER'?)
  SELECT CAST(temp AS INTGER) FROM hall
                      ^^^^^^

plan
SELECT * FROM (SELECT id, id FROM hall) q WHERE id = 'L1'
----
input:1: 'id' may be any of 2 columns (q gives several columns of that name: give them different ones with AS)
  SELECT * FROM (SELECT id, id FROM hall) q WHERE id = 'L1'
                                                  ^^

plan
SELECT * FROM CELLS OF (SELECT h.id, h.x, h.y, h.z, g.id FROM hall h CROSS JOIN hall g)
----
input:1: (query) gives 2 columns called 'id' (name one of them otherwise: SELECT s.id AS id, l.id AS log_id …)
  SELECT * FROM CELLS OF (SELECT h.id, h.x, h.y, h.z, g.id FROM hall h CROSS JOIN hall g)
                          ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall JOIN log USING (id)
----
input:1: there is no column 'id' in log (it has logger, t, temp, co2, n, ok)
  SELECT id FROM hall JOIN log USING (id)
                                      ^^

plan
SELECT temp FROM CELLS OF hall AS c JOIN log ON logger = id
----
input:1: 'temp' may be any of 2 columns (write c.temp or log.temp)
  SELECT temp FROM CELLS OF hall AS c JOIN log ON logger = id
         ^^^^

plan
SELECT who FROM (SELECT id FROM hall) AS q
----
input:1: there is no column 'who' in q (it has id)
  SELECT who FROM (SELECT id FROM hall) AS q
         ^^^

plan
SELECT * FROM (SELECT id FROM hall) AS q JOIN log ON q.di = logger
----
input:1: there is no column 'di' in q (did you mean 'id'?)
  SELECT * FROM (SELECT id FROM hall) AS q JOIN log ON q.di = logger
                                                         ^^

plan
SELECT id FROM hall WHERE id = 5 AND temp BETWEEN 1 AND 'x'
----
input:1: id (TEXT) cannot be compared with 5 (INTEGER) (CAST(id AS REAL) reads a text as a number)
  SELECT id FROM hall WHERE id = 5 AND temp BETWEEN 1 AND 'x'
                                 ^

plan
SELECT COUNT(*) WEIGHTED BY 2 FROM hall
----
input:1: COUNT cannot be weighted (WEIGHTED BY may follow AVG, CORR, DIRECTION_AVG, LEVEL_AVG, MEDIAN, MKT, QUANTILE, SHARE, STDDEV_POP, STDDEV_SAMP, SUM, VAR_POP, VAR_SAMP)
  SELECT COUNT(*) WEIGHTED BY 2 FROM hall
                              ^

plan
SELECT QUANTILE(temp, temp) FROM hall
----
input:1: QUANTILE needs a constant from 0 to 1 as its second argument (0.95 is the value up to which 95 % lie)
  SELECT QUANTILE(temp, temp) FROM hall
                        ^^^^

plan
SELECT SUM(DISTINCT temp) WEIGHTED BY n FROM log
----
input:1: DISTINCT and WEIGHTED BY do not go together: equal values may have different weights
  SELECT SUM(DISTINCT temp) WEIGHTED BY n FROM log
         ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT id FROM hall HAVING temp > 8
----
input:1: HAVING needs groups, and there is neither GROUP BY nor an aggregate (conditions on single rows stand in WHERE)
  SELECT id FROM hall HAVING temp > 8
                             ^^^^^^^^

plan
SELECT EXTRACT(temp) FROM hall
----
input:1: EXTRACT is written EXTRACT(HOUR FROM t)
  SELECT EXTRACT(temp) FROM hall
         ^^^^^^^^^^^^^

plan
SELECT EXTRACT(HUOR FROM t) FROM log
----
input:1: EXTRACT knows no field HUOR (the fields are YEAR, MONTH, DAY, HOUR, MINUTE, SECOND, WEEKDAY)
  SELECT EXTRACT(HUOR FROM t) FROM log
                 ^^^^

plan
SELECT POINT(x, y) FROM hall
----
input:1: POINT takes three numbers: POINT(1.5, 2, 0.3)
  SELECT POINT(x, y) FROM hall
         ^^^^^^^^^^^

plan
SELECT POINT(x, y, z) AS p FROM hall ORDER BY p
----
input:1: points have no order (order by the coordinates)
  SELECT POINT(x, y, z) AS p FROM hall ORDER BY p
                                                ^

plan
SELECT id FROM CELLS OF hall OMITTING ('L1') BECAUSE 'moved' WHERE volume IS 'x'
----
syntax: expected NULL, TRUE, FALSE, UNKNOWN or DISTINCT FROM but found the text 'x' (values are compared with =)

plan
SELECT id FROM hall LIMIT :since
----
input:1: LIMIT needs a whole number of at least 0
  SELECT id FROM hall LIMIT :since
                            ^^^^^^

plan
SELECT id FROM hall ORDER BY 1.0
----
input:1: ORDER BY 1.0 is no position: SELECT has 1 column
  SELECT id FROM hall ORDER BY 1.0
                               ^^^

plan
SELECT temp * 2 AS twice, twice + 1 FROM hall
----
input:1: 'twice' names another item of SELECT, and items do not know each other (repeat the expression, or put the query into FROM (SELECT …))
  SELECT temp * 2 AS twice, twice + 1 FROM hall
                            ^^^^^

plan
SELECT temp * 2 AS twice, AVG(twice) FROM hall
----
input:1: the column 'temp' has many values where SELECT has one row for each group (an aggregate makes one row of all: write GROUP BY temp, or take AVG(temp), MAX(temp) …)
  SELECT temp * 2 AS twice, AVG(twice) FROM hall
         ^^^^

plan
SELECT temp * 2 AS twice, COUNT(*) FROM hall GROUP BY FLOOR(twice)
----
input:1: 'twice' names an item of SELECT, which GROUP BY does not know yet (repeat the expression, or put the query into FROM (SELECT …))
  SELECT temp * 2 AS twice, COUNT(*) FROM hall GROUP BY FLOOR(twice)
                                                              ^^^^^

plan
SELECT id FROM hall GROUP BY POINT(x, y, z)
----
input:1: GROUP BY cannot order points (group by the coordinates)
  SELECT id FROM hall GROUP BY POINT(x, y, z)
                               ^^^^^^^^^^^^^^

plan
SELECT * FROM CELLS OF hall WITHIN (air, air)
----
input:1: two of these solids are called 'air': rows could not tell one zone from the other
  SELECT * FROM CELLS OF hall WITHIN (air, air)
                                           ^^^

plan
SELECT * FROM CELLS OF hall WITHIN (air, BOX (20,0,0) TO (40,10,5))
----
input:1: the zones air and BOX (20,0,0) TO (40,10,5) overlap: 500 m³ lie in both and would count twice
  SELECT * FROM CELLS OF hall WITHIN (air, BOX (20,0,0) TO (40,10,5))
                                           ^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT * FROM CELLS OF hall STRETCHED (1, 1, 0)
----
input:1: a factor of STRETCHED is a number greater than 0, not 0 (STRETCHED (1, 1, 5): a metre up counts as five; 1 leaves an axis as it is)
  SELECT * FROM CELLS OF hall STRETCHED (1, 1, 0)
                                               ^

plan
SELECT * FROM CELLS OF hall STRETCHED (1, -5, 1)
----
input:1: a factor of STRETCHED is a number greater than 0, not -5 (STRETCHED (1, 1, 5): a metre up counts as five; 1 leaves an axis as it is)
  SELECT * FROM CELLS OF hall STRETCHED (1, -5, 1)
                                            ^^

plan
SELECT * FROM CELLS OF hall STRETCHED (1, 'a', 1)
----
syntax: expected y but found the text 'a'

plan
SELECT * FROM CELLS OF hall MEASURED IN (racks)
----
input:1: there is no solid 'racks' (CREATE SOLID racks AS BOX (0,0,0) TO (30,18,7.5); makes one)
  SELECT * FROM CELLS OF hall MEASURED IN (racks)
                                           ^^^^^

plan
SELECT * FROM CELLS OF hall MEASURED IN (air, air)
----
input:1: two of these solids are called 'air': rows could not tell one part from the other
  SELECT * FROM CELLS OF hall MEASURED IN (air, air)
                                                ^^^

plan
SELECT * FROM CELLS OF hall MEASURED IN hall
----
input:1: 'hall' is a campaign, not a solid (ENVELOPE OF hall is the box around its sites)
  SELECT * FROM CELLS OF hall MEASURED IN hall
                                          ^^^^

plan
SELECT * FROM TETRAHEDRA OF hall MEASURED IN air
----
input:1: TETRAHEDRA takes no MEASURED IN (it takes UNCLIPPED, FOR EACH, OMITTING, STRETCHED)
  SELECT * FROM TETRAHEDRA OF hall MEASURED IN air
                                   ^^^^^^^^^^^^^^^
