# What was thought, and what it took. Times and memory are masked.

ask
EXPLAIN MEASURED SELECT id, place, ROUND(volume, 1) AS volume FROM CELLS OF placed WITHIN air ORDER BY volume DESC, id LIMIT 8;
----
estimated  rows  seconds     MB  step
        8     8   ?.????  ?.???  limit 8
        8     8   ?.????  ?.???    sort: volume DESC, id, first 8
       54    54   ?.????             compute: id, place, ROUND(volume, 1) AS volume
       54    54   ?.????  ?.???        cells of placed within air: id, place, volume
                                           geometry: volume of 54 cells, one by one, TIME; 54 computed
       54    54   ?.????                 compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z, place
       54    54   ?.????                   read campaign hall: id, x, y, z, place

# What is known already is not computed again, and what is known of others is.
ask
EXPLAIN MEASURED SELECT id, volume FROM CELLS OF placed WITHIN air WHERE id = 'L17';
----
estimated  rows  seconds     MB  step
        1     1   ?.????         columns: id, volume
        1     1   ?.????  ?.???    cells of placed within air: id, volume; only id = 'L17'
                                       geometry: volume of 1 cell, all known already
       54    54   ?.????             compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????               read campaign hall: id, x, y, z

ask
EXPLAIN SELECT id, volume, area FROM CELLS OF placed WITHIN air WHERE level = 'top';
----
rows  step
  18  columns: id, volume, area
  18    cells of placed within air: id, volume, area; only level = 'top'
            geometry: volume, area of 18 cells, one by one, TIME
  54      compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z, level
  54        read campaign hall: id, x, y, z, level

ask
EXPLAIN MEASURED SELECT level, COUNT(*), SUM(volume) FROM CELLS OF hall GROUP BY level;
----
estimated  rows  seconds     MB  step
       ~3     3   ?.????         columns: level, "COUNT(*)", "SUM(volume)"
       ~3     3   ?.????  ?.???    group by level: COUNT(*), SUM(volume)
       53    53   ?.????  ?.???      cells of hall within air: level, volume
                                         geometry: volume of 53 cells, one by one, TIME; 53 computed
       54    54   ?.????               read campaign hall: id, x, y, z, level

ask
EXPLAIN MEASURED SELECT AVG(temp) WEIGHTED BY volume AS mean FROM CELLS OF readings FOR EACH t WITHIN air WHERE t >= TIMESTAMP '2031-04-13 12:00:00';
----
estimated   rows  seconds     MB  step
        1      1   ?.????         columns: "AVG(temp) WEIGHTED BY volume" AS mean
        1      1   ?.????  ?.???    aggregate all rows: AVG(temp) WEIGHTED BY volume
     2543   2543   ?.????  ?.???      cells of readings within air for each t: id, temp, volume; only t >= TIMESTAMP '2031-04-13 12:00:00'
                                          geometry: volume of 105 cells in 48 partitions, 2 of them different, one by one, TIME; 105 computed
   ~36010  36010   ?.????               columns: id, x, y, z, t, temp
   ~36010  36010   ?.????  ?.???          inner join by hash: id = logger
       54     54   ?.????                   compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54     54   ?.????                     read campaign hall: id, x, y, z
   ~36010  36010   ?.????                   keep where: temp IS NOT NULL
    36047  36047   ?.????                     read table log: t, logger, temp

ask
EXPLAIN MEASURED SELECT k.b, k.area, g.mean FROM CONTACTS OF placed WITHIN air AS k JOIN loggers g ON g.id = k.b WHERE k.a = 'L23' ORDER BY k.area DESC LIMIT 3;
----
estimated   rows  seconds     MB  step
       ~3      3   ?.????  ?.???  limit 3
       ~3      3   ?.????  ?.???    sort: area DESC, first 3
      ~16     13   ?.????             columns: b, area, mean
      ~16     13   ?.????  ?.???        inner join by hash: b = id
      ~16     13   ?.????  ?.???          contacts of placed within air: b, area; only a = 'L23'
                                              geometry: contacts of 1 cell, one by one, TIME; 1 computed
       54     54   ?.????                   compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54     54   ?.????                     read campaign hall: id, x, y, z
      ~54     54   ?.????                 columns: id, "AVG(temp)" AS mean
      ~54     54   ?.????  ?.???            group by id: AVG(temp)
   ~36010  36010   ?.????                     columns: id, temp
   ~36010  36010   ?.????                       columns: id, temp
   ~36010  36010   ?.????  ?.???                  inner join by hash: logger = id
   ~36010  36010   ?.????                           keep where: temp IS NOT NULL
    36047  36047   ?.????                             read table log: logger, temp
       54     54   ?.????                           columns: id
       54     54   ?.????                             read campaign hall: id

ask
EXPLAIN MEASURED SELECT logger, COUNT(temp) AS got FROM log GROUP BY logger HAVING COUNT(temp) < 665 ORDER BY got;
----
estimated   rows  seconds     MB  step
      ~18      1   ?.????  ?.???  sort: got
      ~18      1   ?.????           columns: logger, "COUNT(temp)" AS got
      ~18      1   ?.????             keep having: "COUNT(temp)" < 665
       54     54   ?.????  ?.???        group by logger: COUNT(temp)
    36047  36047   ?.????                 read table log: logger, temp

ask
EXPLAIN MEASURED SELECT DISTINCT level FROM hall UNION ALL SELECT place FROM hall WHERE z > 6;
----
estimated  rows  seconds     MB  step
      ~21    21   ?.????         union all
        3     3   ?.????  ?.???    distinct rows
       54    54   ?.????             columns: level
       54    54   ?.????               read campaign hall: level
      ~18    18   ?.????           columns: place
      ~18    18   ?.????             keep where: z > 6
       54    54   ?.????               read campaign hall: z, place
