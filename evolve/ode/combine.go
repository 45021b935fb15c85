package ode

// weighted is a stage with its weight in a sum.
type weighted struct {
	stage  int
	weight float64
}

// sparse lists the entries of a row of a method's matrix that are not 0.
func sparse(row []float64) []weighted {
	var list []weighted
	for j, a := range row {
		if a != 0 {
			list = append(list, weighted{j, a})
		}
	}
	return list
}

// combine adds h Σ a_j k_j to dst, four stages at a time.
func combine(dst []float64, h float64, row []weighted, k [][]float64) {
	for ; len(row) >= 4; row = row[4:] {
		a, b, c, d := h*row[0].weight, h*row[1].weight, h*row[2].weight, h*row[3].weight
		ka, kb, kc, kd := k[row[0].stage], k[row[1].stage], k[row[2].stage], k[row[3].stage]
		ka, kb, kc, kd = ka[:len(dst)], kb[:len(dst)], kc[:len(dst)], kd[:len(dst)]
		for i := range dst {
			dst[i] += a*ka[i] + b*kb[i] + (c*kc[i] + d*kd[i])
		}
	}
	switch len(row) {
	case 3:
		a, b, c := h*row[0].weight, h*row[1].weight, h*row[2].weight
		ka, kb, kc := k[row[0].stage], k[row[1].stage], k[row[2].stage]
		ka, kb, kc = ka[:len(dst)], kb[:len(dst)], kc[:len(dst)]
		for i := range dst {
			dst[i] += a*ka[i] + b*kb[i] + c*kc[i]
		}
	case 2:
		a, b := h*row[0].weight, h*row[1].weight
		ka, kb := k[row[0].stage], k[row[1].stage]
		ka, kb = ka[:len(dst)], kb[:len(dst)]
		for i := range dst {
			dst[i] += a*ka[i] + b*kb[i]
		}
	case 1:
		a, ka := h*row[0].weight, k[row[0].stage][:len(dst)]
		for i := range dst {
			dst[i] += a * ka[i]
		}
	}
}
