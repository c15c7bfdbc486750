namespace Pipeline.Apparatus;

/// <summary>One hyperfine level of a rotational level.</summary>
/// <param name="F">Total angular momentum.</param>
/// <param name="UpperJ">Share of J = N + 1/2 in it, the rest is J = N - 1/2.</param>
/// <param name="OffsetHz">Energy/h above the mean of the rotational level, weighted by 2F + 1.</param>
public sealed record HyperfineLevel(int F, double UpperJ, double OffsetHz)
{
    /// <summary>Number of substates, 2F + 1.</summary>
    public int Weight => 2 * F + 1;
}

/// <summary>Hyperfine levels of a doublet-Sigma molecule with one nucleus of spin 1/2, without field.</summary>
/// <remarks>Exact: in the basis |N, G, F&gt; with G = S + I, no F has more than two states of either parity, |N = F, G = 0&gt; with |N = F,
/// G = 1&gt;, and |N = F - 1, G = 1&gt; with |N = F + 1, G = 1&gt;, so that mixing of N ends by itself. There (I.n)(S.n) = (G.n)^2/2 - 1/4, where
/// G.n is a helicity: (G.n)^2 = 1 for N = F, G = 1, and 1 less the projector on helicity zero for N = F - 1 and F + 1.</remarks>
public static class HyperfineLevels
{
    /// <param name="k">The molecule.</param>
    /// <param name="n">Rotational level, &gt;= 0.</param>
    /// <returns>By rising energy: four levels, two for n = 0.</returns>
    public static IReadOnlyList<HyperfineLevel> Of(HyperfineConstants k, int n)
    {
        if (n < 0) throw new ArgumentOutOfRangeException(nameof(n), n, "must be >= 0");
        List<HyperfineLevel> levels = [.. SameN(k, n), new(n + 1, 1, Stretched(k, n, n + 1))];
        if (n > 0) levels.Add(new(n - 1, 0, Stretched(k, n, n - 1)));
        double mean = levels.Sum(l => l.Weight * l.OffsetHz) / levels.Sum(l => l.Weight);
        return [.. levels.Select(l => l with { OffsetHz = l.OffsetHz - mean }).OrderBy(l => l.OffsetHz)];
    }

    /// <summary>Lines from these levels to one excited level whose own structure is not resolved: the higher a level lies, the lower is the
    /// frequency of its line. Weights are the numbers of substates: all of them equally filled and equally strong.</summary>
    public static SpectralLine[] Lines(IEnumerable<HyperfineLevel> levels) => [.. levels.Select(l => new SpectralLine(-l.OffsetHz, l.Weight))];

    /// <summary>The two levels F = N, G = 0 and 1 mixed; for N = 0 the one of G = 0.</summary>
    static IEnumerable<HyperfineLevel> SameN(HyperfineConstants k, int n)
    {
        double root = 0.5 * Math.Sqrt(n * (n + 1.0));
        double singlet = -0.75 * k.FermiB - 0.25 * k.DipolarC;
        double triplet = 0.25 * k.FermiB + 0.25 * k.DipolarC - 0.5 * (k.SpinRotation + k.NuclearSpinRotation);
        if (n == 0) return [new(0, 1, singlet)];
        double mixing = (k.SpinRotation - k.NuclearSpinRotation) * root;
        double mean = 0.5 * (singlet + triplet), half = double.Hypot(0.5 * (singlet - triplet), mixing), angle = 0.5 * Math.Atan2(2 * mixing, singlet - triplet);
        (double sin, double cos) = Math.SinCos(angle);
        return [new(n, UpperJ(cos, sin), mean + half), new(n, UpperJ(-sin, cos), mean - half)];
        // N.S, which is N/2 for J = N + 1/2 and -(N + 1)/2 for J = N - 1/2
        double UpperJ(double zero, double one) => (2 * zero * one * root - 0.5 * one * one + 0.5 * (n + 1)) / (n + 0.5);
    }

    /// <summary>Energy of F = N + 1 or N - 1 above the rotation of N, mixed with the other N of the same F.</summary>
    static double Stretched(HyperfineConstants k, int n, int f)
    {
        int other = 2 * f - n;
        double own = Diagonal(n);
        if (other < 0) return own;
        double far = Diagonal(other) + k.RotationalConstant * (other * (other + 1.0) - n * (n + 1.0));
        double mixing = 0.5 * k.DipolarC * Math.Sqrt(f * (f + 1.0)) / (2 * f + 1);
        return 0.5 * (own + far) - Math.CopySign(double.Hypot(0.5 * (far - own), mixing), far - own);

        double Diagonal(int at)
        {
            double zeroHelicity = (at < f ? f : f + 1.0) / (2 * f + 1), rotation = 0.5 * (f * (f + 1.0) - at * (at + 1.0) - 2);
            return 0.25 * k.FermiB + k.DipolarC * (0.25 - 0.5 * zeroHelicity) + 0.5 * (k.SpinRotation + k.NuclearSpinRotation) * rotation;
        }
    }
}
