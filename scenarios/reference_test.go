package scenarios

import (
	"regexp"
	"strings"
	"testing"
)

// walk lists the paths of all scalars and lists of a document, names of
// orbiters and chains written NAME.
func walk(n *node, at string, visit func(string)) {
	for _, name := range n.names {
		c, p := n.table[name], at+name
		if at == "orbiter." || at == "chain." {
			p = at + "NAME"
		}
		switch {
		case c.form == tableForm:
			walk(c, p+".", visit)
		case c.form == listForm && len(c.items) > 0 && c.items[0].form == tableForm:
			for _, item := range c.items {
				walk(item, p+"[].", visit)
			}
		default:
			visit(p)
		}
	}
}

func TestKeysListWhatScenariosHold(t *testing.T) {
	known := map[string]bool{}
	for _, k := range Keys() {
		known[k.Path] = true
		if k.Meaning == "" {
			t.Errorf("%s has no meaning", k.Path)
		}
		if k.Kind == "quantity" && k.Unit == "" {
			t.Errorf("%s has no unit", k.Path)
		}
	}
	sources := map[string]string{"base": base}
	for _, s := range Shipped() {
		resolved := mustRead(t, string(s.Source)).TOML()
		sources[s.Name] = resolved
	}
	for name, src := range sources {
		root, problems := parse(name, []byte(src))
		if len(problems) > 0 {
			t.Fatal(problems)
		}
		walk(root, "", func(p string) {
			if !known[p] && !strings.Contains(p, "[].set.") {
				t.Errorf("%s holds %s, which Keys does not list", name, p)
			}
		})
	}
}

var selected = regexp.MustCompile(`(\w+)\.(\w+) = "([\w-]+)"`)

// TestReaderKnowsWhatKeysList puts each key of the reference alone into its
// table: whatever else is wrong, the reader must not call it unknown.
func TestReaderKnowsWhatKeysList(t *testing.T) {
	for _, k := range Keys() {
		p := strings.NewReplacer("NAME", "Cinder", "chain.NAME", "chain.inner", "[]", "").Replace(k.Path)
		p = strings.Replace(p, "chain.Cinder", "chain.inner", 1)
		var edits []Edit
		for _, m := range selected.FindAllStringSubmatch(k.Law, -1) {
			at := p[:strings.Index(p, "."+m[1]+".")] + "." + m[1] + "." + m[2]
			edits = append(edits, Edit{Path: at, Value: `"` + m[3] + `"`})
		}
		if table, name, ok := strings.Cut(k.Path, "[]."); ok {
			edits = append(edits, Edit{Path: table, Value: "[{ " + name + " = 1 }]"})
		} else {
			if strings.HasPrefix(p, "run.record.") {
				edits = append(edits, Edit{Path: "run.record", Value: "{}"})
			}
			edits = append(edits, Edit{Path: p, Value: "1"})
		}
		_, err := Read("x.toml", []byte(base), edits...)
		if err != nil && strings.Contains(err.Error(), k.Path[strings.LastIndex(k.Path, ".")+1:]+": is not a known key") {
			t.Errorf("%s with %s: %v", k.Path, k.Law, err)
		}
	}
}

func TestKeysShowDefaultsAndRanges(t *testing.T) {
	want := map[string]Reference{
		"run.tolerance":                            {Range: "at least 1e-12 and at most 0.001", Default: "1e-7", Kind: "number", Fixed: true},
		"run.start":                                {Range: "at least 0 Myr and at most 1e7 Myr", Default: `"0 Myr"`, Kind: "quantity", Unit: "Myr", Fixed: true},
		"orbiter.NAME.mass":                        {Range: "above 0 kg", Kind: "quantity", Unit: "kg", Required: true, Fixed: true},
		"central.tide.law":                         {Kind: "choice", Required: true},
		"orbiter.NAME.interior.temperature":        {Law: `interior.model = "rock"`, Range: "above 0 K", Kind: "quantity", Unit: "K", Required: true},
		"orbiter.NAME.interior.viscosity.gamma":    {Law: `interior.model = "rock", viscosity.law = "frank-kamenetskii"`, Kind: "quantity", Unit: "/K", Required: true, Range: "above 0 /K"},
		"orbiter.NAME.interior.melt_loss.velocity": {Law: `interior.model = "rock"`, Kind: "quantity", Unit: "m/s", Required: true},
	}
	for _, k := range Keys() {
		w, ok := want[k.Path]
		if !ok {
			continue
		}
		delete(want, k.Path)
		if k.Law != w.Law || k.Kind != w.Kind || k.Unit != w.Unit || k.Required != w.Required || k.Default != w.Default || w.Range != "" && k.Range != w.Range || w.Fixed != k.Fixed {
			t.Errorf("%s is %+v, want %+v", k.Path, k, w)
		}
	}
	for p := range want {
		t.Errorf("Keys does not list %s", p)
	}
}
