using System.Runtime.CompilerServices;
using MathNet.Numerics;

namespace Pipeline.Statistics;

/// <summary>Whether counts with signal exceed those of background alone.</summary>
/// <param name="Chance">P of so many counts with signal, or more, were there none.</param>
/// <param name="Significance">The same as a one-sided normal deviate; negative for a deficit.</param>
public sealed record OnOff(double Chance, double Significance)
{
    /// <summary>Exact given the sum of both counts: the share with signal is binomial, whatever the background.</summary>
    /// <remarks>Cousins, Linnemann, Tucker, Nucl. Instrum. Methods A 595, 480 (2008).</remarks>
    /// <param name="on">Counts with signal, &gt;= 0.</param>
    /// <param name="off">Counts of background alone, &gt;= 0.</param>
    /// <param name="alpha">Exposure of <paramref name="on"/> in units of that of <paramref name="off"/>, positive.</param>
    /// <returns>No counts with signal have chance 1 and significance minus infinity.</returns>
    public static OnOff Exact(int on, int off, double alpha)
    {
        NotNegative(on);
        NotNegative(off);
        double share = Positive(alpha) / (1 + alpha);
        if (on == 0) return new OnOff(1, double.NegativeInfinity);
        double atLeast = SpecialFunctions.BetaRegularized(on, off + 1.0, share), below = SpecialFunctions.BetaRegularized(off + 1.0, on, 1 / (1 + alpha));
        // the smaller tail keeps its digits
        return new OnOff(atLeast, atLeast < below ? -Quantile(atLeast) : Quantile(below));
    }

    /// <summary>Signed root of the likelihood ratio with and without signal: nearly normal where counts are many.</summary>
    /// <remarks>Li and Ma, Astrophys. J. 272, 317 (1983), equation 17.</remarks>
    /// <inheritdoc cref="Exact"/>
    /// <returns>In standard deviations; negative for a deficit.</returns>
    public static double LiMa(int on, int off, double alpha)
    {
        NotNegative(on);
        NotNegative(off);
        double all = (double)on + off, background = all / (1 + Positive(alpha));
        if (all == 0) return 0;
        double deviance = PoissonDeviance.Of(on, alpha * background) + PoissonDeviance.Of(off, background);
        return Math.CopySign(Math.Sqrt(deviance), on - alpha * off);
    }

    static double Quantile(double p) => p > 0 ? Tail.NormalQuantile(p) : double.NegativeInfinity;

    static double Positive(double value, [CallerArgumentExpression(nameof(value))] string name = "") =>
        value > 0 && double.IsFinite(value) ? value : throw new ArgumentOutOfRangeException(name, value, "must be positive and finite");

    static void NotNegative(int value, [CallerArgumentExpression(nameof(value))] string name = "")
    {
        if (value < 0) throw new ArgumentOutOfRangeException(name, value, "must be >= 0");
    }
}
