package statistic

import "lotproof/spec"

var median = Definition{
	Name:        "median",
	Columns:     1,
	MinN:        1,
	Summary:     "The middle observation, or the mean of the two middle ones.",
	Formula:     "x̃ = x₍₍ₙ₊₁₎/₂₎ for odd n,  ( x₍ₙ/₂₎ + x₍ₙ/₂₊₁₎ ) / 2 for even n",
	Where:       "x₍ⱼ₎ is the j-th smallest of n observations",
	Assumptions: "None on the shape. With ties the median moves in steps of the measurement.",
	Sources:     []string{"ISO 3534-1:2006, Statistics — Vocabulary and symbols — Part 1, 1.13", maritzJarrett},
	Unit:        sameUnit,
	New:         func([]spec.Setting) Estimator { return &quantileOf{p: ratio{num: 1, den: 2}, definition: 7} },
}
