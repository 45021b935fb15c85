package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"tidekiln/evolve"
	"tidekiln/evolve/figure"
	"tidekiln/scenarios"
)

func newFigure() *cobra.Command {
	var out, begin, end string
	var opt figure.Options
	c := &cobra.Command{
		Use:   "figure DATASET",
		Short: "Draw a stored history",
		Long: `Draw eccentricities, heat made and lost, temperature and melt, and semi-major
axes of a stored history against time. The extension of --out chooses the format.`,
		Example: `  tidekiln figure volcanic-cycle -o cycle.pdf
  tidekiln figure volcanic-cycle -o one.svg --bodies Cinder --until "500 Myr" --width 8.5`,
		Args: cobra.ExactArgs(1),
		RunE: func(c *cobra.Command, args []string) error {
			var err error
			if opt.FromMyr, err = myr("--since", begin); err != nil {
				return request(err)
			}
			if opt.ToMyr, err = myr("--until", end); err != nil {
				return request(err)
			}
			if out == "" {
				out = strings.TrimRight(args[0], "/") + ".png"
			}
			h, err := figure.Load(args[0])
			if err != nil {
				return request(err)
			}
			if err := figure.Draw(h, out, opt); err != nil {
				return request(err)
			}
			_, err = fmt.Fprintln(c.OutOrStdout(), out)
			return err
		},
	}
	f := c.Flags()
	f.StringVarP(&out, "out", "o", "", "`FILE` to write, .png, .svg or .pdf (default: DATASET.png)")
	f.StringSliceVar(&opt.Bodies, "bodies", nil, "`NAMES` of the bodies to draw, separated by commas (default: all)")
	f.StringVar(&begin, "since", "", "begin at this time, `\"100 Myr\"`")
	f.StringVar(&end, "until", "", "end at this time, `\"500 Myr\"`")
	f.BoolVar(&opt.LogTime, "log-time", false, "logarithmic time axis")
	f.Float64Var(&opt.WidthCM, "width", 16, "width in `CM`; 8.5 fits one column")
	f.IntVar(&opt.DPI, "dpi", 300, "resolution of a .png")
	return c
}

// myr reads a time given on the command line; "" is 0.
func myr(flag, text string) (float64, error) {
	if text == "" {
		return 0, nil
	}
	t, err := scenarios.ParseQuantity(text, "Myr")
	if err != nil {
		return 0, fmt.Errorf("%s %s: %w", flag, text, err)
	}
	return t / evolve.Megayear, nil
}
