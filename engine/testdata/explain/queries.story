# Queries in expressions stand below the step that asks them, common parts below
# their first use.

# Computed once: its steps are counted. The step that asks counts its time too.
ask
EXPLAIN MEASURED SELECT id, z FROM hall WHERE z > (SELECT AVG(z) FROM hall);
----
estimated  rows  seconds     MB  step
      ~18    25   ?.????         columns: id, z
      ~18    25   ?.????           keep where: z > (query of hall)
       54    54   ?.????             read campaign hall: id, z
                                     (query of hall), computed once:
        1     1   ?.????               columns: "AVG(z)"
        1     1   ?.????  ?.???          aggregate all rows: AVG(z)
       54    54   ?.????                   read campaign hall: z

ask
EXPLAIN MEASURED SELECT id FROM hall WHERE id IN (SELECT logger FROM log WHERE temp > 12);
----
estimated   rows  seconds  MB  step
      ~54      6   ?.????      columns: id
      ~54      6   ?.????        keep where: id IN (query of log)
       54     54   ?.????          read campaign hall: id
                                   (query of log), computed once:
   ~12016    189   ?.????            columns: logger
   ~12016    189   ?.????              keep where: temp > 12
    36047  36047   ?.????                read table log: logger, temp

# A query that equalities tie to the row outside is a join.
ask
EXPLAIN MEASURED SELECT id FROM hall h WHERE EXISTS (SELECT 1 FROM log l WHERE l.logger = h.id AND l.temp > 12);
----
estimated   rows  seconds     MB  step
      ~54      6   ?.????         columns: id
      ~54      6   ?.????  ?.???    keep rows with a match by hash: id = logger
       54     54   ?.????             read campaign hall: id
   ~12016    189   ?.????             keep where: temp > 12
    36047  36047   ?.????               read table log: logger, temp

ask
EXPLAIN SELECT id FROM hall h WHERE NOT EXISTS (SELECT 1 FROM log l WHERE l.logger = h.id);
----
 rows  step
   ~0  columns: id
   ~0    keep rows without a match by hash: id = logger
   54      read campaign hall: id
36047      read table log: logger

# One that is computed for each row outside is not counted step by step.
ask
EXPLAIN MEASURED SELECT id, (SELECT COUNT(*) FROM hall o WHERE o.z < h.z) AS below FROM hall h;
----
estimated  rows  seconds  MB  step
       54    54   ?.????      compute: id, (query of hall) AS below
       54    54   ?.????        read campaign hall: id, z
                                (query of hall), computed for each different row outside:
        1                         columns: "COUNT(*)"
        1                           aggregate all rows: COUNT(*)
      ~18                             keep where: z < outer(z)
       54                               read campaign hall: z

# A common part is computed once.
ask
EXPLAIN MEASURED WITH w AS (SELECT id, volume, level FROM CELLS OF hall)
SELECT a.id FROM w a JOIN w b ON a.level = b.level WHERE b.volume > 100;
----
estimated  rows  seconds     MB  step
     ~312   157   ?.????         columns: id
     ~312   157   ?.????  ?.???    inner join by hash: level = level
       53    53   ?.????             rows of w
       53    53   ?.????               columns: id, volume, level
       53    53   ?.????  ?.???          cells of hall within air: id, level, volume
                                             geometry: volume of 53 cells, one by one, TIME; 53 computed
       54    54   ?.????                   read campaign hall: id, x, y, z, level
      ~18     9   ?.????             keep where: volume > 100
       53    53   ?.????               rows of w

ask
EXPLAIN MEASURED SELECT id FROM hall EXCEPT SELECT logger FROM log WHERE temp > 8;
----
estimated   rows  seconds     MB  step
      ~27     35   ?.????  ?.???  except
       54     54   ?.????           columns: id
       54     54   ?.????             read campaign hall: id
   ~12016   1865   ?.????           columns: logger
   ~12016   1865   ?.????             keep where: temp > 8
    36047  36047   ?.????               read table log: logger, temp

ask
EXPLAIN SELECT a.id, b.logger FROM hall a FULL JOIN log b ON a.id = b.logger AND b.temp > 12;
----
  rows  step
~36047  columns: id, logger
~36047    union all
~12016      columns: id, logger
~12016        left join by hash: id = logger
    54          read campaign hall: id
~12016          keep on: temp > 12
 36047            read table log: logger, temp
~24031      compute: NULL AS id, logger
~24031        keep rows without a match by hash: logger = id; on temp > 12
 36047          read table log: logger, temp
    54          read campaign hall: id
