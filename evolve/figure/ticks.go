package figure

import (
	"fmt"
	"math"
	"strconv"
)

// tick is a mark on an axis; one without label is a minor one.
type tick struct {
	value float64
	label string // markup
}

// linearTicks gives the multiples of 1, 2 or 5 times a power of ten within
// [lo, hi], at most count of them and as many as that allows, labelled in
// units of 10^factor.
func linearTicks(lo, hi float64, count, factor int) []tick {
	step, exponent := 1, int(math.Floor(math.Log10((hi-lo)/float64(count))))
	size := func() float64 { return float64(step) * math.Pow(10, float64(exponent)) }
	// Rounding of v/step may not push a tick that lies on an end off the axis.
	first := func() float64 { return math.Ceil(lo/size() - 1e-9) }
	last := func() float64 { return math.Floor(hi/size() + 1e-9) }
	for last()-first()+1 > float64(count) {
		switch step {
		case 1:
			step = 2
		case 2:
			step = 5
		case 5:
			step, exponent = 1, exponent+1
		}
	}
	if last() == first() && count < 9 {
		return linearTicks(lo, hi, count+1, factor) // one label makes no axis
	}
	var ticks []tick
	decimals := max(0, factor-exponent)
	for i := first(); i <= last(); i++ {
		scaled := i * float64(step) * math.Pow(10, float64(exponent-factor))
		if i == 0 {
			scaled = 0 // the negative zero of math.Ceil would be labelled -0
		}
		ticks = append(ticks, tick{i * size(), strconv.FormatFloat(scaled, 'f', decimals, 64)})
	}
	return ticks
}

// factorFor gives the power of ten to take out of the labels of a linear axis:
// 0 if its numbers can be read as they are.
func factorFor(lo, hi float64) int {
	m := math.Max(math.Abs(lo), math.Abs(hi))
	if m == 0 || (m >= 1e-3 && m < 1e5) {
		return 0
	}
	return int(math.Floor(math.Log10(m)))
}

// logTicks gives the ticks of a logarithmic axis over [lo, hi], 0 < lo < hi:
// decades where there are two or more, each s-th decade if more than count,
// and else some of their multiples. label names m·10^e.
func logTicks(lo, hi float64, count int, label func(m, e int) string) []tick {
	first, last := int(math.Floor(math.Log10(lo))), int(math.Floor(math.Log10(hi)+1e-12))
	within := func(m, e int) (float64, bool) {
		v := float64(m) * math.Pow(10, float64(e))
		return v, v >= lo*(1-1e-12) && v <= hi*(1+1e-12)
	}
	labelled := []int{1}
	for _, set := range [][]int{{1}, {1, 3}, {1, 2, 5}, {1, 2, 3, 4, 5, 6, 7, 8, 9}} {
		labelled = set
		n := 0
		for e := first; e <= last; e++ {
			for _, m := range set {
				if _, ok := within(m, e); ok {
					n++
				}
			}
		}
		if n >= 2 {
			break
		}
	}
	decades := last - int(math.Ceil(math.Log10(lo)-1e-12)) + 1
	every := max(1, (decades+count-1)/count)
	var ticks []tick
	for e := first; e <= last; e++ {
		for m := 1; m <= 9; m++ {
			v, ok := within(m, e)
			if !ok || (every > 1 && m > 1) {
				continue
			}
			t := tick{value: v}
			for _, l := range labelled {
				if l == m && e%every == 0 {
					t.label = label(m, e)
				}
			}
			ticks = append(ticks, t)
		}
	}
	return ticks
}

// powerLabel writes m·10^e with a raised exponent, numbers from 0.1 to 99 in
// full only where the exponent would be 0 or 1.
func powerLabel(m, e int) string {
	switch {
	case e == 0:
		return strconv.Itoa(m)
	case e == 1:
		return strconv.Itoa(10 * m)
	case m == 1:
		return fmt.Sprintf("10^{%d}", e)
	}
	return fmt.Sprintf("%d*10^{%d}", m, e)
}

// decimalLabel writes m·10^e in decimals from 0.001 to 90 000, with a raised
// exponent beyond.
func decimalLabel(m, e int) string {
	if e < -3 || e > 4 {
		return powerLabel(m, e)
	}
	return strconv.FormatFloat(float64(m)*math.Pow(10, float64(e)), 'f', max(0, -e), 64)
}

// unitLabel is the label of an axis: quantity / factor unit.
func unitLabel(quantity, unit string, factor int) string {
	switch {
	case factor != 0 && unit != "":
		return fmt.Sprintf("%s / 10^{%d} %s", quantity, factor, unit)
	case factor != 0:
		return fmt.Sprintf("%s / 10^{%d}", quantity, factor)
	case unit != "":
		return quantity + " / " + unit
	}
	return quantity
}
