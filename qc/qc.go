// Package qc holds the rules. A rule looks at an analysis, a pair or an
// estimate and, where it fires, leaves a finding; one function turns findings
// into a verdict. Nothing is dropped here: a row set aside stays in every table
// with its reasons.
package qc

import (
	"strconv"
	"strings"
)

// Effect is what a finding does to its row.
type Effect uint8

// The effects, from harmless to final.
const (
	Noted    Effect = iota // recorded; the verdict stays
	Flagged                // used, with the reason shown
	SetAside               // not used, with the reason shown
)

func (e Effect) String() string { return [...]string{"noted", "flagged", "set aside"}[e] }

// Finding is one rule that fired on one row.
type Finding struct {
	Rule   string   // the rule's name, as the qc table lists it
	Effect Effect   //
	Value  *float64 // what was measured, in the unit Limit names; nil where the rule is no number
	Limit  string   // what it was held against
	Detail string   // a sentence for the person at the desk
}

// Verdict is what becomes of a row.
type Verdict uint8

// The verdicts. An analysis, pair or estimate has exactly one.
const (
	Kept Verdict = iota
	FlaggedRow
	SetAsideRow
)

func (v Verdict) String() string { return [...]string{"kept", "flagged", "set aside"}[v] }

// Judge turns findings into the row's verdict and its reasons, the details of
// what flagged or set it aside, in the order of the rules.
func Judge(findings []Finding) (Verdict, string) {
	v, reasons := Kept, []string(nil)
	for _, f := range findings {
		if f.Effect == Noted {
			continue
		}
		v = max(v, Verdict(f.Effect))
		reasons = append(reasons, f.Detail)
	}
	return v, strings.Join(reasons, "; ")
}

// Inherit gives the verdict of a row made from others: never better than theirs.
func Inherit(own Verdict, reasons string, from Verdict, why string) (Verdict, string) {
	if from == Kept {
		return own, reasons
	}
	if reasons == "" {
		return max(own, from), why
	}
	return max(own, from), reasons + "; " + why
}

func number(v float64) *float64 { return &v }

// text prints a number for a detail: at most digits decimals, no trailing zeros.
func text(v float64, digits int) string {
	s := strconv.FormatFloat(v, 'f', digits, 64)
	if strings.Contains(s, ".") {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	if s == "-0" {
		return "0"
	}
	return s
}
