using MathNet.Numerics.Distributions;
using Pipeline.Quantities;

namespace Pipeline.Statistics;

/// <summary>Exact limits on a Poisson mean from one count.</summary>
/// <remarks>Quantiles of chi-square: Garwood, Biometrika 28, 437 (1936); one-sided limits at S sigma as tabulated by Gehrels, ApJ 303, 336
/// (1986). The chance beyond a limit is met to 2e-8 of itself or better up to 5 sigma and 10,000 counts; at the largest count
/// there is the limit is 3e-6 sigma off.</remarks>
public static class CountInterval
{
    /// <summary>Beyond so many sigma 1 minus the confidence has lost four of its digits to rounding.</summary>
    const double MostSigmas = 7;

    /// <summary>Central interval: each end leaves out half of 1 - confidence.</summary>
    /// <param name="count">Observed, &gt;= 0.</param>
    /// <param name="confidence">In (0, 1).</param>
    /// <exception cref="ArgumentOutOfRangeException">Negative count, or a confidence outside (0, 1).</exception>
    public static Interval Central(int count, double confidence)
    {
        double oneSided = 0.5 * (1 + Confidence(confidence));
        return new Interval(Lower(count, oneSided), Upper(count, oneSided), confidence);
    }

    /// <summary>One-sided upper limit: a mean above it gives so few counts with less than 1 - confidence.</summary>
    public static double Upper(int count, double confidence) =>
        0.5 * ChiSquared.InvCDF(2 * (NotNegative(count) + 1.0), Confidence(confidence));

    /// <summary>One-sided lower limit; 0 for no counts.</summary>
    public static double Lower(int count, double confidence)
    {
        double tail = 1 - Confidence(confidence);
        return NotNegative(count) == 0 ? 0 : 0.5 * ChiSquared.InvCDF(2.0 * count, tail);
    }

    /// <summary>One-sided upper limit at the confidence of a normal deviate.</summary>
    /// <param name="count">Observed, &gt;= 0.</param>
    /// <param name="sigmas">In [0, 7]; 1 is 84.13 %.</param>
    /// <exception cref="ArgumentOutOfRangeException">Negative count, or sigmas outside [0, 7].</exception>
    public static double UpperOneSided(int count, double sigmas) => Upper(count, ConfidenceOf(sigmas));

    /// <summary>One-sided lower limit at the confidence of a normal deviate; 0 for no counts.</summary>
    /// <inheritdoc cref="UpperOneSided"/>
    public static double LowerOneSided(int count, double sigmas) => Lower(count, ConfidenceOf(sigmas));

    static double ConfidenceOf(double sigmas) => sigmas is >= 0 and <= MostSigmas ? 1 - 0.5 * Tail.NormalTwoSided(sigmas)
        : throw new ArgumentOutOfRangeException(nameof(sigmas), sigmas, $"must lie in [0, {MostSigmas}]");

    static double Confidence(double confidence) => confidence is > 0 and < 1 ? confidence
        : throw new ArgumentOutOfRangeException(nameof(confidence), confidence, "must lie in (0, 1)");

    static int NotNegative(int count) => count >= 0 ? count : throw new ArgumentOutOfRangeException(nameof(count), count, "must be >= 0");
}
