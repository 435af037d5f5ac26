package folder

import (
	"fmt"
	"path/filepath"

	"tieline/pipeline/problem"
)

// Apart refuses a target that holds one of the inputs: replacing it would
// delete what the run is reading.
func Apart(target string, inputs []string) error {
	t, err := resolved(target)
	if err != nil {
		return err
	}
	for _, input := range inputs {
		i, err := resolved(input)
		if err != nil {
			return err
		}
		if rel, err := filepath.Rel(t, i); err == nil && filepath.IsLocal(rel) {
			return fmt.Errorf("the result folder %s holds %s, which this run reads; name another folder with --out",
				problem.CleanAll(target), problem.CleanAll(filepath.ToSlash(rel)))
		}
	}
	return nil
}

// resolved is the absolute path with links followed as far as it exists.
func resolved(path string) (string, error) {
	abs, err := filepath.Abs(path)
	if err != nil {
		return "", err
	}
	rest := ""
	for at := abs; ; at = filepath.Dir(at) {
		if real, err := filepath.EvalSymlinks(at); err == nil {
			return filepath.Join(real, rest), nil
		}
		if filepath.Dir(at) == at {
			return abs, nil
		}
		rest = filepath.Join(filepath.Base(at), rest)
	}
}
