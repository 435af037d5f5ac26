package ingest

import (
	"os"
	"testing"
)

// hostile lists the files under testdata/hostile, one fault each unless its name
// says otherwise, with all that is said of them.
var hostile = []struct {
	file, keys string
	want       []string
}{
	{"blank.csv", "", []string{
		`blank.csv: the file holds blank lines only; expected a header and rows`,
	}},
	{"column-and-constant.csv", `texture = "core"
phase = "Pl"`, []string{
		`column-and-constant.csv:1:2 (Mineral): the column gives phase, and so does phase = "Pl" in the manifest; expected one of them; remove phase from the manifest, or map the column to "ignored"`,
		`column-and-constant.csv:1:3 (texture): the column gives texture, and so does texture = "core" in the manifest; expected one of them; remove texture from the manifest, or map the column to "ignored"`,
	}},
	{"commas.tsv", "", []string{
		`commas.tsv:1:1: a quote inside a cell that does not begin with one; expected the whole cell in quotes, quotes within it doubled; set separator = "comma", which gives 3 columns`,
	}},
	{"conditions.csv", "", []string{
		`conditions.csv:2:4 (SiO2 sigma): "-0.1" is below zero; expected a number of 0 or more`,
		`conditions.csv:2:5 (T (C)): "-300" is below absolute zero; expected a temperature; list the text in missing if it means that there is none`,
		`conditions.csv:2:6 (T sigma (C)): "-1" is below zero; expected a number of 0 or more`,
		`conditions.csv:2:7 (P (kbar)): "-2" is below zero; expected a number of 0 or more`,
		`conditions.csv:2:8 (n): "1.5" is no count; expected a whole number of 1 or more`,
		`conditions.csv:2:9 (x (um)): "a" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
		`conditions.csv:2:10 (published_kind): "guess"; expected experiment, thermometer or estimate`,
		`conditions.csv:2:11 (area_fraction): "55" is no fraction; expected a number from 0 to 1`,
		`conditions.csv:3:4 (SiO2 sigma): "<0.1" is a limit; expected a number with a decimal point; leave the cell empty if there is no number`,
		`conditions.csv:3:5 (T (C)): "<700" is a limit; expected a number with a decimal point; leave the cell empty if there is no number`,
		`conditions.csv:3:7 (P (kbar)): "<10" is a limit; expected a number with a decimal point; leave the cell empty if there is no number`,
		`conditions.csv:3:8 (n): "0" is no count; expected a whole number of 1 or more`,
		`conditions.csv:3:9 (x (um)): "1e309" is too large; expected a number below 1.8e308`,
		`conditions.csv:3:11 (area_fraction): "-0.1" is no fraction; expected a number from 0 to 1`,
	}},
	{"decimal-comma.csv", "", []string{
		`decimal-comma.csv:2:4 (SiO2): "60,1" is no number; expected a number with a decimal point; set decimal = "comma" if this source writes its decimals so`,
		`decimal-comma.csv:2:5 (Al2O3): "25,2" is no number; expected a number with a decimal point; set decimal = "comma" if this source writes its decimals so`,
	}},
	{"decimal-point.csv", `separator = "semicolon"
decimal = "comma"`, []string{
		`decimal-point.csv:2:4 (K2O): "0.5" is no number; expected a number with a decimal comma; set decimal = "point" if this source writes its decimals so`,
		`decimal-point.csv:3:3 (SiO2): "1.060,1" is no number; expected a number with a decimal comma; write numbers without thousands separators or spaces`,
	}},
	{"duplicated-header.csv", "", []string{
		`duplicated-header.csv:1:5 (SiO2): the header "SiO2" stands in columns 3 and 5; expected every header once; rename one in the file, or map the header to "ignored"`,
		`duplicated-header.csv:1:7 (note): the header "note" stands in columns 6 and 7; expected every header once; rename one in the file, or map the header to "ignored"`,
	}},
	{"empty-sample.csv", "", []string{
		`empty-sample.csv:2:1 (Sample): no sample name; expected the name of the rock or run; fill in the cell`,
		`empty-sample.csv:3:1 (Sample): "n.a." is no sample name; expected the name of the rock or run; fill in the cell`,
	}},
	{"empty.csv", "", []string{
		`empty.csv: the file is empty; expected a header and rows`,
	}},
	{"five-faults.csv", "", []string{
		`five-faults.csv:1:4 (SiO2): the header "SiO2" stands in columns 3 and 4; expected every header once; rename one in the file, or map the header to "ignored"`,
		`five-faults.csv:2:5 (K2O): "half" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
		`five-faults.csv:3:2 (Mineral): "unobtainium" is no phase known here; expected an IMA symbol or a mineral name; map it in phases, or list it in pass_over`,
		`five-faults.csv:4: 4 cells; expected 5 as in the header; check for a missing separator, or for one inside a cell that is not quoted`,
		`five-faults.csv:5:1 (Sample): no sample name; expected the name of the rock or run; fill in the cell`,
		`five-faults.csv:6:2 (Mineral): a quote that is opened here and never closed; close the quote, or remove it`,
	}},
	{"header-only.csv", "", []string{
		`header-only.csv:2: no rows below the header; expected one row for each analysis`,
	}},
	{"image.csv", "", []string{
		`image.csv: a PNG image; expected a text file; save the table as CSV with UTF-8 text`,
	}},
	{"latin-undeclared.csv", "", []string{
		`latin-undeclared.csv:3:1 (Sample): bytes that are no UTF-8 in "R\u{fffd}ck"; expected UTF-8 text; declare the file's encoding, say encoding = "windows-1252", or save it as UTF-8`,
		`latin-undeclared.csv:4:2 (Label): bytes that are no UTF-8 in "Gr\u{fffd}\u{fffd}e"; expected UTF-8 text; declare the file's encoding, say encoding = "windows-1252", or save it as UTF-8`,
	}},
	{"mark-against-declaration.csv", `encoding = "windows-1252"`, []string{
		`mark-against-declaration.csv:1: the byte order mark of utf-8; expected windows-1252 as the manifest declares; set encoding = "utf-8" or leave it out`,
	}},
	{"missing-mapped-header.csv", `columns = { "Run no." = "pair", "Section" = "domain" }`, []string{
		`missing-mapped-header.csv:1: no header "Run no."; expected every header the manifest maps in columns; did you mean "Run no"?`,
		`missing-mapped-header.csv:1: no header "Section"; expected every header the manifest maps in columns; write the header in columns as it stands in the file`,
	}},
	{"mol-percent.csv", `composition = "end-member fraction"`, []string{
		`mol-percent.csv:1:3 (Ab (mol%)): Ab in the unit "mol %"; expected end-member fraction; convert the column and name it so, or map it to "ignored" in columns`,
		`mol-percent.csv:1:4 (Or %): Or in the unit "%"; expected end-member fraction; convert the column and name it so, or map it to "ignored" in columns`,
	}},
	{"no-known-column.csv", "", []string{
		`no-known-column.csv:1: no column is known to hold oxide wt%; expected headers such as "SiO2", "Al2O3 (wt%)", "FeO*"; map the headers in columns`,
	}},
	{"no-sample.csv", "", []string{
		`no-sample.csv:1: no column names the phase; expected a header such as "Mineral"; map a column to phase in columns, or set phase for the whole source`,
		`no-sample.csv:1: no column names the sample; expected a header such as "Sample"; map a column to sample in columns, or set sample for the whole source`,
	}},
	{"noise.csv", "", []string{
		`noise.csv: NUL bytes, as in no text; expected a text file; save the table as CSV with UTF-8 text`,
	}},
	{"nul-late.csv", "", []string{
		`nul-late.csv:22:2 (Label): a NUL byte in "z\u{0}z"; expected text; save the table as CSV with UTF-8 text`,
	}},
	{"number-in-words.csv", "", []string{
		`number-in-words.csv:2:4 (SiO2): "sixty" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
		`number-in-words.csv:3:5 (Al2O3): "tr." is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
		`number-in-words.csv:3:6 (FeO*): "60.1*" is no number; expected a number with a decimal point; correct the cell`,
		`number-in-words.csv:3:7 (Na2O): "1_000" is no number; expected a number with a decimal point; correct the cell`,
		`number-in-words.csv:3:8 (K2O): "0x1p-2" is no number; expected a number with a decimal point; correct the cell`,
		`number-in-words.csv:4:4 (SiO2): "inf" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
		`number-in-words.csv:4:5 (Al2O3): "NaN" is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
		`number-in-words.csv:4:6 (FeO*): "1,234.5" is no number; expected a number with a decimal point; write numbers without thousands separators or spaces`,
		`number-in-words.csv:4:7 (Na2O): "7 1" is no number; expected a number with a decimal point; write numbers without thousands separators or spaces`,
		`number-in-words.csv:4:8 (K2O): "1e999" is too large; expected a number below 1.8e308`,
		`number-in-words.csv:5:4 (SiO2): "1e-999" is too small to tell from 0; expected a number, or 0`,
		`number-in-words.csv:5:5 (Al2O3): "<" has no limit after the <; expected a limit such as <0.02`,
		`number-in-words.csv:5:6 (FeO*): "<x" has no limit after the <; expected a limit such as <0.02`,
		`number-in-words.csv:5:7 (Na2O): "<-1" has no limit after the <; expected a limit such as <0.02`,
		`number-in-words.csv:5:8 (K2O): "." is no number; expected a number with a decimal point; list the text in not_analysed, below_detection or missing if it means one of these`,
	}},
	{"one-column.csv", "", []string{
		`one-column.csv:1: one column only, "SiO2 of the lower unit"; expected headers such as "SiO2", "Al2O3 (wt%)", "FeO*"; map the headers in columns`,
	}},
	{"packed.csv", "", []string{
		`packed.csv: a gzip file; expected a text file; save the table as CSV with UTF-8 text`,
	}},
	{"quote-in-cell.csv", "", []string{
		`quote-in-cell.csv:2:2 (Label): a quote inside a cell that does not begin with one; expected the whole cell in quotes, quotes within it doubled; quote the cell, or remove the quote`,
		`quote-in-cell.csv:4:2 (Label): text after the closing quote of a cell; expected a separator, or quotes within the cell doubled; double the quotes within the cell`,
	}},
	{"quoted-semicolons.csv", "", []string{
		`quoted-semicolons.csv:1:1: text after the closing quote of a cell; expected a separator, or quotes within the cell doubled; set separator = "semicolon", which gives 3 columns`,
	}},
	{"ragged.csv", "", []string{
		`ragged.csv:2: 9 cells; expected 8 as in the header; check for a missing separator, or for one inside a cell that is not quoted`,
		`ragged.csv:3: 4 cells; expected 8 as in the header; check for a missing separator, or for one inside a cell that is not quoted`,
	}},
	{"semicolons.csv", "", []string{
		`semicolons.csv:1: one column only, "Sample;Mineral;SiO2"; expected the comma between cells; set separator = "semicolon", which gives 3 columns`,
	}},
	{"shifted.csv", "", []string{
		`shifted.csv:2:5: "0.5" in a column without a header; expected 4 cells; check for a separator inside a cell that is not quoted, or name the column`,
		`shifted.csv:5: 3 cells; expected 4 as in the header; check for a missing separator, or for one inside a cell that is not quoted`,
	}},
	{"tab-in-csv.csv", "", []string{
		`tab-in-csv.csv:2:4 (SiO2): "60.1\u{9}25.2" is no number; expected a number with a decimal point; correct the cell`,
	}},
	{"tabs.csv", "", []string{
		`tabs.csv:1: one column only, "Sample\u{9}Mineral\u{9}SiO2"; expected the comma between cells; set separator = "tab", which gives 3 columns`,
	}},
	{"two-headers-one-quantity.csv", "", []string{
		`two-headers-one-quantity.csv:1:5 (FeO total): "FeO*" in column 4 and "FeO total" in column 5 both give FeO total; expected one column for it; map the other to "ignored" in columns`,
		`two-headers-one-quantity.csv:1:7 (P (GPa)): "P (kbar)" in column 6 and "P (GPa)" in column 7 both give one thing, p_kbar and p_gpa; expected one column for it; map the other to "ignored" in columns`,
	}},
	{"unknown-phase.csv", "", []string{
		`unknown-phase.csv:2:3 (Mineral): "plagioclaze" is no phase known here; expected an IMA symbol or a mineral name; did you mean "plagioclase"? else map it in phases, or list it in pass_over`,
		`unknown-phase.csv:3:3 (Mineral): "wairakite" is no phase known here; expected an IMA symbol or a mineral name; did you mean "andradite"? else map it in phases, or list it in pass_over`,
		`unknown-phase.csv:4:3 (Mineral): "fs" is no phase known here; expected an IMA symbol or a mineral name; did you mean "Fs"? else map it in phases, or list it in pass_over`,
		`unknown-phase.csv:5:3 (Mineral): no phase; expected an IMA symbol or a mineral name; fill in the cell`,
	}},
	{"unterminated-header.csv", "", []string{
		`unterminated-header.csv:1:2: a quote that is opened here and never closed; close the quote, or remove it`,
	}},
	{"unterminated-quote.csv", "", []string{
		`unterminated-quote.csv:3:2 (Label): a quote that is opened here and never closed; close the quote, or remove it`,
	}},
	{"utf16-broken.csv", "", []string{
		`utf16-broken.csv:2:2 (Label): bytes that mean nothing in utf-16le in "\u{fffd}"; expected utf-16le text; declare the encoding the file is in, or save it as UTF-8`,
		`utf16-broken.csv:3:1 (Sample): bytes that mean nothing in utf-16le in "\u{fffd}"; expected utf-16le text; declare the encoding the file is in, or save it as UTF-8`,
	}},
	{"utf16-without-mark.csv", "", []string{
		`utf16-without-mark.csv: every other byte NUL, as in UTF-16 without a byte order mark; expected a text file; set encoding = "utf-16le"`,
	}},
	{"utf16be-without-mark.csv", "", []string{
		`utf16be-without-mark.csv: every other byte NUL, as in UTF-16 without a byte order mark; expected a text file; set encoding = "utf-16be"`,
	}},
	{"utf32.csv", "", []string{
		`utf32.csv:1: the byte order mark of UTF-32; expected UTF-8, UTF-16 or a declared encoding; save the file as UTF-8`,
	}},
	{"workbook.csv", "", []string{
		`workbook.csv: a ZIP archive or XLSX workbook; expected a text file; save the table as CSV with UTF-8 text`,
	}},
}

func TestHostile(t *testing.T) {
	seen := map[string]bool{}
	for _, c := range hostile {
		seen[c.file] = true
		t.Run(c.file, func(t *testing.T) {
			_, _, problems := Read(rootOf(t, "testdata/hostile"), manifestOf(t, "file = \""+c.file+"\"\n"+c.keys), nil)
			same(t, c.file, problems.Lines(), c.want)
		})
	}
	entries, err := os.ReadDir("testdata/hostile")
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if !seen[e.Name()] {
			t.Errorf("testdata/hostile/%s is not tested", e.Name())
		}
	}
}
