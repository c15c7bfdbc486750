using System.Globalization;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>Non-negative spectrum with second-difference smoothing; its number, mean and spread come from <see cref="HeldSpectrum"/>.</summary>
/// <remarks>Smoothing after Phillips (J. ACM 9, 84, 1962) and Tikhonov; its strength minimises the unbiased estimate of predictive risk,
/// weighted residuals + 2 effective parameters (Mallows, Technometrics 15, 661, 1973), over a ladder of strengths relative to the
/// information in the data, and is then taken ten times weaker: at the least risk the bias is as large as the error, and smoothing a beam
/// moves its number by the 1/v of the counts (0.9 % too few in a noiseless test, 0.1 % with a tenth of the strength). Undersmoothing for
/// honest intervals: Kuusela and Panaretos, Ann. Appl. Stat. 9, 1671 (2015).</remarks>
sealed class UnfoldedEstimator : ISpectrumEstimator
{
    static readonly double[] Ladder = [.. Enumerable.Range(0, 17).Select(k => Math.Pow(10, -5 + 0.5 * k))];

    const double Undersmoothing = 0.1;

    /// <summary>Weakest strength of a scan: its lines are wider than its cells, and a draw of noise that asks for less smoothing made the mean
    /// velocity uncertain by hundreds of m/s in one of six made-up scans.</summary>
    const double WeakestInScan = 0.03;

    /// <summary>Over 40 made-up scans the spread had an answer in half of them, where noise far from the beam happened to widen it: one standard error too large.</summary>
    const string BroadLines = "lines are wider than the cells of an unfolded Doppler scan; see the shape fit, or measure a map";

    public string Name => "unfolded";

    public FittedSpectrum Fit(FitWindow window, ResponseMatrix response)
    {
        var design = new Design(window, response);
        double unit = Smoothing.UnitStrength(design);
        var pilot = new PenalisedFit(design, Smoothing.Penalty(design, unit));
        pilot.StartFlat();
        pilot.Solve();
        double best = Undersmoothing * Smoothing.ChooseStrength(design, pilot, unit, design.IsBroad ? [.. Ladder.Where(l => l >= WeakestInScan)] : Ladder);
        var fit = new PenalisedFit(design, Smoothing.Penalty(design, best * unit));
        fit.Solver.StartFrom(pilot.Solver);
        fit.Solve();
        double effective = Smoothing.EffectiveParameters(design, fit, out double[][] resolution);
        var held = new HeldSpectrum(design, fit.Means, fit.X[..design.Cells], best * unit);
        return new UnfoldedSpectrum(response, design, fit, held, best * unit)
        {
            Molecules = fit.X[..design.Cells],
            Moments = held.Moments(Net(window), response.Grid),
            Means = fit.Means,
            Deviance = fit.Deviance,
            DegreesOfFreedom = window.Count - effective,
            Doubt = fit.Converged ? null : "the unfolding did not converge",
            Description = string.Create(CultureInfo.InvariantCulture,
                $"non-negative, smoothing strength {best:G3} of the information in the data, {effective:F1} effective parameters"),
            Resolution = resolution,
            NoSpread = design.IsBroad ? BroadLines : null,
        };
    }

    internal static double[] Net(FitWindow window) => [.. window.Total.Zip(window.Background, (t, b) => t - b)];
}

/// <summary>An unfolding that can be repeated with the same strength, weights and start.</summary>
sealed class UnfoldedSpectrum(ResponseMatrix response, Design design, PenalisedFit fit, HeldSpectrum held, double strength) : FittedSpectrum
{
    /// <summary>[bins] inverse variances that every replica shares.</summary>
    public double[] Weights => fit.Weights;

    /// <summary>Of the second differences, in the units of the information.</summary>
    public double Strength => strength;

    /// <remarks>For the same response, one round with the weights of the main fit: these come from its means, not from the replica.</remarks>
    public override Refitted Refit(FitWindow window, ResponseMatrix other) => ReferenceEquals(other, response) ? Replica(window) : Again(window, other);

    /// <summary>The replica's net counts are brought to the exposure of the main data, whose Hessian is used.</summary>
    Refitted Replica(FitWindow window)
    {
        double[] net = [.. window.Total.Select((t, i) => (t - window.Background[i]) * design.Window.Exposure[i] / window.Exposure[i])];
        var solver = new Numerics.NonNegativeQuadratic(design.Variables, design.Cells);
        solver.StartFrom(fit.Solver);
        solver.Solve(fit.Hessian, design.Project(fit.Weights, net));
        return new Refitted(solver.X[..design.Cells], held.Moments(net, response.Grid));
    }

    Refitted Again(FitWindow window, ResponseMatrix other)
    {
        var moved = new Design(window, other);
        var again = new PenalisedFit(moved, Smoothing.Penalty(moved, strength));
        if (moved.Variables == design.Variables) again.Solver.StartFrom(fit.Solver);
        else again.StartFlat();
        again.Solve();
        double[] molecules = again.X[..moved.Cells];
        var heldAgain = new HeldSpectrum(moved, again.Means, molecules, strength);
        return new Refitted(molecules, heldAgain.Moments(UnfoldedEstimator.Net(window), other.Grid));
    }
}
