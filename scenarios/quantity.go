package scenarios

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"regexp"
	"strconv"
	"strings"
)

// A number is decimal and short: what is longer than 64 characters is no
// measurement, and exact arithmetic on it would cost time without bound.
var numberPattern = regexp.MustCompile(`^[+-]?([0-9]+\.?[0-9]*|\.[0-9]+)([eE][+-]?[0-9]{1,4})?`)

const longestNumber, longestUnit = 64, 64

// ParseQuantity reads a number with its unit, "1790 km", and returns it in the
// coherent SI unit. It must have the dimension of unit, itself a unit such as
// "W/m/K". Errors: no number, no or an unknown unit, another dimension (both
// are named), a number that is not finite or leaves the range of a float64.
func ParseQuantity(text, unit string) (si float64, err error) {
	_, si, p := readQuantity(text, unit, nil)
	if p == nil {
		return si, nil
	}
	if p.Hint != "" {
		return 0, errors.New(p.What + "; " + p.Hint)
	}
	return 0, errors.New(p.What)
}

// readQuantity does so for units that include local ones, and also returns
// the exact value.
func readQuantity(text, want string, local map[string]unit) (*big.Rat, float64, *Problem) {
	target, p := parseUnit(want, nil)
	if p != nil {
		return nil, 0, p
	}
	text = strings.ReplaceAll(strings.TrimSpace(text), "−", "-")
	number := numberPattern.FindString(text)
	if number == "" {
		switch word, _, _ := strings.Cut(strings.ToLower(strings.TrimLeft(text, "+-")), " "); word {
		case "nan", "inf", "infinity":
			return nil, 0, &Problem{What: quote(text) + " is not finite", Hint: "give a finite number"}
		}
		return nil, 0, &Problem{What: quote(text) + " does not begin with a number", Hint: `write a number and a unit, as in "` + example(1, want) + `"`}
	}
	name := strings.TrimSpace(text[len(number):])
	if len(number) > longestNumber || len(name) > longestUnit {
		return nil, 0, &Problem{What: fmt.Sprintf("%s… is too long for a quantity", quote(text[:20])), Hint: "17 digits are all that a number keeps"}
	}
	if name == "" && target.dim != (dimension{}) {
		return nil, 0, &Problem{What: "needs a unit", Hint: `write "` + strings.TrimSpace(number) + " " + want + `"`}
	}
	if strings.HasPrefix(name, "×") || strings.HasPrefix(name, "x10") || strings.HasPrefix(name, ",") || strings.HasPrefix(name, "_") {
		return nil, 0, &Problem{What: quote(text) + " is not written as a number and a unit", Hint: `powers of ten are written 1.6e27, the decimal mark is a point, and digits are not grouped`}
	}
	u, p := parseUnit(name, local)
	if p != nil {
		return nil, 0, p
	}
	if u.dim != target.dim {
		hint := "write it in " + want + " or another unit of that dimension"
		if strings.Count(want, "/") > strings.Count(name, "/") && strings.Contains(name, "/") {
			hint += `; "/" divides by the next factor only`
		}
		return nil, 0, &Problem{What: fmt.Sprintf("%s is %v, but %v is needed", quote(text), u.dim, target.dim), Hint: hint}
	}
	exact, si, ok := scaled(number, u.scale)
	if !ok {
		return nil, 0, &Problem{What: quote(text) + " is beyond the numbers a double holds", Hint: "check the power of ten"}
	}
	return exact, si, nil
}

// scaled returns number × scale, exactly and rounded once. It fails where the
// result, if not zero, leaves the range of normal doubles.
func scaled(number string, scale *big.Rat) (*big.Rat, float64, bool) {
	if f, err := strconv.ParseFloat(number, 64); err != nil || f == 0 && strings.ContainsAny(mantissa(number), "123456789") {
		return nil, 0, false
	}
	exact, ok := new(big.Rat).SetString(number)
	if !ok {
		return nil, 0, false
	}
	exact.Mul(exact, scale)
	si, _ := exact.Float64()
	if math.IsInf(si, 0) || exact.Sign() != 0 && math.Abs(si) < 0x1p-1022 {
		return nil, 0, false
	}
	return exact, si, true
}

func mantissa(number string) string {
	m, _, _ := strings.Cut(strings.ToLower(number), "e")
	return m
}

// formatQuantity writes an SI value in a unit with the fewest digits that read
// back to the same float64. Seventeen always do: the conversion is exact, so
// the relative error 0.5e-16 of the text stays below half an ulp.
func formatQuantity(si float64, unit string) string {
	u, p := parseUnit(unit, nil)
	if p != nil {
		return ""
	}
	exact := new(big.Rat).SetFloat64(si)
	exact.Quo(exact, u.scale)
	shown := new(big.Float).SetPrec(200).SetRat(exact)
	for digits := 0; ; digits++ {
		text := plain(shown.Text('e', digits))
		if _, back, ok := scaled(text, u.scale); ok && back == si || digits == 17 {
			return text + " " + unit
		}
	}
}

// formatNumber writes a float64 with the fewest digits that read back to it.
func formatNumber(x float64) string { return plain(strconv.FormatFloat(x, 'e', -1, 64)) }

// plain turns the %e form into the one people write: 66000, 0.012, 1.6e27.
func plain(e string) string {
	sign := ""
	if e[0] == '-' {
		sign, e = "-", e[1:]
	}
	m, x, _ := strings.Cut(e, "e")
	exp, _ := strconv.Atoi(x)
	digits := strings.TrimRight(strings.Replace(m, ".", "", 1), "0")
	switch {
	case digits == "":
		return sign + "0"
	case exp < -3 || exp > 6:
		if len(digits) > 1 {
			digits = digits[:1] + "." + digits[1:]
		}
		return fmt.Sprintf("%s%se%d", sign, digits, exp)
	case exp < 0:
		return sign + "0." + strings.Repeat("0", -exp-1) + digits
	case len(digits) <= exp+1:
		return sign + digits + strings.Repeat("0", exp+1-len(digits))
	}
	return sign + digits[:exp+1] + "." + digits[exp+1:]
}

// example shows how a value of a unit is written.
func example(x float64, unit string) string { return formatNumber(x) + " " + unit }

func quote(s string) string {
	if len(s) > 60 {
		s = strings.ToValidUTF8(s[:57], "") + "…"
	}
	return strconv.Quote(s)
}
