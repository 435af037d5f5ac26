package ingest

import "strings"

// textures are the words for textural positions, without case (common practice,
// no source); every other word stays as the source has it.
var textures = map[string]string{
	"core": "core", "cores": "core", "centre": "core", "center": "core",
	"rim": "rim", "rims": "rim", "edge": "rim",
	"host": "host", "lamella": "lamella", "lamellae": "lamella", "lamellas": "lamella",
	"inclusion": "inclusion", "inclusions": "inclusion",
	"symplectite": "symplectite", "symplectites": "symplectite", "symplectitic": "symplectite",
	"matrix": "matrix", "groundmass": "matrix",
}

// textureOf gives the normalised word, or the text as it is.
func textureOf(text string) string {
	if t, ok := textures[strings.ToLower(text)]; ok {
		return t
	}
	return text
}
