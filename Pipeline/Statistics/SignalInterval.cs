using System.Runtime.CompilerServices;
using MathNet.Numerics.Distributions;
using Pipeline.Quantities;

namespace Pipeline.Statistics;

/// <summary>Interval for a signal on a background that is known within an error.</summary>
/// <remarks>Profile likelihood of n ~ Poisson(s + b), b0 ~ Normal(b, sigma): all s &gt;= 0 whose deviance is within the quantile of
/// chi-square with one degree of freedom of the smallest; the lower end is 0 where that is reached. After Rolke, Lopez, Conrad, Nucl.
/// Instrum. Methods A 551, 493 (2005).</remarks>
public static class SignalInterval
{
    /// <param name="counts">n, &gt;= 0; weighted counts need not be whole.</param>
    /// <param name="background">b0.</param>
    /// <param name="backgroundError">Standard error of the background, &gt;= 0.</param>
    /// <param name="confidence">In (0, 1).</param>
    /// <returns>Interval of s, in counts.</returns>
    public static Interval Profile(double counts, double background, double backgroundError, double confidence)
    {
        NotNegative(counts);
        NotNegative(backgroundError);
        return Within(s => ProfiledDeviance(s, counts, background, backgroundError), Math.Max(0, counts - background), Math.Sqrt(Math.Max(counts, 1)) + backgroundError + 1, confidence);
    }

    /// <summary>Interval for a signal whose background was counted by itself.</summary>
    /// <remarks>Profile likelihood of on ~ Poisson(s + b), off ~ Poisson(tau b); model 1 of the same source.</remarks>
    /// <param name="on">Counts with signal, &gt;= 0; weighted counts need not be whole.</param>
    /// <param name="off">Counts of background alone, &gt;= 0.</param>
    /// <param name="tau">Exposure of <paramref name="off"/> in units of that of <paramref name="on"/>, positive.</param>
    /// <param name="confidence">In (0, 1).</param>
    /// <returns>Interval of s, in counts.</returns>
    public static Interval OnOff(double on, double off, double tau, double confidence)
    {
        NotNegative(on);
        NotNegative(off);
        if (!(tau > 0 && double.IsFinite(tau))) throw new ArgumentOutOfRangeException(nameof(tau), tau, "must be positive and finite");
        return Within(s => OnOffDeviance(s, on, off, tau), Math.Max(0, on - off / tau), Math.Sqrt(Math.Max(on, 1)) + Math.Sqrt(off) / tau + 1, confidence);
    }

    /// <summary>All s &gt;= 0 whose deviance is within the quantile of that of the best.</summary>
    static Interval Within(Func<double, double> deviance, double best, double step, double confidence)
    {
        double rise = ChiSquared.InvCDF(1, confidence), least = deviance(best), high = best + step;
        while (deviance(high) - least < rise) high += step;
        double upper = Bisection.Root(s => deviance(s) - least - rise, best, high);
        double lower = best > 0 && deviance(0) - least > rise ? -Bisection.Root(s => deviance(-s) - least - rise, -best, 0) : 0;
        return new Interval(lower, upper, confidence);
    }

    /// <summary>Smallest over b, which solves (1 + tau) b^2 + ((1 + tau) s - on - off) b = off s.</summary>
    static double OnOffDeviance(double s, double on, double off, double tau)
    {
        double linear = (1 + tau) * s - on - off, root = Math.Sqrt(linear * linear + 4 * (1 + tau) * off * s);
        // the form without cancellation on either side
        double b = linear > 0 ? 2 * off * s / (linear + root) : (root - linear) / (2 * (1 + tau));
        return PoissonDeviance.Of(on, Math.Max(s + b, 1e-12)) + PoissonDeviance.Of(off, Math.Max(tau * b, 1e-12));
    }

    static double NotNegative(double value, [CallerArgumentExpression(nameof(value))] string name = "") =>
        value >= 0 ? value : throw new ArgumentOutOfRangeException(name, value, "must be >= 0");

    /// <summary>Smallest over b of the deviance, which has a closed form.</summary>
    static double ProfiledDeviance(double s, double n, double b0, double sigma)
    {
        if (sigma == 0) return PoissonDeviance.Of(n, Math.Max(s + b0, 1e-12));
        // d/db of 2(s + b) - 2 n ln(s + b) + (b - b0)^2/sigma^2 = 0 is a quadratic in m = s + b
        double variance = sigma * sigma, p = s + b0 - variance, m = 0.5 * (p + Math.Sqrt(p * p + 4 * variance * n)), b = m - s;
        if (b < 0) (b, m) = (0, s);
        return PoissonDeviance.Of(n, Math.Max(m, 1e-12)) + (b - b0) * (b - b0) / variance;
    }
}
