using System.Globalization;
using Pipeline.Response;
using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>A spectrum of few parameters: one family, or the best of all by an information criterion.</summary>
/// <remarks>Maximum likelihood from several starts; the best counts, and is doubted unless others agree or it is a minimum by its derivatives.</remarks>
/// <param name="shape">Name of a family, or "best".</param>
/// <param name="power">Power of v in beams; 3 is the flux of a drifting gas, other conventions exist, so it stands in every report.</param>
sealed class ShapeEstimator(string shape, double power) : ISpectrumEstimator
{
    public string Name => "shape";

    public FittedSpectrum Fit(FitWindow window, ResponseMatrix response)
    {
        var frame = new ShapeFrame(response.Grid, power, [.. new Design(window, response).Blind.Select(b => !b)]);
        IShapeFamily[] asked = [.. ShapeFamilies.For(shape, frame).Where(f => f.Coordinates.Count < window.Count)];
        if (asked.Length == 0)
            throw new DataFaultException("fit window", $"{window.Count} bins", $"more bins than the shape {shape} has parameters", "correct fit_from and fit_to in night.toml, or choose another shape");
        ShapeSearch[] searches = [.. asked.Concat(ShapeFamilies.Beside(asked, frame)).Select(f => ShapeSearch.Of(new ShapeProblem(window, response, f)))];
        // a family in trouble is taken only where all are
        ShapeSearch chosen = searches.Take(asked.Length).OrderBy(s => s.Trouble is null ? 0 : 1).ThenBy(s => s.Criterion).First();
        (ShapeParameter[] parameters, double lowest) = ShapeProfile.Of(chosen);
        double[] molecules = chosen.Problem.Molecules(chosen.Best.Parameters);
        double freedom = window.Count - chosen.Effective;
        return new ShapeSpectrum(chosen.Family, chosen.Best.Parameters)
        {
            Molecules = molecules,
            Moments = SpectrumMoments.Of(response.Grid, molecules),
            Means = chosen.Problem.Means(chosen.Best.Parameters),
            Deviance = chosen.Best.Deviance,
            DegreesOfFreedom = freedom,
            Doubt = DoubtOf(chosen, freedom, lowest, searches),
            Description = Describe(chosen, asked.Length),
            Parameters = parameters,
            Choices = [.. searches.Select(s => new ShapeChoice(s.Family.Name, s.Best.Deviance, s.Effective, s.Criterion, s.Best.Converged, s == chosen, s.Trouble))],
        };
    }

    /// <summary>Deviances beyond this chance say that the shape is wrong.</summary>
    const double PoorFit = 1e-4;

    static string? DoubtOf(ShapeSearch chosen, double freedom, double lowest, ShapeSearch[] searches) =>
        chosen.Trouble is { } trouble ? trouble
        : lowest < chosen.Best.Objective - 1e-3 ? "the shape fit is no minimum: its profile found a better one"
        : searches.FirstOrDefault(s => s.Trouble is null && s.Criterion < chosen.Criterion) is { } simpler ? $"{simpler.Family.Phrase} would do as well by the criterion of Schwarz"
        : Tail.ChiSquare(chosen.Best.Deviance, freedom) < PoorFit ? $"{chosen.Family.Phrase} does not describe the signal"
        : null;

    static string Describe(ShapeSearch chosen, int families) => string.Create(CultureInfo.InvariantCulture,
        $"{chosen.Family.Name}, {chosen.Family.Describe(chosen.Best.Parameters[..chosen.Problem.Own])}, reached from {chosen.Reached} of {chosen.Starts} starts")
        + (families > 1 ? $"; chosen among {families} families by the criterion of Schwarz; the errors hold this family only, not the choice" : "");
}

/// <summary>A family with its parameters, where repeated fits begin.</summary>
sealed class ShapeSpectrum(IShapeFamily family, double[] parameters) : FittedSpectrum
{
    public override Refitted Refit(FitWindow window, ResponseMatrix response)
    {
        var problem = new ShapeProblem(window, response, family);
        double[] molecules = problem.Molecules(problem.Repeat(problem.Adapt(parameters)));
        return new Refitted(molecules, SpectrumMoments.Of(response.Grid, molecules));
    }
}
