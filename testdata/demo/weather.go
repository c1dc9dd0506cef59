//go:build ignore

// This program writes weather.csv, the daily weather of the demo slope, and that of the starter study. The data are
// invented: the places do not exist, and no station's record went into them. Only the yearly sums and the shape of the
// seasons are meant to be those of a wet, temperate hillside. The same options always write the same bytes.
//
//	go run testdata/demo/weather.go > testdata/demo/weather.csv
//	go run testdata/demo/weather.go -seed 7 -first 2012 -years 12 > cmd/quietslope/starter/weather.csv
//
// Rain: a two-state Markov chain says whether a day is wet (Gabriel & Neumann 1962, from memory), with a chance of rain after a
// dry day and after a wet day that follow the season. Amounts on wet days are drawn independently of each other (Richardson
// 1981, from memory), here from a mixture of two exponential distributions, and are scaled by a factor of the season and by a
// slow factor of the year that gives wet and dry years. Potential evapotranspiration (PET): a yearly sine wave with noise,
// lower on wet days than on dry ones, as in the same paper's treatment of radiation.
package main

import (
	"bufio"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"time"
)

func main() {
	seed := flag.Uint64("seed", 30, "where the random draws begin")
	firstYear := flag.Int("first", 1984, "first `year`")
	years := flag.Int("years", 40, "number of `years`")
	flag.Parse()

	out := bufio.NewWriter(os.Stdout)
	fmt.Fprintln(out, "date,rain_mm,pet_mm")

	// Every quantity has a stream of its own, so that a change to one leaves the others as they are.
	chain := rand.New(rand.NewPCG(*seed, 1))
	amount := rand.New(rand.NewPCG(*seed, 2))
	demand := rand.New(rand.NewPCG(*seed, 3))
	factor := yearFactors(rand.New(rand.NewPCG(*seed, 4)), *years)

	wet, noise := false, 0.0
	end := time.Date(*firstYear+*years, time.January, 1, 0, 0, 0, 0, time.UTC)
	for day := time.Date(*firstYear, time.January, 1, 0, 0, 0, 0, time.UTC); day.Before(end); day = day.AddDate(0, 0, 1) {
		// season is +1 at the turn of November and December, when rain is most frequent, and -1 half a year later.
		season := math.Cos(2 * math.Pi * (float64(day.YearDay()) - 335) / 365.25)
		chance := 0.29 + 0.07*season
		if wet {
			chance = 0.62 + 0.07*season
		}
		wet = chain.Float64() < chance

		rain := 0.0
		draw, size := amount.Float64(), amount.ExpFloat64() // drawn on dry days too, so that the streams stay in step
		if wet {
			mean := 2.7
			if draw < 0.36 {
				mean = 12.2
			}
			// The factor of the year runs from one autumn to the next without a jump.
			at := float64(day.Year()-*firstYear) + float64(day.YearDay())/365.25 + 0.25
			i := int(at)
			f := factor[i] + (factor[i+1]-factor[i])*smooth(at-float64(i))
			rain = size * mean * (1 + 0.14*season) * f
		}
		rain = math.Round(rain*10) / 10

		// The highest PET comes in early July. Noise carries over from day to day.
		sun := math.Cos(2 * math.Pi * (float64(day.YearDay()) - 186) / 365.25)
		noise = 0.6*noise + 0.8*demand.NormFloat64()
		pet := (1.87 + 1.54*sun) * (1 + 0.16*noise)
		if rain > 0 {
			pet *= 0.78
		} else {
			pet *= 1.17
		}
		fmt.Fprintf(out, "%s,%.1f,%.2f\n", day.Format("2006-01-02"), rain, math.Max(pet, 0.05))
	}
	if err := out.Flush(); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
}

// yearFactors returns a factor near 1 for every year and the two beyond: log-normal, each a little like the one before.
func yearFactors(r *rand.Rand, years int) []float64 {
	f := make([]float64, years+2)
	x := r.NormFloat64()
	for i := range f {
		f[i] = math.Exp(0.11*x - 0.11*0.11/2)
		x = 0.3*x + math.Sqrt(1-0.3*0.3)*r.NormFloat64()
	}
	return f
}

// smooth rises from 0 to 1 within the last fifth of the interval from 0 to 1.
func smooth(x float64) float64 {
	x = math.Max(0, (x-0.8)/0.2)
	return x * x * (3 - 2*x)
}
