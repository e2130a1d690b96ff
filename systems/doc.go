// Package systems reads system files: three components, a liquid and its solids,
// with every number's source.
//
// A system file comes in, built in or from disk ([Open], [Load], [Builtin],
// [Parse]); a [File] goes out, checked for syntax and for meaning, in the units
// of the file. [File.At] compiles it to a [gibbs.System] in kelvin, J/mol and
// pascal, the input of every computation; [File.Values] lists its numbers with
// their sources. Start reading at [Parse].
//
// What is wrong with a file is a [*FileError] that lists all problems with line,
// column, key, reason and remedy. An unknown key is a problem: it may be a number
// that its author believes to be in force.
//
// # System files
//
// TOML 1.0, UTF-8. At the top:
//
//	title = "…"               what it is called; must be given
//	about = "…"               what it stands for
//	basis = "…"               note on the formula units chosen as mixing units
//	calibration = "…"         note on how well it meets measurements
//	temperature_scale = "…"   note
//	pressure_GPa = 0.0001     pressure of the standard states; must be given
//	temperature_C = [lo, hi]  range for which the file vouches; must be given
//	cautions = ["…"]          for whoever works with the substances
//	limits = ["…"]            what the model leaves out
//
// Three [[component]] tables with symbol, name and formula. The formula unit is
// the mixing unit of the liquid.
//
// [liquid] holds the mixing model, which a solid with members may have as well:
//
//	sites = 1                 sites of mixing per formula unit
//	extension = "muggianu"    or "kohler", or "toop" with odd = "symbol"
//	[[liquid.pair]]           y_i·y_j·Σ L_k·(y_i − y_j)^k
//	of = ["Di", "An"]         i and j
//	[[liquid.pair.term]]      one per k, L_k = a + bT + cT ln T
//	order = 0                 k
//	a_kJ, b_J_per_K, c_J_per_K, each with a_standard_error_kJ and so on
//	[[liquid.ternary]]        y_0·y_1·y_2·y_on·(a + bT + cT ln T)
//	on = "Di"
//
// [[solid]] tables with symbol, name, remark, and either the formula of a
// stoichiometric solid or one to three [[solid.member]] tables with symbol and
// formula. The moles of the components in a formula are found by balancing the
// elements; where the components share all their elements that is not possible, and
// composition = [moles of each] gives them. A negative number of moles is allowed: the solid
// then lies in the plane, outside the triangle.
//
// Each stoichiometric solid and each member has one standard state, in kJ or J
// per mole of its formula unit:
//
//	[solid.melting]     T_C, dH_kJ, dCp_J, dV_cm3: liquid minus solid at T_C
//	[solid.transition]  from = "symbol", T_C, dH_kJ, dV_cm3: this form minus the other
//	[solid.reaction]    from = [{ phase = "symbol", nu = 1 }, …], dH_kJ, dS_J, dV_cm3:
//	                    this solid minus Σ nu·phases
//
// Beside dV_cm3, melting may have dV_change_cm3_per_GPa, what is added to it by each GPa.
// In place of both it may have slope_C_per_GPa, the initial slope of the melting curve,
// from which ΔV follows by Clapeyron's law, or simon_a_GPa and simon_c: the curve
// T = T_C·(1 + P/a)^(1/c), with T and T_C in kelvin and P above the file's pressure
// (Simon & Glatzel 1929), which is met exactly at every pressure.
//
// ([solid.member.melting] and so on for a member.) A phase is named by its
// symbol, by SOLID.MEMBER where that is ambiguous, or is a pure liquid component,
// L.COMPONENT. Without one of these in every standard state the file holds for its own
// pressure alone. dCp_J may be left out, and is then 0.
//
// Every number in a standard state or mixing term has either source = "citation",
// with recalled = true if it was taken from memory, or fitted_to = "measurements"
// and a standard error. They stand in the table and hold for all of its numbers (those
// of a pair for all of its terms); a number of a standard state may have its own:
// T_source, T_recalled, T_fitted_to, T_uncertainty_C, and likewise with dH, dS,
// dCp and dV. A note may be added to each table.
package systems
