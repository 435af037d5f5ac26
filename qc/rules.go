package qc

// Rule describes one rule of this package.
type Rule struct {
	Name   string   // as the qc table lists it
	On     string   // analysis, source, pair or estimate
	Looks  string   // what it looks at
	Keys   []string // of [qc] in the manifest, with defaults and their source there
	Limit  string   // where no key sets it
	Source string   // of Limit
}

const practice = "common practice, no source"

// Rules lists every rule of this package, in the order they are applied.
var Rules = []Rule{
	{"passed over", "analysis", "phases the manifest passes over", nil, "pass_over of the source", "the manifest"},
	{"end-member sum", "analysis", "sum of given end-member fractions", nil, "end_member_tolerance of [normalisation]", "the manifest"},
	{"major component not measured", "analysis", "oxides without which a formula of the mineral says nothing", nil, "measured", practice},
	{"minor component not measured", "analysis", "oxides counted as zero where not measured", nil, "measured", practice},
	{"BaO not measured", "analysis", "a feldspar without BaO; flagged where A site and Al leave room for celsian", nil, "A site 0.98, Al above 1 + Ca by 0.02", practice},
	{"iron listed twice", "analysis", "a total of iron beside FeO and Fe2O3", nil, "0.02 wt% + 0.5 %", practice},
	{"negative amount", "analysis", "measured amounts below zero", nil, "0", "by definition"},
	{"oxide total", "analysis", "sum of the oxides, Fe2O3 by the basis used", []string{"totals_kept_wt", "totals_flagged_wt"}, "", ""},
	{"cation sum", "analysis", "cations on 8 O of a feldspar, on 6 O with all Fe2+ of a pyroxene", []string{"feldspar_sum_kept", "feldspar_sum_flagged", "pyroxene_sum_kept", "pyroxene_sum_flagged"}, "", ""},
	{"celsian", "analysis", "celsian of a feldspar", []string{"celsian_flagged", "celsian_set_aside"}, "", ""},
	{"reported total", "analysis", "the printed total against the oxides' sum", []string{"reported_total_flagged_wt"}, "", ""},
	{"reported end members", "analysis", "printed Ab, Or, An against those of the composition", []string{"reported_end_member_flagged"}, "", ""},
	{"charge", "analysis", "charges of a formula given as apfu against its oxygens", []string{"charge_flagged"}, "", ""},
	{"phase identity", "analysis", "whether the composition is of the mineral named; never renamed", []string{"opx_ca_flagged", "cpx_ca_flagged", "pl_or_flagged", "afs_an_flagged"}, "", ""},
	{"contamination", "analysis", "iron and MgO of a feldspar", []string{"feldspar_feo_flagged_wt", "feldspar_mgo_flagged_wt"}, "", ""},
	{"T site", "analysis", "Si + Al + Fe3+ + Ti of a feldspar on 8 O", []string{"feldspar_t_site_kept", "feldspar_t_site_flagged"}, "", ""},
	{"A site", "analysis", "Na + K + Ca + Ba + Sr of a feldspar on 8 O", []string{"feldspar_a_site_kept", "feldspar_a_site_flagged"}, "", ""},
	{"coupled exchange", "analysis", "Al + Fe3+ against 1 + Ca + Ba + Sr of a feldspar", []string{"coupled_exchange_flagged"}, "", ""},
	{"lost alkalis", "analysis", "a short A site with T above 4 and Al in step with Ca", []string{"feldspar_a_site_kept", "coupled_exchange_flagged"}, "", ""},
	{"T site short", "analysis", "Si + Al of a pyroxene against 2", []string{"pyroxene_t_site_flagged"}, "", ""},
	{"Fe3+ above total Fe", "analysis", "Fe3+ that charges ask for against the iron there is", nil, "0.005 apfu", practice},
	{"duplicate", "analysis", "the same phase and sample with six equal measured quantities", []string{"prefer"}, "6", practice},
	{"conflict between sources", "analysis", "the same label, phase and sample in two sources with other figures", nil, "equal but for rounding", practice},
	{"columns shifted", "analysis", "whether cells from a column on fit one column further; on a source where most rows say so", []string{"column_rows"}, "", ""},
	{"no method", "analysis", "phases that no method reads", nil, "a phase of a method", "the list of methods"},
	{"Na2O and K2O swapped", "source", "cation sums of feldspars with the two columns exchanged", []string{"column_rows"}, "0.01 apfu closer to 5", practice},
	{"FeO given as Fe", "source", "totals and cation sums of pyroxenes with iron taken for the metal", []string{"column_rows"}, "0.5 wt% and 0.01 apfu closer", practice},
	{"ppm given as wt%", "source", "traces that push totals beyond the flagged limit", []string{"column_rows"}, "3 wt%", practice},
	{"shared stage origin", "source", "thin sections of one sample whose stage coordinates lie over one another", nil, "one thin section", "by definition"},
	{"column in doubt", "analysis", "whether a column of its source is flagged", nil, "columns as their headers say", practice},
	{"phase in doubt", "pair", "a member flagged by phase identity", nil, "a composition of the mineral named", practice},
	{"sides exchanged", "pair", "Ca of the pyroxenes, Or and An of the feldspars: which side holds more", nil, "Ca in Cpx above Opx; Or in Afs above Pl, An below", "by definition"},
	{"Mg number order", "pair", "(Fe/Mg)cpx / (Fe/Mg)opx against 1", nil, "below 1", practice},
	{"textures differ", "pair", "the textural positions of the two sides, exsolved ones left out", nil, "one textural position", practice},
	{"pressures differ", "pair", "pressures of the two rows", nil, "equal", "by definition"},
	{"published temperatures differ", "pair", "published temperatures of the two rows", nil, "equal", "by definition"},
	{"Fe-Mg distribution", "pair", "(Fe/Mg)cpx / (Fe/Mg)opx, total iron", []string{"kd_subsolidus", "kd_igneous"}, "", ""},
	{"I-1 plagioclase", "pair", "An of the plagioclase", []string{"pl_an_flagged"}, "", ""},
	{"close to the critical curve", "pair", "differences in Ab and Or between two feldspars", []string{"critical_distance_flagged"}, "", ""},
	{"no temperature of a rock", "estimate", "the temperature itself", nil, "200 to 1800 degC", practice},
	{"outside calibrated range", "estimate", "temperature, pressure and composition against the method's range", nil, "the method's", "the method"},
	{"no pressure", "estimate", "a number worked at 1 bar, since it hardly depends on pressure", nil, "stated by the source", practice},
	{"below detection", "estimate", "a bound in place of a number", nil, "a measured amount", practice},
	{"assumed pressure", "estimate", "pressure from the manifest's default", nil, "stated by the source", practice},
	{"setting", "estimate", "the source's rocks against the method's", nil, "the method's", "the method"},
	{"coherency unknown", "estimate", "a strain-free solvus on lamellae", nil, "incoherent lamellae", practice},
	{"assemblage", "estimate", "a phase the method wants beside its own", nil, "the method's", "the method"},
	{"weak component", "estimate", "An of alkali feldspar for T_An, Or of plagioclase for T_Or, An of plagioclase for T_Ab", nil, "0.01, 0.01, 0.5", practice},
	{"igneous Fe-Mg distribution", "estimate", "(Fe/Mg)cpx / (Fe/Mg)opx for methods of igneous rocks", []string{"kd_igneous"}, "", ""},
	{"concordance", "estimate", "spread of T_Ab, T_Or, T_An of one method", []string{"concordance_c"}, "", ""},
	{"possible resetting", "estimate", "T of Ca against T of Fe-Mg", []string{"reset_sigma"}, "", ""},
}
