// Package pipeline runs a compilation: the stages in order, each handing tables
// to the next, the workers, and the record of what was done.
package pipeline

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"slices"

	"tieline/ingest"
	"tieline/manifests"
	"tieline/pipeline/discrepancy"
	"tieline/pipeline/folder"
	"tieline/pipeline/problem"
	"tieline/pipeline/report"
	"tieline/pipeline/tables"
	"tieline/thermo"
	"tieline/thermo/chem"
)

// Options say where a run goes and how it is worked; none changes a result.
type Options struct {
	Out      string                                // result folder; "" for out/<compilation>
	Replace  bool                                  // with Out: replace a result that is there
	Workers  int                                   // 0: as many as processors
	Progress func(stage string, done, total int64) // may be nil; total 0 where unknown
}

// Result is a finished run.
type Result struct {
	Folder  string
	Record  *Record
	Summary *report.Summary
}

// Run works a compilation out and leaves its result folder, whole or not at
// all. path is the manifest or its folder. A *problem.List error says what is
// wrong with the inputs, all at once.
func Run(path string, opt Options) (*Result, error) {
	if opt.Workers <= 0 {
		opt.Workers = runtime.GOMAXPROCS(0)
	}
	if opt.Progress == nil {
		opt.Progress = func(string, int64, int64) {}
	}
	m, root, err := manifests.Load(path)
	if err != nil {
		return nil, err
	}
	defer root.Close()
	out, policy := opt.Out, folder.Refuse
	switch {
	case out == "":
		out, policy = filepath.Join("out", m.Compilation.ID), folder.ReplaceDefault
	case opt.Replace:
		policy = folder.Replace
	}
	if err := folder.Apart(out, inputs(path, m)); err != nil {
		return nil, err
	}
	f, err := folder.Open(out, policy)
	if err != nil {
		return nil, err
	}
	defer f.Abandon()
	r, err := runInto(m, root, f.Path(), opt)
	if err != nil {
		return nil, err
	}
	if err := f.Commit(); err != nil {
		return nil, err
	}
	r.Folder = out
	return r, nil
}

// inputs are the paths of what a run reads: its manifest and its sources.
func inputs(path string, m *manifests.Manifest) []string {
	dir := path
	if info, err := os.Stat(path); err == nil && !info.IsDir() {
		dir = filepath.Dir(path)
	}
	out := []string{filepath.Join(dir, manifests.FileName)}
	for i := range m.Sources {
		out = append(out, filepath.Join(dir, filepath.FromSlash(m.Sources[i].File)))
	}
	return out
}

// runInto works the stages in order into an empty folder.
func runInto(m *manifests.Manifest, root *os.Root, dir string, opt Options) (*Result, error) {
	logFile, err := os.Create(filepath.Join(dir, "run.log"))
	if err != nil {
		return nil, err
	}
	defer logFile.Close()
	log := newRunLog(logFile, opt.Workers)

	s, sources, err := read(m, root, opt)
	if err != nil {
		return nil, err
	}
	log.stage("ingest", int64(s.all.Len()))

	w, err := createWriters(dir)
	if err != nil {
		return nil, err
	}
	defer w.close()
	counts := []Count{}
	v, err := s.judgeAnalyses(opt, func(j judged) error {
		return errors.Join(w.analyses.Write(j.rows), s.writeFindings(w, j.findings))
	})
	if err != nil {
		return nil, err
	}
	if err := w.end(analysesTable); err != nil {
		return nil, err
	}
	counts = append(counts, count("analyses", v))
	log.stage("analyses", int64(s.all.Len()))

	v, err = s.judgePairs(w, opt)
	if err != nil {
		return nil, err
	}
	if err := w.end(pairsTable); err != nil {
		return nil, err
	}
	counts = append(counts, count("pairs", v))
	log.stage("pairs", int64(len(s.pairs)))

	kinds, v, err := s.evaluate(w, opt)
	if err != nil {
		return nil, err
	}
	counts = append(counts, count("estimates", v))
	log.stage("estimates", v[0]+v[1]+v[2])

	if err := w.end(estimatesTable); err != nil {
		return nil, err
	}
	units, err := s.samples(kinds, w.samples.Write)
	if err != nil {
		return nil, err
	}
	log.stage("samples", int64(len(units)))

	found := s.discrepancies(kinds)
	if err := w.discrepancies.Write(found); err != nil {
		return nil, err
	}
	log.stage("discrepancies", int64(len(found)))
	written, err := w.finish()
	if err != nil {
		return nil, err
	}
	manifest := m.Canonical()
	r := &Record{MadeBy: MadeBy, Version: Version, Manifest: manifest, Sources: recordSources(sources),
		Methods: s.recordMethods(), Counts: counts, Tables: written}
	text, err := r.Encode()
	if err != nil {
		return nil, err
	}
	if err := os.WriteFile(filepath.Join(dir, "record.json"), text, 0o666); err != nil {
		return nil, err
	}
	log.stage("record", 1)
	return &Result{Record: r, Summary: s.summary(sources, counts, kinds, units, found)}, logFile.Close()
}

// read takes the sources in and checks what the manifest asks for.
func read(m *manifests.Manifest, root *os.Root, opt Options) (*state, []ingest.Source, error) {
	methods, unknown := chosen(m)
	all, sources, problems := ingest.Read(root, m, func(rows int) { opt.Progress("ingest", int64(rows), 0) })
	if problems == nil {
		problems = &problem.List{}
	}
	for _, i := range unknown {
		key := fmt.Sprintf("methods.use[%d]", i)
		line, column := m.At(key)
		problems.Add(problem.Problem{Source: manifests.FileName, Line: line, Column: column, Name: key, Kind: "method",
			Found: "no method is called " + problem.Quote(m.Methods.Use[i]), Expected: "an id that `tieline methods` lists",
			Do: nearestMethod(m.Methods.Use[i])})
	}
	if problems.Len() == 0 && all.Len() == 0 {
		problems.Add(problem.Problem{Source: manifests.FileName, Kind: "empty", Found: "the sources hold no analysis", Expected: "at least one row"})
	}
	if err := problems.Err(); err != nil {
		return nil, sources, err
	}
	s := newState(m, methods)
	s.all = all
	s.reintegrate()
	return s, sources, nil
}

// evaluate works every kind out in blocks and writes estimates and findings.
func (s *state) evaluate(w *writers, opt Options) ([]*kind, verdicts, error) {
	kinds := s.kinds()
	var counts verdicts
	var done, total int64
	for _, k := range kinds {
		total += int64(len(k.items))
	}
	for _, k := range kinds {
		blocks := (len(k.items) + itemRows - 1) / itemRows
		evaluators := make([]*evaluator, min(opt.Workers, max(1, blocks)))
		for i := range evaluators {
			evaluators[i] = s.newEvaluator(k)
		}
		err := ordered(blocks, opt.Workers, func(worker, block int) (result, error) {
			from := block * itemRows
			return evaluators[worker].evaluate(from, min(from+itemRows, len(k.items))), nil
		}, func(block int, r result) error {
			counts.add(r.counts)
			done += int64(min(itemRows, len(k.items)-block*itemRows))
			opt.Progress("estimates", done, total)
			for l, n := range r.inRange {
				k.inRange[l] += n
			}
			s.tally.noNumbers(k.name, r.rows)
			return errors.Join(w.estimates.Write(r.rows), s.writeFindings(w, r.findings))
		})
		if err != nil {
			return nil, counts, err
		}
	}
	return kinds, counts, nil
}

// judgePairs makes the pairs and writes their rows and findings.
func (s *state) judgePairs(w *writers, opt Options) (verdicts, error) {
	var counts verdicts
	without := s.pairUp()
	if err := s.writeFindings(w, without); err != nil {
		return counts, err
	}
	var rows []tables.PairRow
	for i := range s.pairs {
		row, findings := s.makePair(i)
		counts[s.pair[i].verdict]++
		rows = append(rows, row)
		if err := s.writeFindings(w, findings); err != nil {
			return counts, err
		}
		if len(rows) == blockRows || i == len(s.pairs)-1 {
			if err := w.pairs.Write(rows); err != nil {
				return counts, err
			}
			rows = rows[:0]
			opt.Progress("pairs", int64(i+1), int64(len(s.pairs)))
		}
	}
	return counts, nil
}

// discrepancies compares methods over all pairs and over each group.
func (s *state) discrepancies(kinds []*kind) []tables.DiscrepancyRow {
	var out []tables.DiscrepancyRow
	for _, k := range kinds {
		if len(k.items) == 0 {
			continue
		}
		rows := &discrepancy.Rows{PairKind: k.name, Lanes: s.comparable(k, kinds)}
		all := make([]string, len(k.items))
		for i, it := range k.items {
			b, r := s.all.At(int(it.a))
			rows.Sample = append(rows.Sample, b.Text(tables.Sample, r))
			rows.Source = append(rows.Source, b.Source)
			all[i] = "all"
		}
		groupings := []discrepancy.Grouping{{By: "all", Group: all}}
		for _, by := range s.manifest.Groups.By {
			groupings = append(groupings, discrepancy.Grouping{By: by, Group: s.groupOf(k, by)})
		}
		for _, v := range variantsOf(rows.Lanes) {
			rows.Of, rows.Variant = v, variantName(v)
			out = append(out, discrepancy.Compare(rows, groupings)...)
		}
	}
	return out
}

// variantsOf lists the variants of lanes, the plain one first, the others as
// they come.
func variantsOf(lanes []discrepancy.Lane) []string {
	out := []string{""}
	for _, l := range lanes {
		if !slices.Contains(out, l.Variant) {
			out = append(out, l.Variant)
		}
	}
	return out
}

// comparable gives the kind's lanes with, for pairs, those of the single-phase
// methods that read one of its members, in the order of the methods.
func (s *state) comparable(k *kind, kinds []*kind) []discrepancy.Lane {
	n := k.laneCount()
	lanes := append([]discrepancy.Lane{}, k.lanes[:n]...)
	for _, single := range kinds {
		if len(k.roles) != 2 || len(single.roles) != 1 || (single.roles[0] != k.roles[0] && single.roles[0] != k.roles[1]) {
			continue
		}
		of := make(map[int32]int, len(single.items))
		for i, it := range single.items {
			of[it.a] = i
		}
		for _, l := range single.lanes[:single.laneCount()] {
			lanes = append(lanes, l.Through(k.memberRows(single.roles[0], of)))
		}
	}
	return append(lanes, k.lanes[n:]...)
}

// memberRows gives, per item, the row of its member of a role in another kind, -1 for none.
func (k *kind) memberRows(role chem.Phase, of map[int32]int) []int {
	out := make([]int, len(k.items))
	for i, it := range k.items {
		member := it.a
		if role != k.roles[0] {
			member = it.b
		}
		row, ok := of[member]
		if !ok {
			row = -1
		}
		out[i] = row
	}
	return out
}

var groupTexts = map[string]tables.Text{"locality": tables.Locality, "unit": tables.Unit, "sample": tables.Sample,
	"texture": tables.Texture, "generation": tables.Generation}

func (s *state) groupOf(k *kind, by string) []string {
	out := make([]string, len(k.items))
	for i, it := range k.items {
		if by == "source" {
			b, _ := s.all.At(int(it.a))
			out[i] = b.Source
			continue
		}
		out[i] = s.itemText(it, groupTexts[by])
	}
	return out
}

func nearestMethod(id string) string {
	var ids []string
	for _, m := range thermo.Methods() {
		ids = append(ids, m.ID)
	}
	if near := manifests.Nearest(id, ids); near != "" {
		return "did you mean " + problem.Quote(near) + "?"
	}
	return "see `tieline methods`"
}
