package scenarios

import (
	"fmt"
	"strings"
)

// dimension holds the powers of the SI base units a scenario meets. The angle
// counts as a dimension, so that an offset in deg/day is not mistaken for a
// rate in 1/day.
type dimension [6]int

const (
	length = iota
	mass
	time
	temperature
	amount
	angle
)

var baseSymbols = [6]string{"m", "kg", "s", "K", "mol", "rad"}

// dimensionNames are what a practitioner calls the common ones.
var dimensionNames = map[dimension]string{
	{}:                              "dimensionless",
	{length: 1}:                     "a length",
	{mass: 1}:                       "a mass",
	{time: 1}:                       "a time",
	{temperature: 1}:                "a temperature",
	{angle: 1}:                      "an angle",
	{angle: 1, time: -1}:            "an angular rate",
	{length: 2}:                     "an area",
	{length: 1, time: -1}:           "a velocity",
	{length: -1, mass: 1, time: -2}: "a pressure",
	{length: -1, mass: 1, time: -1}: "a viscosity",
	{length: -3, mass: 1}:           "a density",
	{length: 2, mass: 1, time: -2}:  "an energy",
	{length: 2, mass: 1, time: -3}:  "a power",
	{length: 2, time: -2}:           "an energy per mass",
	{length: 2, time: -3}:           "a power per mass",
	{mass: 1, time: -3}:             "a power per area",
	{time: -1}:                      "a rate",
	{temperature: -1}:               "an inverse temperature",
	{length: 2, mass: 1, time: -2, amount: -1}: "an energy per mole",
}

// String names the dimension: "a length", or by its base units where it has
// no everyday name, "kg m s^-3 K^-1".
func (d dimension) String() string {
	if name, ok := dimensionNames[d]; ok {
		return name
	}
	var parts []string
	for _, i := range [6]int{mass, length, time, temperature, amount, angle} {
		switch d[i] {
		case 0:
		case 1:
			parts = append(parts, baseSymbols[i])
		default:
			parts = append(parts, fmt.Sprintf("%s^%d", baseSymbols[i], d[i]))
		}
	}
	return strings.Join(parts, " ")
}
