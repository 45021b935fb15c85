package scenarios

import (
	"math/big"
	"strings"
	"unicode/utf8"
)

// unit is an exact multiple of the coherent SI unit of a dimension. Scales are
// rational so that "1.8216 km" and "1821.6 m" are the same float64.
type unit struct {
	scale *big.Rat
	dim   dimension
}

// symbols are the units a scenario may use, without their prefixed forms. GM
// and radii of Earth, Jupiter and Sun are the nominal values of IAU 2015
// Resolution B3 (Prša et al. 2016, AJ 152, 41; radii equatorial), masses are
// GM/G with CODATA 2018's G; the astronomical unit is that of IAU 2012
// Resolution B2, the year the Julian year.
var symbols = map[string]unit{
	"m":   {rational("1"), dimension{length: 1}},
	"AU":  {rational("149597870700"), dimension{length: 1}},
	"g":   {rational("1e-3"), dimension{mass: 1}},
	"s":   {rational("1"), dimension{time: 1}},
	"min": {rational("60"), dimension{time: 1}},
	"h":   {rational("3600"), dimension{time: 1}},
	"d":   {rational("86400"), dimension{time: 1}},
	"day": {rational("86400"), dimension{time: 1}},
	"yr":  {rational("31557600"), dimension{time: 1}},
	"K":   {rational("1"), dimension{temperature: 1}},
	"mol": {rational("1"), dimension{amount: 1}},
	"rad": {rational("1"), dimension{angle: 1}},
	// π to 40 digits: the rounding of a converted angle is that of one float64.
	"deg": {ratio("3.141592653589793238462643383279502884197", "180"), dimension{angle: 1}},
	"Hz":  {rational("1"), dimension{time: -1}},
	"N":   {rational("1"), dimension{length: 1, mass: 1, time: -2}},
	"Pa":  {rational("1"), dimension{length: -1, mass: 1, time: -2}},
	"bar": {rational("1e5"), dimension{length: -1, mass: 1, time: -2}},
	"J":   {rational("1"), dimension{length: 2, mass: 1, time: -2}},
	"W":   {rational("1"), dimension{length: 2, mass: 1, time: -3}},

	"M_earth": {ratio("3.986004e14", newtonG), dimension{mass: 1}},
	"M_jup":   {ratio("1.2668653e17", newtonG), dimension{mass: 1}},
	"M_sun":   {ratio("1.3271244e20", newtonG), dimension{mass: 1}},
	"R_earth": {rational("6.3781e6"), dimension{length: 1}},
	"R_jup":   {rational("7.1492e7"), dimension{length: 1}},
	"R_sun":   {rational("6.957e8"), dimension{length: 1}},
}

// newtonG is orbit.G as an exact decimal (CODATA 2018).
const newtonG = "6.67430e-11"

// prefixed lists the prefixes in use with each symbol.
var prefixed = map[string]string{
	"m": "nµmckMG", "g": "mkMGT", "s": "nµm", "yr": "kMG", "K": "m", "mol": "mk", "rad": "mµ",
	"Hz": "nµmk", "N": "kM", "Pa": "kMGT", "bar": "kM", "J": "kMGT", "W": "nµmkMGTP",
}

var prefixes = map[rune]string{
	'n': "1e-9", 'µ': "1e-6", 'm': "1e-3", 'c': "1e-2", 'k': "1e3", 'M': "1e6", 'G': "1e9", 'T': "1e12", 'P': "1e15",
}

func rational(s string) *big.Rat {
	r, _ := new(big.Rat).SetString(s)
	return r
}

func ratio(a, b string) *big.Rat { return new(big.Rat).Quo(rational(a), rational(b)) }

// parseUnit reads factors joined by a space, * or ·; / divides by the next
// factor only; a factor is a symbol and a power, m2, m^2, m² or m^-2. local
// adds symbols of the scenario at hand, M_central and R_central.
func parseUnit(text string, local map[string]unit) (unit, *Problem) {
	u := unit{scale: big.NewRat(1, 1)}
	divide, pending := false, false
	for rest := text; ; {
		rest = strings.TrimLeft(rest, " ")
		if rest == "" {
			break
		}
		r, size := utf8.DecodeRuneInString(rest)
		if r == '/' || r == '*' || r == '·' || r == '⋅' {
			if pending || r != '/' && rest == text {
				return unit{}, &Problem{What: quote(text) + " has two operators in a row"}
			}
			divide, pending, rest = r == '/', true, rest[size:]
			continue
		}
		end := strings.IndexAny(rest, " /*·⋅")
		if end < 0 {
			end = len(rest)
		}
		f, p := parseFactor(rest[:end], local)
		if p != nil {
			return unit{}, p
		}
		rest = rest[end:]
		for i := range u.dim {
			if divide {
				u.dim[i] -= f.dim[i]
			} else {
				u.dim[i] += f.dim[i]
			}
		}
		if divide {
			u.scale.Quo(u.scale, f.scale)
		} else {
			u.scale.Mul(u.scale, f.scale)
		}
		divide, pending = false, false
	}
	if pending {
		return unit{}, &Problem{What: quote(text) + " ends with an operator"}
	}
	return u, nil
}

var superscripts = strings.NewReplacer("⁻", "-", "⁰", "0", "¹", "1", "²", "2", "³", "3", "⁴", "4", "⁵", "5", "⁶", "6", "⁷", "7", "⁸", "8", "⁹", "9")

// parseFactor reads one symbol with its power. Powers have one digit.
func parseFactor(text string, local map[string]unit) (unit, *Problem) {
	plain := superscripts.Replace(text)
	end := strings.IndexAny(plain, "^-0123456789")
	if end < 0 {
		end = len(plain)
	}
	symbol, power := plain[:end], strings.TrimPrefix(plain[end:], "^")
	if symbol == "" && power == "1" {
		return unit{scale: big.NewRat(1, 1)}, nil
	}
	base, p := findUnit(symbol, local)
	if p != nil {
		return unit{}, p
	}
	if power == "" && end == len(plain) {
		return base, nil
	}
	digits, negative := strings.CutPrefix(power, "-")
	if len(digits) != 1 || digits[0] < '1' || digits[0] > '9' {
		return unit{}, &Problem{What: "the power in " + quote(text) + " is not a whole number from -9 to 9", Hint: "write m2, m^2 or m²"}
	}
	u := unit{scale: big.NewRat(1, 1)}
	for range int(digits[0] - '0') {
		u.scale.Mul(u.scale, base.scale)
		for i := range u.dim {
			u.dim[i] += base.dim[i]
		}
	}
	if negative {
		u.scale.Inv(u.scale)
		for i := range u.dim {
			u.dim[i] = -u.dim[i]
		}
	}
	return u, nil
}

func findUnit(symbol string, local map[string]unit) (unit, *Problem) {
	symbol = strings.Replace(symbol, "μ", "µ", 1) // Greek mu for the micro sign
	if u, ok := symbols[symbol]; ok {
		return u, nil
	}
	if u, ok := local[symbol]; ok {
		return u, nil
	}
	if symbol == "M_central" || symbol == "R_central" {
		return unit{}, &Problem{What: symbol + " is not known here", Hint: "it needs a central body whose mass and radius are given in other units"}
	}
	prefix, size := utf8.DecodeRuneInString(symbol)
	if prefix == 'u' {
		prefix = 'µ'
	}
	base := symbol[size:]
	if u, ok := symbols[base]; ok && strings.ContainsRune(prefixed[base], prefix) {
		return unit{new(big.Rat).Mul(rational(prefixes[prefix]), u.scale), u.dim}, nil
	}
	p := &Problem{What: "unknown unit " + quote(symbol)}
	switch strings.ToLower(symbol) {
	case "°c", "c", "degc", "celsius":
		p.Hint = "temperatures are in K: add 273.15"
	case "°":
		p.Hint = "write deg"
	case "ga", "ma", "ka", "a":
		p.Hint = "write Gyr, Myr or yr"
	case "pa.s":
		p.Hint = "write Pa s, factors joined by a space"
	default:
		if near := nearest(symbol, unitSymbols()); near != "" {
			p.Hint = "did you mean " + quote(near) + "?"
		} else {
			p.Hint = "known are m, g, s, min, h, d, yr, K, mol, rad, deg, Pa, bar, J, W, N, Hz with prefixes, AU, and M_ or R_ with earth, jup, sun, central"
		}
	}
	return unit{}, p
}

// unitSymbols lists every symbol with its prefixed forms.
func unitSymbols() []string {
	var all []string
	for s := range symbols {
		all = append(all, s)
		for _, p := range prefixed[s] {
			all = append(all, string(p)+s)
		}
	}
	return append(all, "M_central", "R_central")
}
