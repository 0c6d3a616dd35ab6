package voronoi

import (
	"bufio"
	"bytes"
	"fmt"
	"os/exec"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// qhull runs one of Qhull's programs (Barber, Dobkin & Huhdanpaa 1996) and returns
// the lines it prints.
func qhull(t *testing.T, program string, input *bytes.Buffer, options ...string) []string {
	t.Helper()
	cmd := exec.Command(program, options...)
	cmd.Stdin = input
	var out, errs bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &errs
	if err := cmd.Run(); err != nil {
		t.Fatalf("%s %v: %v\n%s", program, options, err, errs.String())
	}
	var lines []string
	for s := bufio.NewScanner(&out); s.Scan(); {
		lines = append(lines, s.Text())
	}
	return lines
}

func needQhull(t *testing.T) {
	t.Helper()
	for _, program := range []string{"qhalf", "qconvex"} {
		if _, err := exec.LookPath(program); err != nil {
			t.Skipf("Qhull's %s is not installed: nothing to check against", program)
		}
	}
}

// qhullVolume is the volume of the cell of site i in the unit box: Qhull meets the
// half-spaces of all other sites and the six walls, and then measures the hull of
// the vertices.
func qhullVolume(t *testing.T, sites []Vec, i int) float64 {
	t.Helper()
	p := sites[i]
	var in bytes.Buffer
	fmt.Fprintf(&in, "3 1\n%.17g %.17g %.17g\n4\n%d\n", p.X, p.Y, p.Z, len(sites)-1+6)
	for j, q := range sites {
		if j == i {
			continue
		}
		n, m := sub(q, p), add(q, p)
		l := length(n)
		fmt.Fprintf(&in, "%.17g %.17g %.17g %.17g\n", n.X/l, n.Y/l, n.Z/l, -dot(n, m)/2/l)
	}
	in.WriteString("-1 0 0 0\n1 0 0 -1\n0 -1 0 0\n0 1 0 -1\n0 0 -1 0\n0 0 1 -1\n")
	corners := qhull(t, "qhalf", &in, "Fp")
	hull := bytes.NewBufferString(strings.Join(corners, "\n") + "\n")
	sizes := qhull(t, "qconvex", hull, "FS") // "0", then "2 area volume"
	fields := strings.Fields(sizes[1])
	volume, err := strconv.ParseFloat(fields[2], 64)
	if err != nil {
		t.Fatalf("%v: %v", sizes, err)
	}
	return volume
}

func TestVolumesAgainstQhull(t *testing.T) {
	needQhull(t)
	for _, set := range []struct {
		name  string
		sites []Vec
	}{{"random", random(300, 11)}, {"clustered", clustered(300, 12)}, {"lattice", grid(6)}} {
		c := measure(t, diagram(t, set.sites, Options{Solid: unitBox}), Volume)
		for i := 3; i < len(set.sites); i += len(set.sites) / 12 {
			near(t, fmt.Sprintf("%s, volume of %d", set.name, i), c.Volume[i], qhullVolume(t, set.sites, i), 1e-12)
		}
	}
}

// The unbounded cells are those of the sites on the convex hull.
func TestUnboundedCellsAgainstQhull(t *testing.T) {
	needQhull(t)
	for _, set := range []struct {
		name  string
		sites []Vec
	}{{"random", random(2000, 13)}, {"clustered", offTheWalls(clustered(2000, 14))}, {"sheet", sheet(500, 15)}} {
		var in bytes.Buffer
		fmt.Fprintf(&in, "3\n%d\n", len(set.sites))
		for _, p := range set.sites {
			fmt.Fprintf(&in, "%.17g %.17g %.17g\n", p.X, p.Y, p.Z)
		}
		onHull := make([]bool, len(set.sites))
		for _, line := range qhull(t, "qconvex", &in, "Fx")[1:] {
			i, err := strconv.Atoi(strings.TrimSpace(line))
			if err != nil {
				t.Fatal(err)
			}
			onHull[i] = true
		}
		c := measure(t, diagram(t, set.sites, Options{}), Bounded)
		for i, b := range c.Bounded {
			if b == onHull[i] {
				t.Errorf("%s: site %d %v: bounded %v, on the hull %v", set.name, i, set.sites[i], b, onHull[i])
			}
		}
	}
}

// offTheWalls drops sites in the walls of the unit box: they lie in faces of the
// hull without being its vertices, and their cells are unbounded all the same.
func offTheWalls(sites []Vec) []Vec {
	return slices.DeleteFunc(sites, func(p Vec) bool { return unitBox.beyond(p) >= 0 })
}

// Without a solid, sites are neighbours if they share an edge of the Delaunay
// tetrahedralisation: unique for random sites.
func TestNeighboursAgainstQhull(t *testing.T) {
	if _, err := exec.LookPath("qdelaunay"); err != nil {
		t.Skip("Qhull's qdelaunay is not installed: nothing to check against")
	}
	for _, set := range []struct {
		name  string
		sites []Vec
	}{{"random", random(1000, 16)}, {"clustered", clustered(1000, 17)}} {
		var in bytes.Buffer
		fmt.Fprintf(&in, "3\n%d\n", len(set.sites))
		for _, p := range set.sites {
			fmt.Fprintf(&in, "%.17g %.17g %.17g\n", p.X, p.Y, p.Z)
		}
		adjacent := map[[2]int]bool{}
		degree := make([]int32, len(set.sites))
		for _, line := range qhull(t, "qdelaunay", &in, "i")[1:] {
			var k [4]int
			if _, err := fmt.Sscan(line, &k[0], &k[1], &k[2], &k[3]); err != nil {
				t.Fatalf("%q: %v", line, err)
			}
			for a := range k {
				for b := range k {
					if e := [2]int{k[a], k[b]}; a != b && !adjacent[e] {
						adjacent[e] = true
						degree[k[a]]++
					}
				}
			}
		}
		c := measure(t, diagram(t, set.sites, Options{}), Neighbours)
		for i, n := range c.Neighbours {
			if n != degree[i] {
				t.Errorf("%s: site %d has %d neighbours, %d Delaunay edges", set.name, i, n, degree[i])
			}
		}
	}
}
