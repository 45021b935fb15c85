package orbit

// G is the Newtonian constant of gravitation, m³ kg⁻¹ s⁻² (CODATA 2018).
const G = 6.67430e-11

// Year and Day are the Julian year of 365.25 days and the day of 86400 s.
const (
	Day  = 86400.0
	Year = 365.25 * Day
)
