using System.Globalization;
using Pipeline.Statistics;

namespace Pipeline.Fitting;

/// <summary>The best fit of one family, and whether it may be believed.</summary>
/// <param name="Problem">The likelihood.</param>
/// <param name="Best">Lowest of all starts.</param>
/// <param name="Starts">Number of starts.</param>
/// <param name="Reached">How many of them ended at the best.</param>
/// <param name="Effective">Parameters of the family, less what its priors take.</param>
/// <param name="Trouble">Why the search is no success; null where it is.</param>
sealed record ShapeSearch(ShapeProblem Problem, PoissonFit Best, int Starts, int Reached, double Effective, string? Trouble)
{
    /// <summary>Two searches are at the same minimum where their deviances differ by less than this: one standard error makes one.</summary>
    const double Same = 1e-3;

    public static ShapeSearch Of(ShapeProblem problem)
    {
        PoissonFit[] fits = [.. problem.Starts().Select(s => problem.Find(s))];
        PoissonFit best = fits.MinBy(f => f.Objective)!;
        double[] ordered = problem.Family.Ordered(best.Parameters);
        if (!ReferenceEquals(ordered, best.Parameters)) best = problem.Find(ordered);
        int reached = fits.Count(f => f.Objective - best.Objective <= Same);
        return new ShapeSearch(problem, best, fits.Length, reached, problem.Own - Taken(problem, best), TroubleOf(problem, best, reached));
    }

    public IShapeFamily Family => Problem.Family;

    /// <summary>-2 log L of data and causes, up to a constant of the data: the roughness of a spline is no part of it.</summary>
    public double Misfit => Best.Deviance + Best.Parameters[Problem.Own..].Sum(a => a * a);

    /// <summary>Information criterion: misfit + parameters * ln(bins).</summary>
    /// <remarks>Schwarz, Ann. Stat. 6, 461 (1978). Of the usual criteria this one finds the right family the more surely the more data there are; Akaike's
    /// splits a single beam in two in one of nine runs (chi-square of three parameters beyond 6), which nobody could tell from a second beam.</remarks>
    public double Criterion => Misfit + Effective * Math.Log(Problem.Bins);

    /// <summary>[p] standard errors by the covariance; infinite where that is singular.</summary>
    public double Sigma(int k) => Best.Covariance is { } c ? Math.Sqrt(c[k * Best.Parameters.Length + k]) : double.PositiveInfinity;

    static string? TroubleOf(ShapeProblem problem, PoissonFit best, int reached)
    {
        if (!best.Converged) return "the shape fit did not converge";
        string[] bound = [.. problem.Family.Coordinates.Where((_, k) => best.AtBound[k]).Select(c => c.Name)];
        if (bound.Length > 0) return $"the shape fit ran into a bound of its parameters ({string.Join(", ", bound)})";
        if (best.Covariance is null) return "the data cannot tell the parameters of the shape apart";
        return reached < 2 && !problem.IsMinimum(best)
            ? string.Create(CultureInfo.InvariantCulture, $"only {reached} of the starts of the shape fit ended at its best, and that is no clear minimum") : null;
    }

    /// <summary>Trace of covariance times prior over the family: a parameter that its prior alone determines counts as none.</summary>
    static double Taken(ShapeProblem problem, PoissonFit best)
    {
        if (best.Covariance is not { } covariance) return 0;
        (double taken, int p) = (0, best.Parameters.Length);
        foreach (double[] row in problem.Family.Priors)
            for (int a = 0; a < row.Length; a++)
                for (int b = 0; b < row.Length; b++) taken += row[a] * row[b] * covariance[a * p + b];
        return taken;
    }
}
