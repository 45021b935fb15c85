package scenarios

import (
	"fmt"

	"tidekiln/scenarios/key"
)

// Reference describes one key a scenario may hold.
type Reference struct {
	Path     string // "orbiter.NAME.interior.viscosity.reference"
	Law      string // the choices that make the key valid, `interior.model = "rock"`; "" if it always is
	Kind     string
	Unit     string // "" unless a quantity
	Range    string // "above 0 K", "" for any finite value and for what is no number
	Default  string // as written in a file, "" without one
	Required bool
	Fixed    bool // a change during the history may not set it
	Choices  []string
	Meaning  string
	Source   string
}

// Keys lists every key the reader accepts, in the order of a scenario file.
// It is made from the declarations the reader itself follows.
func Keys() []Reference {
	var all []Reference
	for _, k := range topKeys[:2] {
		all = append(all, refer(k, k.Name, ""))
	}
	for _, t := range []struct {
		at   string
		keys []key.Key
	}{
		{"run", runKeys}, {"run.record", recordKeys}, {"run.stop[]", triggerKeys}, {"central", centralKeys},
		{"orbiter.NAME", orbiterKeys}, {"chain.NAME", chainKeys},
		{"change[]", changeKeys}, {"change[].when", triggerKeys}, {"observed[]", observedKeys},
	} {
		all = append(all, references(t.at, "", t.keys)...)
	}
	return all
}

func references(at, law string, keys []key.Key) []Reference {
	var all []Reference
	for _, k := range keys {
		path := at + "." + k.Name
		all = append(all, refer(k, path, law))
		if k.Kind != key.Table {
			continue
		}
		if k.Family.Selector != "" {
			s := refer(lawKeys(k, k.Family.Laws[0])[0], path+"."+k.Family.Selector, law)
			for i, l := range k.Family.Laws {
				if s.Source != "" && l.Source != "" {
					s.Source += "; "
				}
				if l.Source != "" {
					s.Source += l.Name + ": " + l.Source
				}
				sep := "; "
				if i == 0 {
					sep = ": "
				}
				s.Meaning += sep + l.Name + ", " + l.Meaning
			}
			all = append(all, s)
		}
		for _, l := range k.Family.Laws {
			chosen := law
			if k.Family.Selector != "" {
				if chosen != "" {
					chosen += ", "
				}
				chosen += fmt.Sprintf("%s.%s = %q", k.Name, k.Family.Selector, l.Name)
			}
			all = append(all, references(path, chosen, l.Keys)...)
		}
	}
	return all
}

func refer(k key.Key, path, law string) Reference {
	ref := Reference{
		Path: path, Law: law, Kind: k.Kind.String(), Unit: k.Unit, Required: k.Default == nil && !k.Optional,
		Fixed: k.Fixed, Choices: k.Choices, Meaning: k.Meaning, Source: k.Source,
	}
	if k.Range.Set {
		ref.Range = rangeText(k)
	}
	if k.Default != nil && k.Kind != key.Table {
		ref.Default = valueTOML(k, k.Default)
	}
	return ref
}
