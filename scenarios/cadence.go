package scenarios

import (
	"fmt"
	"math"
	"math/big"
	"strings"

	"tidekiln/scenarios/key"
)

var recordKeys = []key.Key{
	{Name: "every", Kind: key.Special, Optional: true, Fixed: true, Meaning: `cadence, "1 Myr"`},
	{Name: "change", Kind: key.Number, Optional: true, Range: key.Between(1e-9, 0.5), Fixed: true,
		Meaning: "relative bound to which straight lines between rows reproduce every column"},
}

var (
	secondsPerMyr = rational("31557600e6")
	cadenceKey    = key.Key{Name: "every", Kind: key.Quantity, Unit: "Myr"}
)

// record reads the output cadence, a string or { every, change }.
func (r *reader) record(n *node, at path, span float64) Record {
	if n.form != tableForm {
		return Record{EveryMyr: r.every(n, at, span)}
	}
	v, ok := r.values(n, &scope{at: at, keys: recordKeys})
	if !ok {
		return Record{}
	}
	rec := Record{}
	rec.Change, _ = v.Map["change"].(float64)
	if every, ok := v.Map["every"].(*node); ok {
		rec.EveryMyr = r.every(every, at.with("every"), span)
	} else if rec.Change == 0 {
		r.report(at, "says neither every nor change", `write record = "1 Myr" or record = { change = 1e-3 }`)
	}
	return rec
}

// every reads a cadence exactly: the times of rows are its multiples.
func (r *reader) every(n *node, at path, span float64) *big.Rat {
	k := cadenceKey
	k.Name = at[len(at)-1]
	x := r.quantity(n, at, k)
	if x == nil {
		return nil
	}
	exact, seconds, _ := readQuantity(n.text, k.Unit, r.local)
	switch {
	case !(seconds > 0):
		r.report(at, quote(n.text)+" is out of range", "a cadence is above 0")
		return nil
	case span > 0 && tooManyRows(span, seconds):
		r.report(at, fmt.Sprintf("makes %.3g rows of each body, more than %.0g", span/seconds, mostRows),
			fmt.Sprintf(`write record = "%s Myr"`, decimal(niceCadence(span))))
		return nil
	}
	if decimal(exact) == "" {
		r.report(at, quote(n.text)+" is no finite decimal number of seconds", "write it in Myr, kyr, yr, d or s")
		return nil
	}
	return exact.Quo(exact, secondsPerMyr)
}

// niceCadence is the greatest 1, 2 or 5 times a power of ten Myr not above a
// 500th of the span.
func niceCadence(span float64) *big.Rat {
	target := span / 500 / 31557600e6 * (1 + 1e-12)
	exp := int(math.Floor(math.Log10(target)))
	for ; ; exp-- {
		for _, m := range [3]int{5, 2, 1} {
			if c := rational(fmt.Sprintf("%de%d", m, exp)); c.Cmp(new(big.Rat).SetFloat64(target)) <= 0 {
				return c
			}
		}
	}
}

// decimal writes a positive rational exactly, "" if it has no finite decimal
// form or one longer than a number may be.
func decimal(x *big.Rat) string {
	places, finite := x.FloatPrec()
	if !finite {
		return ""
	}
	digits := strings.TrimLeft(strings.Replace(x.FloatString(places), ".", "", 1), "0")
	exp := len(digits) - 1 - places
	text := plain(fmt.Sprintf("%s.%se%d", digits[:1], digits[1:], exp))
	if len(text) > longestNumber {
		return ""
	}
	return text
}

// toml writes the record key: in Myr where that is a finite decimal, else in
// seconds, in which every cadence the reader lets through is one.
func (r Record) toml() string {
	every := ""
	if r.EveryMyr != nil {
		if d := decimal(r.EveryMyr); d != "" {
			every = quoteTOML(d + " Myr")
		} else {
			every = quoteTOML(decimal(new(big.Rat).Mul(r.EveryMyr, secondsPerMyr)) + " s")
		}
	}
	switch {
	case r.Change == 0:
		return every
	case every == "":
		return "{ change = " + formatNumber(r.Change) + " }"
	}
	return "{ every = " + every + ", change = " + formatNumber(r.Change) + " }"
}
