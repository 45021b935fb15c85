package scenarios

import (
	"strings"
	"testing"
)

func TestEdits(t *testing.T) {
	s, err := Read("x.toml", []byte(base),
		Edit{Path: "run.span", Value: "2 Gyr"},   // no TOML value: a string
		Edit{Path: "run.span", Value: `"3 Gyr"`}, // a later edit wins
		Edit{Path: "central.J2", Value: "0.02"},
		Edit{Path: "title", Value: "twice # as long [x]"}, // looks like more than a value
		Edit{Path: "orbiter.Cinder.interior", Value: `{ model = "fixed", k2_over_Q = 0.01 }`},
		Edit{Path: "orbiter.Tern.eccentricity", Unset: true},
		Edit{Path: "change", Unset: true},
		Edit{Path: `observed`, Value: "[]"},
	)
	if err != nil {
		t.Fatal(err)
	}
	if s.Run.Span != 3000*31557600e6 || s.Central.J2 != 0.02 || s.Title != "twice # as long [x]" || s.Orbiters[0].Interior.Law != "fixed" || s.Orbiters[2].Eccentricity != 0 || len(s.Changes)+len(s.Observed) > 0 {
		t.Errorf("edits gave\n%s", s.TOML())
	}
}

func TestEditProblems(t *testing.T) {
	for _, c := range []struct {
		edit Edit
		want string
	}{
		{Edit{Path: "run.spam", Value: "1"}, "--set run.spam: is not a known key\n  hint: did you mean span?"},
		{Edit{Path: "orbiter.Cinder.radius", Value: "1800"}, "--set orbiter.Cinder.radius: needs a unit\n  hint: write radius = \"1800 km\""},
		{Edit{Path: "orbiter.Cinder.interior", Value: "{}"}, "--set orbiter.Cinder.interior: names no model\n  hint: add model = "},
		{Edit{Path: "run.spann", Unset: true}, "--unset run.spann: there is no such key to remove\n  hint: did you mean run.span?"},
		{Edit{Path: "run..span", Value: "1"}, "--set run..span: is not a path of keys\n  hint: write it as in run.span or orbiter.NAME.mass"},
		{Edit{Path: "change.at", Value: "1"}, "--set change.at: change is a list, and no path leads into one\n  hint: set the list as a whole"},
		{Edit{Path: "title.x", Value: "1"}, "--set title.x: title is a string, not a table"},
		{Edit{Path: "orbiter.Tern.period", Unset: true}, "x.toml:31: orbiter.Tern.period: is missing\n  hint: add period = \"NUMBER d\" or semimajor_axis = \"NUMBER km\", or make it a member of a chain"},
		{Edit{Path: "observed", Value: "[{ body = 1 }]"}, "--set observed: observed[1].body: is a whole number, not a string"},
	} {
		_, err := Read("x.toml", []byte(base), c.edit)
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%+v: got\n%v\nwant\n%s", c.edit, err, c.want)
		}
	}
}
