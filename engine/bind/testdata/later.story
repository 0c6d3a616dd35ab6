# What the language has and the engine lacks is refused by its name.

plan
SELECT * FROM PLACEMENTS OF hall
----
input:1: PLACEMENTS is not there yet
  SELECT * FROM PLACEMENTS OF hall
                ^^^^^^^^^^

plan
SELECT hidden FROM CELLS OF hall
----
input:1: the column 'hidden' of CELLS OF hall is not there yet
  SELECT hidden FROM CELLS OF hall
         ^^^^^^

plan
SELECT * FROM CELLS OF hall UNCERTAINTY (temp 0.1 EACH)
----
input:1: UNCERTAINTY is not there yet
  SELECT * FROM CELLS OF hall UNCERTAINTY (temp 0.1 EACH)
                              ^^^^^^^^^^^^^^^^^^^^^^^^^^^

plan
SELECT * FROM VERDICTS
----
input:1: there is no campaign, table or view 'VERDICTS'
  SELECT * FROM VERDICTS
                ^^^^^^^^

plan
SELECT * FROM hall NATURAL JOIN log
----
syntax: there is no NATURAL JOIN (say which columns: JOIN … USING (…), or ON condition)
