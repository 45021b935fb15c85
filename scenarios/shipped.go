package scenarios

import (
	"embed"
	"strings"
)

//go:embed *.toml
var shippedFiles embed.FS

// ShippedScenario is one of the scenarios that come with the program.
type ShippedScenario struct {
	Name   string // "volcanic-cycle"
	Title  string
	File   string // "volcanic-cycle.toml"
	Source []byte
}

// Shipped lists them by name.
func Shipped() []ShippedScenario {
	files, _ := shippedFiles.ReadDir(".") // the embedded root is always there
	var all []ShippedScenario
	for _, f := range files {
		s := ShippedScenario{Name: strings.TrimSuffix(f.Name(), ".toml"), File: f.Name()}
		s.Source, _ = shippedFiles.ReadFile(f.Name())
		if root, problems := parse(s.File, s.Source); len(problems) == 0 && root.table["title"] != nil {
			s.Title = root.table["title"].text
		}
		all = append(all, s)
	}
	return all
}
