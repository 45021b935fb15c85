package scenarios

import (
	"errors"
	"fmt"
	"regexp"
	"sort"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// deepest bounds how far tables and lists nest. Scenarios need seven levels.
const deepest = 32

// document turns the parser's expressions into a tree, holding the rules of
// TOML 1.0 on what may be defined twice.
type document struct {
	parser   unstable.Parser
	file     string
	starts   []int // offsets of the lines
	root     *node
	problems Errors
}

// parse reads TOML. A syntax error ends the reading; repeated keys and tables
// do not, and all of them are reported.
func parse(file string, src []byte) (*node, Errors) {
	d := &document{file: file, starts: []int{0}, root: newTable(header, 0, "")}
	for i, c := range src {
		if c == '\n' {
			d.starts = append(d.starts, i+1)
		}
	}
	d.parser.Reset(src)
	current := d.root
	var at path
	for d.parser.NextExpression() {
		e := d.parser.Expression()
		switch e.Kind {
		case unstable.Table, unstable.ArrayTable:
			at = nil
			current = d.header(e, &at)
		case unstable.KeyValue:
			if current != nil {
				d.assign(current, at, e, 0)
			}
		}
	}
	if err := d.parser.Error(); err != nil {
		d.syntax(err, src)
	}
	return d.root, d.problems
}

func (d *document) line(r unstable.Range) int {
	return sort.SearchInts(d.starts, int(r.Offset)+1)
}

func (d *document) report(line int, p path, what, hint string) {
	d.problems = append(d.problems, Problem{File: d.file, Line: line, Key: p.String(), What: what, Hint: hint})
}

// header opens the table of a [header] or [[header]], nil if it may not.
func (d *document) header(e *unstable.Node, at *path) *node {
	n := d.root
	for it := e.Key(); it.Next(); {
		name, line := string(it.Node().Data), d.line(it.Node().Raw)
		*at = at.with(name)
		if len(*at) > deepest {
			d.report(line, (*at)[:3], fmt.Sprintf("tables nest more than %d deep", deepest), "")
			return nil
		}
		c := n.table[name]
		isList := c != nil && c.form == listForm && c.origin == header
		open := c != nil && c.form == tableForm && c.origin != closed
		switch {
		case !it.IsLast() && c == nil:
			c = newTable(implied, line, "")
			n.put(name, c)
		case !it.IsLast() && (isList || open):
		case it.IsLast() && c == nil && e.Kind == unstable.Table:
			c = newTable(header, line, "")
			n.put(name, c)
		case it.IsLast() && open && c.origin == implied && e.Kind == unstable.Table:
			c.origin, c.line = header, line
		case it.IsLast() && e.Kind == unstable.ArrayTable && (c == nil || isList):
			if c == nil {
				c = &node{form: listForm, origin: header, line: line}
				n.put(name, c)
			}
			c.items = append(c.items, newTable(header, line, ""))
		default:
			d.report(line, *at, fmt.Sprintf("is given twice, first in line %d", c.line), "join the two, or rename one")
			return nil
		}
		if c.form == listForm {
			*at = at.item(len(c.items) - 1)
			c = c.items[len(c.items)-1]
		}
		n = c
	}
	return n
}

// assign puts a key = value expression below a table.
func (d *document) assign(n *node, at path, e *unstable.Node, depth int) {
	it := e.Key()
	for it.Next() {
		name, line := string(it.Node().Data), d.line(it.Node().Raw)
		at = at.with(name)
		if depth++; depth > deepest {
			d.report(line, at[:min(len(at), 3)], fmt.Sprintf("values nest more than %d deep", deepest), "")
			return
		}
		c := n.table[name]
		if it.IsLast() {
			if c != nil {
				d.report(line, at, fmt.Sprintf("is given twice, first in line %d", c.line), "keep one of the two")
				return
			}
			n.put(name, d.value(e.Value(), at, line, depth))
			return
		}
		if c == nil {
			c = newTable(dotted, line, "")
			n.put(name, c)
		} else if c.form != tableForm || c.origin != dotted {
			d.report(line, at, fmt.Sprintf("was given in line %d and cannot be added to here", c.line), "")
			return
		}
		n = c
	}
}

func (d *document) value(v *unstable.Node, at path, line, depth int) *node {
	n := &node{line: line, origin: closed, text: string(v.Data)}
	switch v.Kind {
	case unstable.String:
		n.form = textForm
	case unstable.Integer:
		n.form = integerForm
	case unstable.Float:
		n.form = floatForm
	case unstable.Bool:
		n.form = boolForm
	case unstable.Array, unstable.InlineTable:
		if depth >= deepest {
			d.report(line, at[:min(len(at), 3)], fmt.Sprintf("values nest more than %d deep", deepest), "")
			return n
		}
		it := v.Children()
		if v.Kind == unstable.InlineTable {
			*n = *newTable(dotted, line, "")
			for it.Next() {
				d.assign(n, at, it.Node(), depth+1)
			}
			n.origin = closed
			return n
		}
		n.form, n.text = listForm, ""
		for i := 0; it.Next(); i++ {
			c := it.Node()
			l := line
			if c.Raw.Length > 0 {
				l = d.line(c.Raw)
			}
			n.items = append(n.items, d.value(c, at.item(i), l, depth+1))
		}
	default:
		n.form = dateForm
	}
	return n
}

// unquoted matches a quantity somebody forgot to put in quotes.
var unquoted = regexp.MustCompile(`^\s*([\w.-]+)\s*=\s*([+-]?[0-9][0-9.eE+-]*\s*[A-Za-z/µ°][^"#]*?)\s*(#.*)?$`)

func (d *document) syntax(err error, src []byte) {
	p := Problem{File: d.file, Line: 1, What: "is not TOML: " + err.Error()}
	var pe *unstable.ParserError
	if errors.As(err, &pe) {
		p.Line = d.line(d.parser.Range(pe.Highlight))
	}
	start, end := d.starts[p.Line-1], len(src)
	if p.Line < len(d.starts) {
		end = d.starts[p.Line]
	}
	if m := unquoted.FindStringSubmatch(strings.TrimRight(string(src[start:end]), "\r\n")); m != nil {
		p.Key = m[1]
		p.Hint = fmt.Sprintf("a value with a unit stands in quotes: %s = %q", m[1], m[2])
	}
	d.problems = append(d.problems, p)
}
