namespace Pipeline.Statistics;

/// <summary>Degrees of freedom of a variance that is a sum of estimated ones.</summary>
/// <remarks>(sum v)^2 / sum (v^2/nu). Source: JCGM 100:2008 (GUM), equation G.2b.</remarks>
public static class WelchSatterthwaite
{
    /// <param name="parts">Variance, &gt;= 0, and degrees of freedom, &gt;= 0, of each part; infinite where it is known.</param>
    /// <returns>At least 1; infinite where every part is known, and where every part is 0.</returns>
    /// <exception cref="ArgumentOutOfRangeException">A variance or degrees of freedom that are negative or NaN.</exception>
    public static double EffectiveFreedom(params ReadOnlySpan<(double Variance, double Freedom)> parts)
    {
        (double sum, double squares) = (0, 0);
        foreach ((double variance, double freedom) in parts)
        {
            if (!(variance >= 0)) throw new ArgumentOutOfRangeException(nameof(parts), variance, "variances must be >= 0");
            if (!(freedom >= 0)) throw new ArgumentOutOfRangeException(nameof(parts), freedom, "degrees of freedom must be >= 0");
            sum += variance;
            if (!double.IsInfinity(freedom)) squares += variance * variance / Math.Max(freedom, 1e-9);
        }
        return squares > 0 ? Math.Max(1, sum * sum / squares) : double.PositiveInfinity;
    }
}
