package scenarios

import (
	"github.com/pelletier/go-toml/v2/unstable"
)

// Edit changes one key of a scenario before it is checked, as --set PATH=VALUE
// and --unset PATH do. Value is a TOML value, else a string; a table replaces
// the whole table.
type Edit struct {
	Path, Value string
	Unset       bool
}

func (e Edit) place() string {
	if e.Unset {
		return "--unset " + e.Path
	}
	return "--set " + e.Path
}

// apply carries an edit out on the document.
func (e Edit) apply(root *node) *Problem {
	fail := func(what, hint string) *Problem {
		return &Problem{File: e.place(), Key: e.Path, What: what, Hint: hint}
	}
	p, value := e.parse()
	if p == nil {
		return fail("is not a path of keys", `write it as in run.span or orbiter.NAME.mass`)
	}
	last := len(p) - 1
	if e.Unset {
		n, whole := root.find(p[:last])
		if !whole || n.form != tableForm || n.table[p[last]] == nil {
			hint := ""
			if n.form == tableForm {
				if near := nearest(p[last], n.names); near != "" {
					hint = "did you mean " + p[:last].with(near).String() + "?"
				}
			}
			return fail("there is no such key to remove", hint)
		}
		n.drop(p[last])
		return nil
	}
	return put(root, p, value, e.place(), fail)
}

// put sets a value at a path and makes the tables on the way to it.
func put(root *node, p path, value *node, place string, fail func(what, hint string) *Problem) *Problem {
	n, last := root, len(p)-1
	for i, part := range p[:last] {
		c := n.table[part]
		if c == nil {
			c = newTable(header, 0, place)
			n.put(part, c)
		}
		if c.form == listForm {
			return fail(p[:i+1].String()+" is a list, and no path leads into one", "set the list as a whole")
		}
		if c.form != tableForm {
			return fail(p[:i+1].String()+" is "+c.form.String()+", not a table", "")
		}
		n = c
	}
	n.put(p[last], value)
	return nil
}

// parse returns the path, nil if it is none, and the value.
func (e Edit) parse() (path, *node) {
	if p, n := e.expression(e.Value); p != nil {
		return p, n
	}
	p, n := e.expression("0")
	if p != nil {
		n = &node{form: textForm, origin: closed, text: e.Value, place: e.place()}
	}
	return p, n
}

// expression reads PATH = value as the one expression of a document. A value
// with a comment or a second line is no value but a string that looks so.
func (e Edit) expression(value string) (path, *node) {
	src := []byte(e.Path + " = " + value)
	check := unstable.Parser{KeepComments: true}
	check.Reset(src)
	if !check.NextExpression() || check.Expression().Kind != unstable.KeyValue || check.Expression().Next() != nil {
		return nil, nil
	}
	var p path
	for it := check.Expression().Key(); it.Next(); {
		p = append(p, string(it.Node().Data))
	}
	if check.NextExpression() || check.Error() != nil || len(p) > deepest {
		return nil, nil
	}
	root, problems := parse(e.place(), src)
	n, whole := root.find(p)
	if len(problems) > 0 || !whole {
		return nil, nil
	}
	n.relocate(e.place())
	return p, n
}

// relocate makes a node and all below it come from an edit.
func (n *node) relocate(place string) {
	n.line, n.place = 0, place
	for _, c := range n.table {
		c.relocate(place)
	}
	for _, c := range n.items {
		c.relocate(place)
	}
}

// editAll applies edits in order.
func editAll(root *node, edits []Edit) Errors {
	var problems Errors
	for _, e := range edits {
		if p := e.apply(root); p != nil {
			problems = append(problems, *p)
		}
	}
	return problems
}
