// Package discrepancy compares methods: the statistics of one against another,
// a minus b, over the pairs of a group.
package discrepancy

import (
	"math"
	"slices"
)

// Statistics describes differences a minus b, in the differences' unit. Fields
// that need two differences are NaN where N is 1; all are NaN where N is 0.
type Statistics struct {
	N             int
	Mean, Median  float64
	MedianAbs     float64 // median of |a - b|
	SD            float64 // with n - 1
	MAD           float64 // median of |d - median d|, raw
	LoALow, LoAUp float64 // mean -+ 1.96 SD, Bland JM, Altman DG (1986) Lancet 327:307-310
}

// Describe gives the statistics of d. Sums run in the order of d, so equal
// inputs in equal order give equal bits. d is left as it was.
func Describe(d []float64) Statistics {
	nan := math.NaN()
	s := Statistics{N: len(d), Mean: nan, Median: nan, MedianAbs: nan, SD: nan, MAD: nan, LoALow: nan, LoAUp: nan}
	if len(d) == 0 {
		return s
	}
	s.Mean = mean(d)
	work := slices.Clone(d)
	s.Median = medianOf(work)
	for i, v := range d {
		work[i] = math.Abs(v)
	}
	s.MedianAbs = medianOf(work)
	for i, v := range d {
		work[i] = math.Abs(v - s.Median)
	}
	s.MAD = medianOf(work)
	if len(d) > 1 {
		s.SD = sd(d, s.Mean)
		half := float64(1.96 * s.SD)
		s.LoALow, s.LoAUp = s.Mean-half, s.Mean+half
	}
	return s
}

// Median gives the median of v, NaN where v is empty; v is left as it was.
func Median(v []float64) float64 {
	if len(v) == 0 {
		return math.NaN()
	}
	return medianOf(slices.Clone(v))
}

func mean(d []float64) float64 {
	sum := 0.0
	for _, v := range d {
		sum += v
	}
	return sum / float64(len(d))
}

func sd(d []float64, mean float64) float64 {
	sum := 0.0
	for _, v := range d {
		r := v - mean
		sum += float64(r * r)
	}
	return math.Sqrt(sum / float64(len(d)-1))
}

// medianOf sorts v. Zeros of either sign compare equal and either may come
// first, so the sign of a zero median is dropped.
func medianOf(v []float64) float64 {
	slices.Sort(v)
	n := len(v)
	m := v[n/2]
	if n%2 == 0 {
		m = (v[n/2-1] + m) / 2
	}
	return m + 0
}
