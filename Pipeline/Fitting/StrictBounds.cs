using MathNet.Numerics.Distributions;
using Pipeline.Numerics;
using Pipeline.Quantities;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>A linear quantity of the spectrum, such as the number below a speed, with the extremes that the data allow.</summary>
/// <param name="Value">At the maximum of the likelihood over all non-negative spectra, without smoothing.</param>
/// <param name="Interval">Profile likelihood: all values for which some non-negative spectrum and background fits within the quantile
/// of chi-square with one degree of freedom; the lower end is 0 where that is reached.</param>
sealed record StrictBound(double Value, Interval Interval);

/// <summary>Extremes of a linear quantity over all non-negative spectra compatible with the data.</summary>
/// <remarks>Rolke and Lopez, Nucl. Instrum. Methods A 458, 745 (2001), for the treatment of a measured background by the profile; the
/// spectrum itself is profiled in the same way.</remarks>
static class StrictBounds
{
    const int MostSteps = 60;

    /// <param name="window">The data.</param>
    /// <param name="response">The instrument.</param>
    /// <param name="direction">[cells] weight of each cell's molecules in the quantity, &gt;= 0.</param>
    /// <param name="confidence">In (0, 1).</param>
    public static StrictBound Find(FitWindow window, ResponseMatrix response, double[] direction, double confidence)
    {
        var design = new Design(window, response);
        double[] ridge = Smoothing.Penalty(design, 1e-8 * Smoothing.UnitStrength(design));
        PenalisedFit free = Start(design, ridge, direction);
        free.Solve();
        double value = Cholesky.Dot(direction, free.X.AsSpan(0, direction.Length));
        double rise = ChiSquared.InvCDF(1, confidence);
        double high = Edge(design, ridge, direction, free, rise, upward: true);
        double low = value > 0 ? Edge(design, ridge, direction, free, rise, upward: false) : 0;
        return new StrictBound(value, new Interval(Math.Min(low, value), Math.Max(high, value), confidence));
    }

    static PenalisedFit Start(Design design, double[] ridge, double[] direction)
    {
        var fit = new PenalisedFit(design, ridge) { Direction = direction };
        fit.StartFlat();
        return fit;
    }

    /// <summary>Pulls until the deviance has risen enough, then closes in on that pull.</summary>
    static double Edge(Design design, double[] ridge, double[] direction, PenalisedFit free, double rise, bool upward)
    {
        PenalisedFit pulled = Start(design, ridge, direction);
        pulled.Solver.StartFrom(free.Solver);
        double sign = upward ? -1 : 1, pull = FirstPull(design, direction), below = 0, above = double.PositiveInfinity;
        (double quantity, double quantityBelow, double riseBelow) = (0, Cholesky.Dot(direction, free.X.AsSpan(0, direction.Length)), 0);
        for (int step = 0; step < MostSteps; step++)
        {
            pulled.Pull = sign * pull;
            pulled.Solve();
            quantity = Cholesky.Dot(direction, pulled.X.AsSpan(0, direction.Length));
            double risen = pulled.Deviance - free.Deviance;
            if (Math.Abs(risen - rise) < 1e-3 * rise) return quantity;
            if (risen < rise) (below, quantityBelow, riseBelow) = (pull, quantity, risen);
            else above = pull;
            if (!upward && quantity <= 1e-12 * (1 + quantityBelow) && risen < rise) return 0;
            // deviance rises as the square of the pull near the minimum
            double guess = pull * Math.Sqrt(rise / Math.Max(risen, 1e-3 * rise));
            pull = double.IsInfinity(above) ? Math.Max(guess, 1.3 * pull) : guess > below && guess < above && step % 4 != 3 ? guess : 0.5 * (below + above);
        }
        return riseBelow > 0.5 * rise ? quantityBelow : quantity;
    }

    /// <summary>The inverse of what one detected count stands for.</summary>
    static double FirstPull(Design design, double[] direction)
    {
        double[] x = new double[design.Variables];
        direction.CopyTo(x, 0);
        double counts = design.Means(x).Sum() - design.Window.Background.Sum(), cells = direction.Sum();
        return cells > 0 && counts > 0 ? 0.3 * counts / cells : 1;
    }
}
