package pipeline

import (
	"errors"
	"slices"
	"testing"
)

func TestOrderedKeepsBlockOrder(t *testing.T) {
	for _, workers := range []int{1, 2, 7} {
		var got []int
		err := ordered(100, workers, func(_, b int) (int, error) { return b * b, nil },
			func(_ int, r int) error { got = append(got, r); return nil })
		if err != nil || len(got) != 100 || !slices.IsSorted(got) || got[99] != 99*99 {
			t.Errorf("%d workers: err %v, results %v; want the squares of 0 to 99 in order", workers, err, got)
		}
	}
}

func TestOrderedStopsAtFirstError(t *testing.T) {
	boom := errors.New("boom")
	for _, where := range []string{"work", "consume"} {
		seen := 0
		err := ordered(1000, 3, func(_, b int) (int, error) {
			if where == "work" && b == 5 {
				return 0, boom
			}
			return b, nil
		}, func(b, _ int) error {
			seen++
			if where == "consume" && b == 5 {
				return boom
			}
			return nil
		})
		want := map[string]int{"work": 5, "consume": 6}[where]
		if !errors.Is(err, boom) || seen != want {
			t.Errorf("error in %s: got %v after %d blocks consumed; want boom after %d", where, err, seen, want)
		}
	}
}
