using Pipeline.Fitting;

namespace Pipeline.Reports;

/// <summary>The families of shapes that were fitted, and the parameters of the one that was taken.</summary>
static class ShapeTables
{
    public static Markup Of(SpectrumOutcome fit) => Markup.Join(fit.Spectra.Where(s => s.Parameters.Count > 0).Select(s => Html.Of($"""
        <h3>Shape: parameters{(s.Choices.Count > 1 ? " and choice" : "")}</h3>
        {Parameters(s)}
        {(s.Choices.Count > 1 ? Choices(s) : Markup.None)}
        """)));

    static Markup Parameters(VelocitySpectrum s) => Html.Of($"""
        <div class="scroll"><table><tr><th>parameter</th><th class="n">value</th><th class="n">from</th><th class="n">to</th></tr>
        {s.Parameters.Select(Parameter)}
        </table></div>
        <p class="note">68 % intervals by profile likelihood, for counting and background only: the scatter between shots and the common causes are in the errors above.</p>
        """);

    static Markup Parameter(ShapeParameter p)
    {
        int decimals = Numbers.Decimals(Math.Max(0.5 * (p.High - p.Low), 1e-6 * Math.Abs(p.Value)));
        string Text(double x) => Numbers.Decimal(x, decimals);
        return Html.Of($"<tr><td>{p.Name}{(p.Unit.Length > 0 ? $" ({p.Unit})" : "")}</td><td class=\"n\">{Text(p.Value)}</td><td class=\"n\">{Text(p.Low)}</td><td class=\"n\">{Text(p.High)}</td></tr>");
    }

    static Markup Choices(VelocitySpectrum s)
    {
        double best = s.Choices.Min(c => c.Criterion);
        return Html.Of($"""
            <div class="scroll"><table><tr><th>family</th><th class="n">deviance</th><th class="n">parameters</th><th class="n">criterion, above the least</th><th>remark</th></tr>
            {s.Choices.Select(c => Html.Of($"<tr><td>{c.Family}</td><td class=\"n\">{Numbers.Decimal(c.Deviance, 1)}</td><td class=\"n\">{Numbers.Decimal(c.Parameters, 1)}</td><td class=\"n\">{Numbers.Decimal(c.Criterion - best, 1)}</td><td>{Remark(c)}</td></tr>"))}
            </table></div>
            <p class="note">Criterion: deviance + parameters × ln(bins) (Schwarz 1978). The choice among families is not in the errors.</p>
            """);
    }

    static string Remark(ShapeChoice c) => (c.Chosen ? "taken" : "") + (c.Chosen && c.Trouble is not null ? "; " : "") + c.Trouble;
}
