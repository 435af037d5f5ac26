package ingest

import "testing"

func TestTextures(t *testing.T) {
	for text, want := range map[string]string{"Core": "core", "CENTRE": "core", "Rim": "rim", "lamellae": "lamella", "groundmass": "matrix",
		"core": "core", "": "", "Corona": "Corona", "C": "C", "rim 2": "rim 2"} {
		if got := textureOf(text); got != want {
			t.Errorf("texture %q is read as %q, want %q", text, got, want)
		}
	}
}
