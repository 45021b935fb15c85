package scenarios

import "strconv"

// form is what a value is in the TOML source.
type form int

const (
	tableForm form = iota
	listForm
	textForm
	integerForm
	floatForm
	boolForm
	dateForm
)

func (f form) String() string {
	return [...]string{"a table", "a list", "a string", "a whole number", "a number", "true or false", "a date"}[f]
}

// origin is how a table or list came to be: it decides what may still be
// added to it.
type origin int

const (
	implied origin = iota // named by the header of a table inside it
	header                // has a [header] or [[header]] of its own
	dotted                // made by a dotted key
	closed                // an inline table or list: complete where it stands
)

// node is a value of a document with its place.
type node struct {
	form   form
	origin origin
	line   int    // of its key or header, from 1; 0 if an edit gave it
	place  string // the edit that gave it, "--set run.span"
	text   string // of a scalar: decoded if a string, else as written
	names  []string
	table  map[string]*node
	items  []*node
}

func newTable(o origin, line int, place string) *node {
	return &node{form: tableForm, origin: o, line: line, place: place, table: map[string]*node{}}
}

func (n *node) put(name string, child *node) {
	if _, ok := n.table[name]; !ok {
		n.names = append(n.names, name)
	}
	n.table[name] = child
}

func (n *node) drop(name string) {
	delete(n.table, name)
	for i, s := range n.names {
		if s == name {
			n.names = append(n.names[:i:i], n.names[i+1:]...)
			return
		}
	}
}

// child follows one part of a path; nil if nothing is there.
func (n *node) child(part string) *node {
	switch n.form {
	case tableForm:
		return n.table[part]
	case listForm:
		if len(part) > 2 && part[0] == '[' {
			if i, err := strconv.Atoi(part[1 : len(part)-1]); err == nil && i >= 1 && i <= len(n.items) {
				return n.items[i-1]
			}
		}
	}
	return nil
}

// find follows a path as far as the document goes and reports whether it got
// to the end.
func (n *node) find(p path) (deepest *node, whole bool) {
	for _, part := range p {
		c := n.child(part)
		if c == nil {
			return n, false
		}
		n = c
	}
	return n, true
}

// clone copies a node and all below it.
func (n *node) clone() *node {
	c := *n
	c.names = append([]string(nil), n.names...)
	if n.table != nil {
		c.table = make(map[string]*node, len(n.table))
		for k, v := range n.table {
			c.table[k] = v.clone()
		}
	}
	c.items = nil
	for _, v := range n.items {
		c.items = append(c.items, v.clone())
	}
	return &c
}
