package record

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

func oneOfEach() *Table {
	return &Table{Name: "each", Meaning: "One column of each kind.", Columns: []Column{
		{Name: "x_m", Kind: Float, Unit: "m", Meaning: "A length.", Null: "not measured"},
		{Name: "count", Kind: Int, Meaning: "A count.", Null: "not counted"},
		{Name: "word", Kind: Text, Meaning: "A word.", Null: "nothing to say"},
		{Name: "flag", Kind: Bool, Meaning: "A flag.", Null: "undecided"},
		{Name: "list_s", Kind: Floats, Unit: "s", Meaning: "Some times.", Null: "no list"},
	}}
}

// TestRoundTrip expects every value back to the bit: nothing is converted.
func TestRoundTrip(t *testing.T) {
	table := oneOfEach()
	floats := []float64{0, math.Copysign(0, -1), 1.0 / 3, math.MaxFloat64, math.SmallestNonzeroFloat64, math.Inf(1), math.Inf(-1)}
	ints := []int64{0, -1, 7, math.MaxInt64, math.MinInt64, 1 << 53, 1}
	texts := []string{"", "Cinder", "Brine", "Cinder", "λ = 2π", "a\x00b", strings.Repeat("x", 5000)}
	lists := [][]float64{{}, {1}, {1, 2, 3}, {math.Inf(1)}, {0}, {}, make([]float64, 3000)}
	rows := NewRows(table)
	for i := range floats {
		rows.Append() // all null
		row := rows.Append()
		row.Float("x_m", floats[i])
		row.Int("count", ints[i])
		row.Text("word", texts[i])
		row.Bool("flag", i%2 == 0)
		row.Floats("list_s", lists[i])
	}
	dir := filepath.Join(t.TempDir(), "out")
	w, err := Create(dir, []*Table{table}, CreateOptions{})
	must(t, err)
	must(t, w.Write(rows, map[string]string{"seed": "1", "empty": ""}))
	must(t, w.Commit())

	d, err := Open(dir)
	must(t, err)
	f, err := d.Read("each")
	must(t, err)
	if !reflect.DeepEqual(f.Table(), table) {
		t.Errorf("declaration %+v, want %+v", f.Table(), table)
	}
	if f.Len() != 2*len(floats) || f.Unit("x_m") != "m" || f.Unit("count") != "" {
		t.Errorf("%d rows, units %q and %q", f.Len(), f.Unit("x_m"), f.Unit("count"))
	}
	if want := map[string]string{"seed": "1", "empty": ""}; !reflect.DeepEqual(f.Meta, want) {
		t.Errorf("meta %v, want %v", f.Meta, want)
	}
	gotFloats, v1, err1 := f.Floats("x_m")
	gotInts, v2, err2 := f.Ints("count")
	gotTexts, v3, err3 := f.Texts("word")
	gotBools, v4, err4 := f.Bools("flag")
	gotLists, v5, err5 := f.Lists("list_s")
	must(t, errors.Join(err1, err2, err3, err4, err5))
	for i := range f.Len() {
		set, k := i%2 == 1, i/2
		for j, v := range [][]bool{v1, v2, v3, v4, v5} {
			if v[i] != set {
				t.Fatalf("row %d, column %d: valid %v, want %v", i, j, v[i], set)
			}
		}
		if !set {
			continue
		}
		if math.Float64bits(gotFloats[i]) != math.Float64bits(floats[k]) || gotInts[i] != ints[k] ||
			gotTexts[i] != texts[k] || gotBools[i] != (k%2 == 0) || !reflect.DeepEqual(gotLists[i], lists[k]) {
			t.Errorf("row %d: %v %v %q %v %v", i, gotFloats[i], gotInts[i], gotTexts[i], gotBools[i], gotLists[i])
		}
	}
	if _, _, err := f.Floats("count"); !errors.Is(err, ErrRows) {
		t.Errorf("an int column as floats: %v", err)
	}
	if _, _, err := f.Floats("nowhere"); !errors.Is(err, ErrRows) {
		t.Errorf("a missing column: %v", err)
	}
	if _, err := d.Read("nowhere"); !errors.Is(err, ErrNotExist) {
		t.Errorf("a missing table: %v", err)
	}
}

// TestRowGroupsAndParts crosses the borders of batch, row group and file.
func TestRowGroupsAndParts(t *testing.T) {
	table := &Table{Name: "long", Meaning: "Many rows.", Columns: []Column{
		{Name: "i", Kind: Int, Meaning: "The row."},
		{Name: "list", Kind: Floats, Meaning: "Up to two copies of the row.", Null: "row divisible by 4"},
	}}
	fill := func(from, to int) *Rows {
		rows := NewRows(table)
		for i := from; i < to; i++ {
			row := rows.Append()
			row.Int("i", int64(i))
			if i%4 != 0 {
				row.Floats("list", []float64{float64(i), float64(i)}[:i%4-1])
			}
		}
		return rows
	}
	first, total := groupRows+batchRows+1, groupRows+2*batchRows
	dir := filepath.Join(t.TempDir(), "out")
	w, err := Create(dir, []*Table{table}, CreateOptions{})
	must(t, err)
	must(t, w.Write(fill(0, first), nil))
	must(t, w.Write(fill(first, total), nil))
	must(t, w.Commit())
	info, err := Inspect(dir)
	must(t, err)
	if want := (TableInfo{"long", int64(total), 2}); info.Tables[1] != want {
		t.Errorf("%+v, want %+v", info.Tables[1], want)
	}
	d, err := Open(dir)
	must(t, err)
	f, err := d.Read("long")
	must(t, err)
	number, _, err := f.Ints("i")
	must(t, err)
	lists, valid, err := f.Lists("list")
	must(t, err)
	if len(number) != total || len(lists) != total {
		t.Fatalf("%d and %d rows, want %d", len(number), len(lists), total)
	}
	for i := range number {
		if number[i] != int64(i) || valid[i] != (i%4 != 0) || valid[i] && len(lists[i]) != i%4-1 ||
			len(lists[i]) > 0 && lists[i][len(lists[i])-1] != float64(i) {
			t.Fatalf("row %d: %d, %v, valid %v", i, number[i], lists[i], valid[i])
		}
	}
}

func TestEmptyTables(t *testing.T) {
	tables := []*Table{oneOfEach()}
	dir := filepath.Join(t.TempDir(), "out")
	w, err := Create(dir, tables, CreateOptions{})
	must(t, err)
	must(t, w.Write(NewRows(tables[0]), nil))
	must(t, w.Commit())
	d, err := Open(dir)
	must(t, err)
	f, err := d.Read("each")
	must(t, err)
	if x, valid, err := f.Lists("list_s"); f.Len() != 0 || len(x) != 0 || len(valid) != 0 || err != nil {
		t.Errorf("%d rows, %v, %v, %v", f.Len(), x, valid, err)
	}
}

// TestSameBytes encodes the same rows and pairs twice. Go permutes the order of
// maps from run to run, so twenty tries show an order that depends on it.
func TestSameBytes(t *testing.T) {
	meta := map[string]string{}
	for i := range 8 {
		meta[fmt.Sprintf("key %d", i)] = "value"
	}
	encoded := func() []byte {
		var b bytes.Buffer
		must(t, encode(&b, sampleRows(sampleTables(), 3, 2000)[1], meta))
		return b.Bytes()
	}
	first := encoded()
	for range 20 {
		if !bytes.Equal(first, encoded()) {
			t.Fatal("same rows, different bytes")
		}
	}
	if !bytes.Contains(first, []byte("tidekiln version "+layoutVersion)) {
		t.Error("the footer's created_by is not ours")
	}
}

func TestRefusedRows(t *testing.T) {
	strict := oneOfEach()
	strict.Columns[1].Null = ""
	for _, c := range []struct {
		name string
		set  func(Row)
		want string // place and cause in the error
	}{
		{"NaN", func(r Row) { r.Int("count", 1); r.Float("x_m", math.NaN()) }, `table each, column "x_m", row 1: NaN`},
		{"NaN in a list", func(r Row) { r.Int("count", 1); r.Floats("list_s", []float64{0, math.NaN()}) }, `column "list_s", row 1: NaN at place 1`},
		{"unset", func(Row) {}, `column "count", row 1: left unset`},
		{"not UTF-8", func(r Row) { r.Int("count", 1); r.Text("word", "\xff") }, `column "word", row 1: text is not UTF-8`},
		{"no column", func(r Row) { r.Int("count", 1); r.Int("nowhere", 1) }, `column "nowhere", row 1: no such column`},
		{"other kind", func(r Row) { r.Int("count", 1); r.Int("x_m", 1) }, `column "x_m", row 1: column is float, not int`},
	} {
		t.Run(c.name, func(t *testing.T) {
			parent := t.TempDir()
			w, err := Create(filepath.Join(parent, "out"), []*Table{strict}, CreateOptions{})
			must(t, err)
			rows := NewRows(strict)
			rows.Append().Int("count", 0)
			c.set(rows.Append())
			if err := w.Write(rows, nil); !errors.Is(err, ErrRows) || !strings.Contains(err.Error(), c.want) {
				t.Errorf("error %v, want %q", err, c.want)
			}
			if err := w.Commit(); !errors.Is(err, ErrRows) || !strings.Contains(err.Error(), "each was not written") {
				t.Errorf("commit without the table: %v", err)
			}
			must(t, w.Abort())
			if left := beside(t, parent); len(left) != 0 {
				t.Errorf("left behind: %v", left)
			}
		})
	}
}

// TestUnequalLengths breaks the buffer by hand, as only a fault of this package
// could: the Parquet library writes such columns without a word.
func TestUnequalLengths(t *testing.T) {
	table := oneOfEach()
	for j := range table.Columns {
		rows := NewRows(table)
		rows.Append()
		rows.columns[j].grow(table.Columns[j].Kind)
		if err := rows.check(); !errors.Is(err, ErrRows) || !strings.Contains(err.Error(), "holds 2 values for 1 rows") {
			t.Errorf("column %s: %v", table.Columns[j].Name, err)
		}
	}
}

func TestRefusedMeta(t *testing.T) {
	w, err := Create(filepath.Join(t.TempDir(), "out"), []*Table{oneOfEach()}, CreateOptions{})
	must(t, err)
	defer w.Abort()
	for _, meta := range []map[string]string{{arrowKey: "x"}, {"": "x"}, {"k": "\xff"}} {
		if err := w.Write(NewRows(w.tables[0]), meta); !errors.Is(err, ErrRows) {
			t.Errorf("%q: %v", meta, err)
		}
	}
	if err := w.Write(NewRows(oneOfEach()), nil); !errors.Is(err, ErrRows) {
		t.Errorf("rows of a table that is not the writer's: %v", err)
	}
}

// TestDamage cuts and alters a file at many places. Cut files never read. An
// altered page reads right or not at all: its CRC-32 finds every single bit
// (Parquet format, page headers). The footer has no checksum, so there only a
// panic is excluded.
func TestDamage(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out")
	must(t, writeSample(dir, 1, 300, CreateOptions{}))
	path := firstPart(dir, "bodies")
	whole, err := os.ReadFile(path)
	must(t, err)
	read := func(b []byte) error {
		must(t, os.WriteFile(path, b, 0o644))
		_, err := checkSample(dir, 300)
		return err
	}
	for n := 0; n < len(whole); n += len(whole)/40 + 1 {
		if err := read(whole[:n]); !errors.Is(err, ErrDamaged) {
			t.Errorf("cut to %d of %d bytes: %v", n, len(whole), err)
		}
	}
	footer := len(whole) - 8 - int(binary.LittleEndian.Uint32(whole[len(whole)-8:]))
	caught, tries := 0, 0
	for n := 0; n < footer; n += 29 {
		b := bytes.Clone(whole)
		b[n] ^= 1 << (n % 8)
		tries++
		if err := read(b); err != nil {
			caught++
			if !errors.Is(err, ErrDamaged) {
				t.Errorf("byte %d of %d: %v", n, footer, err)
			}
		}
	}
	// The rest is index and padding, which this package does not read.
	if caught < tries/2 {
		t.Errorf("%d of %d altered bytes noticed", caught, tries)
	}
	// Any byte, any value: about one in 4000 makes the Parquet library panic.
	random := rand.New(rand.NewPCG(1, 2))
	for range 400 {
		b := bytes.Clone(whole)
		b[random.IntN(len(b))] = byte(random.IntN(256))
		must(t, os.WriteFile(path, b, 0o644))
		if p, err := openPart(path, sampleTables()[1]); err == nil {
			p.appendTo(NewRows(sampleTables()[1])) // an error or not, but no panic
			must(t, p.file.Close())
		}
	}
	var caughtPanic error
	func() {
		defer catch(&caughtPanic)
		panic("slice bounds")
	}()
	if caughtPanic == nil {
		t.Error("a panic was not turned into an error")
	}
	must(t, os.Remove(path))
	if err := read(whole); err != nil {
		t.Errorf("restored: %v", err)
	}
	must(t, os.Remove(path))
	if _, err := Inspect(dir); !errors.Is(err, ErrDamaged) || !strings.Contains(err.Error(), "bodies has no file") {
		t.Errorf("without its file: %v", err)
	}
	if _, err := Inspect(t.TempDir()); !errors.Is(err, ErrDamaged) {
		t.Errorf("an empty directory: %v", err)
	}
	if _, err := Open(dir + "x"); !errors.Is(err, ErrNotExist) || !errors.Is(err, os.ErrNotExist) {
		t.Errorf("a missing directory: %v", err)
	}
}
