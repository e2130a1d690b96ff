package systems

// The types of this file mirror the TOML document key by key; nothing else in
// the package reads TOML. A pointer tells a key that is missing from one that is
// zero.

type wireFile struct {
	Title            string          `toml:"title"`
	About            string          `toml:"about"`
	Basis            string          `toml:"basis"`
	Calibration      string          `toml:"calibration"`
	TemperatureScale string          `toml:"temperature_scale"`
	Pressure         *float64        `toml:"pressure_GPa"`
	Temperature      []float64       `toml:"temperature_C"`
	Cautions         []string        `toml:"cautions"`
	Limits           []string        `toml:"limits"`
	Component        []wireComponent `toml:"component"`
	Liquid           wireMixing      `toml:"liquid"`
	Solid            []wireSolid     `toml:"solid"`
}

type wireComponent struct {
	Symbol  string `toml:"symbol"`
	Name    string `toml:"name"`
	Formula string `toml:"formula"`
}

// wireSource says where the numbers of a table come from.
type wireSource struct {
	Source   string `toml:"source"`
	Recalled bool   `toml:"recalled"`
	FittedTo string `toml:"fitted_to"`
	Note     string `toml:"note"`
}

type wireMixing struct {
	Sites     *float64      `toml:"sites"`
	Extension string        `toml:"extension"`
	Odd       string        `toml:"odd"`
	Pair      []wirePair    `toml:"pair"`
	Ternary   []wireTernary `toml:"ternary"`
}

type wirePair struct {
	Of   []string   `toml:"of"`
	Term []wireTerm `toml:"term"`
	wireSource
}

type wireTerm struct {
	Order *int `toml:"order"`
	wireCoefficients
	wireSource
}

type wireTernary struct {
	On string `toml:"on"`
	wireCoefficients
	wireSource
}

// wireCoefficients are a + b·T + c·T·ln T with their standard errors.
type wireCoefficients struct {
	A      *float64 `toml:"a_kJ"`
	B      *float64 `toml:"b_J_per_K"`
	C      *float64 `toml:"c_J_per_K"`
	AError *float64 `toml:"a_standard_error_kJ"`
	BError *float64 `toml:"b_standard_error_J_per_K"`
	CError *float64 `toml:"c_standard_error_J_per_K"`
}

type wireSolid struct {
	Symbol      string       `toml:"symbol"`
	Name        string       `toml:"name"`
	Remark      string       `toml:"remark"`
	Formula     string       `toml:"formula"`
	Composition []float64    `toml:"composition"`
	Member      []wireMember `toml:"member"`
	wireState
	wireMixing
}

type wireMember struct {
	Symbol      string    `toml:"symbol"`
	Formula     string    `toml:"formula"`
	Composition []float64 `toml:"composition"`
	wireState
}

// wireState holds the one standard state of a member.
type wireState struct {
	Melting    *wireMelting    `toml:"melting"`
	Transition *wireTransition `toml:"transition"`
	Reaction   *wireReaction   `toml:"reaction"`
}

type wireMelting struct {
	wireT
	wireH
	wireCp
	wireV
	wireVP
	wireSlope
	wireCurve
	wireSource
}

type wireTransition struct {
	From string `toml:"from"`
	wireT
	wireH
	wireV
	wireSource
}

type wireReaction struct {
	From []wireReactant `toml:"from"`
	wireH
	wireS
	wireV
	wireSource
}

type wireReactant struct {
	Phase string   `toml:"phase"`
	Nu    *float64 `toml:"nu"`
}

// One struct per quantity: the number, its uncertainty, and its own source
// where that is not the source of the whole table.

type wireT struct {
	T         *float64 `toml:"T_C"`
	TError    *float64 `toml:"T_uncertainty_C"`
	TSource   string   `toml:"T_source"`
	TRecalled *bool    `toml:"T_recalled"`
	TFittedTo string   `toml:"T_fitted_to"`
}

type wireH struct {
	H         *float64 `toml:"dH_kJ"`
	HError    *float64 `toml:"dH_uncertainty_kJ"`
	HSource   string   `toml:"dH_source"`
	HRecalled *bool    `toml:"dH_recalled"`
	HFittedTo string   `toml:"dH_fitted_to"`
}

type wireS struct {
	S         *float64 `toml:"dS_J"`
	SError    *float64 `toml:"dS_uncertainty_J"`
	SSource   string   `toml:"dS_source"`
	SRecalled *bool    `toml:"dS_recalled"`
	SFittedTo string   `toml:"dS_fitted_to"`
}

type wireCp struct {
	Cp         *float64 `toml:"dCp_J"`
	CpError    *float64 `toml:"dCp_uncertainty_J"`
	CpSource   string   `toml:"dCp_source"`
	CpRecalled *bool    `toml:"dCp_recalled"`
	CpFittedTo string   `toml:"dCp_fitted_to"`
}

type wireV struct {
	V         *float64 `toml:"dV_cm3"`
	VError    *float64 `toml:"dV_uncertainty_cm3"`
	VSource   string   `toml:"dV_source"`
	VRecalled *bool    `toml:"dV_recalled"`
	VFittedTo string   `toml:"dV_fitted_to"`
}

// What melting does under pressure: beside dV_cm3 its change, or instead of both the
// slope of the melting curve, or the curve itself.

type wireVP struct {
	VP         *float64 `toml:"dV_change_cm3_per_GPa"`
	VPError    *float64 `toml:"dV_change_uncertainty_cm3_per_GPa"`
	VPSource   string   `toml:"dV_change_source"`
	VPRecalled *bool    `toml:"dV_change_recalled"`
	VPFittedTo string   `toml:"dV_change_fitted_to"`
}

type wireSlope struct {
	Slope         *float64 `toml:"slope_C_per_GPa"`
	SlopeError    *float64 `toml:"slope_uncertainty_C_per_GPa"`
	SlopeSource   string   `toml:"slope_source"`
	SlopeRecalled *bool    `toml:"slope_recalled"`
	SlopeFittedTo string   `toml:"slope_fitted_to"`
}

type wireCurve struct {
	CurveA        *float64 `toml:"simon_a_GPa"`
	CurveAError   *float64 `toml:"simon_a_uncertainty_GPa"`
	CurveC        *float64 `toml:"simon_c"`
	CurveCError   *float64 `toml:"simon_c_uncertainty"`
	CurveSource   string   `toml:"simon_source"`
	CurveRecalled *bool    `toml:"simon_recalled"`
	CurveFittedTo string   `toml:"simon_fitted_to"`
}
