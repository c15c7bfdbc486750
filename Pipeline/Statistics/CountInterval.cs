using MathNet.Numerics.Distributions;
using Pipeline.Quantities;

namespace Pipeline.Statistics;

/// <summary>Exact limits on a Poisson mean from one count.</summary>
/// <remarks>Quantiles of chi-square: Garwood, Biometrika 28, 437 (1936); one-sided limits at S sigma as tabulated by Gehrels, ApJ 303, 336
/// (1986).</remarks>
public static class CountInterval
{
    /// <summary>Central interval.</summary>
    /// <param name="count">Observed, &gt;= 0.</param>
    /// <param name="confidence">In (0, 1).</param>
    public static Interval Central(int count, double confidence)
    {
        if (confidence is not (> 0 and < 1)) throw new ArgumentOutOfRangeException(nameof(confidence), confidence, "must lie in (0, 1)");
        double tail = 0.5 * (1 - confidence);
        return new Interval(Lower(count, 1 - tail), Upper(count, 1 - tail), confidence);
    }

    /// <summary>One-sided upper limit: a mean above it gives so few counts with less than 1 - confidence.</summary>
    public static double Upper(int count, double confidence) => 0.5 * ChiSquared.InvCDF(2 * (NotNegative(count) + 1), confidence);

    /// <summary>One-sided lower limit; 0 for no counts.</summary>
    public static double Lower(int count, double confidence) => NotNegative(count) == 0 ? 0 : 0.5 * ChiSquared.InvCDF(2 * count, 1 - confidence);

    static int NotNegative(int count) => count >= 0 ? count : throw new ArgumentOutOfRangeException(nameof(count), count, "must be >= 0");
}
