package engine_test

import (
	"math"
	"testing"
)

// The twenty sites of the reference set: estimates, errors and volumes in exact rational
// arithmetic, and CGAL 5.5.1's natural neighbour coordinates to nine digits.
func TestEstimatesOfTwentySites(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4);")
	a.text("CREATE TABLE places AS (SELECT 'p' AS name, 5 AS x, 4 AS y, 2 AS z UNION ALL SELECT 'q', 8.5, 3, 2 UNION ALL SELECT 'r', 11, 3, 2);")
	a.is("SELECT name, nearest, ROUND(distance, 9), ROUND(temp, 9) FROM ESTIMATES OF hall AT places UNCLIPPED;",
		"p 8 0.948683298 19.372229457; q 13 1.1 21.110025124; r 1 1.702938637 ")
	a.says("1 point lies outside the hull of the sites of hall")
	a.is("SELECT ROUND(temp, 9) FROM ESTIMATES OF hall AT places UNCLIPPED METHOD LAPLACE WHERE name = 'p';", "19.354783624")
	a.is("SELECT ROUND(temp, 6) FROM ESTIMATES OF hall AT (SELECT 4 AS x, 3 AS y, 2 AS z);", "19.265318")
	a.says("uses cells that end at its walls")
	a.is("SELECT neighbour, ROUND(weight, 9) FROM WEIGHTS OF hall AT places UNCLIPPED WHERE name = 'p';",
		"4 0.068571373; 7 0.257652912; 8 0.483249918; 9 0.005963195; 10 0.039171583; 14 0.056292212; 17 0.020154165; 19 0.068944642")
	for _, c := range [][2]string{
		{"NEAREST", "-0.125 0.635 0.739256383"}, {"SIBSON", "-0.038732184 0.392589311 0.503623486"}, {"LAPLACE", "-0.014020523 0.391681762 0.496499547"},
	} {
		a.is("SELECT ROUND(AVG(-residual), 9), ROUND(AVG(ABS(residual)), 9), ROUND(SQRT(AVG(residual ^ 2)), 9) FROM RESIDUALS OF hall FOR temp METHOD "+c[0]+";", c[1])
	}
	a.is("SELECT COUNT(*) FROM RESIDUALS OF hall FOR temp WHERE NOT on_hull AND id IN (7, 8, 14, 19, 20);", "5")
	a.is("SELECT COUNT(*) FROM RESIDUALS OF hall FOR temp WHERE on_hull;", "15")
	a.is("SELECT threshold, ROUND(volume, 9) FROM EXCEEDANCE OF hall FOR temp ABOVE 19 THRESHOLDS (20, 21) METHOD NEAREST;",
		"19 114.095550185; 20 100.362093293; 21 44.543435908")
	a.says("2 readings of temp lie within 1e-09 of the limit 19")
	a.is("SELECT ROUND(volume, 9), ROUND(unreached, 6) FROM EXCEEDANCE OF hall FOR temp BELOW 30 METHOD LINEAR;", "75.087833333 244.912167")
	a.is("SELECT lower <= volume AND volume <= upper, ABS(volume + other - 320) < 20 FROM EXCEEDANCE OF hall FOR temp ABOVE 19.5 AS e CROSS JOIN (SELECT volume AS other FROM EXCEEDANCE OF hall FOR temp BELOW 19.5) AS o;", "TRUE TRUE")
}

// Campaigns that have nothing, little, or the same everywhere; sites without a reading.
func TestEstimatesOfLittle(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE SOLID box AS BOX (0,0,0) TO (4,4,4);")
	a.text("CREATE TABLE p AS (SELECT 'a' AS name, 1.0 AS x, 1.0 AS y, 1.0 AS z UNION ALL SELECT 'b', 2, 1, 1 UNION ALL SELECT 'out', 9, 9, 9 UNION ALL SELECT 'nowhere', NULL, 1, 1);")
	a.text("CREATE CAMPAIGN five AS (SELECT 'A' AS id, 1.0 AS x, 1.0 AS y, 1.0 AS z, 5.0 AS temp, 7 AS same, 1.0 AS co UNION ALL SELECT 'B', 3, 1, 1, NULL, 7, 2 " +
		"UNION ALL SELECT 'C', 1, 3, 1, 9, 7, 3 UNION ALL SELECT 'D', 1, 1, 3, 6, 7, 4 UNION ALL SELECT 'E', 3, 3, 3, 6, 7, 5);")
	a.is("SELECT COUNT(*) FROM ESTIMATES OF (SELECT * FROM five WHERE FALSE) AT p;", "0")
	one, two := "(SELECT * FROM five WHERE id = 'A')", "(SELECT * FROM five WHERE id IN ('A', 'B'))"
	a.is("SELECT name, temp, distance FROM ESTIMATES OF "+one+" AT p WITHIN box;", "a 5 0; b 5 1; out  13.856406460551018; nowhere  ")
	a.says("1 point has no position")
	a.says("1 point lies outside box")
	a.is("SELECT estimate, residual, robust_z FROM RESIDUALS OF "+one+" FOR temp WITHIN box;", "  ")
	a.says("no other to be estimated from")
	a.is("SELECT name, co FROM ESTIMATES OF "+two+" AT p WITHIN box;", "a 1; b 1.5; out ; nowhere ")
	a.is("SELECT name, co, in_hull FROM ESTIMATES OF "+two+" AT p;", "a 1 TRUE; b 1.5 TRUE; out  FALSE; nowhere  ")
	a.is("SELECT id, estimate, residual FROM RESIDUALS OF five FOR same WITHIN box WHERE residual <> 0 OR robust_z <> 0;", "")
	a.says("all residuals of same are equal")
	// B has no temp: the others share its space, and it gets an estimate all the same.
	a.is("SELECT id, residual IS NULL, estimate BETWEEN 5 AND 9 FROM RESIDUALS OF five FOR temp WITHIN box WHERE id = 'B';", "B TRUE TRUE")
	a.says("temp is missing at 1 site of five")
	without := a.number("SELECT temp FROM ESTIMATES OF (SELECT * FROM five WHERE id <> 'B') AT (SELECT 2 AS x, 2 AS y, 1 AS z) WITHIN box;")
	if got := a.number("SELECT temp FROM ESTIMATES OF five AT (SELECT 2 AS x, 2 AS y, 1 AS z) WITHIN box;"); math.Abs(got-without) > 1e-14 {
		t.Errorf("with a site without a reading %v, without it %v", got, without)
	}
	a.is("SELECT SUM(volume) FROM EXCEEDANCE OF five FOR same ABOVE 7 THRESHOLDS (6) WITHIN box;", "64")
	a.is("SELECT temp, own_temp FROM ESTIMATES OF five AT (SELECT 1 AS x, 1 AS y, 1 AS z, 4 AS temp) WITHIN box;", "5 4")
	// Two rows in one place: each is judged by the other.
	a.is("SELECT id, estimate FROM RESIDUALS OF (SELECT 'A' AS id, 1 AS x, 1 AS y, 1 AS z, 5 AS temp UNION ALL SELECT 'B', 1, 1, 1, 7) FOR temp WITHIN box;", "A 7; B 5")
	a.is("SELECT name, zone, co FROM ESTIMATES OF "+two+" AT p WITHIN (BOX (0,0,0) TO (2,4,4), BOX (2,0,0) TO (4,4,4)) WHERE name <> 'nowhere';",
		"a BOX (0,0,0) TO (2,4,4) 1; b BOX (0,0,0) TO (2,4,4) 1; out  ")
}

// Points of a grid and along a line.
func TestGridAndTransect(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE SOLID box AS BOX (0,0,0) TO (3,2,1); CREATE SOLID l AS PRISM ((0,0), (2,0), (2,1), (1,1), (1,2), (0,2)) FROM 0 TO 1;")
	a.is("SELECT COUNT(*), MIN(x), MAX(x), MIN(z) FROM GRID OF box STEP 1;", "6 0.5 2.5 0.5")
	a.is("SELECT COUNT(*) FROM GRID OF box STEP 0.1;", "6000")
	a.is("SELECT COUNT(*) FROM GRID OF l STEP 0.5;", "24")
	a.is("SELECT x, s FROM TRANSECT BETWEEN (0,0,1) AND (3,0,1) STEP 1;", "0 0; 1 1; 2 2; 3 3")
	a.is("SELECT x, s FROM TRANSECT BETWEEN (0,0,1) AND (2.5,0,1) STEP 1;", "0 0; 1 1; 2 2; 2.5 2.5")
	a.is("SELECT COUNT(*), MAX(s) FROM TRANSECT BETWEEN (0,0,1) AND (30,0,1) STEP 0.1;", "301 30")
	a.is("SELECT COUNT(*) FROM TRANSECT BETWEEN (1,1,1) AND (1,1,1) STEP 1;", "1")
}
