package main

import (
	"bufio"
	"bytes"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"strconv"
	"strings"
)

// port is a peer: another program with the same right-hand side, whose command
// line is given at the head of its main file.
type port struct {
	name    string
	command []string
	file    map[*problem]string // its constants
}

// ask runs the port and returns what it printed.
func (p *port) ask(input string, args ...string) (string, error) {
	cmd := exec.Command(p.command[0], append(p.command[1:len(p.command):len(p.command)], args...)...)
	cmd.Stdin = strings.NewReader(input)
	var out, complaint bytes.Buffer
	cmd.Stdout, cmd.Stderr = &out, &complaint
	if err := cmd.Run(); err != nil {
		return "", &portError{p.name, args, err, lastLine(complaint.String())}
	}
	return out.String(), nil
}

// portError is a port that did not exit well.
type portError struct {
	port      string
	args      []string
	err       error
	complaint string // the last line it wrote to its standard error
}

func (e *portError) Error() string {
	return fmt.Sprintf("%s %s: %v: %s", e.port, strings.Join(e.args, " "), e.err, e.complaint)
}

func lastLine(s string) string {
	s = strings.TrimSpace(s)
	return s[strings.LastIndexByte(s, '\n')+1:]
}

// on is ask with the constants of a case.
func (p *port) on(c *problem, input string, args ...string) (string, error) {
	return p.ask(input, append([]string{p.file[c]}, args...)...)
}

// run makes one integration. A run that does not get to the end is a
// measurement with an outcome.
func (p *port) run(c *problem, args ...string) (measurement, error) {
	out, err := p.on(c, "", append([]string{"run"}, args...)...)
	var m measurement
	var failed *portError
	if errors.As(err, &failed) {
		m.outcome, m.times = "failed: "+failed.complaint, nil
		return m, nil
	}
	if err != nil {
		return m, err
	}
	lines := bufio.NewScanner(strings.NewReader(out))
	lines.Scan()
	var newton, errorTests int
	if _, err := fmt.Sscan(lines.Text(), &m.outcome, &m.reached, &m.steps, &m.rhs, &m.jacs, &newton, &errorTests); err != nil {
		return m, fmt.Errorf("%s: %q: %w", p.name, lines.Text(), err)
	}
	m.rejected = newton + errorTests
	lines.Scan()
	if m.times, err = floats(lines.Text()); err != nil {
		return m, err
	}
	lines.Scan()
	if m.end, err = floats(lines.Text()); err != nil {
		return m, err
	}
	return m, nil
}

func floats(s string) ([]float64, error) {
	var v []float64
	for _, f := range strings.Fields(s) {
		x, err := strconv.ParseFloat(f, 64)
		if err != nil {
			return nil, err
		}
		v = append(v, x)
	}
	return v, nil
}

// seconds returns the port's own time of a right-hand side and of one with the
// Jacobian.
func (p *port) seconds(c *problem) (rhs, jac float64, err error) {
	out, err := p.on(c, "", "time")
	if err != nil {
		return 0, 0, err
	}
	_, err = fmt.Sscan(out, &rhs, &jac)
	return rhs, jac, err
}

// constantsIn writes the constants of every case to a directory and tells the
// ports where they are.
func constantsIn(dir string, cases []*problem, ports ...*port) error {
	for _, c := range cases {
		name := fmt.Sprintf("%s/%s.case", dir, c.name)
		f, err := os.Create(name)
		if err != nil {
			return err
		}
		if err := errors.Join(c.write(f), f.Close()); err != nil {
			return err
		}
		for _, p := range ports {
			if p.file == nil {
				p.file = map[*problem]string{}
			}
			p.file[c] = name
		}
	}
	return nil
}
