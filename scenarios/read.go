package scenarios

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"unicode"
	"unicode/utf8"

	"tidekiln/scenarios/key"
)

var topKeys = []key.Key{
	{Name: "title", Kind: key.Text, Default: "", Fixed: true, Meaning: "what the case is, for people"},
	{Name: "format", Kind: key.Integer, Optional: true, Range: key.Between(1, 1), Fixed: true, Meaning: "version of the scenario format"},
	{Name: "run", Kind: key.Special, Fixed: true, Meaning: "how long, how exactly, how often"},
	{Name: "central", Kind: key.Special, Fixed: true, Meaning: "the planet or star"},
	{Name: "orbiter", Kind: key.Special, Fixed: true, Meaning: "moons or planets, a table each"},
	{Name: "chain", Kind: key.Special, Optional: true, Fixed: true, Meaning: "orbiters locked in resonances, a table a chain"},
	{Name: "change", Kind: key.Special, Optional: true, Fixed: true, Meaning: "what changes during the history, a list"},
	{Name: "observed", Kind: key.Special, Optional: true, Fixed: true, Meaning: "measured values to compare with, a list"},
}

var topLater = []string{"sweep"}

// largest bounds a scenario file, bytes.
const largest = 1 << 20

// Read checks a scenario given as TOML; name stands for it in messages. Edits
// are made in order before anything is checked. The error is Errors: every
// problem of the file, by line.
func Read(name string, src []byte, edits ...Edit) (*Scenario, error) {
	if p := unreadable(src); p != nil {
		p.File = name
		return nil, Errors{*p}
	}
	root, problems := parse(name, bytes.TrimPrefix(src, []byte("\uFEFF")))
	if len(problems) > 0 {
		return nil, problems.sorted()
	}
	r := &reader{file: name, root: root, problems: editAll(root, edits)}
	s := r.scenario()
	if len(r.problems) > 0 {
		return nil, r.problems.sorted()
	}
	return s, nil
}

// unreadable says why bytes are no scenario at all.
func unreadable(src []byte) *Problem {
	switch {
	case len(src) > largest:
		return &Problem{What: fmt.Sprintf("is larger than %d bytes", largest), Hint: "a scenario is a short text; give the .toml file"}
	case bytes.IndexByte(src, 0) >= 0:
		return &Problem{What: "is a binary file, not a scenario", Hint: "give the .toml file"}
	case !utf8.Valid(src):
		valid := 0
		for valid < len(src) {
			c, size := utf8.DecodeRune(src[valid:])
			if c == utf8.RuneError && size == 1 {
				break
			}
			valid += size
		}
		return &Problem{Line: 1 + bytes.Count(src[:valid], []byte("\n")), What: "is not UTF-8 text", Hint: "save the file as UTF-8"}
	case len(bytes.TrimSpace(src)) == 0:
		return &Problem{What: "is empty", Hint: "a shipped scenario shows what one holds"}
	}
	return nil
}

// scenario reads the whole document.
func (r *reader) scenario() *Scenario {
	top := &scope{keys: topKeys, later: topLater}
	v, _ := r.values(r.root, top)
	s := &Scenario{}
	s.Title, _ = v.Map["title"].(string)
	if strings.ContainsFunc(s.Title, unicode.IsControl) {
		r.report(path{"title"}, "holds a control character", "write it on one line, in visible characters")
	}
	if n := r.table(v, "central"); n != nil {
		s.Central = r.central(n, top)
	}
	if n := r.table(v, "orbiter"); n != nil {
		s.Orbiters = r.orbiters(n, top)
		if len(n.names) == 0 {
			r.report(path{"orbiter"}, "holds no orbiter", "add a table [orbiter.NAME]")
		}
	}
	if n := r.table(v, "chain"); n != nil {
		s.Chains = r.chains(n, top)
	}
	if n := r.table(v, "run"); n != nil {
		s.Run = r.run(n, top)
	}
	if n, ok := v.Map["observed"].(*node); ok {
		s.Observed = r.observed(n, top)
	}
	r.structure(s)
	if len(r.problems) == 0 {
		r.layout(s)
	}
	if n, ok := v.Map["change"].(*node); ok {
		s.Changes = r.changes(n, top)
	}
	return s
}

// table returns a section that must be a table.
func (r *reader) table(v key.Values, name string) *node {
	n, ok := v.Map[name].(*node)
	if !ok || n.form == tableForm {
		return n
	}
	hint := "write [" + name + "]"
	if name == "orbiter" || name == "chain" {
		hint = fmt.Sprintf("write [%s.NAME], a table for each", name)
	}
	r.report(path{name}, "is "+n.form.String()+", not a table", hint)
	return nil
}

// ReadFile checks the scenario in a file of at most 1 MiB. The error is
// Errors, also where the file cannot be read.
func ReadFile(path string, edits ...Edit) (*Scenario, error) {
	fail := func(what, hint string) (*Scenario, error) {
		return nil, Errors{{File: path, What: what, Hint: hint}}
	}
	f, err := os.Open(path)
	if errors.Is(err, fs.ErrNotExist) {
		return fail("there is no such file", "")
	}
	if err != nil {
		return fail("cannot be read: "+cause(err), "")
	}
	defer f.Close()
	if info, err := f.Stat(); err == nil && info.IsDir() {
		return fail("is a directory, not a scenario", "give the .toml file")
	}
	src, err := io.ReadAll(io.LimitReader(f, largest+1))
	if err != nil {
		return fail("cannot be read: "+cause(err), "")
	}
	return Read(path, src, edits...)
}

func cause(err error) string {
	var pe *fs.PathError
	if errors.As(err, &pe) {
		err = pe.Err
	}
	return err.Error()
}

// Open reads the file of that path or, where there is none, the shipped
// scenario of that name, with or without .toml.
func Open(nameOrPath string, edits ...Edit) (*Scenario, error) {
	info, err := os.Stat(nameOrPath)
	if err == nil && !info.IsDir() {
		return ReadFile(nameOrPath, edits...)
	}
	var known []string
	for _, s := range Shipped() {
		if s.Name == strings.TrimSuffix(nameOrPath, ".toml") {
			return Read(s.File, s.Source, edits...)
		}
		known = append(known, s.Name)
	}
	if err == nil || !errors.Is(err, fs.ErrNotExist) {
		return ReadFile(nameOrPath, edits...)
	}
	hint := "shipped are " + strings.Join(known, ", ")
	near := nearest(nameOrPath, tomlFiles(filepath.Dir(nameOrPath)))
	if near == "" {
		near = nearest(strings.TrimSuffix(nameOrPath, ".toml"), known)
	}
	if near != "" {
		hint = "did you mean " + near + "?"
	}
	return nil, Errors{{File: nameOrPath, What: "there is no such file and no such shipped scenario", Hint: hint}}
}

// tomlFiles lists the scenario files of a directory.
func tomlFiles(dir string) []string {
	all, err := filepath.Glob(filepath.Join(dir, "*.toml"))
	if err != nil {
		return nil
	}
	return all
}
