using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>Quantities of a spectrum beside number, mean and spread.</summary>
/// <remarks>Quantiles and the peak are taken from the shape fit, where that describes the signal: over 100 made-up runs the median of the unfolded
/// spectrum was a third to two thirds of its standard error too low.</remarks>
static class OtherQuantities
{
    /// <param name="fit">The quoted estimator.</param>
    /// <param name="shape">The shape fit; null where there is none.</param>
    /// <param name="setup">For the mass.</param>
    /// <param name="grid">Cells.</param>
    /// <param name="weak">Why nothing but the number is quoted; null where the signal is clear.</param>
    public static IReadOnlyList<NamedQuantity> Of(EstimatorRun fit, EstimatorRun? shape, Setup setup, VelocityGrid grid, string? weak)
    {
        Quantity Of(EstimatorRun run, Func<Refitted, double> of) => weak is not null ? Quantity.NotDetermined(weak) : run.Quantity(of);
        var temperature = new NamedQuantity("forward temperature", "K", fit.Main.NoSpread is { } none ? Quantity.NotDetermined(none) : Of(fit, r => setup.Species.Mass.Value * r.Moments.Spread * r.Moments.Spread / Codata.BoltzmannConstant));
        if (shape is null || shape.Main.Doubt is not null) return [temperature];
        return
        [
            temperature,
            .. new[] { 0.1, 0.5, 0.9 }.Select(share => new NamedQuantity($"{(share == 0.5 ? "median" : $"{100 * share:F0} % quantile")} (shape fit)", "m/s", Of(shape, r => Quantile(grid, r.Molecules, share)))),
            new NamedQuantity("peak (shape fit)", "m/s", Of(shape, r => Peak(grid, r.Molecules))),
        ];
    }

    /// <summary>Speed below which this share of the molecules is; within a cell they are even.</summary>
    internal static double Quantile(VelocityGrid grid, double[] molecules, double share)
    {
        double left = share * molecules.Sum();
        for (int c = 0; c < molecules.Length; c++)
        {
            if (left <= molecules[c] && molecules[c] > 0) return grid.Edge(c) + grid.Step * left / molecules[c];
            left -= molecules[c];
        }
        return grid.To;
    }

    /// <summary>Where a parabola through the largest cell and its neighbours is highest.</summary>
    internal static double Peak(VelocityGrid grid, double[] molecules)
    {
        int top = Enumerable.Range(0, molecules.Length).MaxBy(c => molecules[c]);
        if (top == 0 || top == molecules.Length - 1) return grid.Centre(top);
        double before = molecules[top - 1], after = molecules[top + 1], bend = before - 2 * molecules[top] + after;
        return grid.Centre(top) + (bend < 0 ? 0.5 * grid.Step * (before - after) / bend : 0);
    }
}
