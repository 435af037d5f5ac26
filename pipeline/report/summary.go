// Package report puts a run into words for the person at the desk.
package report

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"tieline/pipeline/problem"
	"tieline/pipeline/tables"
)

// Summary is what a run says when it ends.
type Summary struct {
	Title         string
	Sources       []Source
	Counts        []Count
	Units         []Unit
	Temperatures  []Temperature
	NoNumbers     []Tally // estimates without a number: what, why, how many
	Findings      []Tally // rules that fired
	SetAside      []Row   // analyses set aside, the first of them
	SetAsideMore  int     // how many more
	Discrepancies []tables.DiscrepancyRow
	Cautions      []string
}

// Source is one file and what became of its rows.
type Source struct {
	ID, File                      string
	Rows, Kept, Flagged, SetAside int      // as read
	Reintegrated                  int      // grains put together from its rows
	Unused                        []string // headers of columns nothing was made of
}

// Count is rows in and by verdict.
type Count struct {
	What                        string
	In, Kept, Flagged, SetAside int64
}

// Unit is what the methods of one pair kind say of one unit and texture: the
// lowest and the highest of their medians of sample medians.
type Unit struct {
	Unit, Texture, PairKind     string
	Samples, Methods            int64
	Lowest, Highest             float64 // degC
	LowestMethod, HighestMethod string
}

// Temperature is one method and component over all pairs.
type Temperature struct {
	PairKind, Method, Component string
	PublishedKind, Variant      string // Variant: "" on the method's own basis
	N                           int
	InRange                     int64   // of N, those inside the calibrated range
	Low, High                   float64 // degC
	SigmaC                      float64 // calibration 1-sigma, degC; 0 for none
	Recalled                    bool    // coefficients from memory, never checked
}

// Tally is how often something happened, with its first case.
type Tally struct {
	What, Effect string
	N            int64
	Example      string
}

// Row is one row set aside and why.
type Row struct{ ID, Why string }

// Text is the summary as people read it, at most about 100 columns wide.
func (s *Summary) Text() string {
	var b strings.Builder
	wrap(&b, "", "", problem.CleanAll(s.Title))
	s.sources(&b)
	s.units(&b)
	s.temperatures(&b)
	s.discrepancies(&b)
	s.quality(&b)
	b.WriteString("\nBefore you use these\n")
	for _, c := range s.Cautions {
		wrap(&b, "  - ", "    ", c)
	}
	return b.String()
}

func (s *Summary) sources(b *strings.Builder) {
	fmt.Fprintf(b, "\n%-24s %8s %8s %8s %10s\n", "Analyses by source", "in", "kept", "flagged", "set aside")
	for _, r := range s.Sources {
		fmt.Fprintf(b, "  %-22s %8d %8d %8d %10d\n", problem.Clean(r.ID), r.Rows, r.Kept, r.Flagged, r.SetAside)
		if r.Reintegrated > 0 {
			fmt.Fprintf(b, "  %-22s %8d\n", "  re-integrated grains", r.Reintegrated)
		}
	}
	for _, c := range s.Counts {
		fmt.Fprintf(b, "%-24s %8d %8d %8d %10d\n", "All "+c.What, c.In, c.Kept, c.Flagged, c.SetAside)
	}
	for _, r := range s.Sources {
		if len(r.Unused) > 0 {
			wrap(b, "  ", "    ", fmt.Sprintf("%s: columns nothing was made of: %s", problem.Clean(r.ID), cleanJoin(r.Unused)))
		}
	}
}

func cleanJoin(texts []string) string {
	out := make([]string, len(texts))
	for i, t := range texts {
		out[i] = problem.Clean(t)
	}
	return strings.Join(out, ", ")
}

func (s *Summary) units(b *strings.Builder) {
	if len(s.Units) == 0 {
		return
	}
	b.WriteString("\nMedians per unit and texture, degC: from the coldest method to the hottest, composition in range\n")
	fmt.Fprintf(b, "  %-24s %-18s %-22s %7s\n", "unit", "texture", "from", "samples")
	for _, u := range s.Units {
		span := fmt.Sprintf("%.0f %s to %.0f %s", u.Lowest, u.LowestMethod, u.Highest, u.HighestMethod)
		if u.Methods == 1 {
			span = fmt.Sprintf("%.0f %s", u.Lowest, u.LowestMethod)
		}
		fmt.Fprintf(b, "  %-24s %-18s %-22s %7d  %s\n", problem.Clean(u.Unit), problem.Clean(u.Texture), u.PairKind, u.Samples, span)
	}
}

func (s *Summary) temperatures(b *strings.Builder) {
	b.WriteString("\nTemperatures over all units and textures, degC (rows set aside left out)\n")
	kind := ""
	for _, t := range s.Temperatures {
		if t.PairKind != kind {
			kind = t.PairKind
			fmt.Fprintf(b, "  %-52s %6s %9s %8s %8s %8s\n", kind, "n", "in range", "lowest", "highest", "cal. +-")
		}
		sigma := ""
		if t.SigmaC > 0 {
			sigma = fmt.Sprintf("%.0f", t.SigmaC)
		}
		name := name(t.PairKind, t.Method, t.Component, t.Variant, t.PublishedKind)
		if t.Recalled {
			name += " (recalled)"
		}
		if t.N == 0 {
			fmt.Fprintf(b, "    %-50s %6d\n", name, 0)
			continue
		}
		in := ""
		if t.Method != discrepancyWithPublished {
			in = strconv.FormatInt(t.InRange, 10)
		}
		fmt.Fprintf(b, "    %-50s %6d %9s %8.0f %8.0f %8s\n", name, t.N, in, t.Low, t.High, sigma)
	}
	for _, n := range s.NoNumbers {
		wrap(b, "  ", "    ", fmt.Sprintf("no number: %d x %s: %s", n.N, n.What, n.Effect))
	}
}

// name is a method and component as they stand under the heading of a pair
// kind: the kind is not said again.
func name(kind string, words ...string) string {
	words[0] = strings.TrimPrefix(words[0], kind+"/")
	return strings.Join(slices.DeleteFunc(words, func(w string) bool { return w == "" }), " ")
}

// listedDisagreements is how many comparisons between methods the summary lists.
const listedDisagreements = 8

// leastForRank is how many differences a comparison needs to be among the largest.
const leastForRank = 3

// discrepancies lists the comparisons that say something at a glance: a method's
// components with each other, everything with the published temperatures, and
// the largest disagreements between methods. The table holds them all.
func (s *Summary) discrepancies(b *strings.Builder) {
	if len(s.Discrepancies) == 0 {
		return
	}
	b.WriteString("\nWhere calibrations disagree, a minus b, degC, over all rows\n")
	left := 0
	for _, kind := range s.kinds() {
		fmt.Fprintf(b, "  %-62s %6s %8s %8s %6s %6s\n", kind, "n", "samples", "median", "MAD", "SD")
		var own, published, between []*tables.DiscrepancyRow
		for i := range s.Discrepancies {
			d := &s.Discrepancies[i]
			switch {
			case d.PairKind != kind:
			case d.MethodB == discrepancyWithPublished:
				published = append(published, d)
			case d.MethodA == d.MethodB:
				own = append(own, d)
			case d.N >= leastForRank:
				between = append(between, d)
			default:
				left++
			}
		}
		slices.SortStableFunc(between, func(x, y *tables.DiscrepancyRow) int {
			return cmp.Compare(math.Abs(*y.MedianDiffC), math.Abs(*x.MedianDiffC))
		})
		kept := min(len(between), listedDisagreements)
		left += len(between) - kept
		listed(b, "with the published temperatures", published)
		listed(b, "components of one method", own)
		listed(b, "between methods, the largest", between[:kept])
	}
	if left > 0 {
		fmt.Fprintf(b, "  %d smaller ones are in tables/discrepancies.parquet\n", left)
	}
}

const discrepancyWithPublished = "as-published"

// kinds lists the pair kinds of the comparisons, each once, as they come.
func (s *Summary) kinds() []string {
	var out []string
	for i := range s.Discrepancies {
		if k := s.Discrepancies[i].PairKind; !slices.Contains(out, k) {
			out = append(out, k)
		}
	}
	return out
}

func listed(b *strings.Builder, heading string, rows []*tables.DiscrepancyRow) {
	if len(rows) == 0 {
		return
	}
	fmt.Fprintf(b, "    %s\n", heading)
	for _, d := range rows {
		sd := ""
		if d.SDC != nil {
			sd = fmt.Sprintf("%.0f", *d.SDC)
		}
		mad := fmt.Sprintf("%.0f", *d.MADC)
		pair := name(d.PairKind, d.MethodA, d.ComponentA) + " - " + name(d.PairKind, d.MethodB, d.ComponentB, d.PublishedKind)
		fmt.Fprintf(b, "      %-58s %6d %8d %8s %6s %6s\n", pair, d.N, d.NSamples, signed(*d.MedianDiffC), mad, sd)
	}
}

// signed prints a difference to the degree, with its sign, and 0 without one.
func signed(v float64) string {
	if s := fmt.Sprintf("%+.0f", v); s != "-0" && s != "+0" {
		return s
	}
	return "0"
}

func (s *Summary) quality(b *strings.Builder) {
	if len(s.Findings) > 0 {
		fmt.Fprintf(b, "\nWhat the rules found\n")
	}
	for _, f := range s.Findings {
		wrap(b, "  ", "    ", fmt.Sprintf("%s: %d x %s, first %s", f.Effect, f.N, f.What, problem.Clean(f.Example)))
	}
	if len(s.SetAside) > 0 {
		b.WriteString("\nAnalyses set aside\n")
	}
	for _, r := range s.SetAside {
		wrap(b, "  ", "    ", problem.Clean(r.ID)+": "+r.Why)
	}
	if s.SetAsideMore > 0 {
		fmt.Fprintf(b, "  and %d more; every one is in tables/analyses.parquet with its reasons\n", s.SetAsideMore)
	}
}

// wrap writes text in lines of at most 100 characters, the first behind one
// lead and the others behind another.
func wrap(b *strings.Builder, first, rest, text string) {
	line, n := first, 0
	for _, w := range strings.Fields(text) {
		if n > 0 && len(line)+1+len(w) > 100 {
			b.WriteString(line + "\n")
			line, n = rest, 0
		}
		if n > 0 {
			line += " "
		}
		line += w
		n++
	}
	b.WriteString(line + "\n")
}
