# One diagram serves all uses of the same sites, solid and stretch: in a query …
ask
EXPLAIN MEASURED SELECT a.id, a.volume, b.volume, b.area FROM CELLS OF placed WITHIN air AS a JOIN CELLS OF placed WITHIN air AS b ON b.id = a.id;
----
estimated  rows  seconds     MB  step
      ~54    54   ?.????         columns: id, volume, volume, area
      ~54    54   ?.????  ?.???    inner join by hash: id = id
       54    54   ?.????  ?.???      cells of placed within air: id, volume; with them area, for other uses
                                         geometry: volume of 54 cells, one by one, TIME
       54    54   ?.????               compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????                 read campaign hall: id, x, y, z
       54    54   ?.????  ?.???      cells of placed within air: id, volume, area
                                         geometry: volume, area of 54 cells, one by one, TIME; 54 computed
       54    54   ?.????               compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????                 read campaign hall: id, x, y, z

# Its measures are each computed when they are first asked for, and known in queries after it.
ask
EXPLAIN MEASURED SELECT SUM(volume) FROM CELLS OF placed WITHIN air;
----
estimated  rows  seconds     MB  step
        1     1   ?.????         columns: "SUM(volume)"
        1     1   ?.????  ?.???    aggregate all rows: SUM(volume)
       54    54   ?.????  ?.???      cells of placed within air: volume
                                         geometry: volume of 54 cells, all known already
       54    54   ?.????               compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????                 read campaign hall: id, x, y, z

ask
EXPLAIN MEASURED SELECT SUM(volume) FROM CELLS OF (SELECT * FROM placed ORDER BY z) WITHIN air;
----
estimated  rows  seconds     MB  step
        1     1   ?.????         columns: "SUM(volume)"
        1     1   ?.????  ?.???    aggregate all rows: SUM(volume)
       54    54   ?.????  ?.???      cells of (query) within air: volume
                                         geometry: volume of 54 cells, all known already
       54    54   ?.????  ?.???        sort: z
       54    54   ?.????                 columns: id, x, y, z
       54    54   ?.????                   compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????                     read campaign hall: id, x, y, z

# Another stretch is another diagram.
ask
EXPLAIN MEASURED SELECT SUM(volume) FROM CELLS OF placed WITHIN air STRETCHED (1, 1, 2);
----
estimated  rows  seconds     MB  step
        1     1   ?.????         columns: "SUM(volume)"
        1     1   ?.????  ?.???    aggregate all rows: SUM(volume)
       54    54   ?.????  ?.???      cells of placed within air stretched (1, 1, 2): volume
                                         geometry: volume of 54 cells, one by one, TIME; 54 computed
       54    54   ?.????               compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????                 read campaign hall: id, x, y, z

# Of FOR EACH equal sets of sites are one diagram: 672 instants, of which most have all loggers.
ask
EXPLAIN MEASURED SELECT t, AVG(temp) WEIGHTED BY volume AS mean FROM CELLS OF readings WITHIN air FOR EACH t GROUP BY t;
----
estimated   rows  seconds     MB  step
     ~672    672   ?.????         columns: t, "AVG(temp) WEIGHTED BY volume" AS mean
     ~672    672   ?.????  ?.???    group by t: AVG(temp) WEIGHTED BY volume
    36010  36010   ?.????  ?.???      cells of readings within air for each t: id, t, temp, volume
                                          geometry: volume of 1739 cells in 672 partitions, 33 of them different, 54 of them known already, one by one, TIME; 1685 computed
   ~36010  36010   ?.????               columns: id, x, y, z, t, temp
   ~36010  36010   ?.????  ?.???          inner join by hash: id = logger
       54     54   ?.????                   compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54     54   ?.????                     read campaign hall: id, x, y, z
   ~36010  36010   ?.????                   keep where: temp IS NOT NULL
    36047  36047   ?.????                     read table log: t, logger, temp

# Two uses that ask for different measures build each cell once: the first one measures
# for both.
ask
EXPLAIN MEASURED SELECT a.id, a.volume, b.area FROM CELLS OF placed WITHIN air STRETCHED (1, 1, 3) AS a JOIN CELLS OF placed WITHIN air STRETCHED (1, 1, 3) AS b ON b.id = a.id;
----
estimated  rows  seconds     MB  step
      ~54    54   ?.????         columns: id, volume, area
      ~54    54   ?.????  ?.???    inner join by hash: id = id
       54    54   ?.????  ?.???      cells of placed within air stretched (1, 1, 3): id, volume; with them area, for other uses
                                         geometry: volume of 54 cells, one by one, TIME
       54    54   ?.????               compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????                 read campaign hall: id, x, y, z
       54    54   ?.????  ?.???      cells of placed within air stretched (1, 1, 3): id, area; with them volume, for other uses
                                         geometry: area of 54 cells, one by one, TIME; 54 computed
       54    54   ?.????               compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
       54    54   ?.????                 read campaign hall: id, x, y, z

ask
EXPLAIN SELECT id, volume FROM CELLS OF placed WITHIN air STRETCHED (1, 1, 4) WHERE id IN (SELECT id FROM CELLS OF placed WITHIN air STRETCHED (1, 1, 4) WHERE farthest > 5);
----
rows  step
 ~18  columns: id, volume
 ~18    keep where: id IN (query of CELLS OF placed, hall)
  54      cells of placed within air stretched (1, 1, 4): id, volume; with them farthest, for other uses
              geometry: volume of 54 cells, one by one, TIME
  54        compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
  54          read campaign hall: id, x, y, z
          (query of CELLS OF placed, hall), computed once:
 ~18        columns: id
 ~18          keep where: farthest > 5
  54            cells of placed within air stretched (1, 1, 4): id, farthest; with them volume, for other uses
                    geometry: farthest of 54 cells, one by one, TIME
  54              compute: id, CASE WHEN id = 'L17' THEN 13.2 ELSE x END AS x, y, z
  54                read campaign hall: id, x, y, z
