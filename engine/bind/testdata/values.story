# Constants: what LET and clauses take.

value
2 ^ 10 + 1
----
REAL 1025

value
-9223372036854775808
----
INTEGER -9223372036854775808

value
9223372036854775808
----
input:1: 9223372036854775808 is beyond INTEGER (64 bits) (written 9223372036854775808.0 it is a REAL)
  9223372036854775808
  ^^^^^^^^^^^^^^^^^^^

value
1e400
----
input:1: 1e400 is beyond REAL
  1e400
  ^^^^^

value
TIMESTAMP '2031-04-07 08:15:00'
----
TIMESTAMP 2031-04-07 08:15:00

value
TIMESTAMP '2031-02-30 00:00:00'
----
input:1: '2031-02-30 00:00:00' has no such date or time of day (write TIMESTAMP '2031-04-07 08:15:00')
  TIMESTAMP '2031-02-30 00:00:00'
            ^^^^^^^^^^^^^^^^^^^^^

value
TIMESTAMP 'yesterday'
----
input:1: 'yesterday' is no time stamp (write TIMESTAMP '2031-04-07 08:15:00')
  TIMESTAMP 'yesterday'
            ^^^^^^^^^^^

value
INTERVAL '15' MINUTE
----
INTERVAL 00:15:00

value
INTERVAL '1.5' HOURS
----
INTERVAL 01:30:00

value
INTERVAL '-2' DAY
----
INTERVAL -48:00:00

value
INTERVAL '0.0000001' SECOND
----
input:1: an interval has whole microseconds, and '0.0000001' SECOND has not
  INTERVAL '0.0000001' SECOND
           ^^^^^^^^^^^

value
INTERVAL '1' MONTH
----
input:1: 'MONTH' is no unit of an interval (its length would depend on the date: count in days)
  INTERVAL '1' MONTH
               ^^^^^

value
INTERVAL '1' MINUT
----
input:1: 'MINUT' is no unit of an interval (did you mean 'MINUTE'?)
  INTERVAL '1' MINUT
               ^^^^^

value
INTERVAL 'a few' HOUR
----
input:1: 'a few' is no number of hours (write INTERVAL '15' MINUTE)
  INTERVAL 'a few' HOUR
           ^^^^^^^

value
INTERVAL '1/3' HOUR
----
input:1: '1/3' is no number of hours (write INTERVAL '15' MINUTE)
  INTERVAL '1/3' HOUR
           ^^^^^

value
:limit * 2
----
REAL 16

value
limit * 2
----
input:1: 'limit' is a column, but there are no columns here (the value set by LET is written :limit)
  limit * 2
  ^^^^^

value
temp
----
input:1: 'temp' is a column, but there are no columns here
  temp
  ^^^^

value
1 / 0
----
input:1: 1 / 0 has no value
  1 / 0
  ^^^^^

value
AVG(1)
----
input:1: AVG needs rows, and there are none here
  AVG(1)
  ^^^^^^

value
'it''s' || ' cold'
----
TEXT it's cold

value
NULL
----
NULL 

position
-depth
----
-depth REAL [m]

position
east / 1000
----
east / 1000 REAL [m]

position
dept
----
input:1: there is no column 'dept' in bores.csv (did you mean 'depth'?)
  dept
  ^^^^

position
name
----
name TEXT
