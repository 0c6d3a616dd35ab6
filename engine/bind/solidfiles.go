package bind

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"time"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
	"nearcell/catalog/reader/obj"
	"nearcell/catalog/reader/ply"
	"nearcell/catalog/reader/stl"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// Content is what a part of a solid expression takes from a file: what MESH, BOXES and
// TERRAIN are made of.
type Content struct {
	Body   solid.Solid
	Source catalog.SourceFile

	single bool         // MESH: the file has coordinates of 32 bits
	boxes  []solid.Part // BOXES: as the file has them
	blocks []block      // of each of the boxes, where a frame has turned them
	points []solid.Vec  // TERRAIN
	height float64
	told   []told
}

// told is a note on what was read.
type told struct {
	level note.Level
	text  string
}

func (c *Content) tell(level note.Level, format string, args ...any) {
	c.told = append(c.told, told{level, fmt.Sprintf(format, args...)})
}

// SolidCache keeps solids that take time to make, and what files hold, so that a session
// makes them once. It may be used by several goroutines.
type SolidCache struct {
	mu    sync.Mutex
	made  map[[32]byte]solid.Solid
	files map[fileKey]*Content
	kept  map[storedKey]*Content
}

// fileKey is a file as it was, and how it was read.
type fileKey struct {
	path    string
	size    int64
	changed time.Time
	how     string
}

// storedKey is a content that the catalog keeps.
type storedKey struct {
	object [16]byte
	part   int
}

// mostCached is the number of solids from which a cache begins anew.
const mostCached = 64

func cached[K comparable, V any](c *SolidCache, table func() *map[K]V, key K, make_ func() (V, error)) (V, error) {
	if c == nil {
		return make_()
	}
	c.mu.Lock()
	v, ok := (*table())[key]
	c.mu.Unlock()
	if ok {
		return v, nil
	}
	v, err := make_()
	if err != nil {
		return v, err
	}
	c.mu.Lock()
	defer c.mu.Unlock()
	if t := table(); *t == nil || len(*t) >= mostCached {
		*t = map[K]V{}
	}
	(*table())[key] = v
	return v, nil
}

// content is that of a file expression: of the file, or, inside a solid that the catalog
// keeps, of what was read when it was made.
func (b *binder) content(s lang.Solid, file *lang.Text, how string, read func(src *reader.Source) (*Content, error)) (*Content, error) {
	if b.stored != nil {
		return b.stored.next(b.env.Solids)
	}
	path := file.Value
	if !filepath.IsAbs(path) {
		path = filepath.Join(b.env.Folder, path)
	}
	info, err := os.Stat(path)
	if err != nil {
		return nil, b.noSolidFile(file, path, err)
	}
	if info.IsDir() {
		return nil, problem.New("no-file", b.at(file), "'%s' is a folder", file.Value)
	}
	key := fileKey{path, info.Size(), info.ModTime(), how}
	c, err := cached(b.env.Solids, func() *map[fileKey]*Content { return &b.env.Solids.files }, key, func() (*Content, error) {
		src, err := reader.Open(file.Value, path)
		if err != nil {
			return nil, b.noSolidFile(file, path, err)
		}
		c, err := read(src)
		if err != nil {
			return nil, err
		}
		c.Source = catalog.SourceFile{Path: file.Value, SHA256: src.SHA256(), Size: int64(len(src.Data)), ModTime: src.ModTime, Rows: c.Source.Rows}
		return c, nil
	})
	if err != nil {
		return nil, err
	}
	if b.env.Notes != nil {
		for _, t := range c.told {
			b.env.Notes.Add(t.level, note.Import, "%s", t.text)
		}
	}
	return c, nil
}

func (b *binder) noSolidFile(file *lang.Text, path string, err error) error {
	if !os.IsNotExist(err) {
		return problem.New("file", b.at(file), "'%s' cannot be read: %v", file.Value, plainCause(err))
	}
	p := problem.New("no-file", b.at(file), "there is no file '%s'", file.Value).Because(err)
	var names []string
	if entries, err := os.ReadDir(filepath.Dir(path)); err == nil {
		for _, e := range entries {
			if !e.IsDir() {
				names = append(names, e.Name())
			}
		}
	}
	if near := lang.Nearest(filepath.Base(path), names); near != "" {
		return p.WithHint("did you mean '%s'?", near)
	}
	return p.WithHint("a relative path starts at the script's folder")
}

// lengthUnits are the units of files of triangles, in metres.
var lengthUnits = map[string]float64{
	"m": 1, "mm": 0.001, "cm": 0.01, "dm": 0.1, "km": 1000, "um": 1e-6, "µm": 1e-6, "in": 0.0254, "inch": 0.0254, "ft": 0.3048, "foot": 0.3048, "yd": 0.9144,
}

// mesh reads MESH 'file'.
func (b *binder) mesh(s *lang.MeshSolid) (lang.Solid, error) {
	unit, weld := 1.0, 0.0
	if !s.Unit.IsZero() {
		var ok bool
		if unit, ok = lengthUnits[strings.ToLower(s.Unit.Text)]; !ok {
			return nil, problem.New("length-unit", b.at(&s.Unit), "'%s' is no unit of length that MESH knows", s.Unit.Text).
				WithHint("m, dm, cm, mm, um, km, in, ft or yd")
		}
	}
	if s.Weld != nil {
		var err error
		if weld, err = b.real(s.Weld, "WELD"); err != nil {
			return nil, err
		}
		if !(weld > 0) {
			return nil, problem.New("types", b.at(s.Weld), "WELD must be greater than 0")
		}
	}
	how := fmt.Sprintf("mesh %v %v", unit, weld)
	c, err := b.content(s, s.File, how, func(src *reader.Source) (*Content, error) { return b.readMesh(s, src, unit, weld) })
	if err != nil {
		return nil, err
	}
	own := *s
	if s.Weld != nil {
		own.Weld = literalNumber(weld, s.At)
	}
	b.contents[&own] = c
	return &own, nil
}

// isMeshFile tells which reader a file is for, by its content and then by its name.
func meshReader(src *reader.Source) func([]byte) (*reader.Mesh, error) {
	ending := strings.ToLower(filepath.Ext(src.Name))
	switch {
	case ply.Is(src.Data):
		return ply.Read
	case stl.Is(src.Data):
		return stl.Read
	case ending == ".stl":
		return stl.Read
	case ending == ".ply":
		return ply.Read
	case ending == ".obj" || obj.Is(src.Data):
		return obj.Read
	}
	return nil
}

func (b *binder) readMesh(s *lang.MeshSolid, src *reader.Source, unit, weld float64) (*Content, error) {
	read := meshReader(src)
	if read == nil {
		return nil, problem.New("mesh-file", b.at(s.File), "'%s' is no file of triangles: neither STL nor PLY nor OBJ", src.Name).
			WithHint("a plan of corners is PRISM '%s' FROM z TO z, boxes are BOXES '%s'", src.Name, src.Name)
	}
	m, err := read(src.Data)
	if err != nil {
		return nil, b.meshFault(err, s.File)
	}
	corners := make([]solid.Vec, len(m.Corners))
	for i, p := range m.Corners {
		corners[i] = solid.Vec{X: float64(p[0] * unit), Y: float64(p[1] * unit), Z: float64(p[2] * unit)}
	}
	c := &Content{single: m.Facts.Single}
	body, report, err := mesh.New(corners, m.Triangles, mesh.Options{Weld: weld, Precision: precision(c.single)})
	if err != nil {
		return nil, b.faultyMesh(err, s, src.Name)
	}
	c.Body = body
	c.Source.Rows = m.Facts.Faces
	tellMesh(c, src.Name, m, report, s, body)
	return c, nil
}

func precision(single bool) float64 {
	if single {
		return 0x1p-23
	}
	return 0
}

// boxes reads BOXES 'file'.
func (b *binder) boxesFile(s *lang.BoxesSolid) (lang.Solid, error) {
	c, err := b.content(s, s.File, "boxes", func(src *reader.Source) (*Content, error) { return b.readBoxes(s, src) })
	if err != nil {
		return nil, err
	}
	own := *s
	b.contents[&own] = c
	return &own, nil
}

// boxColumns are the columns of a file of boxes, and what they may be called too.
var boxColumns = [6][2]string{{"x_from", "x0"}, {"x_to", "x1"}, {"y_from", "y0"}, {"y_to", "y1"}, {"z_from", "z0"}, {"z_to", "z1"}}

const boxesHint = "a file of boxes has the columns name, x_from, x_to, y_from, y_to, z_from and z_to, a box on each line"

func (b *binder) readBoxes(s *lang.BoxesSolid, src *reader.Source) (*Content, error) {
	t, err := b.readTable(s.File, src, []string{"name"}, boxesHint)
	if err != nil {
		return nil, err
	}
	var cols [6]*column.Vector
	for i, names := range boxColumns {
		for _, name := range names {
			if cols[i] == nil {
				cols[i] = numbers(t, name)
			}
		}
		if cols[i] == nil {
			return nil, problem.New("file", b.at(s.File), "'%s' has no column %s of numbers", src.Name, names[0]).WithHint(boxesHint)
		}
	}
	hits := named(t.Schema, "name")
	if len(hits) != 1 {
		return nil, problem.New("file", b.at(s.File), "'%s' has no column name", src.Name).WithHint(boxesHint)
	}
	c := &Content{}
	for r := range t.N {
		name := textOf(&t.Cols[hits[0]], r)
		if name == "" {
			return nil, problem.New("file", b.at(s.File), "box %d of '%s' has no name", r+1, src.Name)
		}
		var x [6]float64
		for i, v := range cols {
			if v.IsNull(r) {
				return nil, problem.New("file", b.at(s.File), "the box '%s' of '%s' has no %s", name, src.Name, boxColumns[i][0])
			}
			x[i] = floatAt(v, r)
		}
		box, err := solid.NewBox(solid.Vec{X: x[0], Y: x[2], Z: x[4]}, solid.Vec{X: x[1], Y: x[3], Z: x[5]})
		if err != nil {
			return nil, problem.New("no-volume", b.at(s.File), "the box '%s' of '%s' has no volume: (%.6g, %.6g, %.6g) TO (%.6g, %.6g, %.6g)",
				name, src.Name, x[0], x[2], x[4], x[1], x[3], x[5])
		}
		c.boxes = append(c.boxes, solid.Part{Name: name, Solid: box})
	}
	if len(c.boxes) == 0 {
		return nil, problem.New("file", b.at(s.File), "'%s' has no boxes", src.Name).WithHint(boxesHint)
	}
	body, err := mesh.NewBoxes(c.boxes)
	if err != nil {
		return nil, b.faultyMesh(err, s, src.Name)
	}
	c.Body = body
	c.Source.Rows = t.N
	total := 0.0
	for _, p := range c.boxes {
		total += p.Solid.Volume()
	}
	if total-body.Volume() > 1e-9*total {
		c.tell(note.Note, "boxes of '%s' overlap: together they have %.6g m³, one by one %.6g m³", src.Name, body.Volume(), total)
	}
	return c, nil
}

// terrain reads TERRAIN 'file' TO height.
func (b *binder) terrain(s *lang.TerrainSolid) (lang.Solid, error) {
	h, err := b.real(s.To, "a height")
	if err != nil {
		return nil, err
	}
	c, err := b.content(s, s.File, fmt.Sprintf("terrain %v", h), func(src *reader.Source) (*Content, error) { return b.readTerrain(s, src, h) })
	if err != nil {
		return nil, err
	}
	own := *s
	own.To = literalNumber(h, s.At)
	b.contents[&own] = c
	return &own, nil
}

const terrainHint = "a survey has the columns x, y and z, a point on each line"

func (b *binder) readTerrain(s *lang.TerrainSolid, src *reader.Source, h float64) (*Content, error) {
	t, err := b.readTable(s.File, src, nil, terrainHint)
	if err != nil {
		return nil, err
	}
	var cols [3]*column.Vector
	for i, name := range [3]string{"x", "y", "z"} {
		if cols[i] = numbers(t, name); cols[i] == nil {
			return nil, problem.New("file", b.at(s.File), "the survey '%s' has no column %s of numbers", src.Name, name).WithHint(terrainHint)
		}
	}
	c := &Content{height: h}
	for r := range t.N {
		for i, v := range cols {
			if v.IsNull(r) {
				return nil, problem.New("file", b.at(s.File), "point %d of the survey '%s' has no %c", r+1, src.Name, "xyz"[i])
			}
		}
		c.points = append(c.points, solid.Vec{X: floatAt(cols[0], r), Y: floatAt(cols[1], r), Z: floatAt(cols[2], r)})
	}
	body, ground, err := mesh.Terrain(c.points, h)
	if err != nil {
		return nil, b.faultyMesh(err, s, src.Name)
	}
	c.Body = body
	c.Source.Rows = t.N
	if ground.Repeated > 0 {
		c.tell(note.Note, "%s of the survey '%s' stood there twice", count(ground.Repeated, "point"), src.Name)
	}
	if ground.Under > 0 && ground.Over > 0 {
		c.tell(note.Warning, "the survey '%s' lies on both sides of the height %.6g: %.6g m³ are under the height and %.6g m³ over it, and both belong to the solid; MINUS a box takes one of them away",
			src.Name, h, ground.Under, ground.Over)
	}
	c.tell(note.Note, "the surface of '%s' is plane between %s; the longest side of a triangle is %.6g m", src.Name, count(ground.Points, "point"), ground.LongestGap)
	return c, nil
}

// readTable reads a table of numbers that describes a solid.
func (b *binder) readTable(file *lang.Text, src *reader.Source, texts []string, hint string) (*column.Table, error) {
	got, err := csv.Reader{}.Read(context.Background(), src, reader.Options{TextColumns: texts})
	if err != nil {
		return nil, problem.New("file", b.at(file), "'%s' cannot be read: %v", src.Name, err).WithHint("%s", hint)
	}
	return got.Table, nil
}

// numbers is the column of numbers with this name, or nil.
func numbers(t *column.Table, name string) *column.Vector {
	hits := named(t.Schema, name)
	if len(hits) != 1 || !t.Schema[hits[0]].Type.Numeric() {
		return nil
	}
	return &t.Cols[hits[0]]
}

func floatAt(v *column.Vector, r int) float64 {
	if v.Type == column.Integer {
		return float64(v.I[r])
	}
	return v.F[r]
}

func textOf(v *column.Vector, r int) string {
	switch {
	case v.IsNull(r):
		return ""
	case v.Type == column.Text:
		return v.Text(r)
	case v.Type == column.Integer:
		return fmt.Sprint(v.I[r])
	}
	return fmt.Sprint(v.F[r])
}
