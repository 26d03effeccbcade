use super::read;

#[test]
fn formulas_are_set_as_in_print() {
    let symbols = |name: &str| match name {
        "diameter" => Some("d".to_owned()),
        "mass" => Some("m".to_owned()),
        "slope" => Some(r"\beta".to_owned()),
        _ => None,
    };
    for (text, tex) in [
        ("diameter / 2", r"\frac{d}{2}"),
        ("4/3 * x * diameter^3", r"\frac{4}{3} \cdot \mathrm{x} \cdot d^{3}"),
        ("(mass / 0.12 [kg])^slope", r"\left(\frac{m}{0.12\,\mathrm{kg}}\right)^{\beta}"),
        ("mass^(3/4)", r"m^{\frac{3}{4}}"),
        ("(x + y) * 2", r"\left(\mathrm{x} + \mathrm{y}\right) \cdot 2"),
        ("x - (y - 2)", r"\mathrm{x} - \left(\mathrm{y} - 2\right)"),
        ("x * -y", r"\mathrm{x} \cdot \left(-\mathrm{y}\right)"),
        ("-x^2", r"-\mathrm{x}^{2}"),
        ("(x/y)^2", r"\left(\frac{\mathrm{x}}{\mathrm{y}}\right)^{2}"),
        ("1e-14 [W]", r"10^{-14}\,\mathrm{W}"),
        ("2.5e-14 [W m^-2]", r"2.5 \cdot 10^{-14}\,\mathrm{W\,m^{-2}}"),
        ("sqrt(x) + cbrt(y)", r"\sqrt{\mathrm{x}} + \sqrt[3]{\mathrm{y}}"),
        (
            "exp(-x) * ln(y) + log10(x)",
            r"\exp\left(-\mathrm{x}\right) \cdot \ln\left(\mathrm{y}\right) + \log_{10}\left(\mathrm{x}\right)",
        ),
        ("abs(x) + erfc(y)", r"\left|\mathrm{x}\right| + \operatorname{erfc}\left(\mathrm{y}\right)"),
        ("max(x, infinity)", r"\max\left(\mathrm{x}, \infty\right)"),
        ("viscosity_at(temperature)", r"\mathrm{viscosity\_at}\left(\mathrm{temperature}\right)"),
        (
            "choose(x < 2 and not y >= 3, x, 0)",
            r"\begin{cases} \mathrm{x} & \text{if } \mathrm{x} < 2 \land \lnot \left(\mathrm{y} \ge 3\right) \\ 0 & \text{otherwise} \end{cases}",
        ),
    ] {
        assert_eq!(read(text).tex(&symbols), tex, "{text}");
    }
}
