package figure

import "strings"

// folded spells the letters and signs that titles and names commonly hold.
var folded = strings.NewReplacer(
	"à", "a", "á", "a", "â", "a", "ã", "a", "ä", "a", "å", "a", "æ", "ae", "ç", "c",
	"è", "e", "é", "e", "ê", "e", "ë", "e", "ì", "i", "í", "i", "î", "i", "ï", "i", "ñ", "n",
	"ò", "o", "ó", "o", "ô", "o", "õ", "o", "ö", "o", "ø", "o", "ù", "u", "ú", "u", "û", "u", "ü", "u", "ý", "y", "ß", "ss",
	"À", "A", "Á", "A", "Â", "A", "Ã", "A", "Ä", "A", "Å", "A", "Æ", "AE", "Ç", "C",
	"È", "E", "É", "E", "Ê", "E", "Ë", "E", "Í", "I", "Î", "I", "Ñ", "N",
	"Ó", "O", "Ô", "O", "Ö", "O", "Ø", "O", "Ú", "U", "Ü", "U", "č", "c", "ě", "e", "ř", "r", "š", "s", "ž", "z",
	"–", "-", "—", "-", "−", "-", "×", "x", "·", ".", "°", " deg", "±", "+-", "µ", "u", "μ", "u", "…", "...",
	"‘", "'", "’", "'", "“", "\"", "”", "\"", "₂", "2", "²", "^2", "³", "^3",
)

// ascii spells s in printable ASCII: accents dropped, white space and control
// characters to one blank, anything else to "?".
func ascii(s string) string {
	var b strings.Builder
	blank := true // swallows leading blanks
	for _, r := range folded.Replace(s) {
		switch {
		case r <= ' ' || r == 0x7f || r == 0xa0 || r == 0x2028 || r == 0x2029:
			if !blank {
				b.WriteByte(' ')
			}
			blank = true
			continue
		case r > '~':
			r = '?'
		}
		b.WriteRune(r)
		blank = false
	}
	return strings.TrimRight(b.String(), " ")
}
